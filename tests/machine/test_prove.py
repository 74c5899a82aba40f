"""The proof: rows as the gates say, refusals by name with their cure, taps pulled back, XOR figures by function."""

from pathlib import Path

from auditor.cone.extract import extract_cone
from auditor.machine.prove import prove_machine
from auditor.netlist.flatten import flatten
from auditor.verilog.read import read_verilog
from tests.support.cones import SAMPLES, extraction_of, library, machine_of

RING = """\
  wire a, b, c, f;
  km_dff a_ff (.CK(clk), .D(f), .Q(a));
  km_dff b_ff (.CK(clk), .D(a), .Q(b));
  km_dff c_ff (.CK(clk), .D(b), .Q(c));
"""


def test_rows_of_a_ring(tmp_path: Path) -> None:
    """A three-stage register with an XNOR feedback gives its transition, its offset and its channel row."""
    machine = machine_of(tmp_path, RING + "  km_xnor2 g (.A(c), .B(b), .Y(f));\n  km_buf o (.A(c), .Y(y));")
    assert machine.storage == ("a_ff", "b_ff", "c_ff")
    assert machine.transition == (0b110, 0b001, 0b010)
    assert machine.offset == 0b001
    (channel,) = machine.observed
    assert channel.row is not None
    assert (channel.row.state, channel.row.constant) == (0b100, 0)
    assert (machine.transient, machine.cycling_degree) == (0, 3)


def test_an_xor_made_of_four_nands_has_the_figures_of_one_cell(tmp_path: Path) -> None:
    """Four NANDs count as one XOR node of two inputs, exactly as the cell does."""
    nands = """
  wire n1, n2, n3;
  km_nand2 g1 (.A(c), .B(b), .Y(n1));
  km_nand2 g2 (.A(c), .B(n1), .Y(n2));
  km_nand2 g3 (.A(n1), .B(b), .Y(n3));
  km_nand2 g4 (.A(n2), .B(n3), .Y({out}));"""
    cell = "  km_xor2 g (.A(c), .B(b), .Y({out}));"
    machines = [
        machine_of(tmp_path, RING + form.format(out="f") + "\n  km_xor2 o (.A(f), .B(a), .Y(y));")
        for form in (nands, cell)
    ]
    assert machines[0].transition == machines[1].transition
    for machine in machines:
        assert (machine.observed[0].xor_inputs, machine.observed[0].xor_depth) == (3, 2)
        assert machine.xor_fan_out == (1, 1, 1)


def test_function_through_dependent_nets_is_still_proved(tmp_path: Path) -> None:
    """A multiplexer whose select is the XOR of its inputs is affine over the state, though not over its pins."""
    body = """
  wire s;
  km_xor2 g (.A(a), .B(b), .Y(s));
  km_mux2 m (.D0(a), .D1(b), .S(s), .Y(f));
  km_nand2 n (.A(s), .B(a), .Y(w));
  km_buf o (.A(c), .Y(y));"""
    # s = 0 means a = b, so the output is a; s = 1 means a != b and the output is b: b in both cases.
    assert machine_of(tmp_path, RING + body).transition[0] == 0b010


def test_a_completed_cycle_is_refused_with_gate_and_cure(tmp_path: Path) -> None:
    """The NOR in the feedback is named as the gate that spoils the row; holding it at 0 would cure it."""
    body = """
  wire z, g;
  km_nor2 none (.A(a), .B(b), .Y(z));
  km_xor2 x1 (.A(c), .B(b), .Y(g));
  km_xor2 x2 (.A(g), .B(z), .Y(f));
  km_buf o (.A(c), .Y(y));"""
    extraction = extraction_of(tmp_path, RING + body)
    assert extraction.machine is None
    (refusal,) = extraction.refusals
    assert (refusal.what, refusal.gate, refusal.cure) == ("a_ff", "none", "--mode z=0")
    assert refusal.because == "km_nor2 none is no XOR of a, b"
    assert refusal.place.line == 8


def test_an_open_enable_is_refused_with_the_constant_that_lets_it_run(tmp_path: Path) -> None:
    """An enable left free refuses the machine; the cure lets the register advance rather than hold."""
    body = """\
  wire a, b;
  km_dffec a_ff (.CK(clk), .RN(1'b1), .EN(run), .D(y), .Q(a));
  km_dffec b_ff (.CK(clk), .RN(1'b1), .EN(run), .D(a), .Q(b));
  km_inv i (.A(b), .Y(y));"""
    ports = "input clk, input run, output y"
    extraction = extraction_of(tmp_path, body, ports=ports)
    assert extraction.machine is None
    assert [(refusal.what, refusal.gate, refusal.cure) for refusal in extraction.refusals] == [
        ("a_ff", "a_ff", "--mode run=1"),
        ("b_ff", "b_ff", "--mode run=1"),
    ]
    assert machine_of(tmp_path, body, ports=ports, mode={"run": 1}).offset == 1


def test_a_gated_channel_is_refused_alone_and_cut_at_its_gate(tmp_path: Path) -> None:
    """A channel behind an AND keeps the machine; the affine net behind the gate is observed in its place."""
    body = """
  wire x;
  km_xor2 g (.A(c), .B(b), .Y(f));
  km_xor2 p (.A(a), .B(c), .Y(x));
  km_nand2 gate (.A(x), .B(open), .Y(y[0]));
  km_buf o (.A(c), .Y(y[1]));"""
    extraction = extraction_of(tmp_path, RING + body, ports="input clk, input open, output [1:0] y")
    machine = extraction.machine
    assert machine is not None
    spoiled, good, cut = machine.observed
    assert spoiled.row is None
    assert spoiled.refusal is not None
    assert (spoiled.refusal.gate, spoiled.refusal.cure) == ("gate", "--mode open=1")
    assert good.row is not None
    assert (cut.name, cut.cut_from) == ("x", "y[0]")
    assert cut.row is not None
    assert cut.row.state == 0b101


def test_a_gated_channel_has_its_cure_whatever_it_carries(tmp_path: Path) -> None:
    """A gate on the net that the first flip-flop takes is cured like any other."""
    body = """
  km_xor2 g (.A(c), .B(b), .Y(f));
  km_nand2 gate (.A(f), .B(open), .Y(y));"""
    machine = machine_of(tmp_path, RING + body, ports="input clk, input open, output y")
    assert machine.observed[0].refusal is not None
    assert machine.observed[0].refusal.cure == "--mode open=1"


def test_a_spoiled_pipeline_stage_refuses_only_what_it_feeds(tmp_path: Path) -> None:
    """A flip-flop behind an AND feeds no register: the machine goes without it, its channel is refused."""
    body = """
  wire x, s;
  km_xor2 g (.A(c), .B(b), .Y(f));
  km_nand2 gate (.A(a), .B(b), .Y(x));
  km_dff s_ff (.CK(clk), .D(x), .Q(s));
  km_buf o0 (.A(s), .Y(y[0]));
  km_buf o1 (.A(c), .Y(y[1]));"""
    machine = machine_of(tmp_path, RING + body, ports="input clk, output [1:0] y")
    assert machine.storage == ("a_ff", "b_ff", "c_ff")
    assert machine.observed[0].refusal is not None
    assert machine.observed[0].refusal.gate == "gate"
    assert machine.observed[1].row is not None


def test_taps_are_pulled_back_through_pipeline_registers(tmp_path: Path) -> None:
    """A channel behind two pipeline stages has the register's taps, each with the delay at which it is seen."""
    body = """
  wire x, p, q;
  km_xor2 g (.A(c), .B(b), .Y(f));
  km_xor2 s (.A(a), .B(c), .Y(x));
  km_dff p_ff (.CK(clk), .D(x), .Q(p));
  km_dff q_ff (.CK(clk), .D(p), .Q(q));
  km_xor2 o (.A(q), .B(b), .Y(y));"""
    machine = machine_of(tmp_path, RING + body)
    (channel,) = machine.observed
    assert [(machine.storage[tap.element], tap.delay) for tap in channel.taps] == [
        ("a_ff", 2),
        ("b_ff", 0),
        ("c_ff", 2),
    ]
    assert channel.pipeline_stages == 2
    assert (channel.xor_inputs, channel.xor_depth) == (3, 2)
    assert (machine.transient, machine.cycling_degree) == (2, 3)


def test_a_flip_flop_at_the_other_edge_adds_no_whole_cycle(tmp_path: Path) -> None:
    """A stage clocked by the inverted clock shows in the same cycle what the register took; its tap has delay 0."""
    body = """
  wire p, k;
  km_xor2 g (.A(c), .B(b), .Y(f));
  km_inv i (.A(clk), .Y(k));
  km_dff p_ff (.CK(k), .D(c), .Q(p));
  km_buf o (.A(p), .Y(y));"""
    machine = machine_of(tmp_path, RING + body)
    (channel,) = machine.observed
    assert [(machine.storage[tap.element], tap.delay) for tap in channel.taps] == [("c_ff", 0)]
    assert machine.half_cycle == {3}
    # After a cycle the late stage holds what c_ff took, which was b_ff before it.
    assert machine.transition[3] == 0b0010


def test_free_inputs_stay_in_the_input_matrix(tmp_path: Path) -> None:
    """A serial seed input is kept as an external XOR input of the register, and of the channel that reads it."""
    body = """
  wire g1;
  km_xor2 g (.A(c), .B(b), .Y(g1));
  km_xor2 h (.A(g1), .B(seed), .Y(f));
  km_xor2 o (.A(c), .B(seed), .Y(y));"""
    machine = machine_of(tmp_path, RING + body, ports="input clk, input seed, output y")
    assert machine.free_inputs == ("seed",)
    assert machine.input_matrix == (1, 0, 0)
    assert machine.observed[0].row is not None
    assert machine.observed[0].row.inputs == 1


def test_a_tied_channel_is_constant(tmp_path: Path) -> None:
    """A channel tied to 1 has an empty row with the constant 1."""
    body = "\n  km_xor2 g (.A(c), .B(b), .Y(f));\n  assign y[0] = 1'b1;\n  km_buf o (.A(c), .Y(y[1]));"
    tied = machine_of(tmp_path, RING + body, ports="input clk, output [1:0] y").observed[0]
    assert tied.row is not None
    assert (tied.row.state, tied.row.constant, tied.taps) == (0, 1, ())


def test_a_node_limit_leaves_the_row_undecided() -> None:
    """With next to no diagram nodes allowed a feedback made of NANDs is undecided, neither proved nor refuted."""
    netlist = flatten(read_verilog((SAMPLES / "phase_shifter_nand.v",)), None, library().cells)
    cone = extract_cone(netlist, library(), {})
    assert prove_machine(cone).machine is not None
    extraction = prove_machine(cone, node_limit=2)
    assert extraction.machine is None
    assert all(refusal.undecided for refusal in extraction.refusals)
