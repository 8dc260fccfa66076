// An array of 2147483648 gates.
module board(input a, output y);
buf h [2147483647:0] (w, a);
buf g (y, a);
endmodule
