// A net with a delay that a hierarchical name drives.
module board(input a, output y);
sub u (y);
buf g (u.w, a);
endmodule
module sub(output y);
wire #3 w;
buf h (y, w);
endmodule
