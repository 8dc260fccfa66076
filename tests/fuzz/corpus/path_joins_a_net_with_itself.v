// Ports and hierarchical names that join one net many times over.
module board(input a, output y);
half u (v.p, v.q);
half v (u.p, u.q);
buf g (y, u.p);
endmodule
module half(inout p, inout q);
endmodule
