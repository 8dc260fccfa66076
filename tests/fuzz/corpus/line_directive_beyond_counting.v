// A line directive with a number beyond counting.
`line 99999999999999999999 "other.v" 0
module board(input a, output y);
buf h (nobody[1], a);
buf g (y, a);
endmodule
