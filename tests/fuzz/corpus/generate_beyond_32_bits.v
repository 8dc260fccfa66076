// A generate loop whose variable would grow beyond 32 bits.
module board(input a, output y);
genvar i;
for (i = 1; i != 0; i = i * 65536) begin : b
buf h (w, a);
end
buf g (y, a);
endmodule
