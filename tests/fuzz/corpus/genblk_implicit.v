// An implicit net with the name of an unnamed block of its scope.
module board(input a, output y);
buf h (genblk1, a);
if (1) begin
wire w;
buf k (w, a);
end
buf g (y, genblk1);
endmodule
