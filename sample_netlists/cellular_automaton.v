// Limpet tide-gauge controller, wave memory: the pattern generator of 16 scan chains. A cellular automaton of
// 24 sites, rules 90 and 150 with null boundaries; 16 of the sites feed chains directly, without a phase
// shifter.
//
// The audit must pass it: primitive (period 16777215), and the sites scatter over the cycle, so that the
// chains of 150 scan cells do not overlap; nearest are so[0] and so[6], 4508 cycles apart.

module cellular_automaton (
  input clk,
  input rst_n,
  output [15:0] so
);
  wire [23:0] site;
  wire n1, n2, n3, n4, n5, n6, n7, n8, n9, n10, n11, n12, n13, n14, n15, n16, n17, n18, n19, n20, n21, n22,
    n23, n24, n25, n26, n27, n28, n29, n30, n31, n32;

  // The register.
  km_dffs site_0_ff (.CK(clk), .SN(rst_n), .D(n1), .Q(site[0]));
  km_dffc site_1_ff (.CK(clk), .RN(rst_n), .D(n2), .Q(site[1]));
  km_dffc site_2_ff (.CK(clk), .RN(rst_n), .D(n4), .Q(site[2]));
  km_dffc site_3_ff (.CK(clk), .RN(rst_n), .D(n5), .Q(site[3]));
  km_dffc site_4_ff (.CK(clk), .RN(rst_n), .D(n7), .Q(site[4]));
  km_dffc site_5_ff (.CK(clk), .RN(rst_n), .D(n8), .Q(site[5]));
  km_dffc site_6_ff (.CK(clk), .RN(rst_n), .D(n9), .Q(site[6]));
  km_dffc site_7_ff (.CK(clk), .RN(rst_n), .D(n11), .Q(site[7]));
  km_dffc site_8_ff (.CK(clk), .RN(rst_n), .D(n12), .Q(site[8]));
  km_dffc site_9_ff (.CK(clk), .RN(rst_n), .D(n13), .Q(site[9]));
  km_dffs site_10_ff (.CK(clk), .SN(rst_n), .D(n15), .Q(site[10]));
  km_dffc site_11_ff (.CK(clk), .RN(rst_n), .D(n16), .Q(site[11]));
  km_dffc site_12_ff (.CK(clk), .RN(rst_n), .D(n18), .Q(site[12]));
  km_dffc site_13_ff (.CK(clk), .RN(rst_n), .D(n19), .Q(site[13]));
  km_dffc site_14_ff (.CK(clk), .RN(rst_n), .D(n20), .Q(site[14]));
  km_dffc site_15_ff (.CK(clk), .RN(rst_n), .D(n22), .Q(site[15]));
  km_dffc site_16_ff (.CK(clk), .RN(rst_n), .D(n23), .Q(site[16]));
  km_dffc site_17_ff (.CK(clk), .RN(rst_n), .D(n25), .Q(site[17]));
  km_dffc site_18_ff (.CK(clk), .RN(rst_n), .D(n26), .Q(site[18]));
  km_dffc site_19_ff (.CK(clk), .RN(rst_n), .D(n28), .Q(site[19]));
  km_dffc site_20_ff (.CK(clk), .RN(rst_n), .D(n29), .Q(site[20]));
  km_dffc site_21_ff (.CK(clk), .RN(rst_n), .D(n31), .Q(site[21]));
  km_dffc site_22_ff (.CK(clk), .RN(rst_n), .D(n32), .Q(site[22]));
  km_dffs site_23_ff (.CK(clk), .SN(rst_n), .D(site[22]), .Q(site[23]));

  // The next states.
  km_xor2 u1 (.A(site[0]), .B(site[1]), .Y(n1));
  km_xor2 u2 (.A(site[2]), .B(n1), .Y(n2));
  km_xnor2 u3 (.A(site[2]), .B(site[3]), .Y(n3));
  km_xnor2 u4 (.A(site[1]), .B(n3), .Y(n4));
  km_xnor2 u5 (.A(site[4]), .B(n3), .Y(n5));
  km_xnor2 u6 (.A(site[4]), .B(site[5]), .Y(n6));
  km_xnor2 u7 (.A(site[3]), .B(n6), .Y(n7));
  km_xnor2 u8 (.A(site[6]), .B(n6), .Y(n8));
  km_xor2 u9 (.A(site[5]), .B(site[7]), .Y(n9));
  km_xnor2 u10 (.A(site[7]), .B(site[8]), .Y(n10));
  km_xnor2 u11 (.A(site[6]), .B(n10), .Y(n11));
  km_xor2 u12 (.A(site[7]), .B(site[9]), .Y(n12));
  km_xor2 u13 (.A(site[8]), .B(site[10]), .Y(n13));
  km_xnor2 u14 (.A(site[10]), .B(site[11]), .Y(n14));
  km_xnor2 u15 (.A(site[9]), .B(n14), .Y(n15));
  km_xor2 u16 (.A(site[10]), .B(site[12]), .Y(n16));
  km_xnor2 u17 (.A(site[12]), .B(site[13]), .Y(n17));
  km_xnor2 u18 (.A(site[11]), .B(n17), .Y(n18));
  km_xnor2 u19 (.A(site[14]), .B(n17), .Y(n19));
  km_xor2 u20 (.A(site[13]), .B(site[15]), .Y(n20));
  km_xnor2 u21 (.A(site[15]), .B(site[16]), .Y(n21));
  km_xnor2 u22 (.A(site[14]), .B(n21), .Y(n22));
  km_xor2 u23 (.A(site[15]), .B(site[17]), .Y(n23));
  km_xnor2 u24 (.A(site[17]), .B(site[18]), .Y(n24));
  km_xnor2 u25 (.A(site[16]), .B(n24), .Y(n25));
  km_xor2 u26 (.A(site[17]), .B(site[19]), .Y(n26));
  km_xnor2 u27 (.A(site[19]), .B(site[20]), .Y(n27));
  km_xnor2 u28 (.A(site[18]), .B(n27), .Y(n28));
  km_xor2 u29 (.A(site[19]), .B(site[21]), .Y(n29));
  km_xnor2 u30 (.A(site[21]), .B(site[22]), .Y(n30));
  km_xnor2 u31 (.A(site[20]), .B(n30), .Y(n31));
  km_xnor2 u32 (.A(site[23]), .B(n30), .Y(n32));

  assign so[0] = site[0];
  assign so[1] = site[1];
  assign so[2] = site[3];
  assign so[3] = site[4];
  assign so[4] = site[6];
  assign so[5] = site[7];
  assign so[6] = site[8];
  assign so[7] = site[9];
  assign so[8] = site[10];
  assign so[9] = site[11];
  assign so[10] = site[12];
  assign so[11] = site[13];
  assign so[12] = site[14];
  assign so[13] = site[16];
  assign so[14] = site[18];
  assign so[15] = site[20];
endmodule
