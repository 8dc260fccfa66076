// An array between the ends of 32 bits.
module board(input a, output y);
buf h [2147483647:-2147483648] (w, a);
buf g (y, a);
endmodule
