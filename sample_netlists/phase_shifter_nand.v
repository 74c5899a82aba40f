// Limpet tide-gauge controller, echo correlator, second source: the function of phase_shifter.v made of NAND
// and AOI cells only.
//
// The audit must pass it with the same register (period 4294967295), the same taps and the same leads as
// phase_shifter.v: so[4] and so[13] are nearest, 45918530 cycles apart.

module phase_shifter_nand (
  input clk,
  input rst_n,
  output [15:0] so
);
  wire [31:0] stage;
  wire n1, n2, n3, n4, n5, n6, n7, n8, n9, n10, n11, n12, n13, n14, n15, n16, n17, n18, n19, n20, n21, n22,
    n23, n24, n25, n26, n27, n28, n29, n30, n31, n32, n33, n34, n35, n36, n37, n38, n39, n40, n41, n42, n43,
    n44, n45, n46, n47, n48, n49, n50, n51, n52, n53, n54, n55, n56, n57, n58, n59, n60, n61, n62, n63, n64,
    n65, n66, n67, n68, n69, n70, n71, n72, n73, n74, n75, n76, n77, n78, n79, n80, n81, n82, n83, n84, n85,
    n86, n87, n88, n89, n90, n91, n92, n93, n94, n95, n96, n97, n98, n99, n100, n101, n102, n103, n104, n105,
    n106, n107, n108, n109, n110, n111, n112, n113, n114, n115, n116, n117, n118, n119, n120, n121, n122,
    n123, n124, n125, n126, n127, n128, n129, n130, n131, n132, n133, n134, n135, n136, n137, n138, n139,
    n140, n141, n142, n143, n144, n145, n146, n147, n148, n149, n150, n151, n152, n153, n154, n155, n156,
    n157, n158, n159, n160, n161, n162, n163, n164, n165, n166, n167, n168, n169, n170, n171, n172, n173,
    n174, n175, n176, n177, n178, n179, n180, n181, n182, n183, n184, n185;

  // The register.
  km_dffs stage_0_ff (.CK(clk), .SN(rst_n), .D(n15), .Q(stage[0]));
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
  km_nand2 u1 (.A(stage[1]), .B(stage[1]), .Y(n1));
  km_nand2 u2 (.A(stage[0]), .B(stage[0]), .Y(n2));
  km_nand2 u3 (.A(n1), .B(n2), .Y(n3));
  km_nand2 u4 (.A(stage[1]), .B(stage[0]), .Y(n4));
  km_nand2 u5 (.A(stage[31]), .B(stage[21]), .Y(n5));
  km_nand2 u6 (.A(stage[31]), .B(stage[31]), .Y(n6));
  km_nand2 u7 (.A(stage[21]), .B(stage[21]), .Y(n7));
  km_nand2 u8 (.A(n6), .B(n7), .Y(n8));
  km_nand2 u9 (.A(n5), .B(n8), .Y(n9));
  km_aoi21 u10 (.A1(n3), .A2(n4), .B(n9), .Y(n10));
  km_nand2 u11 (.A(n10), .B(n10), .Y(n11));
  km_nand2 u12 (.A(n3), .B(n4), .Y(n12));
  km_aoi21 u13 (.A1(n5), .A2(n8), .B(n12), .Y(n13));
  km_nand2 u14 (.A(n13), .B(n13), .Y(n14));
  km_nand2 u15 (.A(n11), .B(n14), .Y(n15));

  // The phase shifter.
  km_nand2 u16 (.A(stage[20]), .B(stage[20]), .Y(n16));
  km_nand2 u17 (.A(n16), .B(stage[27]), .Y(n17));
  km_nand2 u18 (.A(stage[27]), .B(stage[27]), .Y(n18));
  km_nand2 u19 (.A(stage[20]), .B(n18), .Y(n19));
  km_nand2 u20 (.A(n17), .B(n19), .Y(n20));
  km_nand2 u21 (.A(stage[1]), .B(n20), .Y(n21));
  km_nand2 u22 (.A(n16), .B(n18), .Y(n22));
  km_nand2 u23 (.A(stage[20]), .B(stage[27]), .Y(n23));
  km_aoi21 u24 (.A1(n22), .A2(n23), .B(stage[1]), .Y(n24));
  km_nand2 u25 (.A(n24), .B(n24), .Y(n25));
  km_nand2 u26 (.A(n21), .B(n25), .Y(n26));
  km_nand2 u27 (.A(n26), .B(n26), .Y(so[0]));
  km_nand2 u28 (.A(stage[2]), .B(stage[2]), .Y(n27));
  km_nand2 u29 (.A(n27), .B(stage[8]), .Y(n28));
  km_nand2 u30 (.A(stage[8]), .B(stage[8]), .Y(n29));
  km_nand2 u31 (.A(stage[2]), .B(n29), .Y(n30));
  km_nand2 u32 (.A(n28), .B(n30), .Y(n31));
  km_nand2 u33 (.A(stage[21]), .B(n31), .Y(n32));
  km_nand2 u34 (.A(n27), .B(n29), .Y(n33));
  km_nand2 u35 (.A(stage[2]), .B(stage[8]), .Y(n34));
  km_aoi21 u36 (.A1(n33), .A2(n34), .B(stage[21]), .Y(n35));
  km_nand2 u37 (.A(n35), .B(n35), .Y(n36));
  km_nand2 u38 (.A(n32), .B(n36), .Y(n37));
  km_nand2 u39 (.A(n37), .B(n37), .Y(so[1]));
  km_nand2 u40 (.A(stage[5]), .B(stage[5]), .Y(n38));
  km_nand2 u41 (.A(n38), .B(stage[14]), .Y(n39));
  km_nand2 u42 (.A(stage[14]), .B(stage[14]), .Y(n40));
  km_nand2 u43 (.A(stage[5]), .B(n40), .Y(n41));
  km_nand2 u44 (.A(n39), .B(n41), .Y(n42));
  km_nand2 u45 (.A(stage[3]), .B(n42), .Y(n43));
  km_nand2 u46 (.A(n38), .B(n40), .Y(n44));
  km_nand2 u47 (.A(stage[5]), .B(stage[14]), .Y(n45));
  km_aoi21 u48 (.A1(n44), .A2(n45), .B(stage[3]), .Y(n46));
  km_nand2 u49 (.A(n46), .B(n46), .Y(n47));
  km_nand2 u50 (.A(n43), .B(n47), .Y(n48));
  km_nand2 u51 (.A(n48), .B(n48), .Y(so[2]));
  km_nand2 u52 (.A(stage[9]), .B(stage[9]), .Y(n49));
  km_nand2 u53 (.A(n49), .B(stage[23]), .Y(n50));
  km_nand2 u54 (.A(stage[23]), .B(stage[23]), .Y(n51));
  km_nand2 u55 (.A(stage[9]), .B(n51), .Y(n52));
  km_nand2 u56 (.A(n50), .B(n52), .Y(n53));
  km_nand2 u57 (.A(stage[8]), .B(n53), .Y(n54));
  km_nand2 u58 (.A(n49), .B(n51), .Y(n55));
  km_nand2 u59 (.A(stage[9]), .B(stage[23]), .Y(n56));
  km_aoi21 u60 (.A1(n55), .A2(n56), .B(stage[8]), .Y(n57));
  km_nand2 u61 (.A(n57), .B(n57), .Y(n58));
  km_nand2 u62 (.A(n54), .B(n58), .Y(n59));
  km_nand2 u63 (.A(n59), .B(n59), .Y(so[3]));
  km_nand2 u64 (.A(stage[13]), .B(stage[13]), .Y(n60));
  km_nand2 u65 (.A(n60), .B(stage[16]), .Y(n61));
  km_nand2 u66 (.A(stage[16]), .B(stage[16]), .Y(n62));
  km_nand2 u67 (.A(stage[13]), .B(n62), .Y(n63));
  km_nand2 u68 (.A(n61), .B(n63), .Y(n64));
  km_nand2 u69 (.A(stage[2]), .B(n64), .Y(n65));
  km_nand2 u70 (.A(n60), .B(n62), .Y(n66));
  km_nand2 u71 (.A(stage[13]), .B(stage[16]), .Y(n67));
  km_aoi21 u72 (.A1(n66), .A2(n67), .B(stage[2]), .Y(n68));
  km_nand2 u73 (.A(n68), .B(n68), .Y(n69));
  km_nand2 u74 (.A(n65), .B(n69), .Y(n70));
  km_nand2 u75 (.A(n70), .B(n70), .Y(so[4]));
  km_nand2 u76 (.A(stage[19]), .B(stage[19]), .Y(n71));
  km_nand2 u77 (.A(n71), .B(stage[28]), .Y(n72));
  km_nand2 u78 (.A(stage[28]), .B(stage[28]), .Y(n73));
  km_nand2 u79 (.A(stage[19]), .B(n73), .Y(n74));
  km_nand2 u80 (.A(n72), .B(n74), .Y(n75));
  km_nand2 u81 (.A(stage[1]), .B(n75), .Y(n76));
  km_nand2 u82 (.A(n71), .B(n73), .Y(n77));
  km_nand2 u83 (.A(stage[19]), .B(stage[28]), .Y(n78));
  km_aoi21 u84 (.A1(n77), .A2(n78), .B(stage[1]), .Y(n79));
  km_nand2 u85 (.A(n79), .B(n79), .Y(n80));
  km_nand2 u86 (.A(n76), .B(n80), .Y(n81));
  km_nand2 u87 (.A(n81), .B(n81), .Y(so[5]));
  km_nand2 u88 (.A(stage[11]), .B(stage[11]), .Y(n82));
  km_nand2 u89 (.A(n82), .B(stage[30]), .Y(n83));
  km_nand2 u90 (.A(stage[30]), .B(stage[30]), .Y(n84));
  km_nand2 u91 (.A(stage[11]), .B(n84), .Y(n85));
  km_nand2 u92 (.A(n83), .B(n85), .Y(n86));
  km_nand2 u93 (.A(stage[6]), .B(n86), .Y(n87));
  km_nand2 u94 (.A(n82), .B(n84), .Y(n88));
  km_nand2 u95 (.A(stage[11]), .B(stage[30]), .Y(n89));
  km_aoi21 u96 (.A1(n88), .A2(n89), .B(stage[6]), .Y(n90));
  km_nand2 u97 (.A(n90), .B(n90), .Y(n91));
  km_nand2 u98 (.A(n87), .B(n91), .Y(n92));
  km_nand2 u99 (.A(n92), .B(n92), .Y(so[6]));
  km_nand2 u100 (.A(n71), .B(stage[12]), .Y(n93));
  km_nand2 u101 (.A(stage[12]), .B(stage[12]), .Y(n94));
  km_nand2 u102 (.A(stage[19]), .B(n94), .Y(n95));
  km_nand2 u103 (.A(n93), .B(n95), .Y(n96));
  km_nand2 u104 (.A(stage[0]), .B(n96), .Y(n97));
  km_nand2 u105 (.A(n71), .B(n94), .Y(n98));
  km_nand2 u106 (.A(stage[19]), .B(stage[12]), .Y(n99));
  km_aoi21 u107 (.A1(n98), .A2(n99), .B(stage[0]), .Y(n100));
  km_nand2 u108 (.A(n100), .B(n100), .Y(n101));
  km_nand2 u109 (.A(n97), .B(n101), .Y(n102));
  km_nand2 u110 (.A(n102), .B(n102), .Y(so[7]));
  km_nand2 u111 (.A(stage[17]), .B(stage[17]), .Y(n103));
  km_nand2 u112 (.A(n103), .B(stage[29]), .Y(n104));
  km_nand2 u113 (.A(stage[29]), .B(stage[29]), .Y(n105));
  km_nand2 u114 (.A(stage[17]), .B(n105), .Y(n106));
  km_nand2 u115 (.A(n104), .B(n106), .Y(n107));
  km_nand2 u116 (.A(stage[5]), .B(n107), .Y(n108));
  km_nand2 u117 (.A(n103), .B(n105), .Y(n109));
  km_nand2 u118 (.A(stage[17]), .B(stage[29]), .Y(n110));
  km_aoi21 u119 (.A1(n109), .A2(n110), .B(stage[5]), .Y(n111));
  km_nand2 u120 (.A(n111), .B(n111), .Y(n112));
  km_nand2 u121 (.A(n108), .B(n112), .Y(n113));
  km_nand2 u122 (.A(n113), .B(n113), .Y(so[8]));
  km_nand2 u123 (.A(n49), .B(stage[25]), .Y(n114));
  km_nand2 u124 (.A(stage[25]), .B(stage[25]), .Y(n115));
  km_nand2 u125 (.A(stage[9]), .B(n115), .Y(n116));
  km_nand2 u126 (.A(n114), .B(n116), .Y(n117));
  km_nand2 u127 (.A(stage[20]), .B(n117), .Y(n118));
  km_nand2 u128 (.A(n49), .B(n115), .Y(n119));
  km_nand2 u129 (.A(stage[9]), .B(stage[25]), .Y(n120));
  km_aoi21 u130 (.A1(n119), .A2(n120), .B(stage[20]), .Y(n121));
  km_nand2 u131 (.A(n121), .B(n121), .Y(n122));
  km_nand2 u132 (.A(n118), .B(n122), .Y(n123));
  km_nand2 u133 (.A(n123), .B(n123), .Y(so[9]));
  km_nand2 u134 (.A(n105), .B(stage[18]), .Y(n124));
  km_nand2 u135 (.A(stage[18]), .B(stage[18]), .Y(n125));
  km_nand2 u136 (.A(stage[29]), .B(n125), .Y(n126));
  km_nand2 u137 (.A(n124), .B(n126), .Y(n127));
  km_nand2 u138 (.A(stage[11]), .B(n127), .Y(n128));
  km_nand2 u139 (.A(n105), .B(n125), .Y(n129));
  km_nand2 u140 (.A(stage[29]), .B(stage[18]), .Y(n130));
  km_aoi21 u141 (.A1(n129), .A2(n130), .B(stage[11]), .Y(n131));
  km_nand2 u142 (.A(n131), .B(n131), .Y(n132));
  km_nand2 u143 (.A(n128), .B(n132), .Y(n133));
  km_nand2 u144 (.A(n133), .B(n133), .Y(so[10]));
  km_nand2 u145 (.A(n60), .B(stage[7]), .Y(n134));
  km_nand2 u146 (.A(stage[7]), .B(stage[7]), .Y(n135));
  km_nand2 u147 (.A(stage[13]), .B(n135), .Y(n136));
  km_nand2 u148 (.A(n134), .B(n136), .Y(n137));
  km_nand2 u149 (.A(stage[21]), .B(n137), .Y(n138));
  km_nand2 u150 (.A(n60), .B(n135), .Y(n139));
  km_nand2 u151 (.A(stage[13]), .B(stage[7]), .Y(n140));
  km_aoi21 u152 (.A1(n139), .A2(n140), .B(stage[21]), .Y(n141));
  km_nand2 u153 (.A(n141), .B(n141), .Y(n142));
  km_nand2 u154 (.A(n138), .B(n142), .Y(n143));
  km_nand2 u155 (.A(n143), .B(n143), .Y(so[11]));
  km_nand2 u156 (.A(n135), .B(stage[10]), .Y(n144));
  km_nand2 u157 (.A(stage[10]), .B(stage[10]), .Y(n145));
  km_nand2 u158 (.A(stage[7]), .B(n145), .Y(n146));
  km_nand2 u159 (.A(n144), .B(n146), .Y(n147));
  km_nand2 u160 (.A(stage[16]), .B(n147), .Y(n148));
  km_nand2 u161 (.A(n135), .B(n145), .Y(n149));
  km_nand2 u162 (.A(stage[7]), .B(stage[10]), .Y(n150));
  km_aoi21 u163 (.A1(n149), .A2(n150), .B(stage[16]), .Y(n151));
  km_nand2 u164 (.A(n151), .B(n151), .Y(n152));
  km_nand2 u165 (.A(n148), .B(n152), .Y(n153));
  km_nand2 u166 (.A(n153), .B(n153), .Y(so[12]));
  km_nand2 u167 (.A(stage[15]), .B(stage[15]), .Y(n154));
  km_nand2 u168 (.A(n154), .B(stage[22]), .Y(n155));
  km_nand2 u169 (.A(stage[22]), .B(stage[22]), .Y(n156));
  km_nand2 u170 (.A(stage[15]), .B(n156), .Y(n157));
  km_nand2 u171 (.A(n155), .B(n157), .Y(n158));
  km_nand2 u172 (.A(stage[25]), .B(n158), .Y(n159));
  km_nand2 u173 (.A(n154), .B(n156), .Y(n160));
  km_nand2 u174 (.A(stage[15]), .B(stage[22]), .Y(n161));
  km_aoi21 u175 (.A1(n160), .A2(n161), .B(stage[25]), .Y(n162));
  km_nand2 u176 (.A(n162), .B(n162), .Y(n163));
  km_nand2 u177 (.A(n159), .B(n163), .Y(n164));
  km_nand2 u178 (.A(n164), .B(n164), .Y(so[13]));
  km_nand2 u179 (.A(stage[24]), .B(stage[24]), .Y(n165));
  km_nand2 u180 (.A(n165), .B(stage[26]), .Y(n166));
  km_nand2 u181 (.A(stage[26]), .B(stage[26]), .Y(n167));
  km_nand2 u182 (.A(stage[24]), .B(n167), .Y(n168));
  km_nand2 u183 (.A(n166), .B(n168), .Y(n169));
  km_nand2 u184 (.A(stage[31]), .B(n169), .Y(n170));
  km_nand2 u185 (.A(n165), .B(n167), .Y(n171));
  km_nand2 u186 (.A(stage[24]), .B(stage[26]), .Y(n172));
  km_aoi21 u187 (.A1(n171), .A2(n172), .B(stage[31]), .Y(n173));
  km_nand2 u188 (.A(n173), .B(n173), .Y(n174));
  km_nand2 u189 (.A(n170), .B(n174), .Y(n175));
  km_nand2 u190 (.A(n175), .B(n175), .Y(so[14]));
  km_nand2 u191 (.A(n73), .B(stage[4]), .Y(n176));
  km_nand2 u192 (.A(stage[4]), .B(stage[4]), .Y(n177));
  km_nand2 u193 (.A(stage[28]), .B(n177), .Y(n178));
  km_nand2 u194 (.A(n176), .B(n178), .Y(n179));
  km_nand2 u195 (.A(stage[0]), .B(n179), .Y(n180));
  km_nand2 u196 (.A(n73), .B(n177), .Y(n181));
  km_nand2 u197 (.A(stage[28]), .B(stage[4]), .Y(n182));
  km_aoi21 u198 (.A1(n181), .A2(n182), .B(stage[0]), .Y(n183));
  km_nand2 u199 (.A(n183), .B(n183), .Y(n184));
  km_nand2 u200 (.A(n180), .B(n184), .Y(n185));
  km_nand2 u201 (.A(n185), .B(n185), .Y(so[15]));
endmodule
