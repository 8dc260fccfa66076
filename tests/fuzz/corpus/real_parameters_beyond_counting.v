// A real parameter that no float64 holds.
module board(input a, output y);
parameter real R = 1e308 * 1e308;
buf #(R) h (w, a);
buf g (y, a);
endmodule
