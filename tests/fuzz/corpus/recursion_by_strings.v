// A module within itself whose string grows.
module board(input a);
parameter S = "s";
board #({S, S}) u (a);
endmodule
