// Limpet tide-gauge controller, echo correlator, a later revision of phase_shifter.v: every channel taps the
// register one stage earlier.
// 
// The comparison must say shifted, by one cycle.

module phase_shifter (
  input clk,
  input rst_n,
  output [15:0] so
);
  wire s_0, s_1, n1, s_31, n3, s_21, n5, s_2, s_3, s_4, s_5, s_6, s_7, s_8, s_9, s_10, s_11, s_12, s_13, s_14,
       s_15, s_16, s_17, s_18, s_19, s_20, s_22, s_23, s_24, s_25, s_26, s_27, s_28, s_29, s_30, n7, n10, n13,
       n16, n19, n22, n25, n28, n30, n32, n34, n37, n40, n43, n46, n49, n52, n55, n58, n60, n62, n64;

  // The register.
  km_dffs stage_0_ff (.CK(clk), .D(n5), .Q(s_0), .SN(rst_n));
  km_dffc stage_1_ff (.CK(clk), .D(s_0), .Q(s_1), .RN(rst_n));
  km_dffc stage_2_ff (.CK(clk), .D(s_1), .Q(s_2), .RN(rst_n));
  km_dffc stage_3_ff (.CK(clk), .D(s_2), .Q(s_3), .RN(rst_n));
  km_dffc stage_4_ff (.CK(clk), .D(s_3), .Q(s_4), .RN(rst_n));
  km_dffc stage_5_ff (.CK(clk), .D(s_4), .Q(s_5), .RN(rst_n));
  km_dffc stage_6_ff (.CK(clk), .D(s_5), .Q(s_6), .RN(rst_n));
  km_dffc stage_7_ff (.CK(clk), .D(s_6), .Q(s_7), .RN(rst_n));
  km_dffc stage_8_ff (.CK(clk), .D(s_7), .Q(s_8), .RN(rst_n));
  km_dffc stage_9_ff (.CK(clk), .D(s_8), .Q(s_9), .RN(rst_n));
  km_dffc stage_10_ff (.CK(clk), .D(s_9), .Q(s_10), .RN(rst_n));
  km_dffc stage_11_ff (.CK(clk), .D(s_10), .Q(s_11), .RN(rst_n));
  km_dffc stage_12_ff (.CK(clk), .D(s_11), .Q(s_12), .RN(rst_n));
  km_dffc stage_13_ff (.CK(clk), .D(s_12), .Q(s_13), .RN(rst_n));
  km_dffs stage_14_ff (.CK(clk), .D(s_13), .Q(s_14), .SN(rst_n));
  km_dffc stage_15_ff (.CK(clk), .D(s_14), .Q(s_15), .RN(rst_n));
  km_dffc stage_16_ff (.CK(clk), .D(s_15), .Q(s_16), .RN(rst_n));
  km_dffc stage_17_ff (.CK(clk), .D(s_16), .Q(s_17), .RN(rst_n));
  km_dffc stage_18_ff (.CK(clk), .D(s_17), .Q(s_18), .RN(rst_n));
  km_dffc stage_19_ff (.CK(clk), .D(s_18), .Q(s_19), .RN(rst_n));
  km_dffc stage_20_ff (.CK(clk), .D(s_19), .Q(s_20), .RN(rst_n));
  km_dffc stage_21_ff (.CK(clk), .D(s_20), .Q(s_21), .RN(rst_n));
  km_dffc stage_22_ff (.CK(clk), .D(s_21), .Q(s_22), .RN(rst_n));
  km_dffc stage_23_ff (.CK(clk), .D(s_22), .Q(s_23), .RN(rst_n));
  km_dffc stage_24_ff (.CK(clk), .D(s_23), .Q(s_24), .RN(rst_n));
  km_dffc stage_25_ff (.CK(clk), .D(s_24), .Q(s_25), .RN(rst_n));
  km_dffc stage_26_ff (.CK(clk), .D(s_25), .Q(s_26), .RN(rst_n));
  km_dffc stage_27_ff (.CK(clk), .D(s_26), .Q(s_27), .RN(rst_n));
  km_dffc stage_28_ff (.CK(clk), .D(s_27), .Q(s_28), .RN(rst_n));
  km_dffc stage_29_ff (.CK(clk), .D(s_28), .Q(s_29), .RN(rst_n));
  km_dffc stage_30_ff (.CK(clk), .D(s_29), .Q(s_30), .RN(rst_n));
  km_dffc stage_31_ff (.CK(clk), .D(s_30), .Q(s_31), .RN(rst_n));

  // Next states and channels.
  km_xor2 u2 (.A(s_0), .B(s_1), .Y(n1));
  km_xor2 u4 (.A(n1), .B(s_31), .Y(n3));
  km_xor2 u6 (.A(n3), .B(s_21), .Y(n5));
  km_xor2 u8 (.A(s_19), .B(s_0), .Y(n7));
  km_xor2 u9 (.A(n7), .B(s_26), .Y(so[0]));
  km_xor2 u11 (.A(s_20), .B(s_1), .Y(n10));
  km_xor2 u12 (.A(n10), .B(s_7), .Y(so[1]));
  km_xor2 u14 (.A(s_4), .B(s_2), .Y(n13));
  km_xor2 u15 (.A(n13), .B(s_13), .Y(so[2]));
  km_xor2 u17 (.A(s_8), .B(s_22), .Y(n16));
  km_xor2 u18 (.A(n16), .B(s_7), .Y(so[3]));
  km_xor2 u20 (.A(s_1), .B(s_15), .Y(n19));
  km_xor2 u21 (.A(n19), .B(s_12), .Y(so[4]));
  km_xor2 u23 (.A(s_27), .B(s_18), .Y(n22));
  km_xor2 u24 (.A(n22), .B(s_0), .Y(so[5]));
  km_xor2 u26 (.A(s_10), .B(s_5), .Y(n25));
  km_xor2 u27 (.A(n25), .B(s_29), .Y(so[6]));
  km_xor2 u29 (.A(s_31), .B(s_18), .Y(n28));
  km_xor2 u31 (.A(n28), .B(s_11), .Y(n30));
  km_xor2 u33 (.A(n30), .B(s_0), .Y(n32));
  km_xor2 u35 (.A(n32), .B(s_1), .Y(n34));
  km_xor2 u36 (.A(n34), .B(s_21), .Y(so[7]));
  km_xor2 u38 (.A(s_4), .B(s_28), .Y(n37));
  km_xor2 u39 (.A(n37), .B(s_16), .Y(so[8]));
  km_xor2 u41 (.A(s_24), .B(s_19), .Y(n40));
  km_xor2 u42 (.A(n40), .B(s_8), .Y(so[9]));
  km_xor2 u44 (.A(s_17), .B(s_28), .Y(n43));
  km_xor2 u45 (.A(n43), .B(s_10), .Y(so[10]));
  km_xor2 u47 (.A(s_20), .B(s_12), .Y(n46));
  km_xor2 u48 (.A(n46), .B(s_6), .Y(so[11]));
  km_xor2 u50 (.A(s_9), .B(s_15), .Y(n49));
  km_xor2 u51 (.A(n49), .B(s_6), .Y(so[12]));
  km_xor2 u53 (.A(s_21), .B(s_24), .Y(n52));
  km_xor2 u54 (.A(n52), .B(s_14), .Y(so[13]));
  km_xor2 u56 (.A(s_25), .B(s_30), .Y(n55));
  km_xor2 u57 (.A(n55), .B(s_23), .Y(so[14]));
  km_xor2 u59 (.A(s_21), .B(s_0), .Y(n58));
  km_xor2 u61 (.A(n58), .B(s_27), .Y(n60));
  km_xor2 u63 (.A(n60), .B(s_3), .Y(n62));
  km_xor2 u65 (.A(n62), .B(s_31), .Y(n64));
  km_xor2 u66 (.A(n64), .B(s_1), .Y(so[15]));
endmodule
