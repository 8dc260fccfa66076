// A stage dimmer: a lamp is lit while its level is above the ramp that every lamp shares.
`timescale 1 ns / 10 ps

module dimmer #(parameter LAMPS = 3, BITS = 4) (
  input clk, clear_n,
  input [BITS-1:0] ramp,
  input [LAMPS*BITS-1:0] levels,
  output [LAMPS-1:0] lit,
  output any_lit
);
  wire [BITS-1:0] held;
  hold #(.BITS(BITS)) ramp_row (.clk(clk), .d(ramp), .q(held));

  genvar i;
  generate
    for (i = 0; i < LAMPS; i = i + 1) begin : lamp
      wire above;
      comparator #(.BITS(BITS)) cmp (.level(levels[i*BITS +: BITS]), .ramp(held), .above(above));
      TRN_DFFC out (.Q(lit[i]), .D(above), .CK(clk), .CLN(clear_n));
    end
  endgenerate

  wor #(1.2, 0.8) glow;           // one line of the back panel, pulled up by every lamp
  generate
    for (i = 0; i < LAMPS; i = i + 1) begin : tap
      TRN_BUF drive (.Y(glow), .A(lamp[i].above));
    end
  endgenerate
  TRN_BUF panel (.Y(any_lit), .A(glow));
endmodule

// The ramp, held for a step: a register as a textbook writes it.
module hold #(parameter BITS = 1) (input clk, input [BITS-1:0] d, output reg [BITS-1:0] q);
  always @(posedge clk) q <= #(0.6:0.9:1.4) d;
endmodule

// `above` from the lowest bit up: where two bits differ, the level's bit decides.
module comparator #(parameter BITS = 4) (input [BITS-1:0] level, ramp, output above);
  wire [BITS:0] sofar;
  supply0 low;
  assign sofar[0] = low;
  genvar b;
  generate
    for (b = 0; b < BITS; b = b + 1) begin : bits
      wire differ;
      TRN_XOR2 x (.Y(differ), .A(level[b]), .B(ramp[b]));
      TRN_MX2 m (.Y(sofar[b+1]), .A(sofar[b]), .B(level[b]), .S(differ));
    end
  endgenerate
  assign above = sofar[BITS];
endmodule
