// What moves: encoder ticks, tick counters and the step sequence.

// One tick for each edge of the two encoder tracks; `backwards` while the drum turns the wrong way.
module encoder_ticks (
    input        ck, reset_n,
    input  [1:0] encoder,
    output       tick, backwards
);
    wire [1:0] now, earlier, moved;
    wire       against;

    OVDF first  [1:0] (.D(encoder), .CK(ck), .CLR_N(reset_n), .Q(now), .Q_N());
    OVDF second [1:0] (.D(now), .CK(ck), .CLR_N(reset_n), .Q(earlier), .Q_N());
    OVXO2 change [1:0] (.A(now), .B(earlier), .Y(moved));
    OVXO2 any (.A(moved[1]), .B(moved[0]), .Y(tick));
    OVXN2 direction (.A(now[0]), .B(earlier[1]), .Y(against));
    OVAN2 wrong (.A(against), .B(tick), .Y(backwards));
endmodule

// Counts while enabled, starts again at `restart`; `full` when the next tick would wrap it.
module tick_counter #(parameter WIDTH = 4) (
    input              ck, reset_n, enable, restart,
    output [WIDTH-1:0] count,
    output             full
);
    wire [WIDTH:0]   carry;
    wire [WIDTH-1:0] toggled, next;
    wire             go_on;

    assign carry[0] = enable;
    assign full = carry[WIDTH];

    OVIN  no_restart (.A(restart), .Y(go_on));
    OVAN2 ripple [WIDTH-1:0] (.A(carry[WIDTH-1:0]), .B(count), .Y(carry[WIDTH:1]));
    OVXO2 toggle [WIDTH-1:0] (.A(carry[WIDTH-1:0]), .B(count), .Y(toggled));
    OVAN2 hold   [WIDTH-1:0] (.A(toggled), .B(go_on), .Y(next));
    OVDF  bits   [WIDTH-1:0] (.D(next), .CK(ck), .CLR_N(reset_n), .Q(count), .Q_N());
endmodule

// Runs from `start` until the fourth length is done or a fault stops it.
module sequencer (
    input        ck, reset_n, start, match, fault,
    output       run, run_n,
    output [3:0] step, phase_n
);
    wire       advance, last_n, keep_n, begin_n, next;
    wire [7:0] decoded_n;

    OVAN2 stepping (.A(match), .B(run), .Y(advance));
    OVNA4 last (.A(step[0]), .B(step[1]), .C(match), .D(run), .Y(last_n));
    OVNA2 keep (.A(run), .B(last_n), .Y(keep_n));
    OVNA2 beginning (.A(start), .B(run_n), .Y(begin_n));
    run_gate gate (.keep_n(keep_n), .begin_n(begin_n), .fault(fault), .next(next));

    OVDF  run_register (.D(next), .CK(ck), .CLR_N(reset_n), .Q(run), .Q_N(run_n));
    OVCT4 counter (.EN(advance), .RS_N(run), .CK(ck), .CLR_N(reset_n), .Q(step));

    OVDC8 phases (.A({1'b0, step[1:0]}), .G_N(run_n), .Y(decoded_n));
    assign phase_n = decoded_n[3:0];
endmodule

module run_gate (input keep_n, begin_n, fault, output next);
    wire wanted, fault_n;

    OVNA2 either (.A(keep_n), .B(begin_n), .Y(wanted));
    OVIN  invert (.A(fault), .Y(fault_n));
    OVAN2 allow (.A(wanted), .B(fault_n), .Y(next));
endmodule
