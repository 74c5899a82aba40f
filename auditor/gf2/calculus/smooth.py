"""Which of many polynomials have small factors only.

The product of x^(2^k) + x over b/2 < k <= b holds every irreducible polynomial of degree b or less, as its degree
divides such a k. A polynomial that divides the product is smooth; one with repeated factors may be missed.

The test is bit-sliced (Biham 1997): a word holds one coefficient of 64 polynomials, so that a row operation of long
division is two instructions for all of them. They must have one degree, so they are grouped by it, and the smaller ones
of a group are multiplied by some x: the product holds x many times.
"""

import numpy as np
from numpy.typing import NDArray

from auditor.gf2.batch import Elements, Words

_PADDED = 4  # degrees in one group
_WORDS = 256  # words side by side: the arrays of a test fit the second-level cache
_BITS = 64


def degrees(elements: Elements) -> NDArray[np.int64]:
    """Return the degree of each row, -1 for zero."""
    result = np.full(len(elements), -1, np.int64)
    for word in range(elements.shape[1]):
        column = elements[:, word]
        # Without the bit below its leading one, a number is not rounded up to the next power of two.
        sizes = np.frexp(column & ~(column >> np.uint64(1)))[1]
        result = np.where(column != 0, _BITS * word + sizes - 1, result)
    return result


def are_smooth(elements: Elements, bound: int) -> NDArray[np.bool_]:
    """Return for each row whether it divides the product: then no irreducible factor has a degree above the bound.

    Zero is not smooth. Of smooth polynomials of a few times the bound's degree, a tenth are missed.
    """
    sizes = degrees(elements)
    result = (sizes >= 0) & (sizes <= bound)
    largest = int(sizes.max(initial=0))
    for size in range(bound + 1 + (largest - bound - 1) % _PADDED, largest + 1, _PADDED):
        rows = np.flatnonzero((sizes > size - _PADDED) & (sizes <= size) & (sizes > bound))
        for start in range(0, len(rows), _WORDS * _BITS):
            part = rows[start : start + _WORDS * _BITS]
            padded = _shifted(elements[part], size - sizes[part])
            result[part] = _divide_product(slices(padded, size + 1), bound)[: len(part)]
    return result


def _shifted(elements: Elements, shifts: NDArray[np.int64]) -> Elements:
    """Return each row times x^shift, shifts below 64, with one word more."""
    amounts = shifts.astype(np.uint64)[:, None]
    result = np.zeros((len(elements), elements.shape[1] + 1), np.uint64)
    result[:, :-1] = elements << amounts
    # A shift by 64 is not defined, so the last bit goes separately.
    result[:, 1:] |= elements >> np.uint64(1) >> np.uint64(_BITS - 1) - amounts
    return result


def slices(elements: Elements, count: int) -> Words:
    """Return bit slices, shape (count, words): bit i of word w in row k is coefficient k of element 64 w + i.

    A number of elements that is no multiple of 64 is filled up with zeros.
    """
    size = -(-count // 8)
    width = -(-len(elements) // _BITS)
    data = np.zeros((_BITS * width, size), np.uint8)
    data[: len(elements)] = np.ascontiguousarray(elements, dtype="<u8").view(np.uint8)[:, :size]
    bits = np.unpackbits(data, axis=1, count=count, bitorder="little")
    packed = np.packbits(np.ascontiguousarray(bits.T), axis=1, bitorder="little")
    return packed.view("<u8").astype(np.uint64)


def _divide_product(moduli: Words, bound: int) -> NDArray[np.uint8]:
    """Return for each polynomial, given in slices without zero rows on top, 1 if it divides the product, else 0."""
    size = len(moduli) - 1
    low = moduli[:size]
    scratch = np.empty_like(low)
    squares = _even_powers(low)
    start = (size - 1).bit_length() - 1  # x^(2^start) needs no reduction
    power = np.zeros_like(low)
    power[1 << start] = ~np.uint64(0)
    product: Words | None = None
    for k in range(start + 1, bound + 1):
        power = _square(power, squares, scratch)
        if 2 * k > bound:
            power[1] = ~power[1]
            product = power.copy() if product is None else _multiply(product, power, low, scratch)
            power[1] = ~power[1]
    assert product is not None
    rest = np.bitwise_or.reduce(product, axis=0)
    return np.unpackbits(~rest.astype("<u8").view(np.uint8), bitorder="little")


def _even_powers(low: Words) -> list[Words]:
    """Return x^j modulo the polynomials for even j from the least that is not below their degree up to twice that."""
    size = len(low)
    power = low
    result = [power] if size % 2 == 0 else []
    for exponent in range(size + 1, 2 * size - 1):
        shifted = low & power[-1]
        shifted[1:] ^= power[:-1]
        power = shifted
        if exponent % 2 == 0:
            result.append(power)
    return result


def _square(power: Words, squares: list[Words], scratch: Words) -> Words:
    """Return the square: coefficient i moves to 2 i."""
    size = len(power)
    half = (size + 1) // 2
    result = np.zeros_like(power)
    result[::2] = power[:half]
    for coefficient, image in zip(power[half:], squares, strict=True):
        np.bitwise_and(image, coefficient, out=scratch)
        np.bitwise_xor(result, scratch, out=result)
    return result


def _multiply(a: Words, b: Words, low: Words, scratch: Words) -> Words:
    """Return the product modulo x^size + low, by long multiplication and long division."""
    size = len(low)
    whole = np.zeros((2 * size - 1, *low.shape[1:]), np.uint64)
    for k, coefficient in enumerate(b):
        np.bitwise_and(a, coefficient, out=scratch)
        whole[k : k + size] ^= scratch
    for k in range(size - 2, -1, -1):
        np.bitwise_and(low, whole[k + size], out=scratch)
        whole[k : k + size] ^= scratch
    return whole[:size]
