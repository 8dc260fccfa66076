// A generate case without arms.
module board(input a, output y);
case (1)
endcase
buf g (y, a);
endmodule
