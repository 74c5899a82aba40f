"""Orders and primitivity against published tables, PARI and stepping."""

import json
from math import prod
from pathlib import Path

import pytest
from cypari import pari
from hypothesis import given, settings
from hypothesis import strategies as st

from auditor.gf2.factorisation import factor
from auditor.gf2.order import factors_of_mersenne, is_primitive, order_in_field, order_of_x
from auditor.gf2.polynomial import degree, from_exponents, multiply, multiply_modulo, square
from tests.support.algebra import pari_order_of_x

CHECKS = Path(__file__).parents[3] / "shared" / "checks"
present = pytest.mark.skipif(not CHECKS.exists(), reason="the published tables do not lie beside this checkout")

# Terms of the published polynomials; orders computed with a computer-algebra system.
STANDARD = {
    "ITU-T O.150 PRBS11": ((11, 9, 0), True, 2**11 - 1),
    "ITU-T O.150 PRBS20": ((20, 3, 0), True, 2**20 - 1),
    "ITU-T O.150 PRBS23": ((23, 18, 0), True, 2**23 - 1),
    "ITU-T O.150 PRBS31": ((31, 28, 0), True, 2**31 - 1),
    "IEEE 802.11 scrambler": ((7, 4, 0), True, 127),
    "IEEE 802.3 clause 49 scrambler": ((58, 39, 0), True, 2**58 - 1),
    "IEEE 802.3 CRC-32": ((32, 26, 23, 22, 16, 12, 11, 10, 8, 7, 5, 4, 2, 1, 0), True, 2**32 - 1),
    "CRC-16 ANSI": ((16, 15, 2, 0), False, 32767),
    "CRC-24 OpenPGP": ((24, 23, 18, 17, 14, 11, 10, 7, 6, 5, 4, 3, 1, 0), False, 2**23 - 1),
    "CRC-10 ATM": ((10, 9, 5, 4, 1, 0), False, 511),
    "CRC-15 CAN": ((15, 14, 10, 8, 7, 4, 3, 0), False, 127),
    "CRC-32K": ((32, 30, 29, 28, 26, 20, 19, 17, 16, 15, 11, 10, 7, 6, 4, 2, 1, 0), False, 114695),
}

# Rows of a widely reprinted table of maximal stage numbers (1996), n = 3 ... 168.
MAXIMAL_STAGES = [
    (8, 6, 5, 4),
    (16, 15, 13, 4),
    (32, 22, 2, 1),
    (64, 63, 61, 60),
    (96, 94, 49, 47),
    (127, 126),
    (128, 126, 101, 99),
    (149, 148, 40, 39),
    (163, 162, 104, 103),
    (168, 166, 153, 151),
]


@pytest.mark.parametrize("n", range(1, 257))
def test_the_table_is_complete_and_its_primes_are_prime(n):
    """Every line multiplies out to 2^n - 1, and PARI proves each of its primes prime."""
    factors = factors_of_mersenne(n)
    assert factors is not None
    assert prod(prime**exponent for prime, exponent in factors.items()) == 2**n - 1
    assert all(pari.isprime(prime) for prime in factors)
    assert list(factors) == sorted(factors)


def test_the_table_ends():
    """Beyond the table there is no answer, and a caller's changes do not reach it."""
    assert factors_of_mersenne(257) is None
    changed = factors_of_mersenne(4)
    assert changed is not None
    changed.clear()
    assert factors_of_mersenne(4) == {3: 1, 5: 1}


def test_how_many_degrees_have_small_primes_only():
    """Of the degrees 8 to 128, 90 have no prime above 38 bits; the other 31 are these."""
    hard = [n for n in range(8, 129) if max(factors_of_mersenne(n) or ()).bit_length() > 38]
    assert hard == [
        *(49, 59, 61, 65, 67, 69, 73, 77, 79, 83, 85, 86, 87, 89, 93, 97, 98, 101, 103, 106, 107, 109, 113),
        *(115, 118, 121, 122, 123, 125, 127, 128),
    ]
    assert 121 - len(hard) == 90


@pytest.mark.parametrize("name", STANDARD)
def test_standard_polynomials(name):
    """Order and primitivity of polynomials of published standards."""
    terms, primitive, order = STANDARD[name]
    f = from_exponents(terms)
    assert is_primitive(f) is primitive
    assert order_of_x(f) == order


@pytest.mark.parametrize("stages", MAXIMAL_STAGES)
def test_maximal_stage_numbers(stages):
    """Stage numbers published as maximal are primitive."""
    f = from_exponents((*stages, 0))
    assert is_primitive(f) is True
    assert order_of_x(f) == 2 ** stages[0] - 1


def test_the_misprint_of_the_stage_table():
    """The row for 102 stages in every copy seen has factors of degree 3, 34 and 65; with 26, 25 it is maximal."""
    misprint = from_exponents((102, 101, 36, 35, 0))
    assert is_primitive(misprint) is False
    assert [degree(g) for g, _ in factor(misprint)] == [3, 34, 65]
    assert is_primitive(from_exponents((102, 101, 26, 25, 0))) is True


@present
def test_all_standard_polynomials():
    """The whole file of standard polynomials: order, primitivity, factors."""
    rows = json.loads((CHECKS / "standard_polynomials.json").read_text(encoding="utf-8"))["rows"]
    assert len(rows) > 20
    for name, row in rows.items():
        f = from_exponents(row["exps"])
        assert (order_of_x(f), is_primitive(f)) == (int(row["order"]), row["primitive"]), name
        assert factor(f) == tuple(sorted((from_exponents(terms), count) for terms, count in row["factors"])), name


@present
def test_the_whole_stage_table():
    """Of the stage numbers for n = 3 ... 168 only those for 102 are not primitive."""
    rows = json.loads((CHECKS / "tap_table_3_168.json").read_text(encoding="utf-8"))["rows"]
    assert len(rows) == 166
    assert [n for n, stages in rows.items() if not is_primitive(from_exponents((*stages, 0)))] == ["102"]


@present
def test_polynomials_wrongly_published_as_maximal():
    """None of those published as maximal by mistake is primitive."""
    rows = json.loads((CHECKS / "not_primitive.json").read_text(encoding="utf-8"))["rows"]
    assert rows
    assert not any(is_primitive(from_exponents(row["exps"])) for row in rows)


def _steps_until_one(a: int, f: int) -> int:
    count, power = 1, a
    while power != 1:
        count, power = count + 1, multiply_modulo(power, a, f)
    return count


@pytest.mark.parametrize("f", range(3, 512, 2))
def test_every_small_polynomial_against_stepping(f):
    """The order of x modulo any polynomial up to degree 8 is the number of steps until 1 comes back."""
    order = _steps_until_one(2 if degree(f) > 1 else 1, f)
    assert order_of_x(f) == order
    assert is_primitive(f) == (factor(f) == ((f, 1),) and order == 2 ** degree(f) - 1)


@settings(deadline=None, max_examples=40)
@given(st.integers(1, (1 << 100) - 1), st.integers(1, (1 << 60) - 1), st.integers(0, 3))
def test_the_order_is_a_period_and_the_least(a, b, doublings):
    """x^order = 1 modulo f, and x^(order / q) is not, for every prime q that divides the order."""
    f = multiply(a | 1, b | 1)
    for _ in range(doublings):
        f = square(f)
    order = order_of_x(f)
    assert order is not None
    x = pari(f"Mod(Mod(1,2)*x, Mod(1,2)*Pol(binary({f})))")
    assert x**order == 1
    assert all(x ** (order // int(q)) != 1 for q in pari.factor(order)[0])


@pytest.mark.parametrize("n", [16, 45, 64, 100, 128, 200])
def test_irreducible_orders_are_those_of_pari(n):
    """The order of x modulo irreducible polynomials agrees with PARI."""
    f = int(pari(f"subst(lift(ffinit(2,{n})),x,2)"))
    assert order_of_x(f) == pari_order_of_x(f)


def test_orders_of_elements_by_stepping():
    """The order of every element of the field of 256 elements is the number of steps until 1."""
    f = 0b100011101
    assert [order_in_field(a, f) for a in range(1, 256)] == [_steps_until_one(a, f) for a in range(1, 256)]


def test_what_has_no_order():
    """Zero has no order, nor has x modulo a polynomial without constant term; such a one is not primitive."""
    with pytest.raises(ValueError, match="zero has no order"):
        order_in_field(0b10011, 0b10011)
    with pytest.raises(ValueError, match="without constant term"):
        order_of_x(0b110)
    assert is_primitive(0b10) is False
    assert order_of_x(1) == 1


def test_beyond_the_table_nothing_is_guessed():
    """An irreducible polynomial of degree 266 has an unknown order, alone or as a factor; reducible ones are known."""
    trinomial = from_exponents((266, 47, 0))
    assert pari(f"polisirreducible(Mod(1,2)*Pol(binary({trinomial})))")
    assert order_of_x(trinomial) is None
    assert order_of_x(multiply(trinomial, 0b111)) is None
    assert is_primitive(trinomial) is None
    assert order_in_field(0b10, trinomial) is None
    assert order_of_x(1 << 300 | 1) == 300
    assert is_primitive(1 << 300 | 1) is False
