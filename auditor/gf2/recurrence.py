"""The shortest linear recurrence of a bit stream."""

from collections.abc import Iterable

from auditor.notation import Polynomial


def berlekamp_massey(bits: Iterable[int]) -> tuple[Polynomial, int]:
    """Return (connection polynomial C, linear complexity L) of a stream s_0, s_1, ... (Massey 1969).

    C has constant term 1 and degree at most L, and s_t = c_1 s_(t-1) + ... + c_L s_(t-L) for t >= L. The
    characteristic polynomial is x^L C(1/x). Both are those of an endless stream of complexity L once 2 L bits
    have been read.
    """
    connection, previous = 1, 1
    complexity, gap = 0, 1
    history = 0  # bit i is s_(t-i)
    for t, bit in enumerate(bits):
        history = history << 1 | bit & 1
        if (connection & history).bit_count() & 1:
            before = connection
            connection ^= previous << gap
            if 2 * complexity <= t:
                complexity, previous, gap = t + 1 - complexity, before, 0
        gap += 1
    return connection, complexity
