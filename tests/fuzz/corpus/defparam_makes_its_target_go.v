// A defparam in a block that the parameter which it sets takes away.
module board(input a, output y);
half u (a, y);
endmodule
module half(input a, output y);
parameter P = 1;
if (P) begin : b
less v ();
defparam v.Q = 0;
end
buf g (y, a);
endmodule
module less;
parameter Q = 1;
if (Q) begin : c
wire w;
end
endmodule
