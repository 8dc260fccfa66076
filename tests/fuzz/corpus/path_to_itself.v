// An instance that is connected to a net inside itself.
module board(input a, output y);
half u (u.w, y);
endmodule
module half(input a, output y);
wire w;
buf g (w, a);
buf h (y, w);
endmodule
