// A defparam that reaches the module above it.
module board(input a, output y);
parameter P = 1;
half u (a, y);
endmodule
module half(input a, output y);
defparam board.P = 2;
buf g (y, a);
endmodule
