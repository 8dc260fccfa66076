// A generate loop whose rounds hold wide nets: a bound on all bits together.
module board(input a, output y);
genvar i;
for (i = 0; i < 60000; i = i + 1) begin : b
wire [60000:0] w;
end
buf g (y, a);
endmodule
