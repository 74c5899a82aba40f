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
from auditor.gf2.calculus.smooth import are_smooth
from auditor.gf2.calculus.work import Work
from auditor.gf2.polynomial import degree, divide, gcd, multiply
from auditor.notation import Polynomial

Pair = tuple[Polynomial, Polynomial]

_STAGES = (3, 4, 5, 6)  # the multipliers have this many coefficients, then more
_TOGETHER = 1 << 18  # combinations held at once


@dataclass(frozen=True, slots=True)
class Search:
    """Combinations (α left[0] + β left[1], α^power right[0] + β^power right[1]), power 1 or 4."""

    left: Pair
    right: Pair
    power: int = 1


def short_fractions(a: Polynomial, m: Polynomial) -> tuple[Pair, Pair]:
    """Return two consecutive (r, s) of Euclid's algorithm, r = s a modulo m, the second r below half the degree."""
    before, now = (m, 0), (a, 1)
    half = degree(m) // 2
    while degree(now[0]) > half:
        quotient, rest = divide(before[0], now[0])
        before, now = now, (rest, before[1] ^ multiply(quotient, now[1]))
    return before, now


def find_smooth(
    searches: Sequence[Search], bound: int, accept: Callable[[int, Polynomial, Polynomial], bool], work: Work
) -> list[int]:
    """Offer combinations with both parts smooth until one is accepted for each search; return those without.

    ``accept`` is called with the number of the search and the two parts. Small multipliers are tried first.
    """
    unfinished = list(range(len(searches)))
    for stage, before in zip(_STAGES, (0, *_STAGES), strict=False):
        left_out = []
        choices = _multipliers(stage, before)
        step = max(1, _TOGETHER >> 2 * stage)
        for start in range(0, len(unfinished), step):
            numbers = unfinished[start : start + step]
            work.spend(len(numbers) * len(choices))
            solved: set[int] = set()
            for number, left, right in _smooth_combinations([searches[k] for k in numbers], stage, choices, bound):
                if number not in solved and accept(numbers[number], left, right):
                    solved.add(number)
            left_out += [number for k, number in enumerate(numbers) if k not in solved]
        unfinished = left_out
    return unfinished


@cache
def _multipliers(size: int, before: int) -> NDArray[np.int64]:
    """Return α + 2^size β for all coprime α, β of ``size`` coefficients, without those that have ``before`` only."""
    pairs = ((alpha, beta) for beta in range(1 << size) for alpha in range(1 << size))
    return np.array(
        [alpha | beta << size for alpha, beta in pairs if gcd(alpha, beta) == 1 and (alpha | beta) >> before], np.int64
    )


def _smooth_combinations(
    searches: Sequence[Search], stage: int, choices: NDArray[np.int64], bound: int
) -> list[tuple[int, Polynomial, Polynomial]]:
    """Return (number of the search, left, right) where both parts are smooth, in order."""
    left = _combinations([search.left for search in searches], stage, 1)[:, choices]
    left = left.reshape(-1, left.shape[2])
    rows = np.flatnonzero(are_smooth(left, bound))
    number, choice = rows // len(choices), choices[rows % len(choices)]
    powers = {search.power for search in searches}
    right = _combinations([search.right for search in searches], stage, *powers)[number, choice]
    kept = are_smooth(right, bound)
    parts = zip(number[kept].tolist(), left[rows[kept]], right[kept], strict=True)
    return [(k, _as_polynomial(above), _as_polynomial(below)) for k, above, below in parts]


def _combinations(pairs: Sequence[Pair], stage: int, power: int) -> Elements:
    """Return all combinations of each pair, shape (pairs, 4^stage, words): number α + 2^stage β in its row."""
    vectors = [part << power * bit for pair in pairs for part in pair for bit in range(stage)]
    words = -(-max(vector.bit_length() for vector in vectors) // 64)
    data = b"".join(vector.to_bytes(8 * words, "little") for vector in vectors)
    basis = np.frombuffer(data, "<u8").astype(np.uint64).reshape(len(pairs), 2 * stage, words)
    result = np.zeros((len(pairs), 1, words), np.uint64)
    for k in range(2 * stage):
        result = np.concatenate([result, result ^ basis[:, k, None]], axis=1)
    return result


def _as_polynomial(words: Words) -> Polynomial:
    return int.from_bytes(words.astype("<u8").tobytes(), "little")
