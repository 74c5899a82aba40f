// Limpet tide-gauge controller, echo correlator, a later revision of phase_shifter.v: synthesised anew, with
// other cells and without a name kept but those of the ports.
// 
// The comparison must say identical.

module phase_shifter (
  input clk,
  input rst_n,
  output [15:0] so
);
  wire w256988, w18795, w483225, w727840, w996450, w330247, w796963, w657923, w55642, w929601, w45549, w667603,
       w567619, w681858, w483202, w45048, w594263, w833924, w758161, w3658, w133808, w449524, w200363, w378362,
       w615108, w678338, w75261, w164670, w513793, w540440, w747340, w34614, w71740, w130680, w133025, w898653,
       w859335, w338811, w53448, w544915, w281632, w793236, w904454, w659142, w965479, w134726, w932848,
       w287056, w179623, w930755, w128158, w231528, w820327, w567259, w131497, w641900, w433848, w550464,
       w695096, w314455, w180167, w504415, w51754, w450768, w926479, w208109, w727403;

  // The register.
  km_dffs g440940 (.CK(clk), .D(w330247), .Q(w18795), .SN(rst_n));
  km_dffc g737023 (.CK(clk), .D(w18795), .Q(w796963), .RN(rst_n));
  km_dffc g520252 (.CK(clk), .D(w796963), .Q(w657923), .RN(rst_n));
  km_dffc g390510 (.CK(clk), .D(w657923), .Q(w55642), .RN(rst_n));
  km_dffc g452558 (.CK(clk), .D(w55642), .Q(w929601), .RN(rst_n));
  km_dffc g653185 (.CK(clk), .D(w929601), .Q(w45549), .RN(rst_n));
  km_dffc g840078 (.CK(clk), .D(w45549), .Q(w667603), .RN(rst_n));
  km_dffc g398736 (.CK(clk), .D(w667603), .Q(w567619), .RN(rst_n));
  km_dffc g820638 (.CK(clk), .D(w567619), .Q(w681858), .RN(rst_n));
  km_dffc g633795 (.CK(clk), .D(w681858), .Q(w483202), .RN(rst_n));
  km_dffc g391406 (.CK(clk), .D(w483202), .Q(w45048), .RN(rst_n));
  km_dffc g187229 (.CK(clk), .D(w45048), .Q(w594263), .RN(rst_n));
  km_dffc g83782 (.CK(clk), .D(w594263), .Q(w833924), .RN(rst_n));
  km_dffc g398708 (.CK(clk), .D(w833924), .Q(w758161), .RN(rst_n));
  km_dffs g750825 (.CK(clk), .D(w758161), .Q(w3658), .SN(rst_n));
  km_dffc g582511 (.CK(clk), .D(w3658), .Q(w133808), .RN(rst_n));
  km_dffc g129766 (.CK(clk), .D(w133808), .Q(w449524), .RN(rst_n));
  km_dffc g344746 (.CK(clk), .D(w449524), .Q(w200363), .RN(rst_n));
  km_dffc g277799 (.CK(clk), .D(w200363), .Q(w378362), .RN(rst_n));
  km_dffc g318891 (.CK(clk), .D(w378362), .Q(w615108), .RN(rst_n));
  km_dffc g408562 (.CK(clk), .D(w615108), .Q(w678338), .RN(rst_n));
  km_dffc g404537 (.CK(clk), .D(w678338), .Q(w727840), .RN(rst_n));
  km_dffc g368353 (.CK(clk), .D(w727840), .Q(w75261), .RN(rst_n));
  km_dffc g329860 (.CK(clk), .D(w75261), .Q(w164670), .RN(rst_n));
  km_dffc g331241 (.CK(clk), .D(w164670), .Q(w513793), .RN(rst_n));
  km_dffc g526510 (.CK(clk), .D(w513793), .Q(w540440), .RN(rst_n));
  km_dffc g90311 (.CK(clk), .D(w540440), .Q(w747340), .RN(rst_n));
  km_dffc g895954 (.CK(clk), .D(w747340), .Q(w34614), .RN(rst_n));
  km_dffc g506266 (.CK(clk), .D(w34614), .Q(w71740), .RN(rst_n));
  km_dffc g52254 (.CK(clk), .D(w71740), .Q(w130680), .RN(rst_n));
  km_dffc g48428 (.CK(clk), .D(w130680), .Q(w133025), .RN(rst_n));
  km_dffc g812903 (.CK(clk), .D(w133025), .Q(w256988), .RN(rst_n));

  // Next states and channels.
  km_xor2 g229270 (.A(w256988), .B(w18795), .Y(w483225));
  km_xor2 g438611 (.A(w483225), .B(w727840), .Y(w996450));
  km_xor2 g57497 (.A(w898653), .B(w678338), .Y(so[0]));
  km_xor2 g1896 (.A(w45549), .B(w55642), .Y(w859335));
  km_xor2 g814216 (.A(w338811), .B(w483202), .Y(so[3]));
  km_xor2 g495871 (.A(w758161), .B(w657923), .Y(w53448));
  km_xor2 g443530 (.A(w71740), .B(w615108), .Y(w544915));
  km_xor2 g552878 (.A(w544915), .B(w796963), .Y(so[5]));
  km_xor2 g648113 (.A(w667603), .B(w594263), .Y(w281632));
  km_xor2 g260318 (.A(w281632), .B(w133025), .Y(so[6]));
  km_xor2 g284580 (.A(w615108), .B(w18795), .Y(w793236));
  km_xor2 g52357 (.A(w793236), .B(w833924), .Y(so[7]));
  km_xor2 g419721 (.A(w904454), .B(w45549), .Y(so[8]));
  km_xor2 g598627 (.A(w483202), .B(w678338), .Y(w659142));
  km_xor2 g511182 (.A(w659142), .B(w540440), .Y(so[9]));
  km_xor2 g7869 (.A(w378362), .B(w594263), .Y(w965479));
  km_xor2 g863501 (.A(w134726), .B(w75261), .Y(so[13]));
  km_xor2 g845205 (.A(w513793), .B(w256988), .Y(w932848));
  km_xor2 g966542 (.A(w18795), .B(w929601), .Y(w287056));
  km_xor2 g830128 (.A(w796963), .B(w996450), .Y(w330247));
  km_xnor2 g251088 (.A(w796963), .B(w34614), .Y(w179623));
  km_inv g125001 (.A(w179623), .Y(w898653));
  km_xnor2 g856488 (.A(w681858), .B(w657923), .Y(w930755));
  km_inv g560607 (.A(w930755), .Y(w128158));
  km_nor2 g206919 (.A(w128158), .B(w727840), .Y(w231528));
  km_aoi21 g368932 (.A1(w128158), .A2(w727840), .B(w231528), .Y(so[1]));
  km_nor2 g64349 (.A(w859335), .B(w3658), .Y(w820327));
  km_aoi21 g850973 (.A1(w859335), .A2(w3658), .B(w820327), .Y(so[2]));
  km_inv g500377 (.A(w164670), .Y(w567259));
  km_mux2 g903520 (.D0(w164670), .D1(w567259), .S(w681858), .Y(w338811));
  km_xnor2 g264739 (.A(w53448), .B(w449524), .Y(w131497));
  km_inv g357934 (.A(w131497), .Y(so[4]));
  km_nor2 g119104 (.A(w200363), .B(w130680), .Y(w641900));
  km_aoi21 g957438 (.A1(w200363), .A2(w130680), .B(w641900), .Y(w904454));
  km_xor2 g984657 (.A(w130680), .B(w965479), .Y(so[10]));
  km_nand2 g55833 (.A(w758161), .B(w567619), .Y(w433848));
  km_nand2 g563081 (.A(w758161), .B(w433848), .Y(w550464));
  km_nand2 g20809 (.A(w433848), .B(w567619), .Y(w695096));
  km_nand2 g250658 (.A(w550464), .B(w695096), .Y(w314455));
  km_inv g527629 (.A(w727840), .Y(w180167));
  km_mux2 g126682 (.D0(w727840), .D1(w180167), .S(w314455), .Y(so[11]));
  km_nand2 g781501 (.A(w45048), .B(w449524), .Y(w504415));
  km_nand2 g13783 (.A(w45048), .B(w504415), .Y(w51754));
  km_nand2 g604979 (.A(w504415), .B(w449524), .Y(w450768));
  km_nand2 g943377 (.A(w51754), .B(w450768), .Y(w926479));
  km_xnor2 g940118 (.A(w926479), .B(w567619), .Y(w208109));
  km_inv g968731 (.A(w208109), .Y(so[12]));
  km_inv g537183 (.A(w133808), .Y(w727403));
  km_mux2 g841957 (.D0(w133808), .D1(w727403), .S(w540440), .Y(w134726));
  km_xor2 g947503 (.A(w747340), .B(w932848), .Y(so[14]));
  km_xor2 g36851 (.A(w71740), .B(w287056), .Y(so[15]));
endmodule
