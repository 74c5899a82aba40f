module echo_correlator(clk, rst_n, so);
  input clk;
  wire clk;
  input rst_n;
  wire rst_n;
  output [15:0] so;
  wire [15:0] so;
  wire _000_;
  wire _001_;
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
  wire _048_;
  wire _049_;
  wire _050_;
  wire [31:0] stage;
  sg13g2_xnor2_1 _051_ (
    .A(stage[11]),
    .B(stage[30]),
    .Y(_003_)
  );
  sg13g2_xnor2_1 _052_ (
    .A(stage[6]),
    .B(_003_),
    .Y(so[6])
  );
  sg13g2_xnor2_1 _053_ (
    .A(stage[20]),
    .B(stage[27]),
    .Y(_008_)
  );
  sg13g2_xnor2_1 _054_ (
    .A(stage[1]),
    .B(_008_),
    .Y(so[0])
  );
  sg13g2_xnor2_1 _055_ (
    .A(stage[22]),
    .B(stage[25]),
    .Y(_009_)
  );
  sg13g2_xnor2_1 _056_ (
    .A(stage[15]),
    .B(_009_),
    .Y(so[13])
  );
  sg13g2_xnor2_1 _057_ (
    .A(stage[25]),
    .B(stage[9]),
    .Y(_010_)
  );
  sg13g2_xnor2_1 _058_ (
    .A(stage[20]),
    .B(_010_),
    .Y(so[9])
  );
  sg13g2_xnor2_1 _059_ (
    .A(stage[8]),
    .B(stage[23]),
    .Y(_011_)
  );
  sg13g2_xnor2_1 _060_ (
    .A(stage[9]),
    .B(_011_),
    .Y(so[3])
  );
  sg13g2_xnor2_1 _061_ (
    .A(stage[13]),
    .B(stage[7]),
    .Y(_012_)
  );
  sg13g2_xnor2_1 _062_ (
    .A(stage[21]),
    .B(_012_),
    .Y(so[11])
  );
  sg13g2_xnor2_1 _063_ (
    .A(stage[18]),
    .B(stage[29]),
    .Y(_004_)
  );
  sg13g2_xnor2_1 _064_ (
    .A(stage[21]),
    .B(stage[2]),
    .Y(_013_)
  );
  sg13g2_xnor2_1 _065_ (
    .A(stage[8]),
    .B(_013_),
    .Y(so[1])
  );
  sg13g2_xnor2_1 _066_ (
    .A(stage[19]),
    .B(stage[12]),
    .Y(_014_)
  );
  sg13g2_xnor2_1 _067_ (
    .A(stage[0]),
    .B(_014_),
    .Y(so[7])
  );
  sg13g2_xnor2_1 _068_ (
    .A(stage[10]),
    .B(stage[16]),
    .Y(_015_)
  );
  sg13g2_xnor2_1 _069_ (
    .A(stage[7]),
    .B(_015_),
    .Y(so[12])
  );
  sg13g2_xnor2_1 _070_ (
    .A(stage[2]),
    .B(stage[16]),
    .Y(_016_)
  );
  sg13g2_xnor2_1 _071_ (
    .A(stage[13]),
    .B(_016_),
    .Y(so[4])
  );
  sg13g2_xnor2_1 _072_ (
    .A(stage[3]),
    .B(stage[14]),
    .Y(_017_)
  );
  sg13g2_xnor2_1 _073_ (
    .A(stage[5]),
    .B(_017_),
    .Y(so[2])
  );
  sg13g2_xnor2_1 _074_ (
    .A(stage[11]),
    .B(_004_),
    .Y(so[10])
  );
  sg13g2_xnor2_1 _075_ (
    .A(stage[26]),
    .B(stage[31]),
    .Y(_018_)
  );
  sg13g2_xnor2_1 _076_ (
    .A(stage[24]),
    .B(_018_),
    .Y(so[14])
  );
  sg13g2_xnor2_1 _077_ (
    .A(stage[21]),
    .B(stage[31]),
    .Y(_019_)
  );
  sg13g2_xnor2_1 _078_ (
    .A(stage[0]),
    .B(stage[1]),
    .Y(_020_)
  );
  sg13g2_xnor2_1 _079_ (
    .A(_019_),
    .B(_020_),
    .Y(_002_)
  );
  sg13g2_xnor2_1 _080_ (
    .A(stage[5]),
    .B(stage[17]),
    .Y(_005_)
  );
  sg13g2_xnor2_1 _081_ (
    .A(stage[29]),
    .B(_005_),
    .Y(so[8])
  );
  sg13g2_xnor2_1 _082_ (
    .A(stage[4]),
    .B(stage[28]),
    .Y(_006_)
  );
  sg13g2_xnor2_1 _083_ (
    .A(stage[0]),
    .B(_006_),
    .Y(so[15])
  );
  sg13g2_xnor2_1 _084_ (
    .A(stage[1]),
    .B(stage[19]),
    .Y(_007_)
  );
  sg13g2_xnor2_1 _085_ (
    .A(stage[28]),
    .B(_007_),
    .Y(so[5])
  );
  sg13g2_dfrbp_1 _086_ (
    .CLK(clk),
    .D(_002_),
    .Q(_001_),
    .Q_N(stage[0]),
    .RESET_B(rst_n)
  );
  sg13g2_dfrbp_1 _087_ (
    .CLK(clk),
    .D(stage[0]),
    .Q(stage[1]),
    .Q_N(_046_),
    .RESET_B(rst_n)
  );
  sg13g2_dfrbp_1 _088_ (
    .CLK(clk),
    .D(stage[1]),
    .Q(stage[2]),
    .Q_N(_024_),
    .RESET_B(rst_n)
  );
  sg13g2_dfrbp_1 _089_ (
    .CLK(clk),
    .D(stage[2]),
    .Q(stage[3]),
    .Q_N(_023_),
    .RESET_B(rst_n)
  );
  sg13g2_dfrbp_1 _090_ (
    .CLK(clk),
    .D(stage[3]),
    .Q(stage[4]),
    .Q_N(_036_),
    .RESET_B(rst_n)
  );
  sg13g2_dfrbp_1 _091_ (
    .CLK(clk),
    .D(stage[4]),
    .Q(stage[5]),
    .Q_N(_040_),
    .RESET_B(rst_n)
  );
  sg13g2_dfrbp_1 _092_ (
    .CLK(clk),
    .D(stage[5]),
    .Q(stage[6]),
    .Q_N(_028_),
    .RESET_B(rst_n)
  );
  sg13g2_dfrbp_1 _093_ (
    .CLK(clk),
    .D(stage[6]),
    .Q(stage[7]),
    .Q_N(_044_),
    .RESET_B(rst_n)
  );
  sg13g2_dfrbp_1 _094_ (
    .CLK(clk),
    .D(stage[7]),
    .Q(stage[8]),
    .Q_N(_034_),
    .RESET_B(rst_n)
  );
  sg13g2_dfrbp_1 _095_ (
    .CLK(clk),
    .D(stage[8]),
    .Q(stage[9]),
    .Q_N(_026_),
    .RESET_B(rst_n)
  );
  sg13g2_dfrbp_1 _096_ (
    .CLK(clk),
    .D(stage[9]),
    .Q(stage[10]),
    .Q_N(_038_),
    .RESET_B(rst_n)
  );
  sg13g2_dfrbp_1 _097_ (
    .CLK(clk),
    .D(stage[10]),
    .Q(stage[11]),
    .Q_N(_025_),
    .RESET_B(rst_n)
  );
  sg13g2_dfrbp_1 _098_ (
    .CLK(clk),
    .D(stage[11]),
    .Q(stage[12]),
    .Q_N(_042_),
    .RESET_B(rst_n)
  );
  sg13g2_dfrbp_1 _099_ (
    .CLK(clk),
    .D(stage[12]),
    .Q(stage[13]),
    .Q_N(_031_),
    .RESET_B(rst_n)
  );
  sg13g2_dfrbp_1 _100_ (
    .CLK(clk),
    .D(_031_),
    .Q(_000_),
    .Q_N(stage[14]),
    .RESET_B(rst_n)
  );
  sg13g2_dfrbp_1 _101_ (
    .CLK(clk),
    .D(stage[14]),
    .Q(stage[15]),
    .Q_N(_041_),
    .RESET_B(rst_n)
  );
  sg13g2_dfrbp_1 _102_ (
    .CLK(clk),
    .D(stage[15]),
    .Q(stage[16]),
    .Q_N(_027_),
    .RESET_B(rst_n)
  );
  sg13g2_dfrbp_1 _103_ (
    .CLK(clk),
    .D(stage[16]),
    .Q(stage[17]),
    .Q_N(_029_),
    .RESET_B(rst_n)
  );
  sg13g2_dfrbp_1 _104_ (
    .CLK(clk),
    .D(stage[17]),
    .Q(stage[18]),
    .Q_N(_022_),
    .RESET_B(rst_n)
  );
  sg13g2_dfrbp_1 _105_ (
    .CLK(clk),
    .D(stage[18]),
    .Q(stage[19]),
    .Q_N(_033_),
    .RESET_B(rst_n)
  );
  sg13g2_dfrbp_1 _106_ (
    .CLK(clk),
    .D(stage[19]),
    .Q(stage[20]),
    .Q_N(_043_),
    .RESET_B(rst_n)
  );
  sg13g2_dfrbp_1 _107_ (
    .CLK(clk),
    .D(stage[20]),
    .Q(stage[21]),
    .Q_N(_039_),
    .RESET_B(rst_n)
  );
  sg13g2_dfrbp_1 _108_ (
    .CLK(clk),
    .D(stage[21]),
    .Q(stage[22]),
    .Q_N(_045_),
    .RESET_B(rst_n)
  );
  sg13g2_dfrbp_1 _109_ (
    .CLK(clk),
    .D(stage[22]),
    .Q(stage[23]),
    .Q_N(_037_),
    .RESET_B(rst_n)
  );
  sg13g2_dfrbp_1 _110_ (
    .CLK(clk),
    .D(stage[23]),
    .Q(stage[24]),
    .Q_N(_047_),
    .RESET_B(rst_n)
  );
  sg13g2_dfrbp_1 _111_ (
    .CLK(clk),
    .D(stage[24]),
    .Q(stage[25]),
    .Q_N(_049_),
    .RESET_B(rst_n)
  );
  sg13g2_dfrbp_1 _112_ (
    .CLK(clk),
    .D(stage[25]),
    .Q(stage[26]),
    .Q_N(_032_),
    .RESET_B(rst_n)
  );
  sg13g2_dfrbp_1 _113_ (
    .CLK(clk),
    .D(stage[26]),
    .Q(stage[27]),
    .Q_N(_035_),
    .RESET_B(rst_n)
  );
  sg13g2_dfrbp_1 _114_ (
    .CLK(clk),
    .D(stage[27]),
    .Q(stage[28]),
    .Q_N(_048_),
    .RESET_B(rst_n)
  );
  sg13g2_dfrbp_1 _115_ (
    .CLK(clk),
    .D(stage[28]),
    .Q(stage[29]),
    .Q_N(_030_),
    .RESET_B(rst_n)
  );
  sg13g2_dfrbp_1 _116_ (
    .CLK(clk),
    .D(stage[29]),
    .Q(stage[30]),
    .Q_N(_050_),
    .RESET_B(rst_n)
  );
  sg13g2_dfrbp_1 _117_ (
    .CLK(clk),
    .D(stage[30]),
    .Q(stage[31]),
    .Q_N(_021_),
    .RESET_B(rst_n)
  );
endmodule
