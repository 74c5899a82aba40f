"""Matrices against exhaustive search and PARI."""

from functools import reduce
from operator import xor

import pytest
from cypari import pari
from hypothesis import given, settings
from hypothesis import strategies as st

from auditor.gf2 import matrix as gf2
from auditor.gf2.polynomial import degree, divide, remainder
from tests.support.algebra import from_pari

matrices = st.integers(1, 9).flatmap(lambda n: st.lists(st.integers(0, (1 << n) - 1), min_size=n, max_size=n))
sparse = st.integers(1, 9).flatmap(
    lambda n: st.lists(st.sampled_from([0, 0, *(1 << k for k in range(n)), 1 | 1 << n - 1]), min_size=n, max_size=n)
)


def _pari_matrix(rows):
    n = len(rows)
    return pari.matrix(n, n, [row >> k & 1 for row in rows for k in range(n)]) * pari("Mod(1,2)")


def _combinations(rows):
    return [reduce(xor, (row for i, row in enumerate(rows) if mask >> i & 1), 0) for mask in range(1 << len(rows))]


@given(st.integers(0, (1 << 400) - 1))
def test_ones_lists_the_set_bits(vector):
    """The numbers of the elements that are 1, for sparse and for dense vectors."""
    assert sum(1 << k for k in gf2.ones(vector)) == vector
    assert sorted(gf2.ones(vector & 1 << 399)) == [399] * (vector >> 399)


@given(matrices, matrices)
def test_products_on_both_sides(a, b):
    """A row goes through a product as through its factors; a column through the transpose as a row."""
    n = min(len(a), len(b))
    a, b = [row & (1 << n) - 1 for row in a[:n]], [row & (1 << n) - 1 for row in b[:n]]
    product = gf2.multiply(a, b)
    for k in range(n):
        assert gf2.row_times(1 << k, product) == gf2.row_times(gf2.row_times(1 << k, a), b) == product[k]
        assert gf2.apply(product, 1 << k) == gf2.apply(a, gf2.apply(b, 1 << k))
        assert gf2.apply(a, 1 << k) == gf2.row_times(1 << k, gf2.transpose(a, n))


@given(matrices, st.integers(0, 12))
def test_powers_are_repeated_products(a, exponent):
    """A^e is A times itself e times, A^0 the identity."""
    assert gf2.power(a, exponent) == reduce(gf2.multiply, [a] * exponent, gf2.identity(len(a)))


@given(matrices)
def test_rank_counts_the_row_space(a):
    """The row space has 2^rank vectors."""
    assert len(set(_combinations(a))) == 2 ** gf2.rank(a)


@given(matrices, st.integers(0, 511))
def test_solutions_exist_exactly_for_vectors_of_the_row_space(rows, target):
    """A combination is found if and only if exhaustive search has one, and it gives the target."""
    combination = gf2.solve(rows, target)
    assert (combination is not None) == (target in _combinations(rows))
    assert combination is None or gf2.row_times(combination, rows) == target


@given(matrices, st.integers(0, 511))
def test_column_questions_against_all_columns(rows, target):
    """A x = b and A x = 0 agree with a search over all columns."""
    n = len(rows)
    target &= (1 << n) - 1
    images = [gf2.apply(rows, x) for x in range(1 << n)]
    x = gf2.solve_columns(rows, target, n)
    assert (x is not None) == (target in images)
    assert x is None or images[x] == target
    assert sorted(_combinations(gf2.kernel(rows, n))) == [x for x in range(1 << n) if not images[x]]


def test_matrices_need_not_be_square():
    """Two rows over three columns: a kernel of dimension one, and a transpose of three rows."""
    rows = [0b011, 0b110]
    assert gf2.kernel(rows, 3) == [0b111]
    assert gf2.transpose(rows, 3) == [0b01, 0b11, 0b10]
    assert gf2.solve_columns(rows, 0b11, 3) in (0b010, 0b101)


def test_a_span_says_how_a_vector_is_made():
    """Independent rows add a dimension, a dependent one names those it is the sum of, a stranger leaves a rest."""
    span = gf2.Span([0b0011, 0b0110])
    assert span.add(0b0101) == 0b111
    assert span.dimension == 2
    assert span.reduce(0b0101) == (0, 0b11)
    rest, combination = span.reduce(0b1011)
    assert rest ^ gf2.row_times(combination, [0b0011, 0b0110]) == 0b1011
    assert rest


@settings(deadline=None)
@given(st.one_of(matrices, sparse))
def test_characteristic_polynomials_are_those_of_pari(a):
    """det(xI - A) of any small matrix agrees with PARI, derogatory ones included."""
    assert gf2.characteristic_polynomial(a) == from_pari(pari.charpoly(_pari_matrix(a)))


@pytest.mark.parametrize("n", [60, 127])
def test_a_large_characteristic_polynomial_is_that_of_pari(n):
    """A dense matrix whose rows are powers of 3 modulo 2^n."""
    rows = [pow(3, 1000 + 97 * i, 1 << n) for i in range(n)]
    assert gf2.characteristic_polynomial(rows) == from_pari(pari.charpoly(_pari_matrix(rows)))


@given(matrices, st.integers(0, 511), st.integers(0, 1 << 12))
def test_polynomials_of_a_matrix_act_on_rows(a, row, p):
    """Row p(A) is the sum of the rows of the Krylov sequence that p selects."""
    row &= (1 << len(a)) - 1
    sequence = gf2.krylov(row, a, 13)
    assert sequence == [gf2.row_times(row, gf2.power(a, k)) for k in range(13)]
    assert gf2.evaluate_on_row(p, row, a) == gf2.row_times(p, sequence)


@given(matrices, st.integers(0, 511))
def test_the_annihilator_is_the_least_polynomial_that_kills_the_row(a, row):
    """It kills the row, no polynomial of lower degree does, and it divides the characteristic polynomial."""
    row &= (1 << len(a)) - 1
    p = gf2.annihilator(row, a)
    assert gf2.evaluate_on_row(p, row, a) == 0
    assert all(gf2.evaluate_on_row(q, row, a) for q in range(1, 1 << degree(p)))
    assert remainder(gf2.characteristic_polynomial(a), p) == 0


@given(st.one_of(matrices, sparse))
def test_the_nilpotency_index_is_where_ranks_stop_falling(a):
    """T is the first exponent at which rank A^T = rank A^(T + 1); that rank is the cycling part's."""
    ranks = [gf2.rank(gf2.power(a, k)) for k in range(len(a) + 2)]
    index = gf2.nilpotency_index(a)
    assert index == next(k for k in range(len(ranks)) if ranks[k] == ranks[k + 1])
    assert gf2.rank_of_cycling_part(a) == ranks[-1]


def test_a_register_with_four_thousand_pipeline_flip_flops():
    """A 127-bit register, a delay line of 3,000 flip-flops and 873 copies one cycle late: T = 3,000."""
    register = [1 << 126 | 1, *(1 << i for i in range(126))]
    line = [1 << i for i in range(126, 3126)]
    copies = [1 << i % 127 for i in range(873)]
    a = register + line + copies
    assert len(a) == 4000
    assert gf2.nilpotency_index(a) == 3000
    assert gf2.rank_of_cycling_part(a) == 127
    assert gf2.rank(a) == 3126
    factor = gf2.characteristic_polynomial(a)
    assert divide(factor, 1 << 3873) == (gf2.characteristic_polynomial(register), 0)
