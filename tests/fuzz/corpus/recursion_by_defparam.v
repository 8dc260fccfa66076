// A module within itself, each time with another parameter by defparam.
module board(input a);
parameter N = 0;
board u (a);
defparam u.N = N + 1;
endmodule
