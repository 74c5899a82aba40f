// Limpet tide-gauge controller, level filter: the pattern generator of 16 scan chains. A plain 16-stage
// register, x^16 + x^15 + x^13 + x^4 + 1 by stage numbers, whose flip-flops feed the chains directly; stages
// shift towards stage[15].
//
// The audit must fail it: the register is primitive (period 65535), but neighbouring chains carry one stream,
// one cycle apart, so that with chains of 64 scan cells the windows overlap; two neighbours share 63 identical
// pairs.

module plain_register (
  input clk,
  input rst_n,
  output [15:0] so
);
  wire [15:0] stage;
  wire n1, n2, n3;

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
  km_dffc stage_14_ff (.CK(clk), .RN(rst_n), .D(stage[13]), .Q(stage[14]));
  km_dffc stage_15_ff (.CK(clk), .RN(rst_n), .D(stage[14]), .Q(stage[15]));

  // The next states.
  km_xor2 u1 (.A(stage[12]), .B(stage[3]), .Y(n1));
  km_xnor2 u2 (.A(stage[15]), .B(stage[14]), .Y(n2));
  km_xnor2 u3 (.A(n1), .B(n2), .Y(n3));

  assign so = stage;
endmodule
