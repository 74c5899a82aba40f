// Limpet tide-gauge controller, echo correlator, a later revision of phase_shifter.v: so[3], so[4] and so[9]
// changed places.
// 
// The comparison must say permuted.

module phase_shifter (
  input clk,
  input rst_n,
  output [15:0] so
);
  wire [31:0] stage;
  wire n1, n2, n3, n4, n5, n6, n7, n8, n9, n10, n11, n12, n13, n14, n15, n16, n17, n18, n19;

  // The register.
  km_dffs stage_0_ff (.CK(clk), .SN(rst_n), .D(n3), .Q(stage[0]));
  km_dffc stage_1_ff (.CK(clk), .RN(rst_n), .D(stage[0]), .Q(stage[1]));
  km_dffc stage_2_ff (.CK(clk), .RN(rst_n), .D(stage[1]), .Q(stage[2]));
  km_dffc stage_3_ff (.CK(clk), .RN(rst_n), .D(stage[2]), .Q(stage[3]));
  km_dffc stage_4_ff (.CK(clk), .RN(rst_n), .D(stage[3]), .Q(stage[4]));
  km_dffc stage_5_ff (.CK(clk), .RN(rst_n), .D(stage[4]), .Q(stage[5]));
  km_dffc stage_6_ff (.CK(clk), .RN(rst_n), .D(stage[5]), .Q(stage[6]));
  km_dffc stage_7_ff (.CK(clk), .RN(rst_n), .D(stage[6]), .Q(stage[7]));
  km_dffc stage_8_ff (.CK(clk), .RN(rst_n), .D(stage[7]), .Q(stage[8]));
  km_dffc stage_9_ff (.CK(clk), .RN(rst_n), .D(stage[8]), .Q(stage[9]));
  km_dffc stage_10_ff (.CK(clk), .RN(rst_n), .D(stage[9]), .Q(stage[10]));
  km_dffc stage_11_ff (.CK(clk), .RN(rst_n), .D(stage[10]), .Q(stage[11]));
  km_dffc stage_12_ff (.CK(clk), .RN(rst_n), .D(stage[11]), .Q(stage[12]));
  km_dffc stage_13_ff (.CK(clk), .RN(rst_n), .D(stage[12]), .Q(stage[13]));
  km_dffs stage_14_ff (.CK(clk), .SN(rst_n), .D(stage[13]), .Q(stage[14]));
  km_dffc stage_15_ff (.CK(clk), .RN(rst_n), .D(stage[14]), .Q(stage[15]));
  km_dffc stage_16_ff (.CK(clk), .RN(rst_n), .D(stage[15]), .Q(stage[16]));
  km_dffc stage_17_ff (.CK(clk), .RN(rst_n), .D(stage[16]), .Q(stage[17]));
  km_dffc stage_18_ff (.CK(clk), .RN(rst_n), .D(stage[17]), .Q(stage[18]));
  km_dffc stage_19_ff (.CK(clk), .RN(rst_n), .D(stage[18]), .Q(stage[19]));
  km_dffc stage_20_ff (.CK(clk), .RN(rst_n), .D(stage[19]), .Q(stage[20]));
  km_dffc stage_21_ff (.CK(clk), .RN(rst_n), .D(stage[20]), .Q(stage[21]));
  km_dffc stage_22_ff (.CK(clk), .RN(rst_n), .D(stage[21]), .Q(stage[22]));
  km_dffc stage_23_ff (.CK(clk), .RN(rst_n), .D(stage[22]), .Q(stage[23]));
  km_dffc stage_24_ff (.CK(clk), .RN(rst_n), .D(stage[23]), .Q(stage[24]));
  km_dffc stage_25_ff (.CK(clk), .RN(rst_n), .D(stage[24]), .Q(stage[25]));
  km_dffc stage_26_ff (.CK(clk), .RN(rst_n), .D(stage[25]), .Q(stage[26]));
  km_dffc stage_27_ff (.CK(clk), .RN(rst_n), .D(stage[26]), .Q(stage[27]));
  km_dffc stage_28_ff (.CK(clk), .RN(rst_n), .D(stage[27]), .Q(stage[28]));
  km_dffc stage_29_ff (.CK(clk), .RN(rst_n), .D(stage[28]), .Q(stage[29]));
  km_dffc stage_30_ff (.CK(clk), .RN(rst_n), .D(stage[29]), .Q(stage[30]));
  km_dffc stage_31_ff (.CK(clk), .RN(rst_n), .D(stage[30]), .Q(stage[31]));

  // The next states.
  km_xor2 u1 (.A(stage[1]), .B(stage[0]), .Y(n1));
  km_xnor2 u2 (.A(stage[31]), .B(stage[21]), .Y(n2));
  km_xnor2 u3 (.A(n1), .B(n2), .Y(n3));

  // The phase shifter.
  km_xnor2 u4 (.A(stage[20]), .B(stage[27]), .Y(n4));
  km_xnor2 u5 (.A(stage[1]), .B(n4), .Y(so[0]));
  km_xnor2 u6 (.A(stage[2]), .B(stage[8]), .Y(n5));
  km_xnor2 u7 (.A(stage[21]), .B(n5), .Y(so[1]));
  km_xnor2 u8 (.A(stage[5]), .B(stage[14]), .Y(n6));
  km_xnor2 u9 (.A(stage[3]), .B(n6), .Y(so[2]));
  km_xnor2 u10 (.A(stage[9]), .B(stage[23]), .Y(n7));
  km_xnor2 u11 (.A(stage[8]), .B(n7), .Y(so[9]));
  km_xnor2 u12 (.A(stage[13]), .B(stage[16]), .Y(n8));
  km_xnor2 u13 (.A(stage[2]), .B(n8), .Y(so[3]));
  km_xnor2 u14 (.A(stage[19]), .B(stage[28]), .Y(n9));
  km_xnor2 u15 (.A(stage[1]), .B(n9), .Y(so[5]));
  km_xnor2 u16 (.A(stage[11]), .B(stage[30]), .Y(n10));
  km_xnor2 u17 (.A(stage[6]), .B(n10), .Y(so[6]));
  km_xnor2 u18 (.A(stage[19]), .B(stage[12]), .Y(n11));
  km_xnor2 u19 (.A(stage[0]), .B(n11), .Y(so[7]));
  km_xnor2 u20 (.A(stage[17]), .B(stage[29]), .Y(n12));
  km_xnor2 u21 (.A(stage[5]), .B(n12), .Y(so[8]));
  km_xnor2 u22 (.A(stage[9]), .B(stage[25]), .Y(n13));
  km_xnor2 u23 (.A(stage[20]), .B(n13), .Y(so[4]));
  km_xnor2 u24 (.A(stage[29]), .B(stage[18]), .Y(n14));
  km_xnor2 u25 (.A(stage[11]), .B(n14), .Y(so[10]));
  km_xnor2 u26 (.A(stage[13]), .B(stage[7]), .Y(n15));
  km_xnor2 u27 (.A(stage[21]), .B(n15), .Y(so[11]));
  km_xnor2 u28 (.A(stage[7]), .B(stage[10]), .Y(n16));
  km_xnor2 u29 (.A(stage[16]), .B(n16), .Y(so[12]));
  km_xnor2 u30 (.A(stage[15]), .B(stage[22]), .Y(n17));
  km_xnor2 u31 (.A(stage[25]), .B(n17), .Y(so[13]));
  km_xnor2 u32 (.A(stage[24]), .B(stage[26]), .Y(n18));
  km_xnor2 u33 (.A(stage[31]), .B(n18), .Y(so[14]));
  km_xnor2 u34 (.A(stage[28]), .B(stage[4]), .Y(n19));
  km_xnor2 u35 (.A(stage[0]), .B(n19), .Y(so[15]));
endmodule
