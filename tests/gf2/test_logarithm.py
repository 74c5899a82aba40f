"""Logarithms against stepping, PARI, published identities, and against their own corruption."""

from dataclasses import replace
from itertools import pairwise

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from auditor.errors import InternalError
from auditor.gf2 import logarithm
from auditor.gf2.calculus import field
from auditor.gf2.calculus.table import make_factor_base
from auditor.gf2.effort import Effort
from auditor.gf2.factorisation import is_irreducible
from auditor.gf2.logarithm import logarithms
from auditor.gf2.order import factors_of_mersenne, is_primitive
from auditor.gf2.polynomial import from_exponents, multiply_modulo, power_modulo, remainder
from tests.support.algebra import pari_logarithm


def _primitive(n):
    """Return a primitive polynomial of degree n with many terms."""
    candidates = (1 << n | pow(3, 400 + k) & (1 << n) - 1 | 1 for k in range(100 * n))
    return next(f for f in candidates if is_primitive(f))


def _values(n, count):
    """Return numbers of n bits, none zero."""
    return [pow(3, 900 + 41 * i) >> 300 & (1 << n) - 1 | 1 for i in range(count)]


IRREDUCIBLE = [f for n in range(1, 8) for f in range((1 << n) + 1, 2 << n, 2) if is_irreducible(f)]


@pytest.mark.parametrize("f", IRREDUCIBLE)
def test_every_value_of_every_small_field(f):
    """All values modulo every irreducible polynomial up to degree 7: the number of steps, or None off the orbit."""
    steps, power = {}, 1
    while power not in steps:
        steps[power] = len(steps)
        power = remainder(power << 1, f)
    values = range(1 << f.bit_length() - 1)
    result = logarithms(values, f)
    assert result.values == tuple(steps.get(value) for value in values)
    assert result.modulus == result.order == len(steps)
    assert result.complete


@pytest.mark.parametrize("n", [12, 16, 20])
def test_stepping_in_larger_fields(n):
    """The whole orbit of x of degree 12, and every 97th or 997th of degrees 16 and 20, by stepping."""
    f, stride = _primitive(n), {12: 1, 16: 97, 20: 997}[n]
    power, values = 1, []
    for step in range((1 << n) - 1):
        if step % stride == 0:
            values.append(power)
        power = power << 1 ^ f * (power >> n - 1)
    assert logarithms(values, f).values == tuple(range(0, (1 << n) - 1, stride))


@pytest.mark.parametrize(("n", "count"), [(32, 40), (36, 40), (60, 20), (64, 20), (96, 10), (95, 1)])
def test_logarithms_are_those_of_pari(n, count):
    """Random values modulo random dense primitive polynomials: PARI has the same logarithms."""
    f, values = _primitive(n), _values(n, count)
    assert list(logarithms(values, f).values) == [pari_logarithm(value, f) for value in values]


@pytest.mark.parametrize(("n", "count"), [(49, 4), (59, 2), (61, 2), (65, 2)])
def test_logarithms_by_index_calculus_are_those_of_pari(n, count):
    """The same in degrees where 2^n - 1 has a prime too large to search its group."""
    f, values = _primitive(n), _values(n, count)
    result = logarithms(values, f)
    assert result.complete
    assert list(result.values) == [pari_logarithm(value, f) for value in values]


def test_a_field_where_x_is_no_generator():
    """Modulo an irreducible polynomial of degree 36 with x of lower order, other values have no logarithm."""
    f = next(f for f in (1 << 36 | k for k in range(1, 10_000, 2)) if is_irreducible(f) and not is_primitive(f))
    powers = [power_modulo(2, 12345 * k, f) for k in range(50)]
    result = logarithms([*_values(36, 50), 0, *powers], f)
    assert result.order < 2**36 - 1
    for value, found in zip(_values(36, 50), result.values[:50], strict=True):
        assert (found is not None) == (power_modulo(value, result.order, f) == 1)
        assert found is None or power_modulo(2, found, f) == value
    assert None in result.values[:50]
    assert result.values[50] is None
    assert result.values[51:] == tuple(12345 * k % result.order for k in range(50))


@settings(deadline=None, max_examples=30)
@given(st.lists(st.integers(0, 2**63 - 2), max_size=4))
def test_exponents_come_back(exponents):
    """The logarithm of x^s is s, for any number of values."""
    f = from_exponents((63, 1, 0))
    assert is_primitive(f)
    values = [power_modulo(2, s, f) for s in exponents]
    assert logarithms(values, f).values == tuple(exponents)


def test_shift_and_add():
    """Zech: log(x^a + x^b) = a + log(1 + x^(b - a)), on 200 pairs in degree 64."""
    f = from_exponents((64, 4, 3, 1, 0))  # the primitive polynomial of the ISO 3309 CRC-64
    order = 2**64 - 1
    pairs = [(pow(5, k, order), pow(7, k, order)) for k in range(1, 201)]
    sums = [power_modulo(2, a, f) ^ power_modulo(2, b, f) for a, b in pairs]
    shifted = [1 ^ power_modulo(2, b - a, f) for a, b in pairs]
    left, right = logarithms(sums, f).values, logarithms(shifted, f).values
    assert all(total == (a + (zech or 0)) % order for total, zech, (a, _) in zip(left, right, pairs, strict=True))


def test_large_primes_are_left_out_on_demand():
    """2^127 - 1 is prime, so nothing is left there; at 64 without large primes, the logarithm modulo the rest."""
    alone = logarithms([3, 5], from_exponents((127, 1, 0)), max_prime_bits=38)
    assert (alone.values, alone.modulus, alone.complete) == ((0, 0), 1, False)
    f, values = _primitive(64), _values(64, 10)
    whole, part = logarithms(values, f), logarithms(values, f, max_prime_bits=16)
    assert part.modulus == 3 * 5 * 17 * 257 * 641
    assert part.values == tuple((found or 0) % part.modulus for found in whole.values)
    assert not part.complete
    assert whole.complete


@pytest.mark.parametrize("n", [72, 100, 128, 144, 168])
def test_what_is_known_beyond_the_reach_is_right(n):
    """Known exponents come back modulo the product of the prime powers up to 30 bits, at any number of words."""
    f = _primitive(n)
    exponents = [pow(3, 777 + 31 * k, 2**n - 1) for k in range(20)]
    result = logarithms([power_modulo(2, s, f) for s in exponents], f, max_prime_bits=30)
    assert result.values == tuple(s % result.modulus for s in exponents)
    skipped = [prime for prime in factors_of_mersenne(n) or () if prime.bit_length() > 30]
    assert all(result.modulus % prime for prime in skipped)


@pytest.mark.parametrize("f", [0b10, 0b101, 1, from_exponents((266, 47, 0))])
def test_polynomials_without_logarithms_are_refused(f):
    """x, a reducible polynomial, a constant, and a degree whose order is unknown."""
    with pytest.raises(ValueError, match=r"irreducible polynomial other than x|degree 266 is unknown"):
        logarithms([1], f)


def test_a_wrong_logarithm_is_never_returned(monkeypatch):
    """One of 20 logarithms in one small group is spoilt: the check by exponentiation stops it."""
    right = logarithm.shared_logarithms

    def spoilt(ring, elements, generator, order, work):
        results = right(ring, elements, generator, order, work)
        return [*results[:-1], (results[-1] + 1) % order]

    monkeypatch.setattr(logarithm, "shared_logarithms", spoilt)
    f = _primitive(36)
    for bits in (38, 8):
        with pytest.raises(InternalError, match="failed its check"):
            logarithms(_values(36, 20), f, max_prime_bits=bits)


def test_a_product_adds_logarithms():
    """log(a b) = log a + log b modulo the order."""
    f, values = _primitive(48), _values(48, 30)
    products = [multiply_modulo(a, b, f) for a, b in pairwise(values)]
    singles, sums = logarithms(values, f).values, logarithms(products, f).values
    assert all(s == ((a or 0) + (b or 0)) % (2**48 - 1) for s, (a, b) in zip(sums, pairwise(singles), strict=True))


def test_a_register_of_127_stages():
    """Modulo 2^127 - 1, with x^127 + x + 1: exponents come back, of small powers and others, and other short values."""
    f = from_exponents((127, 1, 0))
    exponents = [0, 1, 2, 63, 64, 126, 127, 2**126, *(pow(3, 90 + k) >> 20 & (1 << 126) - 1 for k in range(5))]
    short = [5, 7, (1 << 64) - 1, (1 << 127) - 1, 1 << 64 | 1]
    result = logarithms([*(power_modulo(2, s, f) for s in exponents), *short], f)
    assert result.complete
    assert result.values[: len(exponents)] == tuple(exponents)
    assert [power_modulo(2, found, f) for found in result.values[len(exponents) :]] == short


def test_a_degree_that_is_seldom_asked_for():
    """Modulo a dense polynomial of degree 131, whose 2^n - 1 has a prime of 123 bits, exponents come back."""
    f = _primitive(131)
    exponents = [0, 1, 130, *(pow(3, 500 + k, 2**131 - 1) for k in range(5))]
    result = logarithms([power_modulo(2, s, f) for s in exponents], f)
    assert result.complete
    assert result.values == tuple(exponents)


def test_index_calculus_where_x_is_no_generator():
    """Modulo irreducible polynomials of degree 49 with x of lower order, with and without the large prime."""
    large = 4432676798593  # 2^49 - 1 = 127 x 4432676798593
    candidates = (f for f in range((1 << 49) + 1, (1 << 49) + 20_000, 2) if is_irreducible(f))
    f = next(f for f in candidates if power_modulo(2, large, f) == 1)
    exponents = [pow(3, 100 + k, large) for k in range(10)]
    result = logarithms([*(power_modulo(2, s, f) for s in exponents), 0], f)
    assert (result.order, result.modulus) == (large, large)
    assert result.values == (*exponents, None)


def test_no_table_is_made_where_none_is_needed():
    """In degree 62 all primes are small; in a field of degree 49 the values can all be zero."""
    made = []

    def table(n, modulus, work):
        made.append(n)
        return make_factor_base(n, modulus, work)

    assert logarithms(_values(62, 3), _primitive(62), effort=Effort(tables=table)).complete
    nothing = logarithms([0], _primitive(49), effort=Effort(tables=table))
    assert (nothing.values, nothing.complete) == ((None,), True)
    assert not made
    assert logarithms([3], _primitive(49), effort=Effort(tables=table)).complete
    assert made == [49]


def test_a_limit_on_work_leaves_out_the_large_primes():
    """What is known is the logarithm modulo the rest, the same whatever the limit allowed before."""
    f, values = _primitive(59), _values(59, 4)
    whole = logarithms(values, f)
    small = 179951  # 2^59 - 1 = 179951 x 3203431780337
    for limit in (0, 1_000, 34_000):
        part = logarithms(values, f, effort=Effort(work_limit=limit))
        assert (part.modulus, part.complete) == (small, False)
        assert part.because == "the limit on work is reached"
        assert part.values == tuple(found % small for found in whole.values)
    assert logarithms(values, f, effort=Effort(work_limit=10**9)) == whole


def test_a_limit_on_work_ends_a_search():
    """Of 2^37 - 1 = 223 x 616318177 a small limit leaves only the small prime; a large one changes nothing."""
    f, values = _primitive(37), _values(37, 4)
    whole, part = logarithms(values, f), logarithms(values, f, effort=Effort(work_limit=1000))
    assert (whole.because, part.because) == ("", "the limit on work is reached")
    assert part.modulus == 223
    assert part.values == tuple(found % 223 for found in whole.values)
    assert logarithms(values, f, effort=Effort(work_limit=10**6)) == whole


def test_a_deadline_that_is_over_leaves_out_what_takes_long():
    """No work begins after it; what costs next to nothing is known all the same."""
    result = logarithms([3, 5], _primitive(59), effort=Effort(deadline=0.0))
    assert (result.modulus, result.because) == (179951, "the limit on time is reached")


def test_beyond_the_index_calculus_the_reason_is_told():
    """2^169 - 1 has a prime of 102 bits, and 169 is beyond the largest degree."""
    result = logarithms([3], _primitive(169))
    assert not result.complete
    assert result.because == "a field of degree 169 is out of reach of the index calculus"


def test_progress_is_told():
    """The stages of the index calculus come in order."""
    phrases = []
    logarithms([3, 5], _primitive(49), effort=Effort(progress=phrases.append))
    stages = [phrase.split()[0] for phrase in phrases]
    assert list(dict.fromkeys(stages))[:4] == ["relations", "linear", "a", "elements"]


@pytest.mark.parametrize("place", [0, 30])
def test_a_wrong_table_is_never_believed(place):
    """With one wrong logarithm in the table there is no result."""
    f, values = _primitive(49), _values(49, 40)

    def spoilt(n, modulus, work):
        base = make_factor_base(n, modulus, work)
        logs = list(base.logs)
        logs[place] = (logs[place] + 1) % modulus
        return replace(base, logs=tuple(logs))

    with pytest.raises(InternalError, match=r"failed its check|contradicts its order"):
        logarithms(values, f, effort=Effort(tables=spoilt))


def test_a_wrong_root_is_never_believed(monkeypatch):
    """A wrong image of x in the canonical field is caught by the check by exponentiation."""
    right = field.root
    monkeypatch.setattr(field, "root", lambda f, canonical: right(f, canonical) ^ 1)
    with pytest.raises(InternalError, match="failed its check"):
        logarithms(_values(49, 5), _primitive(49))
