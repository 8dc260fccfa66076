// A width by the logarithm of a number of a million bits.
module board(input a, output y);
wire [$clog2(1 << 1000000):0] w;
buf g (y, a);
endmodule
