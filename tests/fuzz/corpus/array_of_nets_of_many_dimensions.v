// An array of nets in ten dimensions, of 2 to the 100 bits.
module board(input a, output y);
wire w [1023:0][1023:0][1023:0][1023:0][1023:0][1023:0][1023:0][1023:0][1023:0][1023:0];
buf g (y, a);
endmodule
