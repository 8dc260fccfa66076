// A generate loop whose condition always holds.
module board(input a, output y);
genvar i;
for (i = 0; i >= 0; i = i + 1) begin : b
buf h (w, a);
end
buf g (y, a);
endmodule
