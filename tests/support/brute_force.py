"""Small machines run from every state at once: the streams themselves, to hold computed phases against.

A column is what one channel shows in one cycle from all 2^n states: bit k is the output from state k.
"""

import random
from collections.abc import Sequence
from dataclasses import dataclass
from itertools import count
from math import lcm

from auditor.machine.machine import LinearMachine


def run(rows: Sequence[int], offset: int, state: int) -> int:
    """Return the next state."""
    return offset ^ sum((row & state).bit_count() % 2 << i for i, row in enumerate(rows))


@dataclass(frozen=True)
class Columns:
    """All channels over a number of cycles; ``settled`` is the cycle from which every column comes back."""

    everything: int
    shown: tuple[tuple[int, ...], ...]
    settled: int
    period: int

    def is_constant(self, i: int) -> bool:
        """Whether the channel shows one and the same value in all steady cycles from all states."""
        steady = set(self.shown[i][self.settled : self.settled + self.period])
        return len(steady) == 1 and steady <= {0, self.everything}

    def stream_period(self, i: int) -> int:
        """Return the least shift that gives the steady stream again."""
        return next(s for s in count(1) if self.holds(i, i, s, False, self.settled))

    def holds(self, i: int, j: int, shift: int, inverted: bool, start: int) -> bool:
        """Whether y_i(t) = y_j(t + shift) + inverted from every state and for every t from the start on."""
        flip = self.everything if inverted else 0
        end = self.settled + self.period  # all later columns repeat these
        shown = zip(self.shown[i][start:end], self.shown[j][start + shift : end + shift], strict=True)
        return all(mine == other ^ flip for mine, other in shown)

    def relations(self, i: int, j: int) -> list[tuple[int, bool]]:
        """Return all (cycles, complement) in which one of two channels is the other, ascending."""
        return [
            (s, v)
            for s in range(self.stream_period(i))
            for v in (False, True)
            if self.holds(i, j, s, v, self.settled) or self.holds(j, i, s, v, self.settled)
        ]


def columns(machine: LinearMachine) -> Columns:
    """Run a machine from every state until the joint state of all has come back, and one more round."""
    states = tuple(range(1 << machine.size))
    seen: dict[tuple[int, ...], int] = {}
    history = []
    while states not in seen:
        seen[states] = len(history)
        history.append(states)
        states = tuple(run(machine.transition, machine.offset, state) for state in states)
    settled, period = seen[states], len(history) - seen[states]
    history += [history[settled + k % period] for k in range(2 * period)]
    shown = []
    for observed in machine.observed:
        assert observed.row is not None
        row, constant = observed.row.state, observed.row.constant
        outputs = [(row & state).bit_count() + constant & 1 for state in range(1 << machine.size)]
        shown.append(tuple(sum(outputs[state] << k for k, state in enumerate(states)) for states in history))
    return Columns((1 << (1 << machine.size)) - 1, tuple(shown), settled, period)


def cycle_lengths(rows: Sequence[int], offset: int) -> tuple[int, int]:
    """Return (number of states that come back, least common multiple of their cycle lengths)."""
    returning = set(range(1 << len(rows)))
    while (smaller := {run(rows, offset, state) for state in returning}) != returning:
        returning = smaller
    together = 1
    for first in returning:
        state, length = run(rows, offset, first), 1
        while state != first:
            state, length = run(rows, offset, state), length + 1
        together = lcm(together, length)
    return len(returning), together


def random_transition(rng: random.Random, size: int) -> list[int]:
    """Return a transition that may well be singular, reducible, derogatory or unipotent."""
    kind = rng.randrange(4)
    if kind == 0:
        return [rng.getrandbits(size) for _ in range(size)]
    if kind == 1:
        return [rng.getrandbits(size) & rng.getrandbits(size) for _ in range(size)]
    if kind == 2:
        return [1 << i | (1 << i + 1 if i + 1 < size and rng.random() < 0.7 else 0) for i in range(size)]
    part = rng.randint(1, max(1, size // 2))
    block = [rng.getrandbits(part) for _ in range(part)]
    copies = [row << start for start in range(0, size - part + 1, part) for row in block]
    return copies + [0] * (size - len(copies))
