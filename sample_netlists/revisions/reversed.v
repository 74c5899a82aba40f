// Limpet tide-gauge controller, echo correlator, a later revision of phase_shifter.v: the register runs
// backwards, by the reciprocal polynomial.
// 
// The comparison must say reversed.

module phase_shifter (
  input clk,
  input rst_n,
  output [15:0] so
);
  wire s_1, s_0, s_2, s_3, s_4, s_5, s_6, s_7, s_8, s_9, s_10, s_11, s_12, s_13, s_14, s_15, s_16, s_17, s_18,
       s_19, s_20, s_21, s_22, s_23, s_24, s_25, s_26, s_27, s_28, s_29, s_30, s_31, n1, n3, n5, n7, n10, n13,
       n16, n19, n22, n25, n28, n31, n34, n37, n40, n43, n46, n49, n52;

  // The register.
  km_dffs ff_0 (.CK(clk), .D(s_1), .Q(s_0), .SN(rst_n));
  km_dffc ff_1 (.CK(clk), .D(s_2), .Q(s_1), .RN(rst_n));
  km_dffc ff_2 (.CK(clk), .D(s_3), .Q(s_2), .RN(rst_n));
  km_dffc ff_3 (.CK(clk), .D(s_4), .Q(s_3), .RN(rst_n));
  km_dffc ff_4 (.CK(clk), .D(s_5), .Q(s_4), .RN(rst_n));
  km_dffc ff_5 (.CK(clk), .D(s_6), .Q(s_5), .RN(rst_n));
  km_dffc ff_6 (.CK(clk), .D(s_7), .Q(s_6), .RN(rst_n));
  km_dffc ff_7 (.CK(clk), .D(s_8), .Q(s_7), .RN(rst_n));
  km_dffc ff_8 (.CK(clk), .D(s_9), .Q(s_8), .RN(rst_n));
  km_dffc ff_9 (.CK(clk), .D(s_10), .Q(s_9), .RN(rst_n));
  km_dffc ff_10 (.CK(clk), .D(s_11), .Q(s_10), .RN(rst_n));
  km_dffc ff_11 (.CK(clk), .D(s_12), .Q(s_11), .RN(rst_n));
  km_dffc ff_12 (.CK(clk), .D(s_13), .Q(s_12), .RN(rst_n));
  km_dffc ff_13 (.CK(clk), .D(s_14), .Q(s_13), .RN(rst_n));
  km_dffs ff_14 (.CK(clk), .D(s_15), .Q(s_14), .SN(rst_n));
  km_dffc ff_15 (.CK(clk), .D(s_16), .Q(s_15), .RN(rst_n));
  km_dffc ff_16 (.CK(clk), .D(s_17), .Q(s_16), .RN(rst_n));
  km_dffc ff_17 (.CK(clk), .D(s_18), .Q(s_17), .RN(rst_n));
  km_dffc ff_18 (.CK(clk), .D(s_19), .Q(s_18), .RN(rst_n));
  km_dffc ff_19 (.CK(clk), .D(s_20), .Q(s_19), .RN(rst_n));
  km_dffc ff_20 (.CK(clk), .D(s_21), .Q(s_20), .RN(rst_n));
  km_dffc ff_21 (.CK(clk), .D(s_22), .Q(s_21), .RN(rst_n));
  km_dffc ff_22 (.CK(clk), .D(s_23), .Q(s_22), .RN(rst_n));
  km_dffc ff_23 (.CK(clk), .D(s_24), .Q(s_23), .RN(rst_n));
  km_dffc ff_24 (.CK(clk), .D(s_25), .Q(s_24), .RN(rst_n));
  km_dffc ff_25 (.CK(clk), .D(s_26), .Q(s_25), .RN(rst_n));
  km_dffc ff_26 (.CK(clk), .D(s_27), .Q(s_26), .RN(rst_n));
  km_dffc ff_27 (.CK(clk), .D(s_28), .Q(s_27), .RN(rst_n));
  km_dffc ff_28 (.CK(clk), .D(s_29), .Q(s_28), .RN(rst_n));
  km_dffc ff_29 (.CK(clk), .D(s_30), .Q(s_29), .RN(rst_n));
  km_dffc ff_30 (.CK(clk), .D(s_31), .Q(s_30), .RN(rst_n));
  km_dffc ff_31 (.CK(clk), .D(n5), .Q(s_31), .RN(rst_n));

  // Next states and channels.
  km_xor2 u2 (.A(s_22), .B(s_2), .Y(n1));
  km_xor2 u4 (.A(n1), .B(s_0), .Y(n3));
  km_xor2 u6 (.A(n3), .B(s_1), .Y(n5));
  km_xor2 u8 (.A(s_1), .B(s_27), .Y(n7));
  km_xor2 u9 (.A(n7), .B(s_20), .Y(so[0]));
  km_xor2 u11 (.A(s_21), .B(s_8), .Y(n10));
  km_xor2 u12 (.A(n10), .B(s_2), .Y(so[1]));
  km_xor2 u14 (.A(s_14), .B(s_3), .Y(n13));
  km_xor2 u15 (.A(n13), .B(s_5), .Y(so[2]));
  km_xor2 u17 (.A(s_23), .B(s_9), .Y(n16));
  km_xor2 u18 (.A(n16), .B(s_8), .Y(so[3]));
  km_xor2 u20 (.A(s_16), .B(s_13), .Y(n19));
  km_xor2 u21 (.A(n19), .B(s_2), .Y(so[4]));
  km_xor2 u23 (.A(s_28), .B(s_1), .Y(n22));
  km_xor2 u24 (.A(n22), .B(s_19), .Y(so[5]));
  km_xor2 u26 (.A(s_6), .B(s_11), .Y(n25));
  km_xor2 u27 (.A(n25), .B(s_30), .Y(so[6]));
  km_xor2 u29 (.A(s_19), .B(s_12), .Y(n28));
  km_xor2 u30 (.A(n28), .B(s_0), .Y(so[7]));
  km_xor2 u32 (.A(s_5), .B(s_29), .Y(n31));
  km_xor2 u33 (.A(n31), .B(s_17), .Y(so[8]));
  km_xor2 u35 (.A(s_9), .B(s_25), .Y(n34));
  km_xor2 u36 (.A(n34), .B(s_20), .Y(so[9]));
  km_xor2 u38 (.A(s_29), .B(s_18), .Y(n37));
  km_xor2 u39 (.A(n37), .B(s_11), .Y(so[10]));
  km_xor2 u41 (.A(s_21), .B(s_7), .Y(n40));
  km_xor2 u42 (.A(n40), .B(s_13), .Y(so[11]));
  km_xor2 u44 (.A(s_16), .B(s_10), .Y(n43));
  km_xor2 u45 (.A(n43), .B(s_7), .Y(so[12]));
  km_xor2 u47 (.A(s_25), .B(s_22), .Y(n46));
  km_xor2 u48 (.A(n46), .B(s_15), .Y(so[13]));
  km_xor2 u50 (.A(s_31), .B(s_24), .Y(n49));
  km_xor2 u51 (.A(n49), .B(s_26), .Y(so[14]));
  km_xor2 u53 (.A(s_0), .B(s_4), .Y(n52));
  km_xor2 u54 (.A(n52), .B(s_28), .Y(so[15]));
endmodule
