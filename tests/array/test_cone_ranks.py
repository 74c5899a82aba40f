"""Ranks of cones against the combinations that all states of small registers give."""

import random
from pathlib import Path

import pytest

from auditor.array.cone_ranks import rank_cones, sink_supports
from tests.array.test_frozen import chain_cells, draw
from tests.support.brute_circuit import loads, read
from tests.support.circuits import under_test
from tests.support.mapped_circuit import chip


@pytest.mark.parametrize("seed", range(16))
def test_combinations_are_those_of_the_full_period(tmp_path: Path, seed: int) -> None:
    """Over all states 2^rank combinations occur, and outside lock-up those that are counted."""
    text, size, channels, length, _ = draw(seed)
    made = under_test(tmp_path, text, channels, length)
    drawn = read(text)
    held = loads(drawn, length, size)
    columns = [held[drawn.scan[cell.name]["Q"]] for cell in made.cells]
    facts = rank_cones(made.circuit, made.loading)
    assert facts.sets
    for cells in facts.sets:
        seen = [tuple(columns[cell] >> state & 1 for cell in cells.cells) for state in range(1 << size)]
        assert len(set(seen)) == 1 << cells.rank
        assert len(set(seen[1:])) == cells.occurring  # state 0 is the lock-up state
        assert cells.short == (len(set(seen)) < 1 << len(cells.cells))
        assert cells.short == bool(cells.relation)
        if cells.short:
            places = [cells.cells.index(bit.cell) for bit in cells.relation]
            assert {sum(one[k] for k in places) & 1 for one in seen} == {cells.constant}


@pytest.mark.parametrize("seed", range(8))
def test_two_cycles_stack_both_loads(tmp_path: Path, seed: int) -> None:
    """For two-cycle tests a cone sees each cell as it is at capture and as it was one shift before."""
    text, size, channels, length, _ = draw(seed)
    made = under_test(tmp_path, text, channels, length)
    drawn = read(text)
    before, after = loads(drawn, length + 1, size), loads(drawn, length + 2, size)
    outputs = [drawn.scan[cell.name]["Q"] for cell in made.cells]
    facts = rank_cones(made.circuit, made.loading, two_cycles=True)
    for cells in facts.sets:
        nets = [outputs[cell] for cell in cells.cells]
        seen = {
            (tuple(after[q] >> state & 1 for q in nets), tuple(before[q] >> state & 1 for q in nets))
            for state in range(1 << size)
        }
        assert len(seen) == 1 << cells.rank
        assert cells.size == 2 * len(nets)


def test_cones_hold_what_decides_the_sink(tmp_path: Path) -> None:
    """A changed scan cell changes a sink only if it is in its cone; inputs are counted beside them."""
    text, _, channels, length, inputs = draw(2)
    made = under_test(tmp_path, text, channels, length)
    drawn, rng = read(text), random.Random(2)
    outputs = [drawn.scan[cell.name]["Q"] for cell in made.cells]
    names = [*outputs, *(made.circuit.wire_name(wire) for wire in made.circuit.free)]
    sinks = {name: support for name, support in sink_supports(made.circuit) if name in drawn.gates}
    assert inputs
    assert sinks
    for _ in range(50):
        sources = {name: rng.getrandbits(64) for name in [*outputs, *(f"in[{k}]" for k in range(inputs))]}
        changed = rng.randrange(len(names))
        flipped = sources | {names[changed]: sources[names[changed]] ^ (1 << 64) - 1}
        values = [drawn.values(one, list(sinks), (1 << 64) - 1) for one in (sources, flipped)]
        for name, support in sinks.items():
            assert support >> changed & 1 or values[0][name] == values[1][name]


def test_offsets_and_lock_up_of_xnor_feedback(tmp_path: Path) -> None:
    """A cone that tells all bits of the register lacks the one combination that lock-up would give."""
    logic = "  km_nand3 g (.A(q0), .B(q1), .C(q2), .Y(y)); assign d0 = y; assign d1 = q0; assign d2 = q1;"
    made = under_test(tmp_path, chain_cells(logic, 3), 3, 1)
    facts = rank_cones(made.circuit, made.loading)
    (whole,) = [cells for cells in facts.sets if cells.size == 3]
    assert (whole.rank, whole.occurring, facts.dimension) == (3, 7, 3)


def test_share_of_random_rows_of_full_rank(tmp_path: Path) -> None:
    """The share of full rank is 168 of the 512 matrices of 3 x 3, 1 for no row, and 0 for more rows than columns."""
    logic = "  km_nand3 g (.A(q0), .B(q1), .C(q2), .Y(y)); assign d0 = y; assign d1 = q0; assign d2 = q1;"
    made = under_test(tmp_path, chain_cells(logic, 3), 3, 1)
    facts = rank_cones(made.circuit, made.loading)
    assert facts.random_share_of_full_rank(3) == 168 / 512  # |GL(3, 2)| = 168
    assert facts.random_share_of_full_rank(0) == 1
    assert facts.random_share_of_full_rank(4) == 0


def test_twins_leave_a_cone_short(tmp_path: Path) -> None:
    """Neighbouring chains of a bare register hold one stream a cycle apart, so that a cone of both cells is short."""
    text = chip((5, 3), [[0], [1]], 3, 30, 3, widths=(3, 4), outputs=6)
    made = under_test(tmp_path, text, 2, 3)
    facts = rank_cones(made.circuit, made.loading)
    relations = [cells.relation for cells in facts.sets if cells.short]
    assert relations
    twins = {(made.cells[a.cell].name, made.cells[b.cell].name) for a, b in (r for r in relations if len(r) == 2)}
    assert twins <= {("c0_2", "c1_1"), ("c0_3", "c1_2")}
    assert twins
