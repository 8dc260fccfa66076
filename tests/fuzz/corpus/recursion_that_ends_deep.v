// A module within itself a thousand times, which ends.
module board(input a, output y);
parameter N = 1000;
if (N > 0) begin : b
board #(N - 1) u (a, y);
end else
buf g (y, a);
endmodule
