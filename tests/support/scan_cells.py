"""Small machines run from every steady state, and what each scan cell then holds: truth by enumeration.

A column is one scan cell over all steady states: bit k is what it holds when the run began in the k-th of them.
"""

import random
from collections.abc import Sequence

from auditor.array.scan_array import Chain, Place, ScanCell
from auditor.machine.machine import LinearMachine
from tests.support.brute_force import random_transition, run
from tests.support.linear_machines import linear_machine

Columns = dict[Place, int]


def columns_of(machine: LinearMachine, chains: Sequence[Chain], later: int = 0) -> tuple[Columns, int]:
    """Return the column of every scan cell, ``later`` cycles after the first load, and the column of all ones."""
    greatest = max(max(chain.delays) for chain in chains)
    starts = set(range(1 << machine.size))
    for _ in range(machine.transient):
        starts = {run(machine.transition, machine.offset, state) for state in starts}
    columns = {Place(i, j): 0 for i, chain in enumerate(chains) for j in range(chain.length)}
    for k, start in enumerate(sorted(starts)):
        states = [start]
        while len(states) <= greatest + later:
            states.append(run(machine.transition, machine.offset, states[-1]))
        for place in columns:
            chain = chains[place.chain]
            state = states[greatest + later - chain.delays[place.cell]]
            row = next(one.row for one in machine.observed if one.name == chain.channel)
            assert row is not None
            bit = (row.state & state).bit_count() + row.constant + chain.inverted(place.cell)
            columns[place] |= (bit & 1) << k
    return columns, (1 << len(starts)) - 1


def moving(columns: Columns, everything: int) -> Columns:
    """Return the columns that are not constant, each or its complement, whichever has bit 0 clear."""
    kept = {place: column for place, column in columns.items() if column not in (0, everything)}
    return {place: column ^ everything if column & 1 else column for place, column in kept.items()}


def random_array(rng: random.Random) -> tuple[LinearMachine, list[Chain]]:
    """Return a small machine of any structure with a chain behind each channel, some known cell by cell."""
    size, count = rng.randint(2, 6), rng.randint(1, 4)
    channels = [(rng.getrandbits(size), rng.getrandbits(1)) for _ in range(count)]
    machine = linear_machine(random_transition(rng, size), channels, offset=rng.getrandbits(size))
    chains = []
    for i in range(count):
        length = rng.randint(1, 6)
        cells: list[ScanCell] = []
        if rng.random() < 0.4:
            delay = rng.randint(0, 1)
            for j in range(length):
                cells.append(ScanCell(f"c{i}_{j}", delay, bool(rng.getrandbits(1))))
                delay += rng.choice((0, 1, 1, 1, 2))
        chains.append(Chain(f"c{i}", length, tuple(cells)))
    return machine, chains
