// A module within itself whose condition never ends it.
module board(input a);
parameter N = 1;
generate
if (N > 0) begin : more
board #(.N(N + 1)) u (a);
end
endgenerate
endmodule
