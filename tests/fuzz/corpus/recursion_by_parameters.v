// A module within itself, each time with another parameter.
module board(input a);
parameter N = 0;
board #(N + 1) u (a);
endmodule
