// A module that holds two of itself, forty levels deep.
module board(input a);
parameter N = 40;
if (N > 0) begin : b
board #(N - 1) u (a);
board #(N - 1) v (a);
end else
buf g (w, a);
endmodule
