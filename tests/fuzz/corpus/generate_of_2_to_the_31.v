// A generate loop of 2147483647 rounds.
module board(input a, output y);
genvar i;
for (i = 0; i < 2147483647; i = i + 1) begin : b
buf h (w, a);
end
buf g (y, a);
endmodule
