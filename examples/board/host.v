// The host's side. Write: 0 to 3 fold lengths, 4 overlap, 7 clears a fault. Read: 4 length in force,
// 5 position, 6 status.

module host_port (
    select_n, read_n, write_n, address, data, position, length, status, write_enable_n
);
    input        select_n, read_n, write_n;
    input  [2:0] address;
    inout  [7:0] data;
    input  [7:0] position, length, status;
    output [7:0] write_enable_n;

    wire [7:0] chosen_n;
    wire [2:0] read_enable_n;

    OVDC8 decoder (.A(address), .G_N(select_n), .Y(chosen_n));

    OVOR2 writes [7:0] (.A(chosen_n), .B(write_n), .Y(write_enable_n));
    OVOR2 reads [2:0] (.A(chosen_n[6:4]), .B(read_n), .Y(read_enable_n));

    OVTB8 length_out (.A(length), .OE_N(read_enable_n[0]), .Y(data));
    OVTB8 position_out (.A(position), .OE_N(read_enable_n[1]), .Y(data));
    OVTB8 status_out (.A(status), .OE_N(read_enable_n[2]), .Y(data));
endmodule
