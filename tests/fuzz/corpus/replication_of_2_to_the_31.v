// A replication of 2147483647 bits.
module board(input a, output y);
wire w = {2147483647{a}};
buf g (y, a);
endmodule
