"""The bounded search against stepping, and where no logarithm can be had."""

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from auditor.gf2.keys import KeyTable
from auditor.gf2.polynomial import from_exponents, multiply, multiply_modulo, power_modulo, remainder
from auditor.gf2.window import close_pairs


def _by_stepping(values, f, window):
    pairs = []
    for j, value in enumerate(values):
        steps, power = {}, remainder(value, f)
        for d in range(window):
            steps.setdefault(power, d)
            power = remainder(power << 1, f)
        found = ((i, steps.get(remainder(other, f))) for i, other in enumerate(values) if i != j)
        pairs += [(i, j, d) for i, d in found if d is not None and (d or i < j)]
    return sorted(pairs)


@settings(deadline=None, max_examples=300)
@given(st.data())
def test_small_rings_against_stepping(data):
    """Any polynomial with a constant term, irreducible or not, any window, equal values included."""
    n = data.draw(st.integers(1, 9))
    f = data.draw(st.integers(0, (1 << n - 1) - 1)) << 1 | 1 << n | 1
    values = data.draw(st.lists(st.integers(1, (1 << n) - 1), max_size=6))
    window = data.draw(st.one_of(st.integers(0, 40), st.integers(0, 700)))
    assert close_pairs(values, f, window) == _by_stepping(values, f, window)


@pytest.mark.parametrize("window", [2, 3, 17, 1000, 1 << 20])
def test_the_edge_of_the_window(window):
    """At degree 127 a pair window - 1 apart is found, one window apart is not, among 100 other values."""
    f = from_exponents((127, 1, 0))
    values = [pow(3, 900 + 41 * k) >> 300 & (1 << 127) - 1 for k in range(100)]
    near, far = power_modulo(2, window - 1, f), power_modulo(2, window, f)
    values += [multiply_modulo(values[5], near, f), multiply_modulo(values[7], far, f)]
    assert close_pairs(values, f, window) == [(100, 5, window - 1)]


def test_a_product_of_two_registers():
    """Modulo a product the distance must hold in both factors: x^d v is found, v in one factor only is not."""
    left, right = from_exponents((63, 1, 0)), from_exponents((64, 4, 3, 1, 0))
    f = multiply(left, right)
    value = power_modulo(3, 12345, f)
    shifted = multiply_modulo(value, power_modulo(2, 99_999, f), f)
    assert close_pairs([value, shifted, shifted ^ left, shifted ^ right], f, 1 << 18) == [(1, 0, 99_999)]


def test_a_degree_beyond_the_table_of_orders():
    """Degree 266, where the order of x is unknown and no logarithm is possible."""
    f = from_exponents((266, 47, 0))
    values = [power_modulo(3, 1000, f), power_modulo(3, 2000, f)]
    values.append(multiply_modulo(values[1], power_modulo(2, 4321, f), f))
    assert close_pairs(values, f, 10_000) == [(2, 1, 4321)]


def test_wrong_candidates_are_dropped(monkeypatch):
    """With a table that calls everything equal, only the true pairs come through the exact check."""
    f = from_exponents((20, 3, 0))
    values = [power_modulo(3, k, f) for k in range(1, 6)]
    values.append(multiply_modulo(values[2], power_modulo(2, 30, f), f))
    expected = _by_stepping(values, f, 100)
    assert (5, 2, 30) in expected

    def everything(table, keys):
        return ((row, place) for row in range(len(keys)) for place in range(len(table._entries)))

    monkeypatch.setattr(KeyTable, "candidates", everything)
    assert close_pairs(values, f, 100) == expected


def test_what_cannot_be_asked():
    """A polynomial without constant term, a constant, and a zero value are refused."""
    for f in (0b110, 1):
        with pytest.raises(ValueError, match="constant term"):
            close_pairs([1], f, 10)
    with pytest.raises(ValueError, match="zero"):
        close_pairs([1, 0b111], 0b111, 10)


def test_no_values_and_no_window():
    """Nothing is near in an empty list or an empty window; equal values are, from a window of one on."""
    assert close_pairs([], 0b111, 5) == close_pairs([1, 1], 0b111, 0) == []
    assert close_pairs([1, 1, 1], 0b111, 1) == [(0, 1, 0), (0, 2, 0), (1, 2, 0)]
