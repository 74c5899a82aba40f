"""The shortest recurrence against exhaustive search and against the matrix."""

from hypothesis import given
from hypothesis import strategies as st

from auditor.gf2.matrix import annihilator, krylov
from auditor.gf2.polynomial import degree, least_common_multiple, reciprocal
from auditor.gf2.recurrence import berlekamp_massey


def _obeys(bits, connection, complexity):
    """Whether the terms from number ``complexity`` on follow from those before."""
    return all(
        sum(bits[t - i] & connection >> i for i in range(complexity + 1)) % 2 == 0 for t in range(complexity, len(bits))
    )


@given(st.lists(st.integers(0, 1), max_size=14))
def test_no_shorter_recurrence_exists(bits):
    """The recurrence holds, and none of lower complexity does."""
    connection, complexity = berlekamp_massey(bits)
    assert connection & 1
    assert degree(connection) <= complexity
    assert _obeys(bits, connection, complexity)
    assert not any(_obeys(bits, c, length) for length in range(complexity) for c in range(1, 2 << length, 2))


def test_a_published_stream():
    """The m-sequence of x^4 + x + 1: connection polynomial x^4 + x^3 + 1, four stages."""
    bits = [0, 0, 0, 1]
    while len(bits) < 30:
        bits.append(bits[-3] ^ bits[-4])
    assert berlekamp_massey(bits) == (0b11001, 4)


@given(st.integers(1, 24).flatmap(lambda n: st.lists(st.integers(0, (1 << n) - 1), min_size=n, max_size=n)))
def test_the_stream_of_a_machine_obeys_its_annihilator(a):
    """The streams of all unit states together have the row's annihilator as their characteristic polynomial."""
    n = len(a)
    rows = krylov(1, a, 2 * n)
    together = 1
    for k in range(n):
        connection, complexity = berlekamp_massey(row >> k for row in rows)
        characteristic = reciprocal(connection) << complexity - degree(connection)
        assert degree(characteristic) == complexity
        together = least_common_multiple(together, characteristic)
    assert together == annihilator(1, a)
