"""Frozen nets and ranks of cones of a mapped circuit of 50,000 gates, and the share of nets that is decided.

    python -m tests.benchmarks.frozen_nets

The circuit is drawn from one seed by ``tests.support.mapped_circuit``: ripple adders, comparators, incrementers,
decoders, parity trees and layers of random gates of 4 to 16 bits, mapped to the cells of the samples, between 7,000
scan cells and 16 input ports. A register of 64 stages feeds the chains, once through a phase shifter of three taps a
channel, once straight from its stages, where chains share their bits. 20,000 patterns are planned.

Times are CPU seconds. Beside them stands the obvious way, one pattern after the other, for a few patterns and
extrapolated to all. Exit status 1 if either circuit takes more than ``BUDGET`` or decides less than ``SHARE``.
"""

import random
import sys
import tempfile
import time
from collections import Counter
from collections.abc import Sequence
from pathlib import Path

from auditor.array.cone_ranks import rank_cones
from auditor.array.frozen import find_frozen
from auditor.array.toggling import Planned
from tests.support.brute_circuit import read
from tests.support.circuits import under_test
from tests.support.mapped_circuit import chip

BUDGET, SHARE = 120.0, 0.99
STAGES = (64, 63, 61, 60)  # a primitive register
DRAWN = 62_000  # gates drawn; those that no scan cell takes fall away
PATTERNS, SAMPLE = 20_000, 5


def measure(name: str, channels: Sequence[Sequence[int]], length: int) -> bool:
    """Audit one circuit, print what it took, and return whether it kept the budget."""
    text = chip(STAGES, channels, length, DRAWN, seed=1, inputs=16, outputs=500)
    with tempfile.TemporaryDirectory() as folder:
        made = under_test(Path(folder), text, len(channels), length)
    start = time.process_time()
    cones = rank_cones(made.circuit, made.loading)
    ranked = time.process_time()
    facts = find_frozen(made.circuit, made.loading, Planned((made.machine.reset_state,), length, length, PATTERNS))
    spent = time.process_time() - ranked
    decided = 1 - len(facts.undecided) / facts.examined
    print(f"\n{name}: {len(made.circuit.gates)} gates, {len(made.cells)} scan cells, {len(made.circuit.sinks)} sinks")
    short = sum(cells.short for cells in cones.sets)
    print(f"  ranks {ranked - start:.2f} s: {len(cones.sets)} different cones, {short} short of rank")
    scopes = Counter(net.scope for net in facts.frozen)
    print(f"  frozen nets {spent:.2f} s: {facts.examined} nets, {100 * decided:.3f} % decided, {dict(scopes)}")
    print(f"  the obvious way, extrapolated: {pattern_by_pattern(text):.0f} s for the simulation alone")
    return spent <= BUDGET and decided >= SHARE and len(made.circuit.gates) >= 50_000


def pattern_by_pattern(text: str) -> float:
    """Return the CPU seconds for all patterns, one at a time, from a few of them."""
    drawn, rng = read(text), random.Random(1)
    names = [pins["Q"] for pins in drawn.scan.values()] + [f"in[{k}]" for k in range(16)]
    nets = [net for net in drawn.gates if net.startswith("n")]  # those of the circuit, not of the generator
    start = time.process_time()
    for _ in range(SAMPLE):
        drawn.values({name: rng.getrandbits(1) for name in names}, nets, 1)
    return (time.process_time() - start) / SAMPLE * PATTERNS


def main() -> int:
    """Measure both circuits and return the exit status."""
    rng = random.Random(64)
    shifted = measure("through a phase shifter", [rng.sample(range(64), 3) for _ in range(100)], 70)
    straight = measure("straight from the stages", [[k] for k in range(64)], 110)
    print(f"\nthe budget of {BUDGET:.0f} s and {100 * SHARE:.0f} % is {'kept' if shifted and straight else 'missed'}")
    return 0 if shifted and straight else 1


if __name__ == "__main__":
    sys.exit(main())
