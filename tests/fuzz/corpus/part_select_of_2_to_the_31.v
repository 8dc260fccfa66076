// A part of 2147483647 bits.
module board(input a, output y);
wire [3:0] w;
buf h (v, w[0 +: 2147483647]);
buf g (y, a);
endmodule
