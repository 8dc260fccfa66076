// A real to the power of a real.
module board(input a, output y);
parameter real R = 1.5 ** 1e9;
buf g (y, a);
endmodule
