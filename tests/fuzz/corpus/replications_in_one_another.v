// Replications in one another: 1000 to the ninth bits.
module board(input a, output y);
wire w = {1000{{1000{{1000{{1000{{1000{{1000{{1000{{1000{{1000{a}}}}}}}}}}}}}}}}}};
buf g (y, a);
endmodule
