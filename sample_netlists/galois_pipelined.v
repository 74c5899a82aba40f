// Limpet tide-gauge controller, salinity converter: the pattern generator of 12 scan chains. A 24-stage
// register with distributed feedback, characteristic polynomial x^24 + x^7 + x^2 + x + 1, two taps a channel
// and one pipeline flip-flop behind each. Scan flip-flops; seven stages are stored inverted, so that clearing
// all leaves the lock-up state; so[1], so[4], so[7] and so[10] are inverted.
//
// The audit must pass it, with scan_en = 0: primitive (period 16777215), one pipeline stage on each channel,
// nearest so[5] and so[8] with 12092 cycles, and no reset into the lock-up state.

module galois_pipelined (
  input clk,
  input rst_n,
  input scan_en,
  input scan_in,
  output scan_out,
  output [11:0] so
);
  wire [23:0] kept;
  wire [23:0] stage;
  wire n1, n2, n3, n4, n5, n6, n7, n8, n9, n10, n11, n12, n13, n14, n15, n16, n17, n18, n19, n20, n21;

  // The register.
  km_sdffc stage_0_ff (.CK(clk), .RN(rst_n), .SE(scan_en), .SI(scan_in), .D(n1), .Q(kept[0]), .QN(stage[0]));
  km_sdffc stage_1_ff (.CK(clk), .RN(rst_n), .SE(scan_en), .SI(kept[0]), .D(n2), .Q(stage[1]));
  km_sdffc stage_2_ff (.CK(clk), .RN(rst_n), .SE(scan_en), .SI(stage[1]), .D(n3), .Q(stage[2]));
  km_sdffc stage_3_ff (.CK(clk), .RN(rst_n), .SE(scan_en), .SI(stage[2]), .D(n4), .Q(kept[3]), .QN(stage[3]));
  km_sdffc stage_4_ff (.CK(clk), .RN(rst_n), .SE(scan_en), .SI(kept[3]), .D(stage[3]), .Q(stage[4]));
  km_sdffc stage_5_ff (.CK(clk), .RN(rst_n), .SE(scan_en), .SI(stage[4]), .D(n5), .Q(kept[5]), .QN(stage[5]));
  km_sdffc stage_6_ff (.CK(clk), .RN(rst_n), .SE(scan_en), .SI(kept[5]), .D(stage[5]), .Q(stage[6]));
  km_sdffc stage_7_ff (.CK(clk), .RN(rst_n), .SE(scan_en), .SI(stage[6]), .D(n6), .Q(stage[7]));
  km_sdffc stage_8_ff (.CK(clk), .RN(rst_n), .SE(scan_en), .SI(stage[7]), .D(stage[7]), .Q(stage[8]));
  km_sdffc stage_9_ff (.CK(clk), .RN(rst_n), .SE(scan_en), .SI(stage[8]), .D(stage[8]), .Q(stage[9]));
  km_sdffc stage_10_ff (.CK(clk), .RN(rst_n), .SE(scan_en), .SI(stage[9]), .D(n7), .Q(kept[10]), .QN(stage[10]));
  km_sdffc stage_11_ff (.CK(clk), .RN(rst_n), .SE(scan_en), .SI(kept[10]), .D(n8), .Q(kept[11]), .QN(stage[11]));
  km_sdffc stage_12_ff (.CK(clk), .RN(rst_n), .SE(scan_en), .SI(kept[11]), .D(stage[11]), .Q(stage[12]));
  km_sdffc stage_13_ff (.CK(clk), .RN(rst_n), .SE(scan_en), .SI(stage[12]), .D(stage[12]), .Q(stage[13]));
  km_sdffc stage_14_ff (.CK(clk), .RN(rst_n), .SE(scan_en), .SI(stage[13]), .D(stage[13]), .Q(stage[14]));
  km_sdffc stage_15_ff (.CK(clk), .RN(rst_n), .SE(scan_en), .SI(stage[14]), .D(stage[14]), .Q(stage[15]));
  km_sdffc stage_16_ff (.CK(clk), .RN(rst_n), .SE(scan_en), .SI(stage[15]), .D(stage[15]), .Q(stage[16]));
  km_sdffc stage_17_ff (.CK(clk), .RN(rst_n), .SE(scan_en), .SI(stage[16]), .D(n9), .Q(kept[17]), .QN(stage[17]));
  km_sdffc stage_18_ff (.CK(clk), .RN(rst_n), .SE(scan_en), .SI(kept[17]), .D(stage[17]), .Q(stage[18]));
  km_sdffc stage_19_ff (.CK(clk), .RN(rst_n), .SE(scan_en), .SI(stage[18]), .D(stage[18]), .Q(stage[19]));
  km_sdffc stage_20_ff (.CK(clk), .RN(rst_n), .SE(scan_en), .SI(stage[19]), .D(stage[19]), .Q(stage[20]));
  km_sdffc stage_21_ff (.CK(clk), .RN(rst_n), .SE(scan_en), .SI(stage[20]), .D(stage[20]), .Q(stage[21]));
  km_sdffc stage_22_ff (.CK(clk), .RN(rst_n), .SE(scan_en), .SI(stage[21]), .D(n10), .Q(kept[22]), .QN(stage[22]));
  km_sdffc stage_23_ff (.CK(clk), .RN(rst_n), .SE(scan_en), .SI(kept[22]), .D(stage[22]), .Q(stage[23]));

  // The next states.
  km_inv u1 (.A(stage[23]), .Y(n1));
  km_xor2 u2 (.A(stage[23]), .B(stage[0]), .Y(n2));
  km_xor2 u3 (.A(stage[23]), .B(stage[1]), .Y(n3));
  km_inv u4 (.A(stage[2]), .Y(n4));
  km_inv u5 (.A(stage[4]), .Y(n5));
  km_xor2 u6 (.A(stage[23]), .B(stage[6]), .Y(n6));
  km_inv u7 (.A(stage[9]), .Y(n7));
  km_inv u8 (.A(stage[10]), .Y(n8));
  km_inv u9 (.A(stage[16]), .Y(n9));
  km_inv u10 (.A(stage[21]), .Y(n10));

  // The phase shifter.
  km_xor2 u11 (.A(stage[5]), .B(stage[20]), .Y(n11));
  km_xnor2 u12 (.A(stage[4]), .B(stage[9]), .Y(n12));
  km_xor2 u13 (.A(stage[7]), .B(stage[19]), .Y(n13));
  km_xnor2 u14 (.A(stage[10]), .B(stage[17]), .Y(n14));
  km_xor2 u15 (.A(stage[15]), .B(stage[18]), .Y(n15));
  km_xor2 u16 (.A(stage[1]), .B(stage[22]), .Y(n16));
  km_xnor2 u17 (.A(stage[0]), .B(stage[13]), .Y(n17));
  km_xor2 u18 (.A(stage[8]), .B(stage[14]), .Y(n18));
  km_xor2 u19 (.A(stage[21]), .B(stage[11]), .Y(n19));
  km_xnor2 u20 (.A(stage[2]), .B(stage[16]), .Y(n20));
  km_xor2 u21 (.A(stage[3]), .B(stage[12]), .Y(n21));

  // The pipeline behind it.
  km_sdffc pipe_0_ff (.CK(clk), .RN(rst_n), .SE(scan_en), .SI(stage[23]), .D(n11), .Q(so[0]));
  km_sdffc pipe_1_ff (.CK(clk), .RN(rst_n), .SE(scan_en), .SI(so[0]), .D(n12), .Q(so[1]));
  km_sdffc pipe_2_ff (.CK(clk), .RN(rst_n), .SE(scan_en), .SI(so[1]), .D(n13), .Q(so[2]));
  km_sdffc pipe_3_ff (.CK(clk), .RN(rst_n), .SE(scan_en), .SI(so[2]), .D(n6), .Q(so[3]));
  km_sdffc pipe_4_ff (.CK(clk), .RN(rst_n), .SE(scan_en), .SI(so[3]), .D(n14), .Q(so[4]));
  km_sdffc pipe_5_ff (.CK(clk), .RN(rst_n), .SE(scan_en), .SI(so[4]), .D(n15), .Q(so[5]));
  km_sdffc pipe_6_ff (.CK(clk), .RN(rst_n), .SE(scan_en), .SI(so[5]), .D(n16), .Q(so[6]));
  km_sdffc pipe_7_ff (.CK(clk), .RN(rst_n), .SE(scan_en), .SI(so[6]), .D(n17), .Q(so[7]));
  km_sdffc pipe_8_ff (.CK(clk), .RN(rst_n), .SE(scan_en), .SI(so[7]), .D(n18), .Q(so[8]));
  km_sdffc pipe_9_ff (.CK(clk), .RN(rst_n), .SE(scan_en), .SI(so[8]), .D(n19), .Q(so[9]));
  km_sdffc pipe_10_ff (.CK(clk), .RN(rst_n), .SE(scan_en), .SI(so[9]), .D(n20), .Q(so[10]));
  km_sdffc pipe_11_ff (.CK(clk), .RN(rst_n), .SE(scan_en), .SI(so[10]), .D(n21), .Q(so[11]));

  assign scan_out = so[11];
endmodule
