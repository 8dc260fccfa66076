// Macros that double, in a generate block.
`define M0 `M1 `M1
`define M1 `M2 `M2
`define M2 `M3 `M3
`define M3 `M4 `M4
`define M4 `M5 `M5
`define M5 `M6 `M6
`define M6 `M7 `M7
`define M7 `M8 `M8
`define M8 `M9 `M9
`define M9 `M10 `M10
`define M10 `M11 `M11
`define M11 `M12 `M12
`define M12 `M13 `M13
`define M13 `M14 `M14
`define M14 `M15 `M15
`define M15 `M16 `M16
`define M16 `M17 `M17
`define M17 `M18 `M18
`define M18 `M19 `M19
`define M19 `M20 `M20
`define M20 `M21 `M21
`define M21 `M22 `M22
`define M22 `M23 `M23
`define M23 `M24 `M24
`define M24 `M25 `M25
`define M25 `M26 `M26
`define M26 `M27 `M27
`define M27 `M28 `M28
`define M28 `M29 `M29
`define M29 `M30 `M30
`define M30 `M31 `M31
`define M31 `M32 `M32
`define M32 `M33 `M33
`define M33 `M34 `M34
`define M34 `M35 `M35
`define M35 `M36 `M36
`define M36 `M37 `M37
`define M37 `M38 `M38
`define M38 `M39 `M39
`define M39 `M40 `M40
`define M40 wire w;
module board(input a, output y);
if (1) begin : b
`M0
end
buf g (y, a);
endmodule
