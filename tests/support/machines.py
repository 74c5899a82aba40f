"""Abstract linear machines for tests, and the plain mathematics that tells what an audit must find.

Nothing here uses the auditor: a machine is stepped, walked and shifted bit by bit, so that its answers are a second
road.

    x(t+1) = A x(t) + a        y_i(t) = c_i x(t) + e_i        (over GF(2); bit k of a row = element k)
"""

import random
from collections.abc import Iterable, Sequence
from dataclasses import dataclass, replace


@dataclass(frozen=True)
class Machine:
    """n elements, m channels: ``rows`` of A, ``offset`` a (bit i = row i), ``channels`` c_i, ``constants`` e."""

    rows: tuple[int, ...]
    channels: tuple[int, ...] = ()
    offset: int = 0
    constants: int = 0

    @property
    def size(self) -> int:
        return len(self.rows)

    def step(self, state: int) -> int:
        """Return the next state."""
        moved = sum((row & state).bit_count() % 2 << i for i, row in enumerate(self.rows))
        return moved ^ self.offset

    def output(self, channel: int, state: int) -> int:
        """Return what a channel shows in a state."""
        return ((self.channels[channel] & state).bit_count() + (self.constants >> channel)) % 2

    def stream(self, channel: int, state: int, cycles: int) -> list[int]:
        """Return the first ``cycles`` bits of a channel from a state."""
        bits = []
        for _ in range(cycles):
            bits.append(self.output(channel, state))
            state = self.step(state)
        return bits

    def pulled_back(self, row: int) -> int:
        """Return row * A: what the row shows one cycle later, without constants."""
        return sum_rows(self.rows[k] for k in bits_of(row))


def bits_of(vector: int) -> list[int]:
    """Return the numbers of the set bits, ascending."""
    return [k for k in range(vector.bit_length()) if vector >> k & 1]


def sum_rows(rows: Iterable[int]) -> int:
    """Return the sum over GF(2)."""
    total = 0
    for row in rows:
        total ^= row
    return total


def row_of(elements: Iterable[int]) -> int:
    """Return the row that reads these elements."""
    return sum_rows(1 << k for k in elements)


def fibonacci(stages: Iterable[int], size: int) -> Machine:
    """Return the register whose stage 1 (element 0) takes the sum of ``stages``, shifting towards stage ``size``."""
    return Machine((row_of(s - 1 for s in stages), *(1 << k for k in range(size - 1))))


def galois(exponents: Sequence[int]) -> Machine:
    """Return the register with distributed feedback whose characteristic polynomial has these exponents.

    The last stage feeds stage 1 and is added to what stage k gives to stage k + 1 for every exponent 0 < k < n.
    """
    size = max(exponents)
    last = 1 << size - 1
    return Machine((last, *(1 << k - 1 ^ (last if k in exponents else 0) for k in range(1, size))))


def automaton(rules: str) -> Machine:
    """Return the cellular automaton of rules 90 (``0``) and 150 (``1``) with null boundaries."""
    size = len(rules)
    near = ((i - 1, i + 1) for i in range(size))
    rows = [row_of(k for k in pair if 0 <= k < size) for pair in near]
    return Machine(tuple(row ^ (int(rule) << i) for i, (row, rule) in enumerate(zip(rows, rules, strict=True))))


def with_channels(machine: Machine, channels: Iterable[Iterable[int]], constants: int = 0) -> Machine:
    """Return the machine observed by channels that read these elements."""
    return replace(machine, channels=tuple(row_of(elements) for elements in channels), constants=constants)


def beside(parts: Sequence[Machine]) -> Machine:
    """Return machines beside each other in one, which share nothing."""
    rows: list[int] = []
    channels: list[int] = []
    offset = constants = 0
    for part in parts:
        offset |= part.offset << len(rows)
        constants |= part.constants << len(channels)
        first = len(rows)
        channels += [row << first for row in part.channels]
        rows += [row << first for row in part.rows]
    return Machine(tuple(rows), tuple(channels), offset, constants)


def with_pipelines(machine: Machine, depths: Sequence[int]) -> Machine:
    """Return the machine with ``depths[i]`` pipeline elements behind channel i; new elements follow the old ones."""
    rows, channels, offset, constants = list(machine.rows), list(machine.channels), machine.offset, machine.constants
    for i, depth in enumerate(depths):
        for _ in range(depth):
            offset |= (constants >> i & 1) << len(rows)
            constants &= ~(1 << i)
            rows.append(channels[i])
            channels[i] = 1 << len(rows) - 1
    return Machine(tuple(rows), tuple(channels), offset, constants)


def stored(machine: Machine, complemented: int) -> Machine:
    """Return the machine as its flip-flops hold it, where element k keeps its complement if bit k is set."""
    offset = sum_rows(1 << i for i, row in enumerate(machine.rows) if (row & complemented).bit_count() % 2)
    constants = sum_rows(1 << i for i, row in enumerate(machine.channels) if (row & complemented).bit_count() % 2)
    return replace(
        machine,
        offset=machine.offset ^ offset ^ complemented,
        constants=machine.constants ^ constants,
    )


def reachable(machine: Machine, row: int) -> int:
    """Return the elements that decide a row, at once or some cycles before."""
    seen, fresh = 0, row
    while fresh:
        seen |= fresh
        fresh = sum_or(machine.rows[k] for k in bits_of(fresh)) & ~seen
    return seen


def sum_or(rows: Iterable[int]) -> int:
    """Return the union."""
    total = 0
    for row in rows:
        total |= row
    return total


def visible(machine: Machine) -> int:
    """Return the elements that some channel can see."""
    return reachable(machine, sum_or(machine.channels))


def registers(machine: Machine) -> list[int]:
    """Return the feedback registers as rows: the elements that reach each other and themselves, by least element."""
    behind = [reachable(machine, row) for row in machine.rows]
    parts = []
    for i in bits_of(visible(machine)):
        part = row_of(k for k in bits_of(behind[i]) if behind[k] >> i & 1)
        if part >> i & 1 and part not in parts:
            parts.append(part)
    return parts


def taps(machine: Machine, channel: int) -> set[tuple[int, int]]:
    """Return the (element, delay) pairs of feedback registers that a channel adds up."""
    inside = sum_or(registers(machine))
    found: set[tuple[int, int]] = set()
    open_row, delay = machine.channels[channel], 0
    while open_row:
        found |= {(k, delay) for k in bits_of(open_row & inside)}
        open_row, delay = machine.pulled_back(open_row & ~inside), delay + 1
    return found


def transient(machine: Machine) -> int:
    """Return the least T for which A^T and A^(T+1) have the same rank, over the elements that channels see."""
    seen = bits_of(visible(machine))
    rows, ranks = [1 << k for k in seen], [len(seen)]
    while True:
        rows = [machine.pulled_back(row) for row in rows]
        ranks.append(rank(rows))
        if ranks[-1] == ranks[-2]:
            return len(ranks) - 2


def rank(rows: Iterable[int]) -> int:
    """Return the rank over GF(2)."""
    pivots: dict[int, int] = {}
    for start in rows:
        row = start
        while row and row.bit_length() in pivots:
            row ^= pivots[row.bit_length()]
        if row:
            pivots[row.bit_length()] = row
    return len(pivots)


def shifted(machine: Machine, row: int, steps: int) -> int:
    """Return row * A^steps by repeated squaring."""
    power = list(machine.rows)
    while steps:
        if steps & 1:
            row = sum_rows(power[k] for k in bits_of(row))
        power = [sum_rows(power[k] for k in bits_of(r)) for r in power]
        steps >>= 1
    return row


def lead_by_stepping(machine: Machine, channel: int, reference: int) -> int | None:
    """Return the least s with c A^T = c_ref A^(T+s), or None after the whole orbit of the reference."""
    row, other = machine.channels[channel], machine.channels[reference]
    for _ in range(transient(machine)):
        row, other = machine.pulled_back(row), machine.pulled_back(other)
    start, steps = other, 0
    while row != other:
        other, steps = machine.pulled_back(other), steps + 1
        if other == start:
            return None
    return steps


def berlekamp_massey(stream: Sequence[int]) -> int:
    """Return the characteristic polynomial (bit k = x^k) of the shortest recurrence that makes the stream.

    Massey, "Shift-register synthesis and BCH decoding", IEEE Trans. Information Theory 15 (1969).
    """
    current, previous, length, gap = 1, 1, 0, 1
    window = 0
    for position, bit in enumerate(stream):
        window = window << 1 | bit
        if (current & window).bit_count() % 2 == 0:
            gap += 1
        elif 2 * length <= position:
            current, previous, length, gap = current ^ previous << gap, current, position + 1 - length, 1
        else:
            current ^= previous << gap
            gap += 1
    return sum(1 << length - k for k in bits_of(current))


def remainder(polynomial: int, divisor: int) -> int:
    """Return the remainder of a division over GF(2)."""
    while polynomial.bit_length() >= divisor.bit_length():
        polynomial ^= divisor << polynomial.bit_length() - divisor.bit_length()
    return polynomial


def product(polynomials: Iterable[int]) -> int:
    """Return the product over GF(2)."""
    total = 1
    for polynomial in polynomials:
        total = sum_rows(total << k for k in bits_of(polynomial))
    return total


def random_machine(rng: random.Random, size: int, channels: int, affine: bool = True) -> Machine:
    """Return a sparse machine of any structure: derogatory, with a transient, with several registers, as it comes."""
    rows = []
    for k in range(size):
        near = {(k - 1) % size} if rng.random() < 0.8 else {rng.randrange(size)}
        rows.append(row_of(near | set(rng.sample(range(size), min(size, rng.choice((0, 0, 1, 1, 2)))))))
    seen = [row_of(rng.sample(range(size), rng.randint(1, min(size, 4)))) for _ in range(channels)]
    offset = rng.getrandbits(size) if affine else 0
    return Machine(tuple(rows), tuple(seen), offset, rng.getrandbits(channels) if affine else 0)
