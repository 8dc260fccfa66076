// A parameter of 2147483648 bits.
module board(input a, output y);
parameter [2147483647:0] P = 1;
buf g (y, a);
endmodule
