// Limpet tide-gauge controller, echo correlator, a later revision of phase_shifter.v: the register goes three
// steps in every cycle.
// 
// The comparison must say decimated, by 3.

module phase_shifter (
  input clk,
  input rst_n,
  output [15:0] so
);
  wire s_19, s_0, n1, s_30, n3, s_29, n5, s_20, n7, s_31, n9, s_21, n11, s_1, n13, n15, n17, n19, n21, s_2, s_3,
       s_4, s_5, s_6, s_7, s_8, s_9, s_10, s_11, s_12, s_13, s_14, s_15, s_16, s_17, s_18, s_22, s_23, s_24,
       s_25, s_26, s_27, s_28, n23, n26, n29, n32, n35, n38, n41, n44, n47, n50, n53, n56, n59, n62, n65, n68;

  // The register.
  km_dffs ff_0 (.CK(clk), .D(n7), .Q(s_0), .SN(rst_n));
  km_dffc ff_1 (.CK(clk), .D(n15), .Q(s_1), .RN(rst_n));
  km_dffc ff_2 (.CK(clk), .D(n21), .Q(s_2), .RN(rst_n));
  km_dffc ff_3 (.CK(clk), .D(s_0), .Q(s_3), .RN(rst_n));
  km_dffc ff_4 (.CK(clk), .D(s_1), .Q(s_4), .RN(rst_n));
  km_dffc ff_5 (.CK(clk), .D(s_2), .Q(s_5), .RN(rst_n));
  km_dffc ff_6 (.CK(clk), .D(s_3), .Q(s_6), .RN(rst_n));
  km_dffc ff_7 (.CK(clk), .D(s_4), .Q(s_7), .RN(rst_n));
  km_dffc ff_8 (.CK(clk), .D(s_5), .Q(s_8), .RN(rst_n));
  km_dffc ff_9 (.CK(clk), .D(s_6), .Q(s_9), .RN(rst_n));
  km_dffc ff_10 (.CK(clk), .D(s_7), .Q(s_10), .RN(rst_n));
  km_dffc ff_11 (.CK(clk), .D(s_8), .Q(s_11), .RN(rst_n));
  km_dffc ff_12 (.CK(clk), .D(s_9), .Q(s_12), .RN(rst_n));
  km_dffc ff_13 (.CK(clk), .D(s_10), .Q(s_13), .RN(rst_n));
  km_dffs ff_14 (.CK(clk), .D(s_11), .Q(s_14), .SN(rst_n));
  km_dffc ff_15 (.CK(clk), .D(s_12), .Q(s_15), .RN(rst_n));
  km_dffc ff_16 (.CK(clk), .D(s_13), .Q(s_16), .RN(rst_n));
  km_dffc ff_17 (.CK(clk), .D(s_14), .Q(s_17), .RN(rst_n));
  km_dffc ff_18 (.CK(clk), .D(s_15), .Q(s_18), .RN(rst_n));
  km_dffc ff_19 (.CK(clk), .D(s_16), .Q(s_19), .RN(rst_n));
  km_dffc ff_20 (.CK(clk), .D(s_17), .Q(s_20), .RN(rst_n));
  km_dffc ff_21 (.CK(clk), .D(s_18), .Q(s_21), .RN(rst_n));
  km_dffc ff_22 (.CK(clk), .D(s_19), .Q(s_22), .RN(rst_n));
  km_dffc ff_23 (.CK(clk), .D(s_20), .Q(s_23), .RN(rst_n));
  km_dffc ff_24 (.CK(clk), .D(s_21), .Q(s_24), .RN(rst_n));
  km_dffc ff_25 (.CK(clk), .D(s_22), .Q(s_25), .RN(rst_n));
  km_dffc ff_26 (.CK(clk), .D(s_23), .Q(s_26), .RN(rst_n));
  km_dffc ff_27 (.CK(clk), .D(s_24), .Q(s_27), .RN(rst_n));
  km_dffc ff_28 (.CK(clk), .D(s_25), .Q(s_28), .RN(rst_n));
  km_dffc ff_29 (.CK(clk), .D(s_26), .Q(s_29), .RN(rst_n));
  km_dffc ff_30 (.CK(clk), .D(s_27), .Q(s_30), .RN(rst_n));
  km_dffc ff_31 (.CK(clk), .D(s_28), .Q(s_31), .RN(rst_n));

  // Next states and channels.
  km_xor2 u2 (.A(s_19), .B(s_0), .Y(n1));
  km_xor2 u4 (.A(n1), .B(s_30), .Y(n3));
  km_xor2 u6 (.A(n3), .B(s_29), .Y(n5));
  km_xor2 u8 (.A(n5), .B(s_20), .Y(n7));
  km_xor2 u10 (.A(s_20), .B(s_31), .Y(n9));
  km_xor2 u12 (.A(n9), .B(s_21), .Y(n11));
  km_xor2 u14 (.A(n11), .B(s_1), .Y(n13));
  km_xor2 u16 (.A(n13), .B(s_30), .Y(n15));
  km_xor2 u18 (.A(s_31), .B(s_21), .Y(n17));
  km_xor2 u20 (.A(n17), .B(s_0), .Y(n19));
  km_xor2 u22 (.A(n19), .B(s_1), .Y(n21));
  km_xor2 u24 (.A(s_1), .B(s_27), .Y(n23));
  km_xor2 u25 (.A(n23), .B(s_20), .Y(so[0]));
  km_xor2 u27 (.A(s_2), .B(s_8), .Y(n26));
  km_xor2 u28 (.A(n26), .B(s_21), .Y(so[1]));
  km_xor2 u30 (.A(s_3), .B(s_5), .Y(n29));
  km_xor2 u31 (.A(n29), .B(s_14), .Y(so[2]));
  km_xor2 u33 (.A(s_23), .B(s_8), .Y(n32));
  km_xor2 u34 (.A(n32), .B(s_9), .Y(so[3]));
  km_xor2 u36 (.A(s_2), .B(s_13), .Y(n35));
  km_xor2 u37 (.A(n35), .B(s_16), .Y(so[4]));
  km_xor2 u39 (.A(s_28), .B(s_1), .Y(n38));
  km_xor2 u40 (.A(n38), .B(s_19), .Y(so[5]));
  km_xor2 u42 (.A(s_30), .B(s_6), .Y(n41));
  km_xor2 u43 (.A(n41), .B(s_11), .Y(so[6]));
  km_xor2 u45 (.A(s_19), .B(s_12), .Y(n44));
  km_xor2 u46 (.A(n44), .B(s_0), .Y(so[7]));
  km_xor2 u48 (.A(s_5), .B(s_17), .Y(n47));
  km_xor2 u49 (.A(n47), .B(s_29), .Y(so[8]));
  km_xor2 u51 (.A(s_25), .B(s_20), .Y(n50));
  km_xor2 u52 (.A(n50), .B(s_9), .Y(so[9]));
  km_xor2 u54 (.A(s_29), .B(s_11), .Y(n53));
  km_xor2 u55 (.A(n53), .B(s_18), .Y(so[10]));
  km_xor2 u57 (.A(s_7), .B(s_21), .Y(n56));
  km_xor2 u58 (.A(n56), .B(s_13), .Y(so[11]));
  km_xor2 u60 (.A(s_16), .B(s_7), .Y(n59));
  km_xor2 u61 (.A(n59), .B(s_10), .Y(so[12]));
  km_xor2 u63 (.A(s_22), .B(s_25), .Y(n62));
  km_xor2 u64 (.A(n62), .B(s_15), .Y(so[13]));
  km_xor2 u66 (.A(s_24), .B(s_26), .Y(n65));
  km_xor2 u67 (.A(n65), .B(s_31), .Y(so[14]));
  km_xor2 u69 (.A(s_28), .B(s_0), .Y(n68));
  km_xor2 u70 (.A(n68), .B(s_4), .Y(so[15]));
endmodule
