// Table of fold lengths on a shared three-state bus, the adder behind it and the comparison with the position.

`ifndef TABLE_REGISTER                       // -D TABLE_REGISTER=OVRG8F tries the faster version
`define TABLE_REGISTER OVRG8
`endif

module fold_length (
    input        ck, reset_n,
    input  [7:0] data,
    input  [4:0] write_enable_n,
    input  [3:0] step,
    input  [7:0] position,
    output [7:0] length,
    output       match
);
    tri  [7:0] table_bus;
    wire [7:0] row_n, overlap;
    wire       equal, match_n, new_match;

    OVDC8 row_decoder (.A({1'b0, step[1:0]}), .G_N(1'b0), .Y(row_n));

    `TABLE_REGISTER row0 (.D(data), .WE_N(write_enable_n[0]), .CK(ck), .OE_N(row_n[0]), .Q(table_bus));
    `TABLE_REGISTER row1 (.D(data), .WE_N(write_enable_n[1]), .CK(ck), .OE_N(row_n[1]), .Q(table_bus));
    `TABLE_REGISTER row2 (.D(data), .WE_N(write_enable_n[2]), .CK(ck), .OE_N(row_n[2]), .Q(table_bus));
    `TABLE_REGISTER row3 (.D(data), .WE_N(write_enable_n[3]), .CK(ck), .OE_N(row_n[3]), .Q(table_bus));

    OVRG8 overlap_register (data, write_enable_n[4], ck, 1'b0, overlap);

    adder8 adder (.a(table_bus), .b(overlap), .sum(length));
    equal8 compare (.a(length), .b(position), .equal(equal));

    // `match` lasts one clock, though the position takes one more to start again
    OVAN2 once (.A(equal), .B(match_n), .Y(new_match));
    OVDF match_register (.D(new_match), .CK(ck), .CLR_N(reset_n), .Q(match), .Q_N(match_n));
endmodule

// The sum wraps at 256 ticks: the host keeps length + overlap below that.
module adder8 (input [7:0] a, b, output [7:0] sum);
    wire carry;

    adder4 low  (.a(a[3:0]), .b(b[3:0]), .carry_in(1'b0), .sum(sum[3:0]), .carry_out(carry));
    adder4 high (.a(a[7:4]), .b(b[7:4]), .carry_in(carry), .sum(sum[7:4]), .carry_out());
endmodule

// Four bits with carry look-ahead: g generates a carry, p passes one on.
module adder4 (
    input  [3:0] a, b,
    input        carry_in,
    output [3:0] sum,
    output       carry_out
);
    wire [3:0] g, p;
    wire [3:1] c;
    wire [9:0] t;
    wire       group_g, group_p;

    OVAN2 generates [3:0] (.A(a), .B(b), .Y(g));
    OVXO2 passes [3:0] (.A(a), .B(b), .Y(p));

    OVAN2 t0 (.A(p[0]), .B(carry_in), .Y(t[0]));
    OVOR2 c1 (.A(g[0]), .B(t[0]), .Y(c[1]));

    OVAN2 t1 (.A(p[1]), .B(g[0]), .Y(t[1]));
    OVAN3 t2 (.A(p[1]), .B(p[0]), .C(carry_in), .Y(t[2]));
    OVOR3 c2 (.A(g[1]), .B(t[1]), .C(t[2]), .Y(c[2]));

    OVAN2 t3 (.A(p[2]), .B(g[1]), .Y(t[3]));
    OVAN3 t4 (.A(p[2]), .B(p[1]), .C(g[0]), .Y(t[4]));
    OVAN4 t5 (.A(p[2]), .B(p[1]), .C(p[0]), .D(carry_in), .Y(t[5]));
    OVOR4 c3 (.A(g[2]), .B(t[3]), .C(t[4]), .D(t[5]), .Y(c[3]));

    OVAN2 t6 (.A(p[3]), .B(g[2]), .Y(t[6]));
    OVAN3 t7 (.A(p[3]), .B(p[2]), .C(g[1]), .Y(t[7]));
    OVAN4 t8 (.A(p[3]), .B(p[2]), .C(p[1]), .D(g[0]), .Y(t[8]));
    OVOR4 gg (.A(g[3]), .B(t[6]), .C(t[7]), .D(t[8]), .Y(group_g));
    OVAN4 gp (.A(p[3]), .B(p[2]), .C(p[1]), .D(p[0]), .Y(group_p));

    OVAN2 t9 (.A(group_p), .B(carry_in), .Y(t[9]));
    OVOR2 c4 (.A(group_g), .B(t[9]), .Y(carry_out));

    OVXO2 sums [3:0] (.A(p), .B({c, carry_in}), .Y(sum));
endmodule

module equal8 (input [7:0] a, b, output equal);
    wire [7:0] same;
    wire [1:0] differ;

    OVXN2 bits [7:0] (.A(a), .B(b), .Y(same));
    OVNA4 low  (.A(same[0]), .B(same[1]), .C(same[2]), .D(same[3]), .Y(differ[0]));
    OVNA4 high (.A(same[4]), .B(same[5]), .C(same[6]), .D(same[7]), .Y(differ[1]));
    OVNO2 both (.A(differ[0]), .B(differ[1]), .Y(equal));
endmodule
