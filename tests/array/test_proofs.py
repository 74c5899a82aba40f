"""Diagrams over the circuit under test: what they reuse, and where they give up."""

import random

import pytest

from auditor.array import proofs
from auditor.array.proofs import Formulas, Reference
from auditor.cells.library import Function
from auditor.cone.cone import Gate
from auditor.machine.diagrams import Diagrams, TooLargeError

XOR = Function(("0", "1"), ("$0", "$1", "^"))
AND = Function(("0", "1"), ("$0", "$1", "&"))
OR = Function(("0", "1"), ("$0", "$1", "|"))
NOR = Function(("0", "1"), ("$0", "$1", "|", "!"))
WIDTH = 4  # the constant and three bits of state


def chain(function: Function, wires: list[int], first: int) -> tuple[dict[int, Gate], int]:
    """Return gates that join the wires one after the other, numbered from ``first``, and the last output."""
    gates, total = {}, wires[0]
    for k, wire in enumerate(wires[1:], first):
        gates[k] = Gate(k, function, (total, wire), 0)
        total = k
    return gates, total


def wide(pairs: int) -> tuple[dict[int, Gate], int]:
    """Return gates of which the last is (sum of first factors) & (x0 y0 + x1 y1 + ...): the sum fixes a bad order."""
    firsts, seconds = list(range(pairs)), list(range(pairs, 2 * pairs))
    gates, order = chain(XOR, firsts, 1000)
    for k, (x, y) in enumerate(zip(firsts, seconds, strict=True), 2000):
        gates[k] = Gate(k, AND, (x, y), 0)
    joined, total = chain(OR, list(range(2000, 2000 + pairs)), 3000)
    gates |= joined
    gates[4000] = Gate(4000, AND, (order, total), 0)
    return gates, 4000


def test_a_net_that_is_too_large_is_tried_once(monkeypatch: pytest.MonkeyPatch) -> None:
    """What failed alone fails at once the next time, and so does everything before it."""
    gates, last = wide(14)
    forms = {wire: 2 << wire for wire in range(28)}
    gates[4001] = Gate(4001, XOR, (last, 0), 0)
    formulas = Formulas(gates, forms, node_limit=500)
    assert formulas.diagram(1000)
    with pytest.raises(TooLargeError):
        formulas.diagram(last)
    monkeypatch.setattr(Function, "evaluate", lambda *_: pytest.fail("nothing may be evaluated again"))
    with pytest.raises(TooLargeError, match="behind it"):
        formulas.diagram(4001)


def test_all_proofs_together_are_bounded(monkeypatch: pytest.MonkeyPatch) -> None:
    """Once the work of all proofs is spent, further nets are left open."""
    gates, last = wide(6)
    formulas = Formulas(gates, {wire: 2 << wire for wire in range(12)})
    monkeypatch.setattr(proofs, "PROOFS", 0)
    with pytest.raises(TooLargeError, match="all proofs"):
        formulas.diagram(last)


@pytest.mark.parametrize("independent", [True, False])
def test_a_wide_sum_of_twins_is_decided(independent: bool) -> None:
    """The XOR of forty cells and their forty twins is 0 in every state, and moves if one of them is no twin."""
    gates, last = chain(XOR, list(range(80)), 1000)
    forms = {wire: 2 << wire % 40 for wire in range(80)}
    forms[79] ^= (2 << 41) * independent
    formulas = Formulas(gates, forms)
    moved = Reference(1, 64, ()).moves(formulas, formulas.diagram(last))
    assert (moved is not None) == independent
    if moved is not None:
        assert (moved & 2 << 41).bit_count() == 1


def test_relations_are_seen_beyond_twins() -> None:
    """Of three cells with the sum 0, the product of the first two with the third is never 1 alone on the third."""
    gates = {100: Gate(100, AND, (0, 1), 0), 101: Gate(101, AND, (100, 2), 0)}
    formulas = Formulas(gates, {0: 0b010, 1: 0b100, 2: 0b110})
    assert Reference(1, 3, ()).moves(formulas, formulas.diagram(100)) == 0b111
    assert Reference(1, 3, ()).moves(formulas, formulas.diagram(101)) is None


def random_case(rng: random.Random) -> tuple[dict[int, Gate], dict[int, int], list[list[int]]]:
    """Return random gates over six sources, the last of them free, with dependent forms of three bits, and lock-ups."""
    forms = {wire: rng.getrandbits(WIDTH) for wire in range(5)} | {5: 1 << WIDTH}
    gates: dict[int, Gate] = {}
    for output in range(100, 110):
        wires = rng.sample([*range(6), *gates], 2)
        gates[output] = Gate(output, rng.choice((XOR, AND, OR, NOR)), (wires[0], wires[1]), 0)
    return gates, forms, [[rng.getrandbits(WIDTH) & ~1 for _ in range(3)] for _ in range(rng.randint(0, 2))]


def value(gates: dict[int, Gate], forms: dict[int, int], vector: int, wire: int) -> int:
    """Return a wire in a state, gate by gate."""
    known = {source: (form & vector).bit_count() % 2 for source, form in forms.items()}
    for output, gate in gates.items():
        a, b = (known[other] for other in gate.inputs)
        known[output] = {XOR: a ^ b, AND: a & b, OR: a | b, NOR: 1 - (a | b)}[gate.function]
    return known[wire]


@pytest.mark.parametrize("road", ["paths", "independent forms", "paths without bound"])
def test_what_moves_is_what_enumeration_finds(road: str, monkeypatch: pytest.MonkeyPatch) -> None:
    """Over all combinations that the states reach, outside lock-up, a net moves exactly if a vector is given."""
    if road != "paths":
        monkeypatch.setattr(proofs, "FIRST_STEPS", 0)
    if road == "paths without bound":
        monkeypatch.setattr(Diagrams, "freed", _refuses)
    rng, outcomes = random.Random(road), set()
    for _ in range(150):
        gates, forms, lock_ups = random_case(rng)
        states = [v for v in range(1, 1 << WIDTH, 2) if all(any((f & v).bit_count() % 2 for f in r) for r in lock_ups)]
        if not states:
            continue
        start = rng.choice(states)
        formulas = Formulas(gates, forms)
        for wire in gates:
            found = Reference(start, WIDTH, lock_ups).moves(formulas, formulas.diagram(wire))
            wanted = any(
                value(gates, forms, state | free << WIDTH, wire) != value(gates, forms, start | free << WIDTH, wire)
                for state in states
                for free in (0, 1)
            )
            outcomes.add(wanted)
            assert (found is not None) == wanted
            if found is not None:
                mask = (1 << WIDTH) - 1
                assert found & mask in states
                other = value(gates, forms, start | found & ~mask, wire)
                assert value(gates, forms, found, wire) != other
    assert outcomes == {False, True}


def _refuses(_: Diagrams, __: int) -> int:
    raise TooLargeError("the sums are too large")
