"""Fractions with small parts, and the pairs of smooth polynomials among their combinations.

The r, s with r = s a modulo m form a lattice over GF(2)[x]. Two consecutive rows of Euclid's algorithm are a basis of
it with all parts near half the degree of m (Blake, Fuji-Hara, Mullin, Vanstone 1984), and small multiples of the two,
added, give as many fractions as it takes until both parts are smooth.
"""

from collections.abc import Callable, Sequence
from dataclasses import dataclass
from functools import cache

import numpy as np
from numpy.typing import NDArray

from auditor.gf2.batch import Elements, Words
from auditor.gf2.calculus.promise import degrees_left
from auditor.gf2.calculus.smooth import are_smooth
from auditor.gf2.calculus.work import Work
from auditor.gf2.polynomial import degree, divide, gcd, multiply
from auditor.notation import Polynomial

Pair = tuple[Polynomial, Polynomial]
Accept = Callable[[int, Polynomial, Polynomial], bool]

_CELLS = 1 << 22  # fractions looked at together
_SCORED = 1 << 18  # of which the small factors are sought together
_TESTED = 1 << 14  # fractions tested before it is asked which searches are at their end
_PROMISING = 3  # one combination in so many is tested at all


@dataclass(frozen=True, slots=True)
class Search:
    """Two polynomials for each part of a fraction: α left[0] + β left[1] over α^k right[0] + β^k right[1]."""

    left: Pair
    right: Pair


def short_fractions(a: Polynomial, m: Polynomial) -> tuple[Pair, Pair]:
    """Return two consecutive (r, s) of Euclid's algorithm, r = s a modulo m, the second r below half the degree."""
    before, now = (m, 0), (a, 1)
    half = degree(m) // 2
    while degree(now[0]) > half:
        quotient, rest = divide(before[0], now[0])
        before, now = now, (rest, before[1] ^ multiply(quotient, now[1]))
    return before, now


def find_smooth(searches: Sequence[Search], power: int, size: int, bound: int, accept: Accept, work: Work) -> list[int]:
    """Offer fractions with both parts smooth until one is accepted for each search; return those without.

    ``power`` is the k of all searches, 1 or 4; ``size`` the number of coefficients of α and β. ``accept`` is called
    with the number of the search and the two parts, fractions with many small factors first.
    """
    unfinished: list[int] = []
    step = max(1, _CELLS >> 2 * size)
    for start in range(0, len(searches), step):
        numbers = range(start, min(start + step, len(searches)))
        work.spend(len(numbers) * len(_coprime(size)))
        left = _Part([searches[number].left for number in numbers], 1, size)
        right = _Part([searches[number].right for number in numbers], power, size)
        unfinished += _offer(left, right, bound, numbers, accept)
    return unfinished


def _offer(left: "_Part", right: "_Part", bound: int, numbers: Sequence[int], accept: Accept) -> list[int]:
    """Offer the fractions of some searches, given by their numbers; return the numbers of those without one."""
    choices = _coprime(left.size)
    promise = (left.degrees_left()[choices] + right.degrees_left()[choices]).T
    order = choices[np.argsort(promise, axis=1, kind="stable")[:, : len(choices) // _PROMISING]]
    unfinished = np.arange(len(numbers))
    start = 0
    while len(unfinished) and start < order.shape[1]:
        end = start + max(16, _TESTED // len(unfinished))
        picked = order[unfinished, start:end]
        start = end
        search, choice = np.repeat(unfinished, picked.shape[1]), picked.reshape(-1)
        above = left.combinations(search, choice)
        rows = np.flatnonzero(are_smooth(above, bound))
        below = right.combinations(search[rows], choice[rows])
        kept = are_smooth(below, bound)
        solved: set[int] = set()
        for k, *parts in zip(search[rows[kept]].tolist(), above[rows[kept]], below[kept], strict=True):
            if k not in solved and accept(numbers[k], *map(_as_polynomial, parts)):
                solved.add(k)
        unfinished = np.array([k for k in unfinished.tolist() if k not in solved], np.intp)
    return [numbers[k] for k in unfinished.tolist()]


class _Part:
    """One part of the fractions of some searches, for all multipliers of one size."""

    def __init__(self, pairs: Sequence[Pair], power: int, size: int) -> None:
        self._power, self.size = power, size
        longest = max(polynomial.bit_length() for pair in pairs for polynomial in pair)
        words = -(-(longest + power * (size - 1)) // 64)
        self._multiples = [self._all_multiples([pair[k] for pair in pairs], words) for k in (0, 1)]

    def _all_multiples(self, polynomials: Sequence[Polynomial], words: int) -> Elements:
        """Return α^power times each polynomial for all α, shape (polynomials, multipliers, words)."""
        result = np.zeros((len(polynomials), 1, words), np.uint64)
        for shift in range(0, self._power * self.size, self._power):
            data = b"".join((polynomial << shift).to_bytes(8 * words, "little") for polynomial in polynomials)
            shifted = np.frombuffer(data, "<u8").astype(np.uint64).reshape(-1, 1, words)
            result = np.concatenate([result, result ^ shifted], axis=1)
        return result

    def degrees_left(self) -> NDArray[np.uint8]:
        """Return what small factors leave of the degrees, shape (choices, searches); see ``promise``."""
        first, second = (multiples[:, 1] for multiples in self._multiples)
        step = max(1, _SCORED >> 2 * self.size)
        blocks = [slice(start, start + step) for start in range(0, len(first), step)]
        return np.concatenate(
            [degrees_left(first[block], second[block], self.size, self._power) for block in blocks], axis=1
        )

    def combinations(self, search: NDArray[np.intp], choice: NDArray[np.int64]) -> Elements:
        """Return the part for each search and its choice of α + 2^size β."""
        first, second = self._multiples
        result: Elements = first[search, choice & (1 << self.size) - 1] ^ second[search, choice >> self.size]
        return result


@cache
def _coprime(size: int) -> NDArray[np.int64]:
    """Return α + 2^size β for all coprime α, β of that many coefficients."""
    pairs = ((alpha, beta) for beta in range(1 << size) for alpha in range(1 << size))
    return np.array([alpha | beta << size for alpha, beta in pairs if gcd(alpha, beta) == 1], np.int64)


def _as_polynomial(words: Words) -> Polynomial:
    return int.from_bytes(words.astype("<u8").tobytes(), "little")
