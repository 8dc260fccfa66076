// A generate loop whose variable never moves.
module board(input a, output y);
genvar i;
for (i = 0; i < 2; i = i) begin : b
buf h (w, a);
end
buf g (y, a);
endmodule
