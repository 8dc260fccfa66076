// A module that asks for two new sets of parameters, level upon level.
module board(input a);
more #(1) u (a);
endmodule
module more(input a);
parameter N = 1;
if (N < 1 << 30) begin : b
more #(2 * N) u (a);
more #(2 * N + 1) v (a);
end
endmodule
