"""Sparse linear equations modulo a large number, made small before they are made dense.

Structured elimination (LaMacchia and Odlyzko 1990; the order of Markowitz 1957): a column that few equations hold
is solved for in the lightest of them, which adds few new entries. What becomes dense is left to ``dense``.
"""

from collections.abc import Iterable, Mapping
from heapq import heapify, heappop, heappush
from math import gcd

from auditor.gf2.calculus.dense import DenseSystem

_DENSITY = 0.3  # part of the entries that may be there before the rest counts as dense
_SPARE = 20  # dense equations beyond the unknowns

Row = dict[int, int]


class SparseSystem:
    """Homogeneous equations Σ a_k y_k = 0 modulo a number, where y_unit = 1."""

    def __init__(self, equations: Iterable[Mapping[int, int]], unit: int, modulus: int) -> None:
        self._unit, self._modulus = unit, modulus
        self._rows: dict[int, Row] = dict(enumerate(map(dict, equations)))
        self._holders: dict[int, set[int]] = {}
        for number, row in self._rows.items():
            for column in row:
                self._holders.setdefault(column, set()).add(number)
        self._holders.pop(unit, None)
        self._queue = [(len(holders), column) for column, holders in self._holders.items()]
        heapify(self._queue)
        self._solved: list[tuple[int, Row]] = []

    def solution(self) -> dict[int, int]:
        """Return the unknowns that the equations determine, the unit among them; ``InternalError`` if they clash."""
        while self._holders and not self._is_dense():
            self._eliminate(self._lightest_column())
        dense = DenseSystem(sorted(self._holders), self._unit, self._modulus)
        by_weight = sorted(self._rows.items(), key=lambda item: (len(item[1]), item[0]))
        spare = _SPARE
        for _, row in by_weight:
            if dense.rank == len(self._holders):
                spare -= 1
            if not spare:
                break
            dense.add(row)
        found = dense.solution()
        for column, row in reversed(self._solved):
            if all(other in found for other in row):
                found[column] = -sum(value * found[other] for other, value in row.items()) % self._modulus
        return found

    def _is_dense(self) -> bool:
        entries = sum(map(len, self._holders.values()))
        return entries > _DENSITY * len(self._holders) * len(self._rows)

    def _lightest_column(self) -> int:
        while True:
            weight, column = heappop(self._queue)
            holders = self._holders.get(column)
            if holders is not None and len(holders) == weight:
                return column

    def _eliminate(self, column: int) -> None:
        """Solve for a column in the lightest row that holds it, and replace it in the others."""
        holders = self._holders[column]
        candidates = sorted(holders, key=lambda number: (len(self._rows[number]), number))
        usable = (number for number in candidates if gcd(self._rows[number][column], self._modulus) == 1)
        chosen = next(usable, None)
        if chosen is None:  # no row holds the column, or none can be solved for it
            for number in candidates:
                self._remove_row(number)
            del self._holders[column]
            return
        row = self._remove_row(chosen)
        scale = pow(row.pop(column), -1, self._modulus)
        row = {other: value * scale % self._modulus for other, value in row.items()}
        for number in candidates:
            if number != chosen:
                self._substitute(number, column, row)
        del self._holders[column]
        self._solved.append((column, row))

    def _remove_row(self, number: int) -> Row:
        row = self._rows.pop(number)
        for column in row:
            if column != self._unit:
                self._release(column, number)
        return row

    def _release(self, column: int, number: int) -> None:
        holders = self._holders[column]
        holders.discard(number)
        heappush(self._queue, (len(holders), column))

    def _substitute(self, number: int, column: int, replacement: Row) -> None:
        """Replace column by minus the replacement in one row."""
        row = self._rows[number]
        factor = row.pop(column)
        for other, value in replacement.items():
            before = row.get(other, 0)
            after = (before - factor * value) % self._modulus
            if after:
                row[other] = after
                if not before and other != self._unit:
                    self._holders[other].add(number)
                    heappush(self._queue, (len(self._holders[other]), other))
            elif before:
                del row[other]
                if other != self._unit:
                    self._release(other, number)
