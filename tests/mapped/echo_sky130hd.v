module echo_correlator(clk, rst_n, so);
  input clk;
  wire clk;
  input rst_n;
  wire rst_n;
  output [15:0] so;
  wire [15:0] so;
  wire [31:0] _00_;
  wire _01_;
  wire _02_;
  wire _03_;
  wire _04_;
  wire _05_;
  wire _06_;
  wire _07_;
  wire _08_;
  wire _09_;
  wire _10_;
  wire _11_;
  wire _12_;
  wire _13_;
  wire _14_;
  wire _15_;
  wire _16_;
  wire _17_;
  wire _18_;
  wire [31:0] stage;
  sky130_fd_sc_hd__xnor2_1 _19_ (
    .A(stage[11]),
    .B(stage[30]),
    .Y(_01_)
  );
  sky130_fd_sc_hd__xnor2_1 _20_ (
    .A(stage[6]),
    .B(_01_),
    .Y(so[6])
  );
  sky130_fd_sc_hd__xnor2_1 _21_ (
    .A(stage[20]),
    .B(stage[27]),
    .Y(_06_)
  );
  sky130_fd_sc_hd__xnor2_1 _22_ (
    .A(stage[1]),
    .B(_06_),
    .Y(so[0])
  );
  sky130_fd_sc_hd__xnor2_1 _23_ (
    .A(stage[22]),
    .B(stage[25]),
    .Y(_07_)
  );
  sky130_fd_sc_hd__xnor2_1 _24_ (
    .A(stage[15]),
    .B(_07_),
    .Y(so[13])
  );
  sky130_fd_sc_hd__xnor2_1 _25_ (
    .A(stage[25]),
    .B(stage[9]),
    .Y(_08_)
  );
  sky130_fd_sc_hd__xnor2_1 _26_ (
    .A(stage[20]),
    .B(_08_),
    .Y(so[9])
  );
  sky130_fd_sc_hd__xnor2_1 _27_ (
    .A(stage[8]),
    .B(stage[23]),
    .Y(_09_)
  );
  sky130_fd_sc_hd__xnor2_1 _28_ (
    .A(stage[9]),
    .B(_09_),
    .Y(so[3])
  );
  sky130_fd_sc_hd__xnor2_1 _29_ (
    .A(stage[13]),
    .B(stage[7]),
    .Y(_10_)
  );
  sky130_fd_sc_hd__xnor2_1 _30_ (
    .A(stage[21]),
    .B(_10_),
    .Y(so[11])
  );
  sky130_fd_sc_hd__xnor2_1 _31_ (
    .A(stage[18]),
    .B(stage[29]),
    .Y(_02_)
  );
  sky130_fd_sc_hd__xnor2_1 _32_ (
    .A(stage[21]),
    .B(stage[2]),
    .Y(_11_)
  );
  sky130_fd_sc_hd__xnor2_1 _33_ (
    .A(stage[8]),
    .B(_11_),
    .Y(so[1])
  );
  sky130_fd_sc_hd__xnor2_1 _34_ (
    .A(stage[19]),
    .B(stage[12]),
    .Y(_12_)
  );
  sky130_fd_sc_hd__xnor2_1 _35_ (
    .A(stage[0]),
    .B(_12_),
    .Y(so[7])
  );
  sky130_fd_sc_hd__xnor2_1 _36_ (
    .A(stage[10]),
    .B(stage[16]),
    .Y(_13_)
  );
  sky130_fd_sc_hd__xnor2_1 _37_ (
    .A(stage[7]),
    .B(_13_),
    .Y(so[12])
  );
  sky130_fd_sc_hd__xnor2_1 _38_ (
    .A(stage[2]),
    .B(stage[16]),
    .Y(_14_)
  );
  sky130_fd_sc_hd__xnor2_1 _39_ (
    .A(stage[13]),
    .B(_14_),
    .Y(so[4])
  );
  sky130_fd_sc_hd__xnor2_1 _40_ (
    .A(stage[3]),
    .B(stage[14]),
    .Y(_15_)
  );
  sky130_fd_sc_hd__xnor2_1 _41_ (
    .A(stage[5]),
    .B(_15_),
    .Y(so[2])
  );
  sky130_fd_sc_hd__xnor2_1 _42_ (
    .A(stage[11]),
    .B(_02_),
    .Y(so[10])
  );
  sky130_fd_sc_hd__xor2_1 _43_ (
    .A(stage[21]),
    .B(stage[31]),
    .X(_16_)
  );
  sky130_fd_sc_hd__xnor2_1 _44_ (
    .A(stage[0]),
    .B(stage[1]),
    .Y(_17_)
  );
  sky130_fd_sc_hd__xnor2_1 _45_ (
    .A(_16_),
    .B(_17_),
    .Y(_00_[0])
  );
  sky130_fd_sc_hd__xnor2_1 _46_ (
    .A(stage[26]),
    .B(stage[31]),
    .Y(_18_)
  );
  sky130_fd_sc_hd__xnor2_1 _47_ (
    .A(stage[24]),
    .B(_18_),
    .Y(so[14])
  );
  sky130_fd_sc_hd__xnor2_1 _48_ (
    .A(stage[5]),
    .B(stage[17]),
    .Y(_03_)
  );
  sky130_fd_sc_hd__xnor2_1 _49_ (
    .A(stage[29]),
    .B(_03_),
    .Y(so[8])
  );
  sky130_fd_sc_hd__xnor2_1 _50_ (
    .A(stage[4]),
    .B(stage[28]),
    .Y(_04_)
  );
  sky130_fd_sc_hd__xnor2_1 _51_ (
    .A(stage[0]),
    .B(_04_),
    .Y(so[15])
  );
  sky130_fd_sc_hd__xnor2_1 _52_ (
    .A(stage[1]),
    .B(stage[19]),
    .Y(_05_)
  );
  sky130_fd_sc_hd__xnor2_1 _53_ (
    .A(stage[28]),
    .B(_05_),
    .Y(so[5])
  );
  sky130_fd_sc_hd__dfstp_1 _54_ (
    .CLK(clk),
    .D(_00_[0]),
    .Q(stage[0]),
    .SET_B(rst_n)
  );
  sky130_fd_sc_hd__dfrtp_1 _55_ (
    .CLK(clk),
    .D(stage[0]),
    .Q(stage[1]),
    .RESET_B(rst_n)
  );
  sky130_fd_sc_hd__dfrtp_1 _56_ (
    .CLK(clk),
    .D(stage[1]),
    .Q(stage[2]),
    .RESET_B(rst_n)
  );
  sky130_fd_sc_hd__dfrtp_1 _57_ (
    .CLK(clk),
    .D(stage[2]),
    .Q(stage[3]),
    .RESET_B(rst_n)
  );
  sky130_fd_sc_hd__dfrtp_1 _58_ (
    .CLK(clk),
    .D(stage[3]),
    .Q(stage[4]),
    .RESET_B(rst_n)
  );
  sky130_fd_sc_hd__dfrtp_1 _59_ (
    .CLK(clk),
    .D(stage[4]),
    .Q(stage[5]),
    .RESET_B(rst_n)
  );
  sky130_fd_sc_hd__dfrtp_1 _60_ (
    .CLK(clk),
    .D(stage[5]),
    .Q(stage[6]),
    .RESET_B(rst_n)
  );
  sky130_fd_sc_hd__dfrtp_1 _61_ (
    .CLK(clk),
    .D(stage[6]),
    .Q(stage[7]),
    .RESET_B(rst_n)
  );
  sky130_fd_sc_hd__dfrtp_1 _62_ (
    .CLK(clk),
    .D(stage[7]),
    .Q(stage[8]),
    .RESET_B(rst_n)
  );
  sky130_fd_sc_hd__dfrtp_1 _63_ (
    .CLK(clk),
    .D(stage[8]),
    .Q(stage[9]),
    .RESET_B(rst_n)
  );
  sky130_fd_sc_hd__dfrtp_1 _64_ (
    .CLK(clk),
    .D(stage[9]),
    .Q(stage[10]),
    .RESET_B(rst_n)
  );
  sky130_fd_sc_hd__dfrtp_1 _65_ (
    .CLK(clk),
    .D(stage[10]),
    .Q(stage[11]),
    .RESET_B(rst_n)
  );
  sky130_fd_sc_hd__dfrtp_1 _66_ (
    .CLK(clk),
    .D(stage[11]),
    .Q(stage[12]),
    .RESET_B(rst_n)
  );
  sky130_fd_sc_hd__dfrtp_1 _67_ (
    .CLK(clk),
    .D(stage[12]),
    .Q(stage[13]),
    .RESET_B(rst_n)
  );
  sky130_fd_sc_hd__dfstp_1 _68_ (
    .CLK(clk),
    .D(stage[13]),
    .Q(stage[14]),
    .SET_B(rst_n)
  );
  sky130_fd_sc_hd__dfrtp_1 _69_ (
    .CLK(clk),
    .D(stage[14]),
    .Q(stage[15]),
    .RESET_B(rst_n)
  );
  sky130_fd_sc_hd__dfrtp_1 _70_ (
    .CLK(clk),
    .D(stage[15]),
    .Q(stage[16]),
    .RESET_B(rst_n)
  );
  sky130_fd_sc_hd__dfrtp_1 _71_ (
    .CLK(clk),
    .D(stage[16]),
    .Q(stage[17]),
    .RESET_B(rst_n)
  );
  sky130_fd_sc_hd__dfrtp_1 _72_ (
    .CLK(clk),
    .D(stage[17]),
    .Q(stage[18]),
    .RESET_B(rst_n)
  );
  sky130_fd_sc_hd__dfrtp_1 _73_ (
    .CLK(clk),
    .D(stage[18]),
    .Q(stage[19]),
    .RESET_B(rst_n)
  );
  sky130_fd_sc_hd__dfrtp_1 _74_ (
    .CLK(clk),
    .D(stage[19]),
    .Q(stage[20]),
    .RESET_B(rst_n)
  );
  sky130_fd_sc_hd__dfrtp_1 _75_ (
    .CLK(clk),
    .D(stage[20]),
    .Q(stage[21]),
    .RESET_B(rst_n)
  );
  sky130_fd_sc_hd__dfrtp_1 _76_ (
    .CLK(clk),
    .D(stage[21]),
    .Q(stage[22]),
    .RESET_B(rst_n)
  );
  sky130_fd_sc_hd__dfrtp_1 _77_ (
    .CLK(clk),
    .D(stage[22]),
    .Q(stage[23]),
    .RESET_B(rst_n)
  );
  sky130_fd_sc_hd__dfrtp_1 _78_ (
    .CLK(clk),
    .D(stage[23]),
    .Q(stage[24]),
    .RESET_B(rst_n)
  );
  sky130_fd_sc_hd__dfrtp_1 _79_ (
    .CLK(clk),
    .D(stage[24]),
    .Q(stage[25]),
    .RESET_B(rst_n)
  );
  sky130_fd_sc_hd__dfrtp_1 _80_ (
    .CLK(clk),
    .D(stage[25]),
    .Q(stage[26]),
    .RESET_B(rst_n)
  );
  sky130_fd_sc_hd__dfrtp_1 _81_ (
    .CLK(clk),
    .D(stage[26]),
    .Q(stage[27]),
    .RESET_B(rst_n)
  );
  sky130_fd_sc_hd__dfrtp_1 _82_ (
    .CLK(clk),
    .D(stage[27]),
    .Q(stage[28]),
    .RESET_B(rst_n)
  );
  sky130_fd_sc_hd__dfrtp_1 _83_ (
    .CLK(clk),
    .D(stage[28]),
    .Q(stage[29]),
    .RESET_B(rst_n)
  );
  sky130_fd_sc_hd__dfrtp_1 _84_ (
    .CLK(clk),
    .D(stage[29]),
    .Q(stage[30]),
    .RESET_B(rst_n)
  );
  sky130_fd_sc_hd__dfrtp_1 _85_ (
    .CLK(clk),
    .D(stage[30]),
    .Q(stage[31]),
    .RESET_B(rst_n)
  );
  assign _00_[31:1] = stage[30:0];
endmodule
