"""How long the scan array takes, beside the obvious ways on arrays that those can bear, in the same run.

    python -m tests.benchmarks.scan_array

A register of 64 flip-flops with three-tap channels drawn by chance. Twins and separations of 2,000 channels of 1,000
scan cells; sums of three scan cells of 64 channels of 200 and of 1,000 channels of 500. The obvious way to find twins
is to simulate every scan cell over a window and compare, which proves nothing; that to find sums of three is to add
all pairs of rows and look the sum up. Exit status 1 if a budget is missed.
"""

import random
import resource
import sys
import time
from collections import Counter
from itertools import combinations

from auditor.array.distinct import distinct_cells
from auditor.array.relations import find_relations
from auditor.array.rows import ChainRows, chain_rows
from auditor.array.scan_array import Chain, Place, Relations, Twins
from auditor.array.twins import find_twins
from auditor.gf2 import matrix
from auditor.machine.machine import LinearMachine
from auditor.phases.find import find_phases
from tests.support.linear_machines import fibonacci, linear_machine

SIZE = 64
TWINS_BUDGET, SMALL_BUDGET, LARGE_BUDGET = 2.0, 1.0, 120.0
MEMORY_BUDGET = 4 * 1024  # MiB
WINDOW = 256  # cycles that the obvious way simulates: many more than the bits of a state, so equal means twin


def generator(channels: int) -> LinearMachine:
    """Return the register x^64 + x^63 + x^61 + x^60 + 1 with channels of three taps."""
    rng = random.Random(channels)
    taps = [(sum(1 << k for k in rng.sample(range(SIZE), 3)), 0) for _ in range(channels)]
    return linear_machine(fibonacci((64, 63, 61, 60, 0)), taps, transient=0)


def chains(channels: int, length: int) -> list[Chain]:
    return [Chain(f"c{k}", length) for k in range(channels)]


def our_twins(machine: LinearMachine, array: list[Chain]) -> Twins:
    """Count the twins."""
    found = find_twins(chain_rows(machine, array))
    if found is None:
        raise ValueError("the search was refused")
    return found


def obvious_twins(machine: LinearMachine, array: list[Chain]) -> int:
    """Simulate every channel, and count scan cells whose bits of the window are equal or complements."""
    draw = random.Random(1)
    state, span = draw.getrandbits(SIZE) | 1, array[0].length + WINDOW
    rows = [row.row.state for row in machine.observed if row.row]
    streams = [0] * len(rows)
    for cycle in range(span):
        for k, row in enumerate(rows):
            streams[k] |= ((row & state).bit_count() & 1) << cycle
        state = matrix.apply(machine.transition, state)
    mask, counts = (1 << WINDOW) - 1, Counter[int]()
    for stream in streams:
        for cell in range(array[0].length):
            window = stream >> cell & mask
            counts[min(window, window ^ mask)] += 1
    return sum(count * (count - 1) // 2 for count in counts.values())


def our_relations(rows: ChainRows) -> Relations:
    """Merge twins and count the sums of three."""
    cells = distinct_cells(rows)
    found = cells and find_relations(cells, 3, rows.dimension, lambda _: None, lambda _: None)
    if not found:
        raise ValueError("the search was refused")
    return found


def obvious_relations(rows: ChainRows) -> int:
    """Add all pairs of distinct rows and look the sum up."""
    held = {rows.row_of(Place(i, j)) >> 1 for i, chain in enumerate(rows.chains) for j in range(chain.length)}
    return sum(a ^ b in held for a, b in combinations(held, 2)) // 3


def timed(label: str, work, *arguments):  # type: ignore[no-untyped-def]  # any function at all
    """Carry out, print and return the seconds and the result."""
    start = time.perf_counter()
    result = work(*arguments)
    seconds = time.perf_counter() - start
    print(f"  {label:<46} {seconds:8.3f} s")
    return seconds, result


def main() -> int:
    """Run everything and return the exit status."""
    kept = True
    print("twins and separations")
    find_phases(generator(2))  # tables that are read once
    small = generator(1000), chains(1000, 500)
    ours, found = timed("1000 x 500, twins, ours", our_twins, *small)
    theirs, counted = timed("1000 x 500, every cell simulated and compared", obvious_twins, *small)
    if found.pairs + found.repeats != counted:
        raise ValueError(f"{found.pairs} and {found.repeats} against {counted}")
    print(f"  ratio {theirs / ours:.1f}")
    machine = generator(2000)
    separations, _ = timed("2000 x 1000, leads and separations", find_phases, machine)
    twins, found = timed("2000 x 1000, twins", our_twins, machine, chains(2000, 1000))
    print(f"  {found.pairs} pairs; budget {TWINS_BUDGET} s together")
    kept &= separations + twins <= TWINS_BUDGET

    print("sums of three scan cells")
    rows = chain_rows(generator(20), chains(20, 100))
    ours, relations = timed("20 x 100, ours", our_relations, rows)
    theirs, counted = timed("20 x 100, all pairs added and looked up", obvious_relations, rows)
    if relations.places != counted:
        raise ValueError(f"{relations.places} against {counted}")
    print(f"  ratio {theirs / ours:.1f}")
    for channels, length, budget in ((64, 200, SMALL_BUDGET), (1000, 500, LARGE_BUDGET)):
        rows = chain_rows(generator(channels), chains(channels, length))
        seconds, relations = timed(f"{channels} x {length}, ours", our_relations, rows)
        print(f"  {relations.places} places of {relations.distinct} distinct scan cells; budget {budget} s")
        kept &= seconds <= budget
    peak = resource.getrusage(resource.RUSAGE_SELF).ru_maxrss / 1024
    print(f"peak memory {peak:.0f} MiB; budget {MEMORY_BUDGET} MiB")
    kept &= peak <= MEMORY_BUDGET
    print(f"the budgets are {'kept' if kept else 'missed'}")
    return 0 if kept else 1


if __name__ == "__main__":
    sys.exit(main())
