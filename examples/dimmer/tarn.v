// TARN, an invented family of cells: what they do and how long they take, as simulation models.
`timescale 1 ns / 10 ps
`celldefine

module TRN_BUF (output Y, input A);
  buf (Y, A);
  specify
    (A => Y) = (0.30:0.45:0.70, 0.25:0.40:0.65);
  endspecify
endmodule

module TRN_XOR2 (output Y, input A, B);
  xor (Y, A, B);
  specify
    specparam slow = 0.60:0.85:1.30, quick = 0.45:0.65:1.00;
    if (B)  (A => Y) = (slow, quick);
    if (!B) (A => Y) = (quick, quick);
    if (A)  (B => Y) = (slow, quick);
    ifnone  (B => Y) = (quick, quick);
  endspecify
endmodule

module TRN_MX2 (output Y, input A, B, S);
  trn_pick (Y, A, B, S);
  specify
    (A, B *> Y) = (0.40:0.55:0.90, 0.35:0.50:0.85);
    (S => Y) = (0.55:0.75:1.20, 0.50:0.70:1.10);
  endspecify
endmodule

module TRN_DFFC (output Q, input D, CK, CLN);
  reg spoilt;
  trn_store (kept, D, CK, CLN, spoilt);
  buf (Q, kept);
  specify
    (posedge CK => (Q +: D)) = (0.50:0.80:1.30, 0.55:0.85:1.35);
    (negedge CLN => (Q +: 1'b0)) = (0.0, 0.40:0.70:1.10);
    $setuphold(posedge CK, D, 0.40, 0.15, spoilt);
    $recrem(posedge CLN, posedge CK, 0.50, 0.20, spoilt);
    $width(posedge CK, 0.80, 0, spoilt);
    $width(negedge CLN, 0.90, 0, spoilt);
  endspecify
endmodule

module TRN_LATCH (output Q, input D, EN);      // not used by the dimmer: not even read
  trn_gate (Q, D, EN);
  specify
    (D => Q) = 0.9;
    (posedge EN => (Q +: D)) = 1.1;
    $setuphold(negedge EN, D, 0.30, 0.10);
  endspecify
endmodule
`endcelldefine

primitive trn_pick (y, a, b, s);
  output y;
  input a, b, s;
  table
    0 ? 0 : 0;
    1 ? 0 : 1;
    ? 0 1 : 0;
    ? 1 1 : 1;
    0 0 x : 0;
    1 1 x : 1;
  endtable
endprimitive

primitive trn_store (q, d, ck, cln, spoilt);
  output q;
  reg q;
  input d, ck, cln, spoilt;
  table
  // d  ck  cln spoilt : q : next
     0  r   1   ?      : ? : 0;
     1  r   1   ?      : ? : 1;
     ?  n   ?   ?      : ? : -;
     *  ?   ?   ?      : ? : -;
     ?  ?   0   ?      : ? : 0;
     ?  ?   (01) ?     : ? : -;
     ?  ?   ?   *      : ? : x;
  endtable
endprimitive

primitive trn_gate (q, d, en);
  output q;
  reg q;
  input d, en;
  table
    0 1 : ? : 0;
    1 1 : ? : 1;
    ? 0 : ? : -;
  endtable
endprimitive
