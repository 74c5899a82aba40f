"""Many elements of one ring GF(2)[x]/(f) at once, as numpy arrays.

``Elements`` has shape (N, W), uint64: a row is an element, bit k of word j the coefficient of x^(64 j + k).
A linear map costs one table look-up and one XOR for each byte of an element, some 20 ns at 128 bits.
"""

from collections.abc import Iterable, Iterator, Sequence
from typing import TypeAlias

import numpy as np
from numpy.typing import NDArray

from auditor.gf2.polynomial import degree, power_modulo, remainder
from auditor.notation import Polynomial

Words: TypeAlias = NDArray[np.uint64]
Elements: TypeAlias = NDArray[np.uint64]

_NIBBLE = 4
BLOCK = 1 << 14  # rows for one numpy call: they and the tables of a linear map fit the second-level cache


class LinearMap:
    """A linear map on packed elements, given by the images of 1, x, x^2, ...: calling it maps an array."""

    def __init__(self, images: Elements) -> None:
        count, words = images.shape
        positions = -(-count // 8)
        padded = np.zeros((positions * 8, words), np.uint64)
        padded[:count] = images
        columns = padded.reshape(positions, 8, words)
        tables = np.zeros((positions, 256, words), np.uint64)
        for bit in range(8):
            tables[:, 1 << bit : 2 << bit] = tables[:, : 1 << bit] ^ columns[:, bit, None]
        self._tables = list(tables)

    def __call__(self, elements: Elements) -> Elements:
        """Return the images, one for each row; the argument's words may be more than the image's."""
        source = _bytes_of(elements)
        result: Elements = self._tables[0].take(source[:, 0], axis=0)
        for position, table in enumerate(self._tables[1:], start=1):
            result ^= table.take(source[:, position], axis=0)
        return result


class Ring:
    """Arithmetic modulo one polynomial f of degree 1 or more."""

    def __init__(self, f: Polynomial) -> None:
        self.f = f
        self.degree = degree(f)
        # Rows of 24 bytes are slower to gather than rows of 32.
        words = -(-self.degree // 64)
        self.words = 4 if words == 3 else words
        powers = self._powers(1, 2 * self.degree)
        self.square = LinearMap(self.pack(powers[::2]))
        self._reduce = LinearMap(self.pack(powers))
        self._times_x = self.multiplier(0b10)

    def _powers(self, start: Polynomial, count: int) -> list[Polynomial]:
        """Return start x^k modulo f for k = 0 ... count - 1."""
        top, powers = 1 << self.degree, []
        for _ in range(count):
            powers.append(start)
            start <<= 1
            if start & top:
                start ^= self.f
        return powers

    def pack(self, values: Iterable[Polynomial]) -> Elements:
        """Return reduced polynomials as an array."""
        size = 8 * self.words
        data = b"".join(value.to_bytes(size, "little") for value in values)
        return np.frombuffer(data, dtype="<u8").astype(np.uint64).reshape(-1, self.words)

    def unpack(self, elements: Elements) -> list[Polynomial]:
        """Return the rows as polynomials."""
        size = 8 * self.words
        data = elements.astype("<u8").tobytes()
        return [int.from_bytes(data[start : start + size], "little") for start in range(0, len(data), size)]

    def multiplier(self, constant: Polynomial) -> LinearMap:
        """Return the map that multiplies by a constant."""
        return LinearMap(self.pack(self._powers(remainder(constant, self.f), self.degree)))

    def multiply(self, a: Elements, b: Elements) -> Elements:
        """Return the products row by row (left-to-right comb with windows of four bits, López and Dahab 2000)."""
        count, words = a.shape
        multiples = np.zeros((1 << _NIBBLE, count, words + 1), np.uint64)
        for bit in range(_NIBBLE):
            base = multiples[1 << bit]
            base[:, :words] = a << np.uint64(bit)
            if bit:
                base[:, 1:] |= a >> np.uint64(64 - bit)
            multiples[(1 << bit) + 1 : 2 << bit] = multiples[1 : 1 << bit] ^ base
        flat = multiples.reshape(-1, words + 1)
        rows = np.arange(count)
        product = np.zeros((count, 2 * words), np.uint64)
        for shift in range(64 - _NIBBLE, -1, -_NIBBLE):
            carry = product[:, :-1] >> np.uint64(64 - _NIBBLE)
            product <<= np.uint64(_NIBBLE)
            product[:, 1:] |= carry
            nibbles = (b >> np.uint64(shift) & np.uint64(15)).astype(np.intp) * count
            for word in range(words):
                product[:, word : word + words + 1] ^= flat.take(nibbles[:, word] + rows, axis=0)
        return self._reduce(product)

    def power(self, elements: Elements, exponent: int) -> Elements:
        """Return every element to one common power, exponent from 0 on (windows of four bits)."""
        ones = np.zeros_like(elements)
        ones[:, 0] = 1
        if not exponent:
            return ones
        digits = f"{exponent:x}"
        table = [ones, elements]
        while len(table) <= max(int(digit, 16) for digit in digits):
            table.append(self.multiply(table[-1], elements))
        result = table[int(digits[0], 16)]
        for digit in digits[1:]:
            for _ in range(_NIBBLE):
                result = self.square(result)
            if digit != "0":
                result = self.multiply(result, table[int(digit, 16)])
        return result

    def powers_of_x(self, exponents: Sequence[int]) -> Elements:
        """Return x^e for each exponent e from 0 on, all ladders climbed together."""
        result = np.zeros((len(exponents), self.words), np.uint64)
        result[:, 0] = 1
        for bit in range(max(exponents, default=0).bit_length() - 1, -1, -1):
            chosen = np.fromiter((exponent >> bit & 1 for exponent in exponents), bool, len(exponents))
            result = self.square(result)
            result[chosen] = self._times_x(result[chosen])
        return result


def geometric_block(ring: Ring, starts: Elements, ratio: Polynomial, count: int) -> Elements:
    """Return starts, starts ratio, ..., starts ratio^(count - 1) one below the other, by doubling."""
    block, done = starts, 1
    while done < count:
        block = np.concatenate([block, ring.multiplier(power_modulo(ratio, done, ring.f))(block)])
        done *= 2
    return block[: count * len(starts)]


def progression(ring: Ring, starts: Elements, ratio: Polynomial, count: int) -> Iterator[Elements]:
    """Yield starts ratio^k for k = 0 ... count - 1, those of one k side by side, in blocks of about ``BLOCK`` rows."""
    together = max(1, min(count, BLOCK // max(1, len(starts))))
    block = geometric_block(ring, starts, ratio, together)
    advance = ring.multiplier(power_modulo(ratio, together, ring.f))
    for done in range(0, count, together):
        yield block[: (count - done) * len(starts)]
        block = advance(block)


def _bytes_of(elements: Elements) -> NDArray[np.uint8]:
    """Return the bytes of each row, least significant first."""
    return np.ascontiguousarray(elements, dtype="<u8").view(np.uint8)
