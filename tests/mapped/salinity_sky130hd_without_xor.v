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
  wire [23:0] nx;
  wire [23:0] stage;
  sky130_fd_sc_hd__nor2_1 _033_ (
    .A(nx[4]),
    .B(nx[13]),
    .Y(_002_)
  );
  sky130_fd_sc_hd__and2_0 _034_ (
    .A(nx[4]),
    .B(nx[13]),
    .X(_003_)
  );
  sky130_fd_sc_hd__or2_0 _035_ (
    .A(stage[1]),
    .B(_007_),
    .X(_009_)
  );
  sky130_fd_sc_hd__nand2_1 _036_ (
    .A(_008_),
    .B(_009_),
    .Y(_001_[2])
  );
  sky130_fd_sc_hd__nand2_1 _037_ (
    .A(stage[0]),
    .B(_007_),
    .Y(_010_)
  );
  sky130_fd_sc_hd__or2_0 _038_ (
    .A(stage[0]),
    .B(_007_),
    .X(_011_)
  );
  sky130_fd_sc_hd__nand2_1 _039_ (
    .A(_010_),
    .B(_011_),
    .Y(_001_[1])
  );
  sky130_fd_sc_hd__or2_0 _040_ (
    .A(nx[3]),
    .B(nx[17]),
    .X(_012_)
  );
  sky130_fd_sc_hd__nand2_1 _041_ (
    .A(nx[3]),
    .B(nx[17]),
    .Y(_013_)
  );
  sky130_fd_sc_hd__nand2_1 _042_ (
    .A(_012_),
    .B(_013_),
    .Y(_000_[10])
  );
  sky130_fd_sc_hd__nor2_1 _043_ (
    .A(nx[12]),
    .B(nx[22]),
    .Y(_014_)
  );
  sky130_fd_sc_hd__and2_0 _044_ (
    .A(nx[12]),
    .B(nx[22]),
    .X(_015_)
  );
  sky130_fd_sc_hd__nor2_1 _045_ (
    .A(_002_),
    .B(_003_),
    .Y(_000_[11])
  );
  sky130_fd_sc_hd__nor2_1 _046_ (
    .A(_014_),
    .B(_015_),
    .Y(_000_[9])
  );
  sky130_fd_sc_hd__nor2_1 _047_ (
    .A(nx[9]),
    .B(nx[15]),
    .Y(_016_)
  );
  sky130_fd_sc_hd__and2_0 _048_ (
    .A(nx[9]),
    .B(nx[15]),
    .X(_017_)
  );
  sky130_fd_sc_hd__nor2_1 _049_ (
    .A(_016_),
    .B(_017_),
    .Y(_000_[8])
  );
  sky130_fd_sc_hd__or2_0 _050_ (
    .A(stage[0]),
    .B(nx[14]),
    .X(_018_)
  );
  sky130_fd_sc_hd__nand2_1 _051_ (
    .A(stage[0]),
    .B(nx[14]),
    .Y(_019_)
  );
  sky130_fd_sc_hd__nand2_1 _052_ (
    .A(_018_),
    .B(_019_),
    .Y(_000_[7])
  );
  sky130_fd_sc_hd__nor2_1 _053_ (
    .A(stage[1]),
    .B(nx[23]),
    .Y(_020_)
  );
  sky130_fd_sc_hd__and2_0 _054_ (
    .A(stage[1]),
    .B(nx[23]),
    .X(_021_)
  );
  sky130_fd_sc_hd__nor2_1 _055_ (
    .A(_020_),
    .B(_021_),
    .Y(_000_[6])
  );
  sky130_fd_sc_hd__nor2_1 _056_ (
    .A(stage[6]),
    .B(nx[0]),
    .Y(_004_)
  );
  sky130_fd_sc_hd__nor2_1 _057_ (
    .A(nx[16]),
    .B(nx[19]),
    .Y(_022_)
  );
  sky130_fd_sc_hd__and2_0 _058_ (
    .A(nx[16]),
    .B(nx[19]),
    .X(_023_)
  );
  sky130_fd_sc_hd__nor2_1 _059_ (
    .A(_022_),
    .B(_023_),
    .Y(_000_[5])
  );
  sky130_fd_sc_hd__or2_0 _060_ (
    .A(nx[11]),
    .B(nx[18]),
    .X(_024_)
  );
  sky130_fd_sc_hd__nand2_1 _061_ (
    .A(nx[11]),
    .B(nx[18]),
    .Y(_025_)
  );
  sky130_fd_sc_hd__nand2_1 _062_ (
    .A(_024_),
    .B(_025_),
    .Y(_000_[4])
  );
  sky130_fd_sc_hd__nor2_1 _063_ (
    .A(nx[8]),
    .B(nx[20]),
    .Y(_026_)
  );
  sky130_fd_sc_hd__and2_0 _064_ (
    .A(nx[8]),
    .B(nx[20]),
    .X(_027_)
  );
  sky130_fd_sc_hd__nor2_1 _065_ (
    .A(_026_),
    .B(_027_),
    .Y(_000_[2])
  );
  sky130_fd_sc_hd__or2_0 _066_ (
    .A(nx[5]),
    .B(nx[10]),
    .X(_028_)
  );
  sky130_fd_sc_hd__and2_0 _067_ (
    .A(stage[6]),
    .B(nx[0]),
    .X(_005_)
  );
  sky130_fd_sc_hd__nand2_1 _068_ (
    .A(nx[5]),
    .B(nx[10]),
    .Y(_029_)
  );
  sky130_fd_sc_hd__nand2_1 _069_ (
    .A(_028_),
    .B(_029_),
    .Y(_000_[1])
  );
  sky130_fd_sc_hd__nor2_1 _070_ (
    .A(nx[6]),
    .B(nx[21]),
    .Y(_030_)
  );
  sky130_fd_sc_hd__and2_0 _071_ (
    .A(nx[6]),
    .B(nx[21]),
    .X(_031_)
  );
  sky130_fd_sc_hd__nor2_1 _072_ (
    .A(_030_),
    .B(_031_),
    .Y(_000_[0])
  );
  sky130_fd_sc_hd__nand2_1 _073_ (
    .A(scan_en),
    .B(other[0]),
    .Y(_032_)
  );
  sky130_fd_sc_hd__nand2_1 _074_ (
    .A(_007_),
    .B(_032_),
    .Y(_001_[0])
  );
  sky130_fd_sc_hd__nor2_1 _075_ (
    .A(_004_),
    .B(_005_),
    .Y(nx[7])
  );
  sky130_fd_sc_hd__nand2_1 _076_ (
    .A(stage[6]),
    .B(scan_en),
    .Y(_006_)
  );
  sky130_fd_sc_hd__o31ai_1 _077_ (
    .A1(scan_en),
    .A2(_004_),
    .A3(_005_),
    .B1(_006_),
    .Y(_001_[7])
  );
  sky130_fd_sc_hd__nand2b_1 _078_ (
    .A_N(scan_en),
    .B(nx[0]),
    .Y(_007_)
  );
  sky130_fd_sc_hd__nand2_1 _079_ (
    .A(stage[1]),
    .B(_007_),
    .Y(_008_)
  );
  sky130_fd_sc_hd__dfrtp_1 _080_ (
    .CLK(clk),
    .D(_000_[0]),
    .Q(so[0]),
    .RESET_B(rst_n)
  );
  sky130_fd_sc_hd__dfrtp_1 _081_ (
    .CLK(clk),
    .D(_000_[1]),
    .Q(so[1]),
    .RESET_B(rst_n)
  );
  sky130_fd_sc_hd__dfrtp_1 _082_ (
    .CLK(clk),
    .D(_000_[2]),
    .Q(so[2]),
    .RESET_B(rst_n)
  );
  sky130_fd_sc_hd__dfrtp_1 _083_ (
    .CLK(clk),
    .D(nx[7]),
    .Q(so[3]),
    .RESET_B(rst_n)
  );
  sky130_fd_sc_hd__dfstp_1 _084_ (
    .CLK(clk),
    .D(_000_[4]),
    .Q(so[4]),
    .SET_B(rst_n)
  );
  sky130_fd_sc_hd__dfstp_1 _085_ (
    .CLK(clk),
    .D(_000_[5]),
    .Q(so[5]),
    .SET_B(rst_n)
  );
  sky130_fd_sc_hd__dfstp_1 _086_ (
    .CLK(clk),
    .D(_000_[6]),
    .Q(so[6]),
    .SET_B(rst_n)
  );
  sky130_fd_sc_hd__dfstp_1 _087_ (
    .CLK(clk),
    .D(_000_[7]),
    .Q(so[7]),
    .SET_B(rst_n)
  );
  sky130_fd_sc_hd__dfrtp_1 _088_ (
    .CLK(clk),
    .D(_000_[8]),
    .Q(so[8]),
    .RESET_B(rst_n)
  );
  sky130_fd_sc_hd__dfrtp_1 _089_ (
    .CLK(clk),
    .D(_000_[9]),
    .Q(so[9]),
    .RESET_B(rst_n)
  );
  sky130_fd_sc_hd__dfrtp_1 _090_ (
    .CLK(clk),
    .D(_000_[10]),
    .Q(so[10]),
    .RESET_B(rst_n)
  );
  sky130_fd_sc_hd__dfrtp_1 _091_ (
    .CLK(clk),
    .D(_000_[11]),
    .Q(so[11]),
    .RESET_B(rst_n)
  );
  sky130_fd_sc_hd__dfstp_1 _092_ (
    .CLK(clk),
    .D(_001_[0]),
    .Q(stage[0]),
    .SET_B(rst_n)
  );
  sky130_fd_sc_hd__dfrtp_1 _093_ (
    .CLK(clk),
    .D(_001_[1]),
    .Q(stage[1]),
    .RESET_B(rst_n)
  );
  sky130_fd_sc_hd__dfrtp_1 _094_ (
    .CLK(clk),
    .D(_001_[2]),
    .Q(nx[3]),
    .RESET_B(rst_n)
  );
  sky130_fd_sc_hd__dfrtp_1 _095_ (
    .CLK(clk),
    .D(nx[3]),
    .Q(nx[4]),
    .RESET_B(rst_n)
  );
  sky130_fd_sc_hd__dfrtp_1 _096_ (
    .CLK(clk),
    .D(nx[4]),
    .Q(nx[5]),
    .RESET_B(rst_n)
  );
  sky130_fd_sc_hd__dfrtp_1 _097_ (
    .CLK(clk),
    .D(nx[5]),
    .Q(nx[6]),
    .RESET_B(rst_n)
  );
  sky130_fd_sc_hd__dfrtp_1 _098_ (
    .CLK(clk),
    .D(nx[6]),
    .Q(stage[6]),
    .RESET_B(rst_n)
  );
  sky130_fd_sc_hd__dfrtp_1 _099_ (
    .CLK(clk),
    .D(_001_[7]),
    .Q(nx[8]),
    .RESET_B(rst_n)
  );
  sky130_fd_sc_hd__dfstp_1 _100_ (
    .CLK(clk),
    .D(nx[8]),
    .Q(nx[9]),
    .SET_B(rst_n)
  );
  sky130_fd_sc_hd__dfstp_1 _101_ (
    .CLK(clk),
    .D(nx[9]),
    .Q(nx[10]),
    .SET_B(rst_n)
  );
  sky130_fd_sc_hd__dfrtp_1 _102_ (
    .CLK(clk),
    .D(nx[10]),
    .Q(nx[11]),
    .RESET_B(rst_n)
  );
  sky130_fd_sc_hd__dfrtp_1 _103_ (
    .CLK(clk),
    .D(nx[11]),
    .Q(nx[12]),
    .RESET_B(rst_n)
  );
  sky130_fd_sc_hd__dfrtp_1 _104_ (
    .CLK(clk),
    .D(nx[12]),
    .Q(nx[13]),
    .RESET_B(rst_n)
  );
  sky130_fd_sc_hd__dfrtp_1 _105_ (
    .CLK(clk),
    .D(nx[13]),
    .Q(nx[14]),
    .RESET_B(rst_n)
  );
  sky130_fd_sc_hd__dfstp_1 _106_ (
    .CLK(clk),
    .D(nx[14]),
    .Q(nx[15]),
    .SET_B(rst_n)
  );
  sky130_fd_sc_hd__dfstp_1 _107_ (
    .CLK(clk),
    .D(nx[15]),
    .Q(nx[16]),
    .SET_B(rst_n)
  );
  sky130_fd_sc_hd__dfstp_1 _108_ (
    .CLK(clk),
    .D(nx[16]),
    .Q(nx[17]),
    .SET_B(rst_n)
  );
  sky130_fd_sc_hd__dfrtp_1 _109_ (
    .CLK(clk),
    .D(nx[17]),
    .Q(nx[18]),
    .RESET_B(rst_n)
  );
  sky130_fd_sc_hd__dfstp_1 _110_ (
    .CLK(clk),
    .D(nx[18]),
    .Q(nx[19]),
    .SET_B(rst_n)
  );
  sky130_fd_sc_hd__dfrtp_1 _111_ (
    .CLK(clk),
    .D(nx[19]),
    .Q(nx[20]),
    .RESET_B(rst_n)
  );
  sky130_fd_sc_hd__dfrtp_1 _112_ (
    .CLK(clk),
    .D(nx[20]),
    .Q(nx[21]),
    .RESET_B(rst_n)
  );
  sky130_fd_sc_hd__dfstp_1 _113_ (
    .CLK(clk),
    .D(nx[21]),
    .Q(nx[22]),
    .SET_B(rst_n)
  );
  sky130_fd_sc_hd__dfrtp_1 _114_ (
    .CLK(clk),
    .D(nx[22]),
    .Q(nx[23]),
    .RESET_B(rst_n)
  );
  sky130_fd_sc_hd__dfstp_1 _115_ (
    .CLK(clk),
    .D(nx[23]),
    .Q(nx[0]),
    .SET_B(rst_n)
  );
  assign { _001_[23:8], _001_[6:3] } = { nx[23:8], nx[6:3] };
  assign _000_[3] = nx[7];
  assign { stage[23:7], stage[5:2] } = { nx[0], nx[23:8], nx[6:3] };
endmodule
