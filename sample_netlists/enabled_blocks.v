// Limpet tide-gauge controller, surge predictor: the pattern generator of 8 scan chains in two blocks, a
// 20-stage register with an enable (stages 20, 17) and a phase shifter.
//
// The audit must fail it, with run = 1: the register is primitive (period 1048575), but its reset leaves it in
// its lock-up state, and so[7] is the complement of so[3] in lockstep.

module surge_register (
  input clk,
  input rst_n,
  input run,
  output [20:1] stage
);
  wire feedback;

  // The register.
  km_dffec stage_1_ff (.CK(clk), .RN(rst_n), .EN(run), .D(feedback), .Q(stage[1]));
  km_dffec stage_2_ff (.CK(clk), .RN(rst_n), .EN(run), .D(stage[1]), .Q(stage[2]));
  km_dffec stage_3_ff (.CK(clk), .RN(rst_n), .EN(run), .D(stage[2]), .Q(stage[3]));
  km_dffec stage_4_ff (.CK(clk), .RN(rst_n), .EN(run), .D(stage[3]), .Q(stage[4]));
  km_dffec stage_5_ff (.CK(clk), .RN(rst_n), .EN(run), .D(stage[4]), .Q(stage[5]));
  km_dffec stage_6_ff (.CK(clk), .RN(rst_n), .EN(run), .D(stage[5]), .Q(stage[6]));
  km_dffec stage_7_ff (.CK(clk), .RN(rst_n), .EN(run), .D(stage[6]), .Q(stage[7]));
  km_dffec stage_8_ff (.CK(clk), .RN(rst_n), .EN(run), .D(stage[7]), .Q(stage[8]));
  km_dffec stage_9_ff (.CK(clk), .RN(rst_n), .EN(run), .D(stage[8]), .Q(stage[9]));
  km_dffec stage_10_ff (.CK(clk), .RN(rst_n), .EN(run), .D(stage[9]), .Q(stage[10]));
  km_dffec stage_11_ff (.CK(clk), .RN(rst_n), .EN(run), .D(stage[10]), .Q(stage[11]));
  km_dffec stage_12_ff (.CK(clk), .RN(rst_n), .EN(run), .D(stage[11]), .Q(stage[12]));
  km_dffec stage_13_ff (.CK(clk), .RN(rst_n), .EN(run), .D(stage[12]), .Q(stage[13]));
  km_dffec stage_14_ff (.CK(clk), .RN(rst_n), .EN(run), .D(stage[13]), .Q(stage[14]));
  km_dffec stage_15_ff (.CK(clk), .RN(rst_n), .EN(run), .D(stage[14]), .Q(stage[15]));
  km_dffec stage_16_ff (.CK(clk), .RN(rst_n), .EN(run), .D(stage[15]), .Q(stage[16]));
  km_dffec stage_17_ff (.CK(clk), .RN(rst_n), .EN(run), .D(stage[16]), .Q(stage[17]));
  km_dffec stage_18_ff (.CK(clk), .RN(rst_n), .EN(run), .D(stage[17]), .Q(stage[18]));
  km_dffec stage_19_ff (.CK(clk), .RN(rst_n), .EN(run), .D(stage[18]), .Q(stage[19]));
  km_dffec stage_20_ff (.CK(clk), .RN(rst_n), .EN(run), .D(stage[19]), .Q(stage[20]));

  // The next states.
  km_xor2 u1 (.A(stage[20]), .B(stage[17]), .Y(feedback));
endmodule

module surge_spreader (
  input [20:1] stage,
  output [7:0] y
);
  wire n1, n2;

  // The phase shifter.
  km_xor2 u1 (.A(stage[3]), .B(stage[11]), .Y(y[0]));
  km_xnor2 u2 (.A(stage[14]), .B(stage[20]), .Y(n1));
  km_xnor2 u3 (.A(stage[6]), .B(n1), .Y(y[1]));
  km_xor2 u4 (.A(stage[1]), .B(stage[9]), .Y(y[2]));
  km_xnor2 u5 (.A(stage[5]), .B(stage[13]), .Y(y[7]));
  km_inv u6 (.A(y[7]), .Y(y[3]));
  km_xor2 u7 (.A(stage[8]), .B(stage[19]), .Y(y[4]));
  km_xnor2 u8 (.A(stage[16]), .B(stage[18]), .Y(n2));
  km_xnor2 u9 (.A(stage[2]), .B(n2), .Y(y[5]));
  km_xor2 u10 (.A(stage[4]), .B(stage[15]), .Y(y[6]));
endmodule

module enabled_blocks (
  input clk,
  input rst_n,
  input run,
  output [7:0] so
);
  wire [20:1] stage;

  surge_register source (.clk(clk), .rst_n(rst_n), .run(run), .stage(stage));
  surge_spreader spreader (.stage(stage), .y(so));
endmodule
