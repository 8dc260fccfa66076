// A string a billion times.
module board(input a, output y);
parameter P = {1000000000{"abcd"}};
buf g (y, a);
endmodule
