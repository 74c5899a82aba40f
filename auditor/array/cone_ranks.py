"""Which input combinations the generator can give to each cone of the circuit under test. Main verb of this subject.

The cone of a sink is the set of loaded bits on which it depends. Their rows over the state have a rank; of the
2^size combinations 2^rank occur over all states, and a sum of rows that is constant names combinations that never do.
"""

from collections.abc import Iterable, Iterator, Sequence
from dataclasses import dataclass
from itertools import combinations

import numpy as np

from auditor.array.circuit import CellSet, Circuit, ConeFacts, LoadedBit, SinkCone
from auditor.array.loading import Loading, States
from auditor.errors import InternalError
from auditor.gf2 import matrix
from auditor.notation import Vector

SEED = 0xC0E5
_LANES = 1024


def rank_cones(circuit: Circuit, loading: Loading, two_cycles: bool = False) -> ConeFacts:
    """Return the ranks of all cones. ``InternalError`` if simulated loads contradict a relation."""
    cells = (1 << len(circuit.cells)) - 1
    supports = ((name, seen & cells, seen >> len(circuit.loaded)) for name, seen in sink_supports(circuit))
    cones = ((name, inside, others.bit_count()) for name, inside, others in supports if inside)
    return rank_sets(cones, loading, two_cycles)


def rank_sets(seen: Iterable[tuple[str, Vector, int]], loading: Loading, two_cycles: bool) -> ConeFacts:
    """Return the ranks of cones given as (name, scan cells, number of other sources); equal sets are ranked once."""
    numbers: dict[Vector, int] = {}
    cones: list[SinkCone] = []
    sets: list[CellSet] = []
    rank = _Ranks(loading, two_cycles)
    for name, inside, others in seen:
        if inside not in numbers:
            numbers[inside] = len(sets)
            sets.append(rank.of(tuple(sorted(matrix.ones(inside)))))
        cones.append(SinkCone(name, numbers[inside], others))
    _confirm(loading, sets)
    return ConeFacts(tuple(cones), tuple(sets), two_cycles, matrix.rank([row & ~1 for row in loading.steady]))


def sink_supports(circuit: Circuit) -> Iterator[tuple[str, Vector]]:
    """Yield every sink with the sources it depends on: loaded bits first, then free ones.

    What a gate depends on is let go of as soon as nobody reads it any more.
    """
    readers: dict[int, int] = {}
    for gate in circuit.gates:
        for wire in gate.inputs:
            readers[wire] = readers.get(wire, 0) + 1
    for sink in circuit.sinks:
        readers[sink.wire] = readers.get(sink.wire, 0) + 1
    seen = {wire: 1 << k for k, wire in enumerate((*circuit.loaded, *circuit.free))}
    for gate in circuit.gates:
        total = 0
        for wire in gate.inputs:
            total |= seen[wire]
            readers[wire] -= 1
            if not readers[wire]:
                del seen[wire]
        seen[gate.output] = total
    for sink in circuit.sinks:
        yield sink.name, seen[sink.wire]


@dataclass(frozen=True, slots=True)
class _Ranks:
    loading: Loading
    two_cycles: bool

    def of(self, cells: tuple[int, ...]) -> CellSet:
        """Return the rank of some scan cells, and the shortest of the relations that elimination meets."""
        bits = [LoadedBit(cell, earlier) for earlier in (False, True)[: 1 + self.two_cycles] for cell in cells]
        span, relation = matrix.Span(), 0
        for bit in bits:
            found = span.add(_row(self.loading, bit) & ~1)
            if found and (not relation or found.bit_count() < relation.bit_count()):
                relation = found
        members = tuple(bits[k] for k in sorted(matrix.ones(relation)))
        constant = sum(_row(self.loading, bit) & 1 for bit in members) & 1
        rank = span.dimension
        occurring = (1 << rank) - _only_in_lock_up(span, self.loading)
        return CellSet(cells, len(bits), rank, occurring, members, constant)


def _row(loading: Loading, bit: LoadedBit) -> Vector:
    return (loading.before if bit.earlier else loading.steady)[bit.cell]


def _only_in_lock_up(span: matrix.Span, loading: Loading) -> int:
    """Return how many combinations of rows that span a space occur in lock-up states alone.

    A combination tells that a register is locked up exactly if the rows decide all its forms. Combinations that tell it
    of several registers are counted once, by inclusion and exclusion.
    """
    told = [forms for forms in loading.lock_ups if all(not span.reduce(form & ~1)[0] for form in forms)]
    total = 0
    for count in range(1, len(told) + 1):
        for chosen in combinations(told, count):
            together = matrix.Span()
            for forms in chosen:
                for form in forms:
                    together.add(form)
            if together.reduce(1)[0]:
                total -= (-1) ** count << span.dimension - together.dimension
    return total


def _confirm(loading: Loading, sets: Sequence[CellSet]) -> None:
    """Look at loads from random states: every relation must hold in all of them."""
    random = np.random.default_rng(SEED)
    bits = random.integers(0, 2, (loading.width, _LANES), dtype=np.uint8)
    columns = [int.from_bytes(np.packbits(row).tobytes(), "little") for row in bits]
    states = States([(1 << _LANES) - 1, *columns[1:]], _LANES)
    values = [states.values(rows) for rows in (loading.steady, loading.before)]
    for cells in sets:
        if cells.relation:
            total = np.bitwise_xor.reduce([values[bit.earlier][bit.cell] for bit in cells.relation], axis=0)
            if (total != total[0]).any() or int(total[0]) & 1 != cells.constant or int(total[0]) not in (0, 2**64 - 1):
                raise InternalError("simulated loads contradict a relation between scan cells")
