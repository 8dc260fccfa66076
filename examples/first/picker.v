// Which of four trays feeds the next sheet: tray number in, one motor line for each tray out.

module picker (
    input  [1:0] tray,
    input        enable,
    output [3:0] motor,
    output       feeding
);
    wire [1:0] tray_n;
    wire [3:0] chosen_n;

    not  n0 (tray_n[0], tray[0]);
    not  n1 (tray_n[1], tray[1]);

    nand g0 (chosen_n[0], tray_n[1], tray_n[0], enable);
    nand g1 (chosen_n[1], tray_n[1], tray[0],   enable);
    nand g2 (chosen_n[2], tray[1],   tray_n[0], enable);
    nand g3 (chosen_n[3], tray[1],   tray[0],   enable);

    nand any (feeding, chosen_n[0], chosen_n[1], chosen_n[2], chosen_n[3]);

    RELAY_DRIVER d0 (.IN_N(chosen_n[0]), .OUT(motor[0]));
    RELAY_DRIVER d1 (.IN_N(chosen_n[1]), .OUT(motor[1]));
    RELAY_DRIVER d2 (.IN_N(chosen_n[2]), .OUT(motor[2]));
    RELAY_DRIVER d3 (.IN_N(chosen_n[3]), .OUT(motor[3]));
endmodule
