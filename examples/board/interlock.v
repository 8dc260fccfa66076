// Machine side: line receivers, contact filters, fault memory and the drives. The receivers and the small
// programmable device are no parts of the family; their delays stand here.

`timescale 1 ns / 100 ps

module interlock (
    input        ck, reset_n, beat,
    input  [1:0] encoder_raw,
    input  [3:0] contact_raw,
    input        clear_fault_n, overrun, stalled, backwards, run_n,
    input  [3:0] phase_n,
    output [1:0] encoder,
    output [3:0] contact,
    output       fault,
    output [3:0] drive,
    output       brake_n,
    output [1:0] lamp_n                  // fault, ready
);
    wire [3:0] received;
    wire [1:0] encoder_n;
    wire       safe, halted, next_fault, fault_n;

    // isolator and receiver both invert
    not #(16.0:24.0:38.0, 12.5:20.0:31.0) encoder_isolator [1:0] (encoder_n, encoder_raw);
    not #(7.5:11.0:17.0, 6.5:10.0:15.0) encoder_receiver [1:0] (encoder, encoder_n);
    buf #(14.0:21.0:32.0) contact_receiver [3:0] (received, contact_raw);

    contact_filter filter [3:0] (.ck(ck), .reset_n(reset_n), .beat(beat), .raw(received), .clean(contact));

    OVAN2 all_safe (.A(contact[0]), .B(contact[1]), .Y(safe));

    // the programmable device: one delay from any pin to its output
    assign #(7.0:11.0:18.0) next_fault =
        (fault & clear_fault_n) | overrun | stalled | backwards | (~run_n & ~(safe & contact[2]));

    OVDF fault_register (.D(next_fault), .CK(ck), .CLR_N(reset_n), .Q(fault), .Q_N(fault_n));

    drive_output outputs [3:0] (.phase_n(phase_n), .safe(safe), .fault_n(fault_n), .drive(drive));

    OVNA2 braking (.A(safe), .B(fault_n), .Y(halted));
    OVNO2 brake (halted, run_n, brake_n);
    OVIN  lamps [1:0] (.A({fault, safe}), .Y(lamp_n));
endmodule

// A contact counts as closed, or as open, once three beats in a row have found it so.
module contact_filter (input ck, reset_n, beat, raw, output clean);
    wire [2:0] sample;
    wire       all, any, held, next;

    OVDE samples [2:0] (.D({sample[1:0], raw}), .EN(beat), .CK(ck), .CLR_N(reset_n), .Q(sample));
    OVAN3 closed (.A(sample[0]), .B(sample[1]), .C(sample[2]), .Y(all));
    OVOR3 open (.A(sample[0]), .B(sample[1]), .C(sample[2]), .Y(any));
    OVAN2 holding (.A(any), .B(clean), .Y(held));
    OVOR2 result (.A(all), .B(held), .Y(next));
    OVDF memory (.D(next), .CK(ck), .CLR_N(reset_n), .Q(clean), .Q_N());
endmodule

module drive_output (input phase_n, safe, fault_n, output drive);
    wire phase;

    OVIN  invert (.A(phase_n), .Y(phase));
    OVAN3 enable (.A(phase), .B(safe), .C(fault_n), .Y(drive));
endmodule
