// An array of 2147483648 nets.
module board(input a, output y);
wire w [2147483647:0];
buf g (y, a);
endmodule
