"""Polynomials over GF(2) as Python ints: bit k is the coefficient of x^k, so x^4 + x + 1 is 0b10011.

Addition is ``^``. The functions are meant for degrees up to a few thousand.
"""

from collections.abc import Iterable

from auditor.notation import Polynomial

# _SPREAD[b] is the byte b with a zero put above every bit: the square of an eight-term polynomial.
_SPREAD = tuple(sum((byte >> k & 1) << 2 * k for k in range(8)) for byte in range(256))
_SPREAD_LOW = bytes(square & 0xFF for square in _SPREAD)
_SPREAD_HIGH = bytes(square >> 8 for square in _SPREAD)


def degree(p: Polynomial) -> int:
    """Return the degree, -1 for the zero polynomial."""
    return p.bit_length() - 1


def multiply(a: Polynomial, b: Polynomial) -> Polynomial:
    """Return the product, by windows of four bits of the shorter factor."""
    if a.bit_length() < b.bit_length():
        a, b = b, a
    if b < 16:
        return _multiply_short(a, b)
    a2, a4, a8 = a << 1, a << 2, a << 3
    a3, a12 = a ^ a2, a4 ^ a8
    table = (0, a, a2, a3, a4, a4 ^ a, a4 ^ a2, a4 ^ a3, a8, a8 ^ a, a8 ^ a2, a8 ^ a3, a12, a12 ^ a, a12 ^ a2, a12 ^ a3)
    product = 0
    for byte in b.to_bytes((b.bit_length() + 7) // 8, "big"):
        product = product << 8 ^ table[byte >> 4] << 4 ^ table[byte & 15]
    return product


def _multiply_short(a: Polynomial, b: Polynomial) -> Polynomial:
    product = 0
    while b:
        if b & 1:
            product ^= a
        a <<= 1
        b >>= 1
    return product


def square(p: Polynomial) -> Polynomial:
    """Return p^2: squaring is additive, so it only puts a zero between neighbouring coefficients."""
    count = (p.bit_length() + 7) // 8
    source = p.to_bytes(count, "little")
    spread = bytearray(2 * count)
    spread[0::2] = source.translate(_SPREAD_LOW)
    spread[1::2] = source.translate(_SPREAD_HIGH)
    return int.from_bytes(spread, "little")


def divide(a: Polynomial, b: Polynomial) -> tuple[Polynomial, Polynomial]:
    """Return quotient and remainder; ``ZeroDivisionError`` for b = 0."""
    if not b:
        raise ZeroDivisionError("division by the zero polynomial")
    size, quotient = b.bit_length(), 0
    while (shift := a.bit_length() - size) >= 0:
        a ^= b << shift
        quotient |= 1 << shift
    return quotient, a


def remainder(a: Polynomial, b: Polynomial) -> Polynomial:
    """Return a modulo b; ``ZeroDivisionError`` for b = 0."""
    if not b:
        raise ZeroDivisionError("division by the zero polynomial")
    size = b.bit_length()
    while (shift := a.bit_length() - size) >= 0:
        a ^= b << shift
    return a


def gcd(a: Polynomial, b: Polynomial) -> Polynomial:
    """Return the greatest common divisor, 0 if both are 0."""
    while b:
        a, b = b, remainder(a, b)
    return a


def inverse(a: Polynomial, f: Polynomial) -> Polynomial:
    """Return the inverse of a modulo f; ``ValueError`` if a and f are not coprime."""
    old, new = f, remainder(a, f)
    old_factor, new_factor = 0, 1
    while new:
        quotient, rest = divide(old, new)
        old, new = new, rest
        old_factor, new_factor = new_factor, old_factor ^ multiply(quotient, new_factor)
    if old != 1:
        raise ValueError(f"{text(a)} has no inverse modulo {text(f)}")
    return remainder(old_factor, f)


def multiply_modulo(a: Polynomial, b: Polynomial, f: Polynomial) -> Polynomial:
    """Return a b modulo f."""
    return remainder(multiply(a, b), f)


def square_modulo(a: Polynomial, f: Polynomial) -> Polynomial:
    """Return a^2 modulo f."""
    return remainder(square(a), f)


def power_modulo(base: Polynomial, exponent: int, f: Polynomial) -> Polynomial:
    """Return base^exponent modulo f; a negative exponent needs an invertible base (``ValueError``)."""
    if exponent < 0:
        base, exponent = inverse(base, f), -exponent
    base = remainder(base, f)
    if base == remainder(2, f):
        return _power_of_x(exponent, f)
    result = remainder(1, f)
    for digit in f"{exponent:b}":
        result = square_modulo(result, f)
        if digit == "1":
            result = multiply_modulo(result, base, f)
    return result


def _power_of_x(exponent: int, f: Polynomial) -> Polynomial:
    result = remainder(1, f)
    for digit in f"{exponent:b}":
        result = square(result)
        if digit == "1":
            result <<= 1
        result = remainder(result, f)
    return result


def derivative(p: Polynomial) -> Polynomial:
    """Return the formal derivative: the odd exponents, each lowered by one."""
    count = (p.bit_length() + 7) // 8
    return p >> 1 & int.from_bytes(b"\x55" * count, "little")


def reciprocal(p: Polynomial) -> Polynomial:
    """Return x^d p(1/x), d the degree of p: the coefficients reversed.

    A factor x^k of p is therefore lost: the reciprocal has degree d - k and a constant term.
    """
    return int(f"{p:b}"[::-1], 2)


def least_common_multiple(a: Polynomial, b: Polynomial) -> Polynomial:
    """Return the least common multiple; 0 if either is 0."""
    return multiply(a, divide(b, gcd(a, b))[0]) if a and b else 0


def exponents(p: Polynomial) -> tuple[int, ...]:
    """Return the exponents of the terms of p, descending."""
    top = degree(p)
    return tuple(top - position for position, digit in enumerate(f"{p:b}") if digit == "1")


def from_exponents(terms: Iterable[int]) -> Polynomial:
    """Return the sum of x^k over the terms; equal terms cancel."""
    p = 0
    for term in terms:
        p ^= 1 << term
    return p


def text(p: Polynomial) -> str:
    """Return p as in ``x^4 + x + 1``; the zero polynomial is ``0``."""
    names = {0: "1", 1: "x"}
    return " + ".join(names.get(k, f"x^{k}") for k in exponents(p)) or "0"
