"""How long the logarithms of many channels take in each degree, and how a computer-algebra system does beside it.

    python -m tests.benchmarks.logarithms                 the 31 degrees up to 128 that need an index calculus
    python -m tests.benchmarks.logarithms 8-128           these degrees, or those listed
    python -m tests.benchmarks.logarithms --values 10 127
    python -m tests.benchmarks.logarithms --peers 0       without the other system

For each degree a random dense primitive polynomial and random channels of three taps; every degree starts in a process
of its own with nothing cached, and its CPU time and peak memory are those of that process without the start of Python.
The peer is PARI's fflog, called for a few of the same channels, which must give the same logarithms. Its times are
CPU seconds for one channel, and the ratio is that time over ours, both for one channel. Exit status 1 if a logarithm is
missing or differs.
"""

import argparse
import multiprocessing
import random
import resource
import sys
import time
from collections.abc import Iterator, Sequence
from concurrent.futures import ProcessPoolExecutor
from dataclasses import dataclass
from statistics import median

from auditor.gf2.calculus.table import make_factor_base
from auditor.gf2.effort import Effort
from auditor.gf2.logarithm import logarithms
from auditor.gf2.order import is_primitive

HARD = (
    *(49, 59, 61, 65, 67, 69, 73, 77, 79, 83, 85, 86, 87, 89, 93, 97, 98, 101, 103, 106, 107, 109, 113, 115, 118),
    *(121, 122, 123, 125, 127, 128),
)


@dataclass(frozen=True)
class Run:
    """The logarithms of one degree; ``table`` is the part of the seconds that made the factor base, 0 without one."""

    values: tuple[int | None, ...]
    complete: bool
    seconds: float
    table: float
    megabytes: float


def channels(n: int, count: int) -> tuple[int, list[int]]:
    """Return a random primitive polynomial of degree n and random polynomials of three terms."""
    rng = random.Random(n)
    f = 0
    while not is_primitive(f):
        f = 1 << n | rng.getrandbits(n) | 1
    return f, [sum(1 << k for k in rng.sample(range(n), 3)) for _ in range(count)]


def measure(n: int, count: int) -> Run:
    """Return the logarithms of one degree with time and memory."""
    f, values = channels(n, count)
    table = 0.0

    def timed_table(*arguments):
        nonlocal table
        start = time.process_time()
        base = make_factor_base(*arguments)
        table += time.process_time() - start
        return base

    start = time.process_time()
    found = logarithms(values, f, effort=Effort(tables=timed_table))
    seconds = time.process_time() - start
    megabytes = resource.getrusage(resource.RUSAGE_SELF).ru_maxrss / 1024
    return Run(found.values, found.complete, seconds, table, megabytes)


def peer(n: int, count: int, sample: int) -> tuple[list[int], float]:
    """Return PARI's logarithms of the first channels and its CPU seconds for one."""
    from tests.support.algebra import pari_logarithm

    f, values = channels(n, count)
    start = time.process_time()
    found = [pari_logarithm(value, f) for value in values[:sample]]
    return found, (time.process_time() - start) / sample


def degrees(words: Sequence[str]) -> Iterator[int]:
    """Yield the degrees of arguments like 8-128 and 127."""
    for word in words:
        first, _, last = word.partition("-")
        yield from range(int(first), int(last or first) + 1)


def main() -> int:
    """Print a line for each degree and a summary."""
    parser = argparse.ArgumentParser(description=(__doc__ or "").partition("\n")[0])
    parser.add_argument("degrees", nargs="*", help="such as 127 or 8-128")
    parser.add_argument("--values", type=int, default=1000, help="channels of each degree")
    parser.add_argument("--peers", type=int, default=1, help="channels that PARI is called for")
    options = parser.parse_args()
    wrong, times = [], []
    print(f"{options.values} channels   method         seconds  table    MB   PARI, one    ratio")
    fresh = multiprocessing.get_context("spawn")
    for n in degrees(options.degrees) if options.degrees else HARD:
        with ProcessPoolExecutor(1, fresh) as pool:
            run = pool.submit(measure, n, options.values).result()
            expected, one = pool.submit(peer, n, options.values, options.peers).result() if options.peers else ([], 0.0)
        times.append(run.seconds)
        if not run.complete or list(run.values[: len(expected)]) != expected:
            wrong.append(n)
        method = "index calculus" if run.table else "search"
        beside = f"{one:9.2f}s {one * options.values / run.seconds:8.0f}" if expected else ""
        print(
            f"degree {n:5}     {method:14} {run.seconds:8.2f} {run.table:6.2f} {run.megabytes:5.0f} {beside}",
            flush=True,
        )
    print(f"median {median(times):.2f} s, worst {max(times):.2f} s; missing or different: {wrong or 'none'}")
    return 1 if wrong else 0


if __name__ == "__main__":
    sys.exit(main())
