module salinity_converter(clk, rst_n, scan_en, other, so);
  input clk;
  wire clk;
  input rst_n;
  wire rst_n;
  input scan_en;
  wire scan_en;
  input [3:0] other;
  wire [3:0] other;
  output [11:0] so;
  wire [11:0] so;
  wire [11:0] _000_;
  wire [23:0] _001_;
  wire _002_;
  wire _003_;
  wire _004_;
  wire _005_;
  wire _006_;
  wire _007_;
  wire _008_;
  wire _009_;
  wire _010_;
  wire _011_;
  wire _012_;
  wire _013_;
  wire _014_;
  wire _015_;
  wire _016_;
  wire _017_;
  wire _018_;
  wire _019_;
  wire _020_;
  wire _021_;
  wire _022_;
  wire _023_;
  wire _024_;
  wire _025_;
  wire _026_;
  wire _027_;
  wire _028_;
  wire _029_;
  wire _030_;
  wire _031_;
  wire _032_;
  wire _033_;
  wire _034_;
  wire _035_;
  wire _036_;
  wire _037_;
  wire _038_;
  wire _039_;
  wire _040_;
  wire _041_;
  wire _042_;
  wire _043_;
  wire _044_;
  wire _045_;
  wire _046_;
  wire _047_;
  wire [23:0] nx;
  wire [23:0] stage;
  sg13g2_inv_1 _048_ (
    .A(nx[9]),
    .Y(_020_)
  );
  sg13g2_inv_1 _049_ (
    .A(nx[15]),
    .Y(_021_)
  );
  sg13g2_xor2_1 _050_ (
    .A(nx[9]),
    .B(nx[15]),
    .X(_000_[8])
  );
  sg13g2_xor2_1 _051_ (
    .A(nx[8]),
    .B(nx[20]),
    .X(_000_[2])
  );
  sg13g2_xnor2_1 _052_ (
    .A(nx[5]),
    .B(nx[10]),
    .Y(_000_[1])
  );
  sg13g2_xor2_1 _053_ (
    .A(nx[6]),
    .B(nx[21]),
    .X(_000_[0])
  );
  sg13g2_xor2_1 _054_ (
    .A(nx[4]),
    .B(nx[13]),
    .X(_000_[11])
  );
  sg13g2_nand2_1 _055_ (
    .A(scan_en),
    .B(other[0]),
    .Y(_024_)
  );
  sg13g2_and2_1 _056_ (
    .A(_023_),
    .B(_024_),
    .X(_015_)
  );
  sg13g2_xor2_1 _057_ (
    .A(stage[0]),
    .B(nx[14]),
    .X(_016_)
  );
  sg13g2_xnor2_1 _058_ (
    .A(stage[1]),
    .B(nx[23]),
    .Y(_017_)
  );
  sg13g2_xnor2_1 _059_ (
    .A(nx[16]),
    .B(nx[19]),
    .Y(_018_)
  );
  sg13g2_inv_1 _060_ (
    .A(nx[16]),
    .Y(_022_)
  );
  sg13g2_xor2_1 _061_ (
    .A(nx[11]),
    .B(nx[18]),
    .X(_019_)
  );
  sg13g2_xor2_1 _062_ (
    .A(stage[6]),
    .B(nx[0]),
    .X(nx[7])
  );
  sg13g2_mux2_1 _063_ (
    .A0(nx[7]),
    .A1(stage[6]),
    .S(scan_en),
    .X(_001_[7])
  );
  sg13g2_nand2b_1 _064_ (
    .A_N(scan_en),
    .B(nx[0]),
    .Y(_023_)
  );
  sg13g2_xnor2_1 _065_ (
    .A(stage[1]),
    .B(_023_),
    .Y(_001_[2])
  );
  sg13g2_xnor2_1 _066_ (
    .A(stage[0]),
    .B(_023_),
    .Y(_001_[1])
  );
  sg13g2_xnor2_1 _067_ (
    .A(nx[3]),
    .B(nx[17]),
    .Y(_000_[10])
  );
  sg13g2_xor2_1 _068_ (
    .A(nx[12]),
    .B(nx[22]),
    .X(_000_[9])
  );
  sg13g2_dfrbp_1 _069_ (
    .CLK(clk),
    .D(_000_[0]),
    .Q(so[0]),
    .Q_N(_038_),
    .RESET_B(rst_n)
  );
  sg13g2_dfrbp_1 _070_ (
    .CLK(clk),
    .D(_000_[1]),
    .Q(so[1]),
    .Q_N(_037_),
    .RESET_B(rst_n)
  );
  sg13g2_dfrbp_1 _071_ (
    .CLK(clk),
    .D(_000_[2]),
    .Q(so[2]),
    .Q_N(_036_),
    .RESET_B(rst_n)
  );
  sg13g2_dfrbp_1 _072_ (
    .CLK(clk),
    .D(nx[7]),
    .Q(so[3]),
    .Q_N(_035_),
    .RESET_B(rst_n)
  );
  sg13g2_dfrbp_1 _073_ (
    .CLK(clk),
    .D(_019_),
    .Q(_006_),
    .Q_N(so[4]),
    .RESET_B(rst_n)
  );
  sg13g2_dfrbp_1 _074_ (
    .CLK(clk),
    .D(_018_),
    .Q(_005_),
    .Q_N(so[5]),
    .RESET_B(rst_n)
  );
  sg13g2_dfrbp_1 _075_ (
    .CLK(clk),
    .D(_017_),
    .Q(_004_),
    .Q_N(so[6]),
    .RESET_B(rst_n)
  );
  sg13g2_dfrbp_1 _076_ (
    .CLK(clk),
    .D(_016_),
    .Q(_003_),
    .Q_N(so[7]),
    .RESET_B(rst_n)
  );
  sg13g2_dfrbp_1 _077_ (
    .CLK(clk),
    .D(_000_[8]),
    .Q(so[8]),
    .Q_N(_032_),
    .RESET_B(rst_n)
  );
  sg13g2_dfrbp_1 _078_ (
    .CLK(clk),
    .D(_000_[9]),
    .Q(so[9]),
    .Q_N(_034_),
    .RESET_B(rst_n)
  );
  sg13g2_dfrbp_1 _079_ (
    .CLK(clk),
    .D(_000_[10]),
    .Q(so[10]),
    .Q_N(_033_),
    .RESET_B(rst_n)
  );
  sg13g2_dfrbp_1 _080_ (
    .CLK(clk),
    .D(_000_[11]),
    .Q(so[11]),
    .Q_N(_047_),
    .RESET_B(rst_n)
  );
  sg13g2_dfrbp_1 _081_ (
    .CLK(clk),
    .D(_015_),
    .Q(_002_),
    .Q_N(stage[0]),
    .RESET_B(rst_n)
  );
  sg13g2_dfrbp_1 _082_ (
    .CLK(clk),
    .D(_001_[1]),
    .Q(stage[1]),
    .Q_N(_045_),
    .RESET_B(rst_n)
  );
  sg13g2_dfrbp_1 _083_ (
    .CLK(clk),
    .D(_001_[2]),
    .Q(nx[3]),
    .Q_N(_040_),
    .RESET_B(rst_n)
  );
  sg13g2_dfrbp_1 _084_ (
    .CLK(clk),
    .D(nx[3]),
    .Q(nx[4]),
    .Q_N(_046_),
    .RESET_B(rst_n)
  );
  sg13g2_dfrbp_1 _085_ (
    .CLK(clk),
    .D(nx[4]),
    .Q(nx[5]),
    .Q_N(_029_),
    .RESET_B(rst_n)
  );
  sg13g2_dfrbp_1 _086_ (
    .CLK(clk),
    .D(nx[5]),
    .Q(nx[6]),
    .Q_N(_039_),
    .RESET_B(rst_n)
  );
  sg13g2_dfrbp_1 _087_ (
    .CLK(clk),
    .D(nx[6]),
    .Q(stage[6]),
    .Q_N(_031_),
    .RESET_B(rst_n)
  );
  sg13g2_dfrbp_1 _088_ (
    .CLK(clk),
    .D(_001_[7]),
    .Q(nx[8]),
    .Q_N(_043_),
    .RESET_B(rst_n)
  );
  sg13g2_dfrbp_1 _089_ (
    .CLK(clk),
    .D(_043_),
    .Q(_008_),
    .Q_N(nx[9]),
    .RESET_B(rst_n)
  );
  sg13g2_dfrbp_1 _090_ (
    .CLK(clk),
    .D(_020_),
    .Q(_009_),
    .Q_N(nx[10]),
    .RESET_B(rst_n)
  );
  sg13g2_dfrbp_1 _091_ (
    .CLK(clk),
    .D(nx[10]),
    .Q(nx[11]),
    .Q_N(_041_),
    .RESET_B(rst_n)
  );
  sg13g2_dfrbp_1 _092_ (
    .CLK(clk),
    .D(nx[11]),
    .Q(nx[12]),
    .Q_N(_042_),
    .RESET_B(rst_n)
  );
  sg13g2_dfrbp_1 _093_ (
    .CLK(clk),
    .D(nx[12]),
    .Q(nx[13]),
    .Q_N(_044_),
    .RESET_B(rst_n)
  );
  sg13g2_dfrbp_1 _094_ (
    .CLK(clk),
    .D(nx[13]),
    .Q(nx[14]),
    .Q_N(_028_),
    .RESET_B(rst_n)
  );
  sg13g2_dfrbp_1 _095_ (
    .CLK(clk),
    .D(_028_),
    .Q(_010_),
    .Q_N(nx[15]),
    .RESET_B(rst_n)
  );
  sg13g2_dfrbp_1 _096_ (
    .CLK(clk),
    .D(_021_),
    .Q(_011_),
    .Q_N(nx[16]),
    .RESET_B(rst_n)
  );
  sg13g2_dfrbp_1 _097_ (
    .CLK(clk),
    .D(_022_),
    .Q(_012_),
    .Q_N(nx[17]),
    .RESET_B(rst_n)
  );
  sg13g2_dfrbp_1 _098_ (
    .CLK(clk),
    .D(nx[17]),
    .Q(nx[18]),
    .Q_N(_026_),
    .RESET_B(rst_n)
  );
  sg13g2_dfrbp_1 _099_ (
    .CLK(clk),
    .D(_026_),
    .Q(_007_),
    .Q_N(nx[19]),
    .RESET_B(rst_n)
  );
  sg13g2_dfrbp_1 _100_ (
    .CLK(clk),
    .D(nx[19]),
    .Q(nx[20]),
    .Q_N(_027_),
    .RESET_B(rst_n)
  );
  sg13g2_dfrbp_1 _101_ (
    .CLK(clk),
    .D(nx[20]),
    .Q(nx[21]),
    .Q_N(_025_),
    .RESET_B(rst_n)
  );
  sg13g2_dfrbp_1 _102_ (
    .CLK(clk),
    .D(_025_),
    .Q(_014_),
    .Q_N(nx[22]),
    .RESET_B(rst_n)
  );
  sg13g2_dfrbp_1 _103_ (
    .CLK(clk),
    .D(nx[22]),
    .Q(nx[23]),
    .Q_N(_030_),
    .RESET_B(rst_n)
  );
  sg13g2_dfrbp_1 _104_ (
    .CLK(clk),
    .D(_030_),
    .Q(_013_),
    .Q_N(nx[0]),
    .RESET_B(rst_n)
  );
  assign { _001_[23:8], _001_[6:3] } = { nx[23:8], nx[6:3] };
  assign _000_[3] = nx[7];
  assign { stage[23:7], stage[5:2] } = { nx[0], nx[23:8], nx[6:3] };
endmodule
