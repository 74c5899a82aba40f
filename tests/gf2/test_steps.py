"""Baby and giant steps against stepping, in subgroups and with one value or many."""

import pytest

from auditor.errors import InternalError
from auditor.gf2.batch import Ring
from auditor.gf2.polynomial import multiply_modulo, power_modulo
from auditor.gf2.steps import shared_logarithms

F = 0b100011101  # x^8 + x^4 + x^3 + x^2 + 1, primitive: the field polynomial of many published codes


@pytest.mark.parametrize("order", [1, 3, 5, 15, 17, 51, 85, 255])
def test_every_element_of_every_subgroup(order):
    """All elements of a subgroup at once get the number of steps that lead to each."""
    generator = power_modulo(2, 255 // order, F)
    elements = [1]
    while len(elements) < order:
        elements.append(multiply_modulo(elements[-1], generator, F))
    ring = Ring(F)
    assert shared_logarithms(ring, ring.pack(elements), generator, order) == list(range(order))
    for logarithm, element in enumerate(elements):
        assert shared_logarithms(ring, ring.pack([element]), generator, order) == [logarithm]


def test_no_values():
    """Nothing asked, nothing answered, at once."""
    ring = Ring(F)
    assert shared_logarithms(ring, ring.pack([]), 2, 255) == []


def test_an_element_outside_the_group_is_our_own_mistake():
    """X is not among the powers of x^17: the search ends with an error instead of an answer."""
    ring = Ring(F)
    with pytest.raises(InternalError, match="group of order 15"):
        shared_logarithms(ring, ring.pack([1, 2]), power_modulo(2, 17, F), 15)
