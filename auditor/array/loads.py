"""How many different patterns the chains get, one load after another, before the first comes again."""

from collections.abc import Iterable, Iterator
from math import gcd, lcm

import numpy as np

from auditor.array.cycles import cycle_counts
from auditor.array.orbits import state_after
from auditor.array.rows import ChainRows, pack
from auditor.array.scan_array import Loads, Start
from auditor.gf2 import matrix
from auditor.gf2.batch import LinearMap
from auditor.machine.machine import LinearMachine
from auditor.notation import Vector
from auditor.phases.table import PhaseTable
from auditor.plan import Patterns

_MOST_COUNTED = 1 << 21  # words of loads


def distinct_loads(period: int | None, clocks: int) -> int | None:
    """Return how many states of a cycle are met by steps of so many clocks."""
    return None if period is None else period // gcd(period, clocks)


def find_loads(
    machine: LinearMachine, table: PhaseTable, rows: ChainRows, clocks: int, from_reset: int | None
) -> Loads:
    """Return the different loads for the orbit from reset, where its period is given, else for most states.

    They tell all states of the cycling part apart, and so are as many as the states met, where the rows of the scan
    cells span that part.
    """
    start: Start = "reset"
    period = from_reset
    one = len(table.registers) == 1 and bool(table.registers[0].primitive)
    if period is None:
        channel = {row.name: k for k, row in enumerate(machine.observed) if not row.cut_from}
        groups = {table.phases[channel[chain.channel]].group for chain in rows.chains}
        moduli = [table.classes[group].modulus for group in sorted(g for g in groups if g is not None)]
        known = [modulus for modulus in moduli if modulus is not None]
        period = lcm(*known) if known and len(known) == len(moduli) and None not in groups else None
        start = "any state outside lock-up" if one else "the states of the longest cycles"
    exact = len(load_basis(rows)) == machine.cycling_degree
    cycles = None if one else cycle_counts(machine)
    return Loads(period, distinct_loads(period, clocks), exact, start, cycles=tuple((cycles or {}).items()))


def load_basis(rows: ChainRows) -> list[Vector]:
    """Return rows of scan cells, constants left out, that are independent and tell what all others hold.

    So many cells of one chain in a row as the channels' space has dimensions span all that the chain can.
    """
    span = matrix.Span()
    basis: list[Vector] = []
    for channel, chain in zip(rows.rows, rows.chains, strict=True):
        delays = set(chain.delays) if chain.cells else range(1, chain.length + 1)
        row = matrix.row_times(channel, matrix.power(rows.step, rows.greatest_delay - chain.greatest_delay))
        last = max(-1, chain.greatest_delay - 2 * rows.dimension - 1)
        for delay, shown in _stepped(rows, row, range(chain.greatest_delay, last, -1)):
            if len(basis) == rows.dimension:
                return basis
            if delay in delays and not span.add(shown >> 1):
                basis.append(shown >> 1)
    return basis


def _stepped(rows: ChainRows, row: Vector, delays: Iterable[int]) -> Iterator[tuple[int, Vector]]:
    """Yield the row of each of the falling delays, ``row`` being the first."""
    for delay in delays:
        yield delay, row
        row = matrix.row_times(row, rows.step)


def count_loads(machine: LinearMachine, rows: ChainRows, patterns: Patterns, reset: Vector) -> int | None:
    """Return how many of the planned loads from reset differ, None where that exceeds the work that is done.

    A load is told by what the basis of its rows gives on the state D cycles before the chains are parked.
    """
    basis = load_basis(rows)
    words = -(-max(1, len(basis)) // 64)
    if patterns.count * max(rows.words, words) > _MOST_COUNTED:
        return None
    first = max(machine.transient, patterns.shift_cycles - rows.greatest_delay)
    state = state_after(machine, reset, first)
    column = 1 | sum((state >> element & 1) << place for place, element in enumerate(rows.elements, 1))
    stride = matrix.transpose(matrix.power(rows.step, patterns.clocks_per_pattern), rows.width)
    columns = pack([column], rows.words)
    while len(columns) < patterns.count:
        columns = np.concatenate([columns, LinearMap(pack(stride, rows.words))(columns)])
        stride = matrix.multiply(stride, stride)
    images = matrix.transpose([row << 1 for row in basis], rows.width)
    loads = LinearMap(pack(images, words))(columns[: patterns.count])
    return len(np.unique(loads, axis=0))
