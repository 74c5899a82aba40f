"""Loops: strongly connected parts against a general graph package, on random graphs."""

import random

import networkx as nx
import numpy as np
import pytest

from auditor.drafting.arcs import GATE, Arcs
from auditor.drafting.loops import find_loops, strong_parts


def random_arcs(rng: random.Random, nets: int, count: int) -> list[tuple[int, int]]:
    return [(rng.randrange(nets), rng.randrange(nets)) for _ in range(count)]


@pytest.mark.parametrize("seed", range(40))
def test_parts_are_those_of_a_general_package(seed: int) -> None:
    """Nets share a part exactly where networkx puts them into one component; a net on no cycle stands alone."""
    rng = random.Random(seed)
    nets = rng.randint(2, 60)
    arcs = random_arcs(rng, nets, rng.randint(1, 2 * nets))
    source, target = (np.array(column, dtype=np.int32) for column in zip(*arcs, strict=True))
    part = strong_parts(source, target, nets).tolist()
    found = {frozenset(k for k in range(nets) if part[k] == number) for number in set(part) - {-1}}
    components = [frozenset(c) for c in nx.strongly_connected_components(nx.DiGraph(arcs))]
    assert {c for c in found if len(c) > 1} == {c for c in components if len(c) > 1}
    assert found <= set(components)


def test_a_loop_is_told_by_its_storage() -> None:
    """A ring of two gates and three storage instances is one loop of three; a ring of gates alone is none."""
    arcs = [(2, 3, 7), (3, 4, GATE), (4, 5, 9), (5, 6, 8), (6, 2, GATE), (10, 11, GATE), (11, 10, GATE), (6, 10, GATE)]
    columns = (np.array(column, dtype=np.int32) for column in zip(*arcs, strict=True))
    (loop,) = find_loops(Arcs(*columns), 12, 3)
    assert loop.elements == (7, 8, 9)
    assert loop.arcs == 5


def test_a_long_chain_costs_no_stack() -> None:
    """A ring through a hundred thousand nets is one part."""
    count = 100_000
    source = np.arange(count, dtype=np.int32)
    part = strong_parts(source, np.roll(source, -1), count)
    assert set(part.tolist()) == {0}
