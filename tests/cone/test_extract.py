"""The cone: what is in it, what the mode cuts off, and every trouble that keeps it from being closed."""

from pathlib import Path

from auditor.cells.library import Cell, CellLibrary, Function, Pin, Storage
from auditor.cells.read import read_cells
from auditor.machine.prove import prove_machine
from auditor.replay.replay import replay
from tests.support.cones import cone_of, library, troubles_of

RING = """\
  wire a, b, f;
  km_dff a_ff (.CK(clk), .D(f), .Q(a));
  km_dff b_ff (.CK(clk), .D(a), .Q(b));
  km_xor2 g (.A(a), .B(b), .Y(f));
  km_buf out (.A(b), .Y(y));"""

CLEARED = """\
  wire a, b, n, r;
  km_inv i (.A(reset), .Y(n));
  km_buf j (.A(n), .Y(r));
  km_dffc a_ff (.CK(clk), .RN(r), .D(b), .Q(a));
  km_dffs b_ff (.CK(clk), .SN(r), .D(a), .Q(b));
  km_buf out (.A(b), .Y(y));"""


def test_the_ring_is_one_feedback_register(tmp_path: Path) -> None:
    """Two flip-flops that read each other form one register, in the natural order of their names."""
    cone = cone_of(tmp_path, RING)
    assert [element.name for element in cone.elements] == ["a_ff", "b_ff"]
    assert cone.feedback == ((0, 1),)
    assert [cone.wire_name(gate.output) for gate in cone.gates if gate.instance >= 0][-1] in {"f", "y"}
    assert cone.netlist.net_names[cone.clock] == "clk"
    assert cone.clock_edge == "rising"


def test_graph_edges_say_what_they_pass(tmp_path: Path) -> None:
    """Every edge of the graph carries its instance; the edges into stored bits are marked."""
    cone = cone_of(tmp_path, RING)
    a, b = (element.wire for element in cone.elements)
    f = cone.netlist.net_of_name["f"]
    assert cone.graph.edges[f, a]["storage"] is True
    q = cone.netlist.net_of_name["b"]
    assert cone.graph.has_edge(b, q)
    assert cone.netlist.instance_names[cone.graph.edges[q, f]["instance"]] == "g"
    assert cone.graph.edges[q, f]["storage"] is False


def test_mode_prunes_the_function_but_not_the_load(tmp_path: Path) -> None:
    """With scan enable at 0 the scan path leaves the cone; the pins on it still load the flip-flop."""
    body = """\
  wire a, b, c;
  km_sdffc a_ff (.CK(clk), .RN(1'b1), .D(b), .SI(c), .SE(se), .Q(a));
  km_dff b_ff (.CK(clk), .D(a), .Q(b));
  km_dff c_ff (.CK(clk), .D(b), .Q(c));
  km_buf out (.A(b), .Y(y));"""
    cone = cone_of(tmp_path, body, ports="input clk, input se, output y", mode={"se": 0})
    assert [element.name for element in cone.elements] == ["a_ff", "b_ff"]
    load = cone.loads[1]
    assert load.pins == ("Q",)
    assert load.direct == (3,)
    assert load.capacitance_ff == (1.8 + 1.8 + 1.7,)


def test_fan_out_counts_leaves_through_buffers_and_inverters(tmp_path: Path) -> None:
    """A buffer and an inverter count as what they drive; Q and QN are told apart."""
    body = """\
  wire a, n, p, q, f;
  km_dff a_ff (.CK(clk), .D(f), .Q(a), .QN(n));
  km_buf u1 (.A(a), .Y(p));
  km_inv u2 (.A(p), .Y(q));
  km_xor2 u3 (.A(p), .B(q), .Y(w));
  km_inv u4 (.A(n), .Y(f));
  km_buf out (.A(a), .Y(y));"""
    load = cone_of(tmp_path, body).loads[0]
    assert load.pins == ("Q", "QN")
    assert load.direct == (2, 1)
    assert load.leaf == (2, 1)


def test_asynchronous_pins_are_inactive_by_assumption_and_give_the_reset(tmp_path: Path) -> None:
    """A reset port behind an inverter is assumed inactive and listed; flipping it gives the reset state."""
    cone = cone_of(tmp_path, CLEARED, ports="input clk, input reset, output y")
    assert cone.assumed == (
        "reset = 0: the asynchronous pins behind it are inactive; "
        "reset = 1 gives the reset state of 2 storage elements",
    )
    assert [element.reset for element in cone.elements] == [0, 1]
    assert not cone.obstacles


def test_an_asynchronous_pin_that_the_mode_holds_active_is_an_obstacle(tmp_path: Path) -> None:
    """A reset held active by the mode stands in the way of every element behind it, with its cure."""
    cone = cone_of(tmp_path, CLEARED, ports="input clk, input reset, output y", mode={"reset": 1})
    assert [obstacle.because for obstacle in cone.obstacles] == [
        "its asynchronous clear is active under the mode",
        "its asynchronous preset is active under the mode",
    ]
    assert {obstacle.cure for obstacle in cone.obstacles} == {"--mode reset=0"}


GATES = Path(__file__).parents[1] / "support" / "gates.lib"

BOTH = """\
  wire a, p;
  {gate} i (.A(r), .Y(p));
  ff_clear_and_set a_ff (.CK(clk), .D(y), .RN(r), .SN(p), .Q(a));
  inv out (.A(a), .Y(y));"""


def test_a_port_that_clears_and_sets_at_once_gives_no_reset_state(tmp_path: Path) -> None:
    """Where the library says nothing of clear and preset together, the port is inactive and no state is promised."""
    cone = cone_of(
        tmp_path, BOTH.format(gate="buffer"), ports="input clk, input r, output y", cells=read_cells((GATES,))
    )
    assert cone.assumed == ("r = 1: the asynchronous pins behind it are inactive",)
    assert [element.reset for element in cone.elements] == [None]


def test_no_constant_cures_a_pin_by_making_the_other_active(tmp_path: Path) -> None:
    """Clear by a port and preset by its inverse: one of them is always active, and the audit proposes neither."""
    cone = cone_of(tmp_path, BOTH.format(gate="inv"), ports="input clk, input r, output y", cells=read_cells((GATES,)))
    assert [obstacle.because for obstacle in cone.obstacles] == ["its asynchronous preset is active under the mode"]
    assert [obstacle.cure for obstacle in cone.obstacles] == [""]


def test_an_inverted_clock_tree_is_traced_to_its_root(tmp_path: Path) -> None:
    """Two inverters and a buffer between port and pins leave the root and its edge as they are; one turns the edge."""
    body = """\
  wire a, k, l, m;
  km_inv c1 (.A(clk), .Y(k));
  km_inv c2 (.A(k), .Y(l));
  km_buf c3 (.A({clock}), .Y(m));
  km_dff a_ff (.CK(m), .D(y), .Q(a));
  km_inv out (.A(a), .Y(y));"""
    assert cone_of(tmp_path, body.replace("{clock}", "l")).clock_edge == "rising"
    falling = cone_of(tmp_path, body.replace("{clock}", "k"))
    assert falling.clock_edge == "falling"
    assert len(falling.clock_gates) == 2


def test_forced_internal_nets_are_listed(tmp_path: Path) -> None:
    """A mode value for an internal net that could take both is kept and listed."""
    cone = cone_of(tmp_path, RING, mode={"f": 1})
    assert [cone.netlist.net_names[net] for net in cone.forced] == ["f"]
    assert cone.feedback == ()


def test_channels_may_be_vectors_and_patterns(tmp_path: Path) -> None:
    """A vector gives its bits by ascending index, a pattern its matches in natural order."""
    body = """\
  km_dff a_ff (.CK(clk), .D(y[0]), .Q(y[0]));
  km_dff b_ff (.CK(clk), .D(y[0]), .Q(y[1]));"""
    ports = "input clk, output [1:0] y"
    for wanted in ((), ("y",), ("y*",)):
        assert [channel.name for channel in cone_of(tmp_path, body, ports=ports, channels=wanted).channels] == [
            "y[0]",
            "y[1]",
        ]


def test_unknown_cells_are_told_in_one_list_with_a_stub(tmp_path: Path) -> None:
    """All unknown cells inside the cone stand in one trouble: pins, count, first place, and an entry to fill in."""
    body = """\
  wire a, b, c;
  mystery_ff a_ff (.CK(clk), .D(c), .Q(a));
  odd2 u1 (.A(a), .B(b), .Z(c));
  odd2 u2 (.A(a), .B(a), .Z(b));
  km_buf out (.A(c), .Y(y));"""
    (trouble,) = troubles_of(tmp_path, body)
    assert trouble.startswith(
        "t.v:3: 2 unknown cells inside the cone:\n"
        "  mystery_ff (CK, D, Q): 1 in the cone, first a_ff at t.v:3\n"
        "  odd2 (A, B, Z): 2 in the cone, first u1 at t.v:4; "
        "give --cells a Liberty file that has them, or a cell table with these entries filled in:\n\n"
        "[cell.mystery_ff]"
    )
    assert "[cell.odd2]" in trouble


def test_an_unknown_cell_outside_the_cone_does_not_matter(tmp_path: Path) -> None:
    """An unknown cell that only reads the register is a load and no trouble."""
    cone = cone_of(tmp_path, RING + "\n  odd2 u9 (.A(a), .Z(zz));")
    assert cone.loads[0].direct == (3,)
    assert cone.loads[0].capacitance_ff == (None,)


def test_pins_that_a_cell_does_not_have_are_told(tmp_path: Path) -> None:
    """Connected pins that the description of a cell in the cone lacks are ignored, and the report says so."""
    body = RING.replace("km_dff a_ff (", "km_dff a_ff (.SE(se), .SI(b), ").replace("g (", "g (.VPP(clk), ")
    cone = cone_of(tmp_path, body, ports="input clk, input se, output y")
    assert cone.assumed == (
        "cell km_dff has no pin SE, SI in its description: ignored at a_ff",
        "cell km_xor2 has no pin VPP in its description: ignored at g",
    )


def test_two_drivers_are_named(tmp_path: Path) -> None:
    """A net with two drivers names both with their places."""
    assert troubles_of(tmp_path, RING + "\n  km_inv second (.A(a), .Y(f));") == [
        "t.v:5: net f has 2 drivers: g.Y (t.v:5), second.Y (t.v:7); leave one driver to each net"
    ]


def test_a_black_box_is_an_unknown_cell_inside_and_a_load_outside(tmp_path: Path) -> None:
    """A module without content whose output reaches the cone is told with its pins; one that only reads is a load."""
    box = "\nendmodule\nmodule box (input [1:0] I, input E, output O);"
    outside = cone_of(tmp_path, RING + "\n  wire z; box u9 (.I({a, b}), .E(a), .O(z));" + box)
    assert [load.direct for load in outside.loads] == [(4,), (3,)]
    inside = RING.replace("km_xor2 g (.A(a), .B(b), .Y(f))", "box g (.I({a, b}), .E(1'b1), .O(f))")
    (trouble,) = troubles_of(tmp_path, inside + box)
    assert trouble.startswith(
        "t.v:5: 1 unknown cell inside the cone:\n  box (I[1], I[0], E, O): 1 in the cone, first g at t.v:5; "
    )


def test_a_driverless_net_and_an_open_pin_are_told_together(tmp_path: Path) -> None:
    """A net without driver and an open input, both inside the cone, are reported in one go."""
    body = """\
  wire a, f, lost;
  km_dff a_ff (.CK(clk), .D(f), .Q(a));
  km_xor2 g (.A(a), .B(lost), .Y(f));
  km_xor2 out (.A(a), .B(), .Y(y));"""
    assert troubles_of(tmp_path, body) == [
        "t.v:2: net lost inside the cone has no driver; connect it, make it a port, or give --mode a value for it",
        "t.v:5: input B of out (km_xor2) inside the cone is not connected; connect it or tie it to 0 or 1",
    ]


def test_a_loop_without_storage_is_told_as_a_path(tmp_path: Path) -> None:
    """A combinational loop is reported with every instance on it."""
    body = """\
  wire a, p, q;
  km_dff a_ff (.CK(clk), .D(p), .Q(a));
  km_nand2 g1 (.A(a), .B(q), .Y(p));
  km_inv g2 (.A(p), .Y(q));
  km_buf out (.A(a), .Y(y));"""
    (trouble,) = troubles_of(tmp_path, body)
    assert trouble in {
        "t.v:4: loop without storage: g1 → g2 → g1; break the loop or give --mode a constant that opens it",
        "t.v:5: loop without storage: g2 → g1 → g2; break the loop or give --mode a constant that opens it",
    }


def test_two_clocks_are_named_with_examples(tmp_path: Path) -> None:
    """Two clock roots are reported with the number of elements of each and one of them."""
    body = """\
  wire a, b;
  km_dff a_ff (.CK(clk), .D(b), .Q(a));
  km_dff b_ff (.CK(other), .D(a), .Q(b));
  km_buf out (.A(b), .Y(y));"""
    (trouble,) = troubles_of(tmp_path, body, ports="input clk, input other, output y")
    assert trouble == (
        "t.v:1: 2 clocks inside the cone: clk (1 elements, such as a_ff), other (1 elements, such as b_ff); "
        "give --mode the constants that select one clock, or narrow --channels"
    )


def test_a_clock_gate_left_open_names_its_inputs(tmp_path: Path) -> None:
    """A gate in the clock that the mode does not decide is reported with what it is made of."""
    body = """\
  wire a, k;
  km_nand2 gate (.A(clk), .B(en), .Y(k));
  km_dff a_ff (.CK(k), .D(y), .Q(a));
  km_inv out (.A(a), .Y(y));"""
    ports = "input clk, input en, output y"
    assert troubles_of(tmp_path, body, ports=ports) == [
        "t.v:3: clock net k is left open by the mode: gate makes it of clk and en; "
        "give --mode a value for all of them but the clock"
    ]
    assert cone_of(tmp_path, body, ports=ports, mode={"en": 1}).clock_edge == "falling"


GATED = """\
  wire a, b, k, f;
  gate g0 (.CK(clk), .EN(run), .TE(1'b0), .GCK(k));
  km_dff a_ff (.CK(k), .D(f), .Q(a));
  km_dff b_ff (.CK(k), .D(a), .Q(b));
  km_xnor2 g1 (.A(a), .B(b), .Y(f));
  km_buf out (.A(b), .Y(y));"""


def with_clock_gate() -> CellLibrary:
    """Return the sample cells and a clock gate: a latch open while the clock is low, then an AND."""
    enable = Function(("EN", "TE"), ("$0", "$1", "|"))
    passed = Function(("CK", "q"), ("$0", "$1", "&"))
    pins = {name: Pin(name, "input") for name in ("CK", "EN", "TE")} | {"GCK": Pin("GCK", "output", passed)}
    latch = Storage("q", "latch", Function(("CK",), ("$0", "!")), enable)
    return CellLibrary({**dict(library().cells), "gate": Cell("gate", pins, (latch,))})


def test_a_clock_gate_that_the_mode_holds_open_passes_the_clock(tmp_path: Path) -> None:
    """A latched clock gate with its enable at 1 leads to the root, and the replay with the latch in it agrees."""
    cells = with_clock_gate()
    cone = cone_of(tmp_path, GATED, ports="input clk, input run, output y", mode={"run": 1}, cells=cells)
    assert cone.netlist.net_names[cone.clock] == "clk"
    assert [element.name for element in cone.elements] == ["a_ff", "b_ff"]
    assert len(cone.clock_latches) == 1
    machine = prove_machine(cone).machine
    assert machine is not None
    assert replay(cone, cells, machine).cycles == 256


def test_a_latched_clock_gate_left_open_tells_when_it_passes(tmp_path: Path) -> None:
    """Without a value for the enable the condition under which the block advances is told."""
    assert troubles_of(tmp_path, GATED, ports="input clk, input run, output y", cells=with_clock_gate()) == [
        "t.v:3: clock net k is left open by the mode: the clock gate g0 passes it only after run = 1; "
        "give --mode a value for run"
    ]


def test_a_bus_with_one_enabled_driver_has_that_driver(tmp_path: Path) -> None:
    """Of two three-state drivers the mode turns one off; with both enabled the net has two drivers."""
    body = """\
  wire a, b, f, n;
  km_dff a_ff (.CK(clk), .D(f), .Q(a));
  km_inv i (.A(a), .Y(n));
  bufif1 d1 (f, n, sel);
  bufif0 d0 (f, a, sel);
  km_buf out (.A(a), .Y(y));"""
    ports = "input clk, input sel, output y"
    cone = cone_of(tmp_path, body, ports=ports, mode={"sel": 1})
    assert cone.feedback == ((0,),)
    machine = prove_machine(cone).machine
    assert machine is not None
    assert (machine.transition, machine.offset) == ((1,), 1)
    assert replay(cone, library(), machine).cycles == 256
    (trouble,) = troubles_of(tmp_path, body, ports=ports)
    assert "net f has 2 drivers: d1.out (t.v:5), d0.out (t.v:6)" in trouble


def test_a_divided_clock_is_refused(tmp_path: Path) -> None:
    """A clock that comes out of a flip-flop is reported with its name."""
    body = """\
  wire a, k, n;
  km_dff half (.CK(clk), .D(n), .Q(k), .QN(n));
  km_dff a_ff (.CK(k), .D(y), .Q(a));
  km_inv out (.A(a), .Y(y));"""
    assert troubles_of(tmp_path, body) == [
        "t.v:3: clock net k comes from the storage element half; "
        "give --mode a constant that selects a clock from a port"
    ]


def test_contradictory_constants_are_named(tmp_path: Path) -> None:
    """A forced net whose driver gives the other value under the ports' constants is refused, as is one net twice."""
    body = """\
  wire a, w;
  assign alias = en;
  km_inv i (.A(en), .Y(w));
  km_nand2 g (.A(w), .B(y), .Y(a));
  km_dff a_ff (.CK(clk), .D(a), .Q(y));"""
    ports = "input clk, input en, output y"
    assert troubles_of(tmp_path, body, ports=ports, mode={"en": 1, "w": 1}) == [
        "t.v:2: contradictory constants: mode forces w = 1, but its driver gives 0 under the other constants; "
        "drop the forced net or mend the constants of the ports"
    ]
    body = body.replace("  assign alias = en;", "  wire alias; assign alias = en;")
    (trouble,) = troubles_of(tmp_path, body, ports=ports, mode={"en": 1, "alias": 0})
    assert trouble == (
        "t.v:3: contradictory constants: mode gives alias = 0, but mode gives en = 1 and both are one net; "
        "give each net one value"
    )


def test_names_that_do_not_exist_get_near_misses(tmp_path: Path) -> None:
    """Unknown mode pins and channels are told together, with names that are close."""
    assert troubles_of(tmp_path, RING, mode={"ckl": 0}, channels=("yy",)) == [
        "channel yy does not exist in t; did you mean y?",
        "mode pin ckl does not exist in t; did you mean clk?",
    ]


def test_no_storage_behind_the_channels(tmp_path: Path) -> None:
    """Channels that no register feeds are refused."""
    assert troubles_of(tmp_path, "  km_inv u (.A(clk), .Y(y));") == [
        "no storage behind the channels of t; give --channels nets that a register feeds"
    ]


def test_no_output_ports(tmp_path: Path) -> None:
    """A top without outputs needs channels to be named."""
    assert troubles_of(tmp_path, "  wire a;\n  km_dff f (.CK(clk), .D(a), .Q(a));", ports="input clk") == [
        "t has no output ports; give --channels the nets that feed the scan chains"
    ]
