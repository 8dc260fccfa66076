// Two generate loops of 65536 rounds in one another.
module board(input a, output y);
genvar i, j;
for (i = 0; i < 65536; i = i + 1) begin : b
for (j = 0; j < 65536; j = j + 1) begin : c
buf h (w, a);
end
end
buf g (y, a);
endmodule
