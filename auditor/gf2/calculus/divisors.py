"""Factors of many polynomials over the irreducible polynomials of a factor base.

Taking remainders is linear. A table holds, for each four coefficients of a polynomial, their remainders modulo all
of the base side by side, so that one polynomial costs an XOR of few long rows, and zeros mark its divisors.
"""

from dataclasses import dataclass

import numpy as np

from auditor.gf2.calculus.factor_base import irreducibles
from auditor.gf2.polynomial import degree, divide, multiply
from auditor.notation import Polynomial


@dataclass(frozen=True, slots=True)
class Factors:
    """A polynomial as ∏ irreducibles[index]^exponent times a rest without factors in the base."""

    exponents: dict[int, int]
    rest: Polynomial


class Divisors:
    """The irreducible polynomials up to a degree and those of their powers that are no larger."""

    def __init__(self, bound: int, size: int) -> None:
        """Prepare for polynomials of degree below ``size``."""
        self._primes = irreducibles(bound).tolist()
        moduli, owners = list(self._primes), list(range(len(self._primes)))
        for index, prime in enumerate(self._primes):
            if 2 * degree(prime) > bound:
                break
            power = multiply(prime, prime)
            while degree(power) <= bound:
                moduli.append(power)
                owners.append(index)
                power = multiply(power, prime)
        self._owners = np.array(owners)
        self._degrees = np.array([degree(self._primes[owner]) for owner in owners])
        self._rows = self._remainders(np.array(moduli, np.int64), size)

    @staticmethod
    def _remainders(moduli: np.ndarray, size: int) -> list[list[np.ndarray]]:
        """Return remainders[k][c]: those of c x^(4 k) modulo all moduli, c of degree below 4."""
        tops = np.array([1 << degree(modulus) for modulus in moduli.tolist()])
        powers, power = [], np.ones_like(moduli)
        power = np.where(tops == 1, 0, power)
        narrow = np.uint16 if int(tops.max()) <= 1 << 16 else np.uint32
        for _ in range(-(-size // 4) * 4):
            powers.append(power.astype(narrow))
            power = power << 1
            power = np.where(power & tops, power ^ moduli, power)
        tables = []
        for k in range(0, len(powers), 4):
            table = [np.zeros_like(powers[0])]
            for image in powers[k : k + 4]:
                table += [row ^ image for row in table]
            tables.append(table)
        return tables

    def of(self, polynomial: Polynomial) -> Factors:
        """Return the factors of a polynomial other than zero; ``ValueError`` if it is longer than prepared for."""
        if polynomial.bit_length() > 4 * len(self._rows):
            raise ValueError("the polynomial is longer than the table of remainders")
        digits = f"{polynomial:x}"[::-1]
        rows = [table[int(digit, 16)] for table, digit in zip(self._rows, digits, strict=False) if digit != "0"]
        total = rows[0].copy()
        for row in rows[1:]:
            total ^= row
        hits = np.flatnonzero(total == 0)
        exponents: dict[int, int] = {}
        for owner in self._owners[hits].tolist():
            exponents[owner] = exponents.get(owner, 0) + 1
        if int(self._degrees[hits].sum()) == degree(polynomial):
            return Factors(exponents, 1)
        return self._complete(polynomial, exponents)

    def _complete(self, polynomial: Polynomial, exponents: dict[int, int]) -> Factors:
        """Divide by the factors found, as often as they go: powers above the bound are in no table."""
        rest = polynomial
        for index, exponent in exponents.items():
            for _ in range(exponent):
                rest = divide(rest, self._primes[index])[0]
        for index in exponents:
            quotient, remainder = divide(rest, self._primes[index])
            while not remainder:
                exponents[index] += 1
                rest = quotient
                quotient, remainder = divide(rest, self._primes[index])
        return Factors(exponents, rest)
