// A generate loop whose variable takes the same values again.
module board(input a, output y);
genvar i;
for (i = 0; i < 9; i = (i + 1) % 7) begin : b
buf h (w, a);
end
buf g (y, a);
endmodule
