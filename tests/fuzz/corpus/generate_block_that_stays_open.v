// A generate block that nobody closes.
module board(input a, output y);
if (1) begin : b
buf g (y, a);
endmodule
