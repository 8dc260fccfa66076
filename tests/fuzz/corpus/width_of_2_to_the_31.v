// A net of 2147483648 bits.
module board(input a, output y);
wire [2147483647:0] w;
buf g (y, a);
endmodule
