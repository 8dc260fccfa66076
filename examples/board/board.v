// Control board of a sheet-folding machine: the host writes four fold lengths and an overlap; at each fold
// the board counts encoder ticks until length + overlap is reached, then steps to the next drive.

module fold_board (
    input        clk, reset_n,
    input        beat,                   // one clock long, every 2 ms
    // host bus
    input        select_n, read_n, write_n,
    input  [2:0] address,
    inout  [7:0] data,
    // machine side, as it comes from the connectors
    input  [1:0] encoder_raw,
    input  [3:0] contact_raw,            // guard shut, stop not pressed, sheet present, start
    output [3:0] drive,                  // feed, first fold, second fold, eject
    output       brake_n,
    output [1:0] lamp_n
);
    wire [3:0] ck;                       // one clock line for each block
    wire [7:0] write_enable_n, position, length;
    wire [3:0] contact, step, phase_n;
    wire [1:0] encoder;
    wire       tick, backwards, match, run, run_n, fault, overrun, stalled, rewind, waiting;

    OVCB4 clock_driver (.A(clk), .Y(ck));

    host_port host (
        .select_n(select_n), .read_n(read_n), .write_n(write_n), .address(address), .data(data),
        .position(position), .length(length),
        .status({fault, run, match, backwards, contact}), .write_enable_n(write_enable_n)
    );

    fold_length lengths (
        .ck(ck[0]), .reset_n(reset_n), .data(data), .write_enable_n(write_enable_n[4:0]),
        .step(step), .position(position), .length(length), .match(match)
    );

    encoder_ticks ticks (ck[1], reset_n, encoder, tick, backwards);

    // ticks since the last fold
    OVOR2 rewinding (.A(match), .B(run_n), .Y(rewind));
    tick_counter #(.WIDTH(8)) travel (
        .ck(ck[1]), .reset_n(reset_n), .enable(tick), .restart(rewind), .count(position), .full(overrun)
    );

    // beats since the last tick
    OVAN2 running (.A(beat), .B(run), .Y(waiting));
    tick_counter #(4) stall (
        .ck(ck[1]), .reset_n(reset_n), .enable(waiting), .restart(tick), .count(), .full(stalled)
    );

    sequencer steps (
        .ck(ck[2]), .reset_n(reset_n), .start(contact[3]), .match(match), .fault(fault),
        .run(run), .run_n(run_n), .step(step), .phase_n(phase_n)
    );

    interlock guards (
        .ck(ck[3]), .reset_n(reset_n), .beat(beat), .encoder_raw(encoder_raw), .contact_raw(contact_raw),
        .clear_fault_n(write_enable_n[7]), .overrun(overrun), .stalled(stalled), .backwards(backwards),
        .run_n(run_n), .phase_n(phase_n), .encoder(encoder), .contact(contact), .fault(fault),
        .drive(drive), .brake_n(brake_n), .lamp_n(lamp_n)
    );
endmodule
