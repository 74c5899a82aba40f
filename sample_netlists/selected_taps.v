// Limpet tide-gauge controller, sea state estimator: the pattern generator of 6 scan chains. A 14-stage register
// whose feedback is chosen by the pin storm: stages 14, 5, 3, 1 with storm = 0 and 14, 9, 3, 1 with storm = 1; two
// taps a channel.
//
// The audit must fail it, with the modes calm (storm = 0) and storm (storm = 1): calm passes, primitive (period
// 16383), nearest so[1] and so[2] with 836 cycles; storm fails, its register repeats after 585 cycles at most,
// before the 800 clocks of the planned test are over.

module selected_taps (
  input clk,
  input rst_n,
  input storm,
  output [5:0] so
);
  wire [14:1] stage;
  wire chosen, n1, n2, feedback;

  // The register.
  km_dffs stage_1_ff (.CK(clk), .SN(rst_n), .D(feedback), .Q(stage[1]));
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
  km_dffc stage_14_ff (.CK(clk), .RN(rst_n), .D(stage[13]), .Q(stage[14]));

  // The feedback.
  km_mux2 u1 (.D0(stage[5]), .D1(stage[9]), .S(storm), .Y(chosen));
  km_xor2 u2 (.A(stage[14]), .B(chosen), .Y(n1));
  km_xor2 u3 (.A(stage[3]), .B(stage[1]), .Y(n2));
  km_xor2 u4 (.A(n1), .B(n2), .Y(feedback));

  // The phase shifter.
  km_xor2 u5 (.A(stage[6]), .B(stage[12]), .Y(so[0]));
  km_xor2 u6 (.A(stage[3]), .B(stage[12]), .Y(so[1]));
  km_xor2 u7 (.A(stage[8]), .B(stage[9]), .Y(so[2]));
  km_xor2 u8 (.A(stage[3]), .B(stage[8]), .Y(so[3]));
  km_xor2 u9 (.A(stage[2]), .B(stage[14]), .Y(so[4]));
  km_xor2 u10 (.A(stage[7]), .B(stage[14]), .Y(so[5]));
endmodule
