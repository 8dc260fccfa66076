// A thousand generate conditions in one another.
module board(input a, output y);
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
if (1) begin
buf h (w, a);
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end
end

buf g (y, a);
endmodule
