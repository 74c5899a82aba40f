"""Frozen nets against every state of small registers and every setting of the scan cells."""

import random
from pathlib import Path

import pytest

from auditor.array.circuit import Circuit
from auditor.array.frozen import find_frozen
from auditor.array.toggling import Planned
from tests.support.brute_circuit import Chip, column, loads, read, spread
from tests.support.circuits import under_test
from tests.support.mapped_circuit import chip

REGISTERS = ((4, 3), (5, 3), (6, 5), (7, 6))


def examined(circuit: Circuit) -> list[str]:
    """Return the names of all nets on gates of the circuit."""
    nets = len(circuit.netlist.net_names)
    return [circuit.wire_name(gate.output) for gate in circuit.gates if gate.output < nets]


def spans(value: int, cases: int, times: int) -> list[int]:
    """Return the values of ``times`` runs of cases."""
    return [value >> cases * k & ((1 << cases) - 1) for k in range(times)]


class Truth:
    """What nets do over all states outside lock-up and over all settings of the scan cells, inputs as they like."""

    def __init__(self, drawn: Chip, nets: list[str], inputs: int, size: int, shifts: int, lock_up: int) -> None:
        self.states = [state for state in range(1 << size) if state != lock_up]
        self.inputs, self.drawn, self.nets = inputs, drawn, nets
        loaded = loads(drawn, shifts, size)
        chosen = {q: sum((value >> s & 1) << k for k, s in enumerate(self.states)) for q, value in loaded.items()}
        self.under_generator = self._runs(chosen, len(self.states))
        free = {q: column(k, len(loaded)) for k, q in enumerate(loaded)}
        self.with_free_cells = self._runs(free, 1 << len(loaded))

    def _runs(self, loaded: dict[str, int], cases: int) -> dict[str, list[int]]:
        times = 1 << self.inputs
        mask = (1 << cases * times) - 1
        sources = {q: spread(value, cases, times) for q, value in loaded.items()}
        for k in range(self.inputs):
            sources[f"in[{k}]"] = sum(((1 << cases) - 1) << cases * u for u in range(times) if u >> k & 1)
        values = self.drawn.values(sources, self.nets, mask)
        return {net: spans(value, cases, times) for net, value in values.items()}

    def toggles_freely(self, net: str) -> bool:
        cases = (1 << (1 << len(self.drawn.scan))) - 1
        return any(value not in (0, cases) for value in self.with_free_cells[net])

    def kept(self, net: str) -> list[int] | None:
        """Return the value of a net for each setting of the inputs, None if the generator toggles it."""
        cases = (1 << len(self.states)) - 1
        values = self.under_generator[net]
        return [value & 1 for value in values] if all(value in (0, cases) for value in values) else None


def draw(seed: int) -> tuple[str, int, int, int, int]:
    """Return a small chip of either kind (bare register or three-tap channels), and its sizes."""
    rng = random.Random(seed)
    stages = rng.choice(REGISTERS)
    size, channels, length = stages[0], 4, rng.choice((2, 3))
    taps = [[k] for k in range(channels)] if seed % 2 else [rng.sample(range(size), 3) for _ in range(channels)]
    inputs = seed % 3
    text = chip(stages, taps, length, 60, seed, inputs, outputs=20, widths=(2, 5))
    return text, size, channels, length, inputs


@pytest.mark.parametrize("seed", range(24))
def test_frozen_nets_are_those_of_the_full_period(tmp_path: Path, seed: int) -> None:
    """Without planned patterns the frozen nets, scopes and values are those of all states and of free scan cells."""
    text, size, channels, length, inputs = draw(seed)
    made = under_test(tmp_path, text, channels, length)
    nets = examined(made.circuit)
    truth = Truth(read(text), nets, inputs, size, length, 0)
    expected = {}
    for net in nets:
        if truth.toggles_freely(net) and (kept := truth.kept(net)) is not None:
            same = len(set(kept)) == 1
            expected[net] = ("every-state", kept[0]) if same else ("only-with-freedom", None)
    facts = find_frozen(made.circuit, made.loading, None)
    found = {made.circuit.wire_name(net.net): (net.scope, net.value) for net in facts.frozen}
    assert found == expected
    assert not facts.undecided


def test_the_drawn_chips_show_every_scope(tmp_path: Path) -> None:
    """The chips above have nets of both proved scopes, so that agreement on them means something."""
    scopes = []
    for seed in range(12):
        text, _, channels, length, _ = draw(seed)
        made = under_test(tmp_path, text, channels, length)
        scopes += [net.scope for net in find_frozen(made.circuit, made.loading, None).frozen]
    assert scopes.count("every-state") > 20
    assert scopes.count("only-with-freedom") > 0


@pytest.mark.parametrize("seed", [1, 3, 6, 7, 9, 12])
def test_nets_that_planned_patterns_miss(tmp_path: Path, seed: int) -> None:
    """Beside the proved nets, those are frozen in the planned patterns that keep one value in each of them."""
    text, size, channels, length, inputs = draw(seed)
    made = under_test(tmp_path, text, channels, length)
    always = {net.net for net in find_frozen(made.circuit, made.loading, None).frozen}
    count, clocks = 5, length + 1
    facts = find_frozen(made.circuit, made.loading, Planned((1,), clocks, length, count))
    assert facts.patterns == count
    truth = Truth(read(text), examined(made.circuit), inputs, size, length, 0)
    at_start, state = [], 1
    for cycle in range(count * clocks):
        if cycle % clocks == 0:
            at_start.append(truth.states.index(state))
        state = sum((row & state).bit_count() % 2 << k for k, row in enumerate(made.machine.transition))
    for net in facts.frozen:
        assert (net.net in always) == (net.scope != "planned-patterns")
    missed = {net.net: net.value for net in facts.frozen if net.scope == "planned-patterns"}
    for name in truth.nets:
        net = made.circuit.netlist.net_of_name[name]
        seen = {value >> k & 1 for value in truth.under_generator[name] for k in at_start}
        if len(seen) == 1 and net not in always and truth.toggles_freely(name):
            assert net in missed or net in facts.undecided
        if net in missed:
            assert seen == {missed[net]}
    assert missed


@pytest.mark.parametrize("seed", [1, 2, 13, 15])
def test_examples_would_free_the_net_and_break_their_relation(tmp_path: Path, seed: int) -> None:
    """The example gives the net its other value, and no state gives the bits of the relation that sum."""
    text, size, channels, length, inputs = draw(seed)
    made = under_test(tmp_path, text, channels, length)
    drawn = read(text)
    held = loads(drawn, length, size)
    shown = [net for net in find_frozen(made.circuit, made.loading, None).frozen if net.needs]
    assert shown
    cells = [drawn.scan[cell.name]["Q"] for cell in made.cells]
    names = cells + [made.circuit.wire_name(wire) for wire in made.circuit.free]
    for net in shown:
        assert not net.follows
        sources = dict.fromkeys([*cells, *(f"in[{k}]" for k in range(inputs))], 0)
        sources |= {names[source]: bit for source, bit in net.needs}
        name = made.circuit.wire_name(net.net)
        assert drawn.values(sources, [name], 1)[name] != net.value
        needed = sum(dict(net.needs)[source] for source in net.relation) & 1
        for state in range(1, 1 << size):
            total = sum(held[cells[source]] >> state & 1 for source in net.relation) & 1
            assert not net.relation or total != needed


BODY = """
  wire [2:0] x; wire f;
  km_xnor2 u0 (.A(x[2]), .B(x[1]), .Y(f));
  km_dffc s1 (.CK(clk), .RN(rst_n), .D(f), .Q(x[0]));
  km_dffc s2 (.CK(clk), .RN(rst_n), .D(x[0]), .Q(x[1]));
  km_dffc s3 (.CK(clk), .RN(rst_n), .D(x[1]), .Q(x[2]));
  wire [2:0] si; assign si = x;
"""


def chain_cells(logic: str, cells: int) -> str:
    """Return a chip with a three-stage register of XNOR feedback and one scan cell behind each stage."""
    scan = [
        f"  km_sdffc c{i}_1 (.CK(clk), .RN(rst_n), .D(d{i}), .SI(si[{i}]), .SE(scan_en), .Q(q{i}));"
        for i in range(cells)
    ]
    return "\n".join(
        ["module chip (input clk, input rst_n, input scan_en, output y);", BODY, *scan, logic, "endmodule", ""]
    )


def test_a_value_that_only_lock_up_gives_counts_as_frozen(tmp_path: Path) -> None:
    """With XNOR feedback the register locks up at all ones, and AND of all its bits is 0 everywhere else."""
    logic = "  km_nand3 g (.A(q0), .B(q1), .C(q2), .Y(y)); assign d0 = y; assign d1 = q0; assign d2 = q1;"
    made = under_test(tmp_path, chain_cells(logic, 3), 3, 1)
    (net,) = find_frozen(made.circuit, made.loading, None).frozen
    assert (made.circuit.wire_name(net.net), net.value, net.scope) == ("d0", 1, "every-state")
    assert net.needs == ((0, 1), (1, 1), (2, 1))
    assert net.relation == ()


def test_nets_that_free_cells_do_not_toggle_are_no_finding(tmp_path: Path) -> None:
    """A redundant gate is constant whatever the scan cells hold; that is not the generator's doing."""
    logic = """
  wire n, r; km_inv g0 (.A(q0), .Y(n)); km_nor2 g1 (.A(q0), .B(n), .Y(r));
  km_nor2 g2 (.A(r), .B(q1), .Y(y)); assign d0 = y; assign d1 = q2; assign d2 = q2;"""
    made = under_test(tmp_path, chain_cells(logic, 3), 3, 1)
    assert not find_frozen(made.circuit, made.loading, None).frozen


def test_a_node_limit_leaves_nets_undecided(tmp_path: Path) -> None:
    """Past the bound a net is counted as undecided, and never as frozen."""
    text, _, channels, length, _ = draw(1)
    made = under_test(tmp_path, text, channels, length)
    whole = {net.net for net in find_frozen(made.circuit, made.loading, None).frozen}
    facts = find_frozen(made.circuit, made.loading, None, node_limit=1)
    assert facts.undecided
    assert {net.net for net in facts.frozen} | set(facts.undecided) >= whole
    assert {net.net for net in facts.frozen} <= whole


def test_a_second_start_moves_more_nets(tmp_path: Path) -> None:
    """Nets that no pattern from any start moves are among those that no pattern from one start moves."""
    text, _, channels, length, _ = draw(7)
    made = under_test(tmp_path, text, channels, length)
    missed = []
    for starts in ((1,), (5,), (1, 5)):
        facts = find_frozen(made.circuit, made.loading, Planned(starts, length + 1, length, 4))
        missed.append({net.net for net in facts.frozen if net.scope == "planned-patterns"})
    assert missed[2] < missed[0]
    assert missed[2] <= missed[0] & missed[1]
