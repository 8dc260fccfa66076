// A parameter that a defparam makes depend on itself.
module board(input a, output y);
half u (a);
defparam u.P = u.P + 1;
buf g (y, a);
endmodule
module half(input a);
parameter P = 1;
endmodule
