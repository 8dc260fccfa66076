// A hierarchical name with an index that its array of instances has not.
module board(input a, output y);
half u [4:3] (a);
buf g (y, u[5].w);
endmodule
module half(input a);
wire w;
endmodule
