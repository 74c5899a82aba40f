// Limpet tide-gauge controller, level alarm: a circuit under test with its four scan chains of eight cells, and a
// 32-stage register, stages 32, 22, 2, 1, whose first four stages feed the chains directly.
// The chains run through the level and the limit it is compared with, a counter, and the status.
//
// The audit must fail it: neighbouring chains carry one stream, one cycle apart, so that each level bit always holds
// what the limit bit beside it holds. Every test then sees the level equal to the limit, the comparison is frozen,
// and no fault behind it is ever found. limpet_alarm_shifted.v is the same circuit behind a phase shifter.

module limpet_alarm_straight (
  input clk,
  input rst_n,
  input scan_en,
  input [6:0] gauge,
  input load,
  input clear,
  output alarm,
  output [7:0] total,
  output [3:0] scan_out
);
  wire [31:0] stage;
  wire [3:0] scan_in;
  wire [6:0] level, limit, same, above_here, not_above, above, next_limit;
  wire [7:0] count, next_count, status, next_status;
  wire fresh, spare, equal, part_1, part_2, alarm_n, armed, run;
  wire [7:0] carry, carry_n;
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
  km_xor2 u1 (.A(stage[1]), .B(stage[0]), .Y(n1));
  km_xnor2 u2 (.A(stage[31]), .B(stage[21]), .Y(n2));
  km_xnor2 u3 (.A(n1), .B(n2), .Y(n3));

  // The chains hang on the register.
  assign scan_in = stage[3:0];

  // Chain 0: a new level is there, then the level.
  km_sdffc fresh_ff (.CK(clk), .RN(rst_n), .D(load), .SI(scan_in[0]), .SE(scan_en), .Q(fresh));
  km_sdffc level_0_ff (.CK(clk), .RN(rst_n), .D(gauge[0]), .SI(fresh), .SE(scan_en), .Q(level[0]));
  km_sdffc level_1_ff (.CK(clk), .RN(rst_n), .D(gauge[1]), .SI(level[0]), .SE(scan_en), .Q(level[1]));
  km_sdffc level_2_ff (.CK(clk), .RN(rst_n), .D(gauge[2]), .SI(level[1]), .SE(scan_en), .Q(level[2]));
  km_sdffc level_3_ff (.CK(clk), .RN(rst_n), .D(gauge[3]), .SI(level[2]), .SE(scan_en), .Q(level[3]));
  km_sdffc level_4_ff (.CK(clk), .RN(rst_n), .D(gauge[4]), .SI(level[3]), .SE(scan_en), .Q(level[4]));
  km_sdffc level_5_ff (.CK(clk), .RN(rst_n), .D(gauge[5]), .SI(level[4]), .SE(scan_en), .Q(level[5]));
  km_sdffc level_6_ff (.CK(clk), .RN(rst_n), .D(gauge[6]), .SI(level[5]), .SE(scan_en), .Q(level[6]));
  assign scan_out[0] = level[6];

  // Chain 1: the limit.
  km_sdffc limit_0_ff (.CK(clk), .RN(rst_n), .D(next_limit[0]), .SI(scan_in[1]), .SE(scan_en), .Q(limit[0]));
  km_sdffc limit_1_ff (.CK(clk), .RN(rst_n), .D(next_limit[1]), .SI(limit[0]), .SE(scan_en), .Q(limit[1]));
  km_sdffc limit_2_ff (.CK(clk), .RN(rst_n), .D(next_limit[2]), .SI(limit[1]), .SE(scan_en), .Q(limit[2]));
  km_sdffc limit_3_ff (.CK(clk), .RN(rst_n), .D(next_limit[3]), .SI(limit[2]), .SE(scan_en), .Q(limit[3]));
  km_sdffc limit_4_ff (.CK(clk), .RN(rst_n), .D(next_limit[4]), .SI(limit[3]), .SE(scan_en), .Q(limit[4]));
  km_sdffc limit_5_ff (.CK(clk), .RN(rst_n), .D(next_limit[5]), .SI(limit[4]), .SE(scan_en), .Q(limit[5]));
  km_sdffc limit_6_ff (.CK(clk), .RN(rst_n), .D(next_limit[6]), .SI(limit[5]), .SE(scan_en), .Q(limit[6]));
  km_sdffc spare_ff (.CK(clk), .RN(rst_n), .D(fresh), .SI(limit[6]), .SE(scan_en), .Q(spare));
  assign scan_out[1] = spare;

  // Chain 2: how often the level passed the limit.
  km_sdffc count_0_ff (.CK(clk), .RN(rst_n), .D(next_count[0]), .SI(scan_in[2]), .SE(scan_en), .Q(count[0]));
  km_sdffc count_1_ff (.CK(clk), .RN(rst_n), .D(next_count[1]), .SI(count[0]), .SE(scan_en), .Q(count[1]));
  km_sdffc count_2_ff (.CK(clk), .RN(rst_n), .D(next_count[2]), .SI(count[1]), .SE(scan_en), .Q(count[2]));
  km_sdffc count_3_ff (.CK(clk), .RN(rst_n), .D(next_count[3]), .SI(count[2]), .SE(scan_en), .Q(count[3]));
  km_sdffc count_4_ff (.CK(clk), .RN(rst_n), .D(next_count[4]), .SI(count[3]), .SE(scan_en), .Q(count[4]));
  km_sdffc count_5_ff (.CK(clk), .RN(rst_n), .D(next_count[5]), .SI(count[4]), .SE(scan_en), .Q(count[5]));
  km_sdffc count_6_ff (.CK(clk), .RN(rst_n), .D(next_count[6]), .SI(count[5]), .SE(scan_en), .Q(count[6]));
  km_sdffc count_7_ff (.CK(clk), .RN(rst_n), .D(next_count[7]), .SI(count[6]), .SE(scan_en), .Q(count[7]));
  assign scan_out[2] = count[7];

  // Chain 3: the status.
  km_sdffc status_0_ff (.CK(clk), .RN(rst_n), .D(next_status[0]), .SI(scan_in[3]), .SE(scan_en), .Q(status[0]));
  km_sdffc status_1_ff (.CK(clk), .RN(rst_n), .D(next_status[1]), .SI(status[0]), .SE(scan_en), .Q(status[1]));
  km_sdffc status_2_ff (.CK(clk), .RN(rst_n), .D(next_status[2]), .SI(status[1]), .SE(scan_en), .Q(status[2]));
  km_sdffc status_3_ff (.CK(clk), .RN(rst_n), .D(next_status[3]), .SI(status[2]), .SE(scan_en), .Q(status[3]));
  km_sdffc status_4_ff (.CK(clk), .RN(rst_n), .D(next_status[4]), .SI(status[3]), .SE(scan_en), .Q(status[4]));
  km_sdffc status_5_ff (.CK(clk), .RN(rst_n), .D(next_status[5]), .SI(status[4]), .SE(scan_en), .Q(status[5]));
  km_sdffc status_6_ff (.CK(clk), .RN(rst_n), .D(next_status[6]), .SI(status[5]), .SE(scan_en), .Q(status[6]));
  km_sdffc status_7_ff (.CK(clk), .RN(rst_n), .D(next_status[7]), .SI(status[6]), .SE(scan_en), .Q(status[7]));
  assign scan_out[3] = status[7];

  // Level and limit compared, from the lowest bit up.
  km_xnor2 same_0 (.A(level[0]), .B(limit[0]), .Y(same[0]));
  km_xnor2 same_1 (.A(level[1]), .B(limit[1]), .Y(same[1]));
  km_xnor2 same_2 (.A(level[2]), .B(limit[2]), .Y(same[2]));
  km_xnor2 same_3 (.A(level[3]), .B(limit[3]), .Y(same[3]));
  km_xnor2 same_4 (.A(level[4]), .B(limit[4]), .Y(same[4]));
  km_xnor2 same_5 (.A(level[5]), .B(limit[5]), .Y(same[5]));
  km_xnor2 same_6 (.A(level[6]), .B(limit[6]), .Y(same[6]));
  km_nand4 equal_1 (.A(same[0]), .B(same[1]), .C(same[2]), .D(same[3]), .Y(part_1));
  km_nand3 equal_2 (.A(same[4]), .B(same[5]), .C(same[6]), .Y(part_2));
  km_nor2 equal_3 (.A(part_1), .B(part_2), .Y(equal));
  km_nor2 above_here_0 (.A(same[0]), .B(limit[0]), .Y(above[0]));
  km_nor2 above_here_1 (.A(same[1]), .B(limit[1]), .Y(above_here[1]));
  km_aoi21 not_above_1 (.A1(same[1]), .A2(above[0]), .B(above_here[1]), .Y(not_above[1]));
  km_inv above_1 (.A(not_above[1]), .Y(above[1]));
  km_nor2 above_here_2 (.A(same[2]), .B(limit[2]), .Y(above_here[2]));
  km_aoi21 not_above_2 (.A1(same[2]), .A2(above[1]), .B(above_here[2]), .Y(not_above[2]));
  km_inv above_2 (.A(not_above[2]), .Y(above[2]));
  km_nor2 above_here_3 (.A(same[3]), .B(limit[3]), .Y(above_here[3]));
  km_aoi21 not_above_3 (.A1(same[3]), .A2(above[2]), .B(above_here[3]), .Y(not_above[3]));
  km_inv above_3 (.A(not_above[3]), .Y(above[3]));
  km_nor2 above_here_4 (.A(same[4]), .B(limit[4]), .Y(above_here[4]));
  km_aoi21 not_above_4 (.A1(same[4]), .A2(above[3]), .B(above_here[4]), .Y(not_above[4]));
  km_inv above_4 (.A(not_above[4]), .Y(above[4]));
  km_nor2 above_here_5 (.A(same[5]), .B(limit[5]), .Y(above_here[5]));
  km_aoi21 not_above_5 (.A1(same[5]), .A2(above[4]), .B(above_here[5]), .Y(not_above[5]));
  km_inv above_5 (.A(not_above[5]), .Y(above[5]));
  km_nor2 above_here_6 (.A(same[6]), .B(limit[6]), .Y(above_here[6]));
  km_aoi21 not_above_6 (.A1(same[6]), .A2(above[5]), .B(above_here[6]), .Y(not_above[6]));
  km_inv above_6 (.A(not_above[6]), .Y(above[6]));

  // An alarm where the level is above the limit and the status says that it is armed.
  km_nor2 armed_1 (.A(status[0]), .B(clear), .Y(armed));
  km_nand2 alarm_1 (.A(above[6]), .B(armed), .Y(alarm_n));
  km_inv alarm_2 (.A(alarm_n), .Y(alarm));

  // The limit is loaded from the gauge, the counter counts, the status moves on.
  km_mux2 next_limit_0 (.D0(limit[0]), .D1(gauge[0]), .S(load), .Y(next_limit[0]));
  km_mux2 next_limit_1 (.D0(limit[1]), .D1(gauge[1]), .S(load), .Y(next_limit[1]));
  km_mux2 next_limit_2 (.D0(limit[2]), .D1(gauge[2]), .S(load), .Y(next_limit[2]));
  km_mux2 next_limit_3 (.D0(limit[3]), .D1(gauge[3]), .S(load), .Y(next_limit[3]));
  km_mux2 next_limit_4 (.D0(limit[4]), .D1(gauge[4]), .S(load), .Y(next_limit[4]));
  km_mux2 next_limit_5 (.D0(limit[5]), .D1(gauge[5]), .S(load), .Y(next_limit[5]));
  km_mux2 next_limit_6 (.D0(limit[6]), .D1(gauge[6]), .S(load), .Y(next_limit[6]));
  km_nor2 run_1 (.A(alarm_n), .B(equal), .Y(run));
  km_xor2 count_0 (.A(count[0]), .B(run), .Y(next_count[0]));
  assign carry[0] = run;
  km_nand2 carry_n_1 (.A(carry[0]), .B(count[0]), .Y(carry_n[1]));
  km_inv carry_1 (.A(carry_n[1]), .Y(carry[1]));
  km_xor2 count_1 (.A(count[1]), .B(carry[1]), .Y(next_count[1]));
  km_nand2 carry_n_2 (.A(carry[1]), .B(count[1]), .Y(carry_n[2]));
  km_inv carry_2 (.A(carry_n[2]), .Y(carry[2]));
  km_xor2 count_2 (.A(count[2]), .B(carry[2]), .Y(next_count[2]));
  km_nand2 carry_n_3 (.A(carry[2]), .B(count[2]), .Y(carry_n[3]));
  km_inv carry_3 (.A(carry_n[3]), .Y(carry[3]));
  km_xor2 count_3 (.A(count[3]), .B(carry[3]), .Y(next_count[3]));
  km_nand2 carry_n_4 (.A(carry[3]), .B(count[3]), .Y(carry_n[4]));
  km_inv carry_4 (.A(carry_n[4]), .Y(carry[4]));
  km_xor2 count_4 (.A(count[4]), .B(carry[4]), .Y(next_count[4]));
  km_nand2 carry_n_5 (.A(carry[4]), .B(count[4]), .Y(carry_n[5]));
  km_inv carry_5 (.A(carry_n[5]), .Y(carry[5]));
  km_xor2 count_5 (.A(count[5]), .B(carry[5]), .Y(next_count[5]));
  km_nand2 carry_n_6 (.A(carry[5]), .B(count[5]), .Y(carry_n[6]));
  km_inv carry_6 (.A(carry_n[6]), .Y(carry[6]));
  km_xor2 count_6 (.A(count[6]), .B(carry[6]), .Y(next_count[6]));
  km_nand2 carry_n_7 (.A(carry[6]), .B(count[6]), .Y(carry_n[7]));
  km_inv carry_7 (.A(carry_n[7]), .Y(carry[7]));
  km_xor2 count_7 (.A(count[7]), .B(carry[7]), .Y(next_count[7]));
  km_aoi21 status_0 (.A1(alarm), .A2(spare), .B(clear), .Y(next_status[0]));
  km_oai21 status_1 (.A1(status[0]), .A2(equal), .B(clear), .Y(next_status[1]));
  km_aoi21 status_2 (.A1(status[1]), .A2(count[1]), .B(clear), .Y(next_status[2]));
  km_oai21 status_3 (.A1(status[2]), .A2(count[2]), .B(clear), .Y(next_status[3]));
  km_aoi21 status_4 (.A1(status[3]), .A2(count[3]), .B(clear), .Y(next_status[4]));
  km_oai21 status_5 (.A1(status[4]), .A2(count[4]), .B(clear), .Y(next_status[5]));
  km_aoi21 status_6 (.A1(status[5]), .A2(count[5]), .B(clear), .Y(next_status[6]));
  km_oai21 status_7 (.A1(status[6]), .A2(count[6]), .B(clear), .Y(next_status[7]));
  assign total = count;
endmodule
