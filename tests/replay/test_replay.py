"""The replay: it agrees with every honest machine and catches every wrong bit of one."""

from dataclasses import replace
from pathlib import Path

import pytest
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from auditor.cone.cone import Cone
from auditor.errors import InternalError
from auditor.gf2.recurrence import berlekamp_massey
from auditor.machine.machine import LinearMachine
from auditor.machine.prove import prove_machine
from auditor.replay.replay import replay
from auditor.replay.simulator import Simulator
from tests.support.cones import cone_of, library

# A register with a late stage, a stage behind a latch, an enable, a reset, and a channel of each.
PORTS = "input clk, input rst_n, input run, input se, output [3:0] y"
MODE = {"run": 1, "se": 0}
BODY = """\
  wire a, b, c, d, n, k, late, held, f, g;
  km_dffec a_ff (.CK(clk), .RN(rst_n), .EN(run), .D(f), .Q(a), .QN(n));
  km_sdffc b_ff (.CK(clk), .RN(rst_n), .D(a), .SI(held), .SE(se), .Q(b));
  km_dffs c_ff (.CK(clk), .SN(rst_n), .D(b), .Q(c));
  km_dff d_ff (.CK(clk), .D(c), .Q(d));
  km_xnor2 g1 (.A(d), .B(c), .Y(g));
  km_inv g2 (.A(g), .Y(f));
  km_inv i (.A(clk), .Y(k));
  km_dff late_ff (.CK(k), .D(d), .Q(late));
  km_dff held_ff (.CK(clk), .D(late), .Q(held));
  km_buf o0 (.A(d), .Y(y[0]));
  km_xor2 o1 (.A(n), .B(c), .Y(y[1]));
  km_buf o2 (.A(late), .Y(y[2]));
  km_xnor2 o3 (.A(held), .B(b), .Y(y[3]));"""


@pytest.fixture(scope="module")
def block(tmp_path_factory: pytest.TempPathFactory) -> tuple[Cone, LinearMachine]:
    """Return the cone of the block above and its proved machine."""
    cone = cone_of(tmp_path_factory.mktemp("block"), BODY, ports=PORTS, mode=MODE)
    machine = prove_machine(cone).machine
    assert machine is not None
    return cone, machine


def test_an_honest_machine_agrees(block: tuple[Cone, LinearMachine]) -> None:
    """The proved machine and the gates agree over at least 64 states and 256 cycles."""
    replayed = replay(block[0], library(), block[1])
    assert replayed.states >= 64
    assert replayed.cycles == 256


@settings(suppress_health_check=[HealthCheck.function_scoped_fixture], deadline=None, max_examples=40)
@given(data=st.data())
def test_any_flipped_bit_of_the_machine_is_caught(block: tuple[Cone, LinearMachine], data: st.DataObject) -> None:
    """Whichever single bit of transition, offset or a channel row is wrong, the replay says so."""
    cone, machine = block
    bit = 1 << data.draw(st.integers(0, machine.size - 1))
    number = data.draw(st.integers(0, machine.size - 1))
    kind = data.draw(st.sampled_from(["transition", "offset", "channel"]))
    if kind == "transition":
        rows = list(machine.transition)
        rows[number] ^= bit
        wrong = replace(machine, transition=tuple(rows))
    elif kind == "offset":
        wrong = replace(machine, offset=machine.offset ^ bit)
    else:
        observed = list(machine.observed)
        which = data.draw(st.integers(0, len(observed) - 1))
        row = observed[which].row
        assert row is not None
        observed[which] = replace(observed[which], row=replace(row, state=row.state ^ bit))
        wrong = replace(machine, observed=tuple(observed))
    with pytest.raises(InternalError, match="disagree on"):
        replay(cone, library(), wrong)


def test_latches_between_generator_and_chain_hold_half_a_cycle(tmp_path: Path) -> None:
    """A latch open while the clock is low, and one open while it is high, are proved and replayed alike."""
    from auditor.cells.library import Cell, CellLibrary, Function, Pin, Storage

    pass_through = Function(("D",), ("$0",))
    pins = {"D": Pin("D", "input"), "G": Pin("G", "input"), "Q": Pin("Q", "output", Function(("q",), ("$0",)))}
    high = Cell("high", pins, (Storage("q", "latch", Function(("G",), ("$0",)), pass_through),))
    low = Cell("low", pins, (Storage("q", "latch", Function(("G",), ("$0", "!")), pass_through),))
    cells = CellLibrary({**dict(library().cells), "high": high, "low": low})
    body = """\
  wire a, b, f;
  km_dff a_ff (.CK(clk), .D(f), .Q(a));
  km_dff b_ff (.CK(clk), .D(a), .Q(b));
  km_xor2 g (.A(a), .B(b), .Y(f));
  high l1 (.G(clk), .D(b), .Q(y[0]));
  low l2 (.G(clk), .D(b), .Q(y[1]));
  low l3 (.G(clk), .D(y[0]), .Q(y[2]));"""
    cone = cone_of(tmp_path, body, ports="input clk, output [2:0] y", cells=cells)
    assert {element.name: element.step for element in cone.elements} == {
        "a_ff": 0,
        "b_ff": 0,
        "l1": 1,
        "l2": 3,
        "l3": 3,
    }
    machine = prove_machine(cone).machine
    assert machine is not None
    assert replay(cone, cells, machine).cycles == 256
    assert [[tap.delay for tap in row.taps] for row in machine.observed] == [[0], [0], [0]]


def test_noise_on_what_the_mode_cuts_off_does_not_matter(block: tuple[Cone, LinearMachine]) -> None:
    """The nets that the mode cuts off carry noise in the replay, so wrong pruning could not hide."""
    cone, machine = block
    unsafe = replace(cone, constants={net: bit for net, bit in cone.constants.items() if net < 2})
    with pytest.raises(InternalError):
        replay(unsafe, library(), machine)


def test_the_replayed_stream_has_the_proved_polynomial(tmp_path: Path) -> None:
    """Berlekamp-Massey on a simulated channel finds the feedback polynomial that the gates were drawn from."""
    body = """\
  wire [4:0] q;
  wire f;
  km_xor2 g (.A(q[4]), .B(q[2]), .Y(f));
  km_dff r0 (.CK(clk), .D(f), .Q(q[0]));
  km_dff r1 (.CK(clk), .D(q[0]), .Q(q[1]));
  km_dff r2 (.CK(clk), .D(q[1]), .Q(q[2]));
  km_dff r3 (.CK(clk), .D(q[2]), .Q(q[3]));
  km_dff r4 (.CK(clk), .D(q[3]), .Q(q[4]));
  km_buf o (.A(q[4]), .Y(y));"""
    cone = cone_of(tmp_path, body)
    simulator = Simulator(cone, library(), 1)
    simulator.values[:5] = 1
    slot = simulator.slot_of([cone.channels[0].wire])[0]
    bits = []
    for _ in range(40):
        simulator.settle()
        bits.append(int(simulator.values[slot, 0]) & 1)
        simulator.toggle(1)
        simulator.toggle(0)
    polynomial, complexity = berlekamp_massey(bits)
    assert complexity == 5
    # Stages 5 and 3 fed back: connection polynomial x^5 + x^3 + 1.
    assert polynomial == 0b101001
