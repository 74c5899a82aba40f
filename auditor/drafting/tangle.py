"""Loops that hold logic beside registers: what falls off them where a multiplexer's select is held.

A chip's scan path runs through register and logic alike, so that all of it may be one loop. Such a loop is not put to
the proof; the selects of most multiplexers are tried one by one on the structure alone.
"""

from collections import Counter
from collections.abc import Container, Iterator, Mapping

import numpy as np

from auditor.cells.function import EXACT_INPUTS, restrict, support
from auditor.cells.library import Function
from auditor.cone.constants import spread
from auditor.cone.wiring import Wiring
from auditor.drafting.arcs import find_arcs, functions_of
from auditor.drafting.justify import gate_behind, root_of
from auditor.drafting.loops import find_loops, strong_parts
from auditor.drafting.part import Part
from auditor.netlist.netlist import OPEN

LARGEST_LOOP = 4096  # storage instances
MOST_WORK = 150_000  # gates behind an element squared, over all elements: what naming spoilers may cost
REGION = 200  # gates behind one element that are counted
SELECTS = 3  # nets that are tried


def is_tangled(part: Part, known: Mapping[int, int]) -> bool:
    """Tell whether so much stands behind the elements of a part that it is logic and no register."""
    work = 0
    for instance in part.elements:
        waiting, seen = list(part.wiring.nets_of(instance).values()), set[int]()
        while waiting and len(seen) < REGION:
            net = waiting.pop()
            if net not in seen and net not in known and (behind := gate_behind(part.wiring, net, known)):
                seen.add(net)
                waiting += behind.wires
        work += len(seen) ** 2
        if work > MOST_WORK:
            return True
    return False


def fallen_loops(
    wiring: Wiring, ports: Container[int], known: Mapping[int, int], tangle: frozenset[int], least: int
) -> Iterator[tuple[tuple[int, ...], int, int]]:
    """Yield (elements, net, value): the loops of at most ``LARGEST_LOOP`` that a tangle leaves with a select held."""
    met: set[tuple[int, ...]] = set()
    nets = len(wiring.netlist.net_names)
    arcs = find_arcs(wiring, known)
    part = strong_parts(arcs.source, arcs.target, nets)
    of_tangle = np.isin(part, part[arcs.target[np.isin(arcs.element, list(tangle))]]) & (part >= 0)
    for net in _selects(wiring, ports, known):
        for value in (0, 1):
            held = {**known, net: value}
            spread(wiring, held, [net])
            for loop in find_loops(find_arcs(wiring, held).among(of_tangle), nets, least):
                small = len(loop.elements) <= min(LARGEST_LOOP, len(tangle) - 1)
                if small and loop.elements not in met and tangle.issuperset(loop.elements):
                    met.add(loop.elements)
                    yield loop.elements, net, value


def _selects(wiring: Wiring, ports: Container[int], known: Mapping[int, int]) -> list[int]:
    """Return the nets that select at most multiplexers, ports first; buffers and inverters in between are passed."""
    netlist = wiring.netlist
    width = max(1, len(netlist.pin_names))
    kind = netlist.instance_type[wiring.instance].astype(np.int64) * width + netlist.pin_name
    selecting = [
        number * width + code
        for number, cell in enumerate(wiring.cells)
        for code, name in enumerate(netlist.pin_names)
        if cell is not None and not cell.not_understood and any(_is_select(f, name) for f in functions_of(cell))
    ]
    nets = netlist.pin_net[np.isin(kind, selecting)]
    counts = np.bincount(nets[nets != OPEN], minlength=1)
    votes: Counter[int] = Counter()
    for net in np.argsort(-counts, kind="stable")[:1000].tolist():
        if counts[net] and net not in known:
            votes[root_of(wiring, net, known)[0]] += int(counts[net])
    ranked = sorted(votes, key=lambda net: (net not in ports, -votes[net], net))
    return ranked[:SELECTS]


def _is_select(function: Function, name: str) -> bool:
    """Tell whether an input chooses between others: neither cofactor is constant, and each drops what the other has."""
    if name not in function.inputs or len(function.inputs) > EXACT_INPUTS:
        return False
    low, high = (set(support(restrict(function, {name: bit}))) for bit in (0, 1))
    return bool(low - high) and bool(high - low)
