"""Constant sums of scan cells against enumeration and against published identities."""

import json
import random
import re
from itertools import combinations, permutations
from math import comb
from pathlib import Path

import pytest

from auditor.array.distinct import distinct_cells
from auditor.array.relations import find_relations
from auditor.array.rows import chain_rows
from auditor.array.scan_array import Chain, Place, Relations
from auditor.gf2.order import is_primitive
from auditor.gf2.polynomial import from_exponents
from auditor.machine.machine import LinearMachine
from tests.support.linear_machines import fibonacci, galois, linear_machine
from tests.support.scan_cells import columns_of, moving, random_array

# Identities of Lindholm (An analysis of the pseudo-randomness properties of subsequences of long m-sequences, IEEE
# Trans. Information Theory 14, 1968): sets of three and of four among M consecutive bits that sum to zero. Counted
# exhaustively; (exponents, M) -> (sets of three, sets of four, expected sets of three).
WINDOWS = {
    ((10, 3, 0), 16): (6, 3, 0.55), ((10, 3, 0), 24): (18, 27, 1.98), ((10, 3, 0), 32): (34, 92, 4.84),
    ((10, 3, 0), 48): (74, 356, 16.89),
    ((10, 8, 7, 4, 2, 1, 0), 16): (3, 0, 0.55), ((10, 8, 7, 4, 2, 1, 0), 24): (11, 9, 1.98),
    ((10, 8, 7, 4, 2, 1, 0), 32): (25, 40, 4.84), ((10, 8, 7, 4, 2, 1, 0), 48): (57, 216, 16.89),
    ((11, 2, 0), 16): (5, 3, 0.27), ((11, 2, 0), 24): (15, 19, 0.99), ((11, 2, 0), 32): (31, 69, 2.42),
    ((11, 2, 0), 48): (67, 288, 8.45),
    ((9, 4, 0), 16): (7, 5, 1.09), ((9, 4, 0), 24): (21, 41, 3.95), ((9, 4, 0), 32): (37, 123, 9.69),
    ((9, 4, 0), 48): (81, 466, 33.78),
}  # fmt: skip
SHARED = Path(__file__).parents[3] / "shared" / "checks" / "window_relations.json"


def relations_of(
    machine: LinearMachine, chains: list[Chain], size: int, leads: dict[str, int] | None = None
) -> Relations:
    """Return the relations; ``leads`` of the channels on a cycle of 31."""
    rows = chain_rows(machine, chains)
    cells = distinct_cells(rows)
    assert cells is not None

    def position(place: Place) -> tuple[int, int, int] | None:
        chain = rows.chains[place.chain]
        return (0, (leads[chain.channel] - chain.delays[place.cell]) % 31, 31) if leads else None

    found = find_relations(cells, size, rows.dimension, position, lambda _: None)
    assert found is not None
    return found


@pytest.mark.parametrize("seed", range(60))
def test_counts_are_those_of_enumeration(seed: int) -> None:
    """Sets of three and four distinct columns, up to complements, whose sum is constant, and every example."""
    machine, chains = random_array(random.Random(seed))
    columns, everything = columns_of(machine, chains)
    moved = moving(columns, everything)
    distinct = sorted(set(moved.values()))
    if not distinct:
        return
    constant = {0, everything}
    for size in (3, 4):
        found = relations_of(machine, chains, size)
        sums = [sum_of(group) for group in combinations(distinct, size)]
        assert (found.distinct, found.places) == (len(distinct), sum(one in constant for one in sums))
        sets = (group for group in combinations(sorted(moved), size) if len({moved[p] for p in group}) == size)
        assert found.cell_sets == sum(sum_of([moved[p] for p in group]) in constant for group in sets)
    # Examples count in the chains that are not constant; those that are take no part.
    numbers = chain_rows(machine, chains).numbers
    for relation in relations_of(machine, chains, 3).examples:
        bits = sum_of([columns[Place(numbers[chain], cell)] for chain, cell in relation.cells])
        assert bits == (everything if relation.constant else 0)


def sum_of(columns: list[int] | tuple[int, ...]) -> int:
    """Return the sum over GF(2)."""
    total = 0
    for column in columns:
        total ^= column
    return total


@pytest.mark.parametrize(("exponents", "length"), WINDOWS)
def test_windows_of_one_stream_have_the_published_relations(exponents: tuple[int, ...], length: int) -> None:
    """Lindholm 1968: B3 and B4 of M consecutive bits, and the count that random rows would have."""
    machine = linear_machine(fibonacci(exponents), [(1, 0)])
    three = relations_of(machine, [Chain("c0", length)], 3)
    four = relations_of(machine, [Chain("c0", length)], 4)
    assert (three.places, four.places, round(three.expected, 2)) == WINDOWS[exponents, length]
    assert three.cell_sets == three.places
    assert four.expected == pytest.approx(comb(length, 4) / 2 ** max(exponents))


@pytest.mark.skipif(not SHARED.exists(), reason="the shared data do not stand beside the repository")
def test_the_windows_are_those_of_the_shared_data() -> None:
    """The rows above are all rows of the data they were copied from."""
    rows = json.loads(SHARED.read_text())["rows"]
    for row in rows:
        powers = [int(power or 1) for power in re.findall(r"x(?:\^(\d+))?", row["poly"])]
        assert WINDOWS[(*powers, 0), row["M"]] == (row["B3"], row["B4"], row["expected_B3"])
    assert len(rows) == len(WINDOWS)


@pytest.mark.parametrize("exponents", [(9, 4, 0), (15, 1, 0), (25, 3, 0), (71, 6, 0)])
def test_a_trinomial_forces_relations_at_its_own_spacing(exponents: tuple[int, int, int]) -> None:
    """Golomb (Shift Register Sequences, 1967): x^n + x^k + 1 makes bits k and n apart sum to zero, and its squares."""
    degree, middle, _ = exponents
    machine = linear_machine(galois(exponents), [(1, 0)])
    found = relations_of(machine, [Chain("c0", 2 * degree + 1)], 3)
    spans = {tuple(place.cell - one.cells[0].cell for place in one.cells) for one in found.examples}
    both = {(0, middle, degree), (0, degree - middle, degree)}
    squares = {tuple(2 * step for step in steps) for steps in both}
    assert spans & both
    assert spans & squares
    assert relations_of(machine, [Chain("c0", degree)], 3).places == 0


@pytest.mark.parametrize("degree", [9, 10, 11, 12])
def test_pentanomials_have_no_relations_of_three(degree: int) -> None:
    """Dewar, Moura, Panario, Stevens and Wang 2007: no trinomial of up to twice the degree is a multiple."""
    pentanomials = [from_exponents((degree, *middle, 0)) for middle in combinations(range(1, degree), 3)]
    primitive = [p for p in pentanomials if is_primitive(p)]
    assert primitive
    for polynomial in primitive:
        machine = linear_machine(galois([k for k in range(degree + 1) if polynomial >> k & 1]), [(1, 0)])
        assert relations_of(machine, [Chain("c0", 2 * degree + 1)], 3).places == 0


def test_relations_are_told_apart_by_leads() -> None:
    """Chains 5 cycles apart from one another all round a cycle of 31: every relation is counted once."""
    register = galois((5, 2, 0))
    rows = {f"c{i}": power(5 * i) for i in range(5)}
    machine = linear_machine(register, [(row, 0) for row in rows.values()])
    found = relations_of(machine, [Chain(name, 5) for name in rows], 3, {f"c{i}": 5 * i for i in range(5)})
    held = {(5 * i - delay) % 31 for i in range(5) for delay in range(1, 6)}
    value = {place: power(place % 31) for place in range(31)}
    trios = [trio for trio in combinations(sorted(held), 3) if value[trio[0]] ^ value[trio[1]] == value[trio[2]]]
    assert found.places == len(trios)
    shapes = {min(tuple((b - a) % 31 for b in order) for order in permutations(t) for a in order[:1]) for t in trios}
    assert found.relations == len(shapes)


def power(exponent: int) -> int:
    """Return the row that shows element 0 of the register x^5 + x^2 + 1 that many cycles later."""
    row, register = 1, galois((5, 2, 0))
    for _ in range(exponent):
        row = sum_of([register[k] for k in range(5) if row >> k & 1])
    return row


def test_the_third_moment_follows_from_the_relations() -> None:
    """Lindholm 1968: the skewness of the ones in a window is that of enumeration over all states."""
    machine = linear_machine(galois((9, 4, 0)), [(1, 0), (6, 1)])
    chains = [Chain("c0", 14), Chain("c1", 12)]
    columns, everything = columns_of(machine, chains)
    found = relations_of(machine, chains, 3)
    assert found.distinct == len(columns)
    states = everything.bit_length()
    ones = [sum(column >> k & 1 for column in columns.values()) for k in range(states)]
    mean = sum(ones) / states
    moments = [sum((one - mean) ** power for one in ones) / states for power in (2, 3)]
    assert found.skewness == pytest.approx(moments[1] / moments[0] ** 1.5)


def test_wide_rows_are_held_against_each_other() -> None:
    """A register of 127 elements has keys of 64 bits for rows of 128, and the relations of its own trinomial alone."""
    exponents = (127, 1, 0)
    machine = linear_machine(galois(exponents), [(1, 0)])
    found = relations_of(machine, [Chain("c0", 200)], 3)
    assert found.places == 200 - 127
    assert found.relations == 1
