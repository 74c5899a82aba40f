"""Scan cells as rows over the state: which bits of the generator a scan cell holds, for every state at once.

With D the greatest delay, a scan cell of delay d holds the row c A^(D - d) of its channel over the state D cycles
before the chains were parked, the transient being over by then. A row is an affine form: bit 0 is the constant, the
other bits are elements. ``Rows`` has shape (N, W), uint64: bit k of word j is bit 64 j + k of the row.
"""

from collections.abc import Sequence
from dataclasses import dataclass
from functools import cached_property
from typing import TypeAlias

import numpy as np
from numpy.typing import NDArray

from auditor.array.scan_array import Chain, Place
from auditor.gf2 import matrix
from auditor.gf2.batch import LinearMap
from auditor.machine.machine import LinearMachine
from auditor.notation import Matrix, Vector
from auditor.phases.streams import reached, read_streams

Rows: TypeAlias = NDArray[np.uint64]
Words: TypeAlias = NDArray[np.uint64]
Indices: TypeAlias = NDArray[np.intp]

_SEED = 0x5CA7


def pack(rows: Sequence[Vector], words: int) -> Rows:
    """Return rows of up to 64 ``words`` bits as an array."""
    data = b"".join(row.to_bytes(8 * words, "little") for row in rows)
    return np.frombuffer(data, dtype="<u8").astype(np.uint64).reshape(-1, words)


@dataclass(frozen=True)
class ChainRows:
    """The rows of chains that a channel with a row feeds and that are not constant, all others left out.

    ``numbers``  which chain of the array each is       ``chains``  these chains
    ``rows``     their channels' rows once the transient is over: bit 0 the constant, ``width`` bits in all
    ``elements`` the machine's elements in the order of the bits 1, 2, ...
    ``step``     (width,) rows of the augmented next-state matrix: a row times it is what is shown a cycle later
    """

    numbers: tuple[int, ...]
    chains: tuple[Chain, ...]
    rows: tuple[Vector, ...]
    elements: tuple[int, ...]
    step: Matrix

    @property
    def width(self) -> int:
        """Bits of a row."""
        return len(self.step)

    @property
    def words(self) -> int:
        """Words of a packed row."""
        return -(-self.width // 64)

    @cached_property
    def packed(self) -> Rows:
        """The rows as an array (chains, words)."""
        return pack(self.rows, self.words)

    @cached_property
    def greatest_delay(self) -> int:
        """D, to which all rows of scan cells refer."""
        return max((chain.greatest_delay for chain in self.chains), default=0)

    @cached_property
    def dimension(self) -> int:
        """The dimension of the space of linear parts that the channels show sooner or later."""
        linear, span = [row >> 1 for row in self.step[1:]], matrix.Span()
        for first in dict.fromkeys(row >> 1 for row in self.rows):
            row = first
            while not span.add(row):
                row = matrix.row_times(row, linear)
        return span.dimension

    def later(self, cycles: int) -> LinearMap:
        """Return the map from packed rows to those that many cycles later."""
        return LinearMap(pack(matrix.power(self.step, cycles), self.words))

    def row_of(self, place: Place) -> Vector:
        """Return the affine form of one scan cell, its inversion included; ``place`` counts in ``chains``."""
        chain = self.chains[place.chain]
        cycles = self.greatest_delay - chain.delay_of(place.cell)
        return matrix.row_times(self.rows[place.chain], matrix.power(self.step, cycles)) ^ chain.inverted(place.cell)


def chain_rows(machine: LinearMachine, chains: Sequence[Chain]) -> ChainRows:
    """Return the rows behind the chains of a machine, free inputs at 0."""
    streams = read_streams(machine)
    channel = {row.name: k for k, row in enumerate(machine.observed) if not row.cut_from}
    found = {
        number: streams.steady[channel[chain.channel]]
        for number, chain in enumerate(chains)
        if streams.steady.get(channel.get(chain.channel, -1), 0) > 1
    }
    seen = reached(streams.step, found.values())
    width = max(seen, default=0) + 1
    step = [streams.step[k] if k in seen else 0 for k in range(width)]
    step[0] = 1
    fed = tuple(chains[number] for number in found)
    return ChainRows(tuple(found), fed, tuple(found.values()), streams.elements[: width - 1], step)


class Keys:
    """Linear fingerprints of 64 bits of the linear parts of rows: the key of a sum is the sum of the keys.

    ``exact``  equal keys are equal linear parts; otherwise equality must be looked at in the rows
    """

    def __init__(self, width: int, seed: int = 0) -> None:
        self.exact = width <= 65
        if self.exact:
            images = np.uint64(1) << np.arange(width - 1, dtype=np.uint64)
        else:
            images = np.random.default_rng((_SEED, seed)).integers(0, 1 << 64, width - 1, dtype=np.uint64)
        self._map = LinearMap(np.concatenate([np.zeros(1, np.uint64), images])[:, None])

    def __call__(self, rows: Rows) -> Words:
        """Return one key for each row; that of a constant is 0."""
        return self._map(np.ascontiguousarray(rows))[:, 0]


def same_linear_part(a: Rows, b: Rows) -> NDArray[np.bool_]:
    """Tell row by row whether two arrays differ in no bit but the constant."""
    difference = a ^ b
    difference[:, 0] &= ~np.uint64(1)
    return np.asarray(~difference.any(axis=1))


def constants(rows: Rows) -> NDArray[np.bool_]:
    """Return the constant of every row."""
    return (rows[:, 0] & np.uint64(1)).astype(bool)
