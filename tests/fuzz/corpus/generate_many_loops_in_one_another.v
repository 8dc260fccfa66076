// Twenty generate loops of two rounds in one another.
module board(input a, output y);
genvar i0, i1, i2, i3, i4, i5, i6, i7, i8, i9, i10, i11, i12, i13, i14, i15, i16, i17, i18, i19;
for (i0 = 0; i0 < 2; i0 = i0 + 1) begin : b0
for (i1 = 0; i1 < 2; i1 = i1 + 1) begin : b1
for (i2 = 0; i2 < 2; i2 = i2 + 1) begin : b2
for (i3 = 0; i3 < 2; i3 = i3 + 1) begin : b3
for (i4 = 0; i4 < 2; i4 = i4 + 1) begin : b4
for (i5 = 0; i5 < 2; i5 = i5 + 1) begin : b5
for (i6 = 0; i6 < 2; i6 = i6 + 1) begin : b6
for (i7 = 0; i7 < 2; i7 = i7 + 1) begin : b7
for (i8 = 0; i8 < 2; i8 = i8 + 1) begin : b8
for (i9 = 0; i9 < 2; i9 = i9 + 1) begin : b9
for (i10 = 0; i10 < 2; i10 = i10 + 1) begin : b10
for (i11 = 0; i11 < 2; i11 = i11 + 1) begin : b11
for (i12 = 0; i12 < 2; i12 = i12 + 1) begin : b12
for (i13 = 0; i13 < 2; i13 = i13 + 1) begin : b13
for (i14 = 0; i14 < 2; i14 = i14 + 1) begin : b14
for (i15 = 0; i15 < 2; i15 = i15 + 1) begin : b15
for (i16 = 0; i16 < 2; i16 = i16 + 1) begin : b16
for (i17 = 0; i17 < 2; i17 = i17 + 1) begin : b17
for (i18 = 0; i18 < 2; i18 = i18 + 1) begin : b18
for (i19 = 0; i19 < 2; i19 = i19 + 1) begin : b19
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

buf g (y, a);
endmodule
