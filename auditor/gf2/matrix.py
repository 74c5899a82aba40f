"""Matrices over GF(2) as sequences of row ints: bit k of row i is the entry in row i, column k.

A row vector times a matrix is the XOR of the rows it selects, so row spaces are the cheap side and column
questions go through the transpose. Eliminations keep one row per leading bit; sparse rows stay cheap
whatever the size, dense ones are fine up to a few thousand.
"""

from collections.abc import Iterator, Sequence
from functools import reduce
from itertools import compress, count
from operator import xor

from auditor.gf2 import polynomial
from auditor.notation import Matrix, Polynomial, Vector

_DIGIT_VALUES = bytes(digit & 1 for digit in range(256))


def ones(vector: Vector) -> Iterator[int]:
    """Yield the numbers of the elements that are 1, in no promised order."""
    if vector.bit_count() * 16 < vector.bit_length():
        while vector:
            top = vector.bit_length() - 1
            yield top
            vector ^= 1 << top
    else:
        yield from compress(count(), f"{vector:b}"[::-1].encode().translate(_DIGIT_VALUES))


class Span:
    """The space spanned by the rows added so far, with a record of how each vector of it is made from them.

    Row number k (counting the rows added, dependent ones included) is bit k of a combination.
    """

    def __init__(self, rows: Sequence[Vector] = ()) -> None:
        self._by_leading_bit: dict[int, tuple[Vector, Vector]] = {}
        self._added = 0
        for row in rows:
            self.add(row)

    @property
    def dimension(self) -> int:
        """The number of independent rows among those added."""
        return len(self._by_leading_bit)

    def reduce(self, vector: Vector) -> tuple[Vector, Vector]:
        """Return (rest, combination): vector = rest + the rows of the combination, rest 0 if and only if inside."""
        rest, combination, aside = vector, 0, 0
        while rest:
            entry = self._by_leading_bit.get(rest.bit_length())
            if entry is None:
                # A leading bit that no row has stays in the rest; what is below it may still be reduced.
                leading = 1 << rest.bit_length() - 1
                aside |= leading
                rest ^= leading
            else:
                rest ^= entry[0]
                combination ^= entry[1]
        return aside, combination

    def add(self, row: Vector) -> Vector:
        """Add a row. Return 0 if it was independent, else the combination, itself included, that gives zero."""
        rest, combination = row, 1 << self._added
        self._added += 1
        while rest:
            entry = self._by_leading_bit.get(rest.bit_length())
            if entry is None:
                self._by_leading_bit[rest.bit_length()] = rest, combination
                return 0
            rest ^= entry[0]
            combination ^= entry[1]
        return combination


def row_times(row: Vector, matrix: Sequence[Vector]) -> Vector:
    """Return the row vector times the matrix."""
    return reduce(xor, map(matrix.__getitem__, ones(row)), 0)


def apply(matrix: Sequence[Vector], column: Vector) -> Vector:
    """Return the matrix times the column vector."""
    return sum(((row & column).bit_count() & 1) << i for i, row in enumerate(matrix))


def multiply(a: Sequence[Vector], b: Sequence[Vector]) -> Matrix:
    """Return the product A B; A has as many columns as B has rows."""
    return [row_times(row, b) for row in a]


def transpose(matrix: Sequence[Vector], columns: int) -> Matrix:
    """Return the transpose of a matrix of that many columns."""
    result = [0] * columns
    for i, row in enumerate(matrix):
        for k in ones(row):
            result[k] |= 1 << i
    return result


def identity(n: int) -> Matrix:
    """Return the n x n identity."""
    return [1 << i for i in range(n)]


def power(matrix: Sequence[Vector], exponent: int) -> Matrix:
    """Return A^exponent for a square matrix and an exponent from 0 on."""
    result = identity(len(matrix))
    for digit in f"{exponent:b}" if exponent else "":
        result = multiply(result, result)
        if digit == "1":
            result = multiply(result, matrix)
    return result


def rank(matrix: Sequence[Vector]) -> int:
    """Return the rank."""
    leading: dict[int, Vector] = {}
    for row in matrix:
        rest = row
        while rest:
            other = leading.setdefault(rest.bit_length(), rest)
            if other is rest:
                break
            rest ^= other
    return len(leading)


def solve(rows: Sequence[Vector], target: Vector) -> Vector | None:
    """Return a combination of the rows (bit i = row i) whose sum is the target, None if there is none."""
    rest, combination = Span(rows).reduce(target)
    return None if rest else combination


def kernel(matrix: Sequence[Vector], columns: int) -> list[Vector]:
    """Return a basis of the columns x with A x = 0."""
    span = Span()
    return [relation for column in transpose(matrix, columns) if (relation := span.add(column))]


def solve_columns(matrix: Sequence[Vector], target: Vector, columns: int) -> Vector | None:
    """Return a column x with A x = target, None if there is none."""
    return solve(transpose(matrix, columns), target)


def krylov(row: Vector, matrix: Sequence[Vector], count: int) -> list[Vector]:
    """Return row A^k for k = 0 ... count - 1."""
    rows = []
    for _ in range(count):
        rows.append(row)
        row = row_times(row, matrix)
    return rows


def evaluate_on_row(p: Polynomial, row: Vector, matrix: Sequence[Vector]) -> Vector:
    """Return row p(A), by Horner's rule."""
    result = 0
    for digit in f"{p:b}":
        result = row_times(result, matrix)
        if digit == "1":
            result ^= row
    return result


def annihilator(row: Vector, matrix: Sequence[Vector]) -> Polynomial:
    """Return the polynomial p of least degree with row p(A) = 0; it is 1 for the zero row."""
    span = Span()
    while not (relation := span.add(row)):
        row = row_times(row, matrix)
    return relation


def characteristic_polynomial(matrix: Sequence[Vector]) -> Polynomial:
    """Return det(xI - A) of a square matrix.

    Unit rows are followed under A until they close modulo the space that earlier ones filled. In the basis so
    found A is block triangular with companion blocks, and the polynomial is the product of theirs (Krylov 1931).
    """
    span, product, start = Span(), 1, 0
    for i in range(len(matrix)):
        row = 1 << i
        if not span.reduce(row)[0]:
            continue
        while not (relation := span.add(row)):
            row = row_times(row, matrix)
        # Bits below the start belong to earlier blocks; bit start + k is the k-th power of A in this one.
        block = relation >> start
        product = polynomial.multiply(product, block)
        start += block.bit_length()
    return product


def nilpotency_index(matrix: Sequence[Vector]) -> int:
    """Return the least T with rank A^T = rank A^(T + 1); 0 for an invertible matrix."""
    return len(_kernel_growth(matrix))


def rank_of_cycling_part(matrix: Sequence[Vector]) -> int:
    """Return the rank of A^n, n the size of A: the dimension of the part on which A is invertible."""
    return len(matrix) - sum(_kernel_growth(matrix))


def _kernel_growth(matrix: Sequence[Vector]) -> list[int]:
    """Return by how much the space of rows v with v A^k = 0 grows at k = 1, 2, ..., until it grows no more.

    A vector of the k-th space gives one of the next if it lies in the row space of A, after vectors of this or
    an earlier space that do not have been added to cancel the part outside. So A is eliminated once and each
    vector is lifted once.
    """
    image, obstacles = Span(), Span()
    level = [relation for row in matrix if (relation := image.add(row))]
    kept: list[Vector] = []
    growth = []
    while level:
        growth.append(len(level))
        lifted = []
        for vector in level:
            outside, combination = image.reduce(vector)
            relation = obstacles.add(outside)
            kept.append(combination)
            if relation:
                lifted.append(row_times(relation, kept))
        level = lifted
    return growth
