// Two parameters that defparams make depend on one another through a width.
module board(input a, output y);
half u (a);
half v (a);
defparam u.P = v.P;
defparam v.P = u.P;
buf g (y, a);
endmodule
module half(input a);
parameter P = 1;
wire [P:0] w;
endmodule
