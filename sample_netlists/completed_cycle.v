// Limpet tide-gauge controller, harbour radio: an eight-stage register, stages 8, 6, 5, 4, whose cycle is
// completed to 256 states by a NOR over seven stages in the feedback, mapped to km_nor2 and the km_nand4 that
// joins them.
//
// The audit must refuse it: the next state of stage_0_ff is not affine because of u8, and n8 = 1 would make it
// so.

module completed_cycle (
  input clk,
  input rst_n,
  output [3:0] so
);
  wire [7:0] stage;
  wire n1, n2, n3, n4, n5, n6, n7, n8, n9;

  // The register.
  km_dffc stage_0_ff (.CK(clk), .RN(rst_n), .D(n9), .Q(stage[0]));
  km_dffc stage_1_ff (.CK(clk), .RN(rst_n), .D(stage[0]), .Q(stage[1]));
  km_dffc stage_2_ff (.CK(clk), .RN(rst_n), .D(stage[1]), .Q(stage[2]));
  km_dffc stage_3_ff (.CK(clk), .RN(rst_n), .D(stage[2]), .Q(stage[3]));
  km_dffc stage_4_ff (.CK(clk), .RN(rst_n), .D(stage[3]), .Q(stage[4]));
  km_dffc stage_5_ff (.CK(clk), .RN(rst_n), .D(stage[4]), .Q(stage[5]));
  km_dffc stage_6_ff (.CK(clk), .RN(rst_n), .D(stage[5]), .Q(stage[6]));
  km_dffc stage_7_ff (.CK(clk), .RN(rst_n), .D(stage[6]), .Q(stage[7]));

  // The next states.
  km_xor2 u1 (.A(stage[4]), .B(stage[3]), .Y(n1));
  km_xnor2 u2 (.A(stage[7]), .B(stage[5]), .Y(n2));
  km_xnor2 u3 (.A(n1), .B(n2), .Y(n3));
  km_inv u4 (.A(stage[5]), .Y(n4));
  km_nor2 u5 (.A(stage[4]), .B(stage[3]), .Y(n5));
  km_nor2 u6 (.A(stage[0]), .B(stage[6]), .Y(n6));
  km_nor2 u7 (.A(stage[1]), .B(stage[2]), .Y(n7));
  km_nand4 u8 (.A(n4), .B(n5), .C(n6), .D(n7), .Y(n8));
  km_xnor2 u9 (.A(n3), .B(n8), .Y(n9));

  // The phase shifter.
  km_xor2 u10 (.A(stage[4]), .B(stage[0]), .Y(so[0]));
  km_xor2 u11 (.A(stage[7]), .B(stage[1]), .Y(so[1]));
  km_xor2 u12 (.A(stage[5]), .B(stage[2]), .Y(so[2]));
  km_xor2 u13 (.A(stage[3]), .B(stage[6]), .Y(so[3]));
endmodule
