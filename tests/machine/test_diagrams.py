"""Decision diagrams over linear forms: affine or not, exactly."""

from functools import reduce

import pytest
from hypothesis import given
from hypothesis import strategies as st

from auditor.machine.diagrams import Diagrams, TooLargeError


def brute_affine(table: int, inputs: int) -> bool:
    """Tell by definition whether a truth table is an XOR of inputs and a constant."""
    value = [table >> k & 1 for k in range(1 << inputs)]
    constant = value[0]
    weights = [value[1 << j] ^ constant for j in range(inputs)]
    return all(value[k] == constant ^ (sum(weights[j] & k >> j for j in range(inputs)) & 1) for k in range(1 << inputs))


def diagram_of(algebra: Diagrams, table: int, variables: list[int]) -> int:
    """Build the diagram of a truth table as a sum of products."""
    total = algebra.constant(0)
    for k in range(1 << len(variables)):
        if table >> k & 1:
            product = algebra.constant(1)
            for j, variable in enumerate(variables):
                product = algebra.conjoin(product, variable if k >> j & 1 else algebra.invert(variable))
            total = algebra.disjoin(total, product)
    return total


def test_every_function_of_three_inputs_is_judged_as_by_definition() -> None:
    """All 256 functions of three free inputs are affine exactly when the definition says so."""
    algebra = Diagrams()
    variables = [algebra.variable(1 << k, k) for k in range(3)]
    for table in range(256):
        found = algebra.affine(diagram_of(algebra, table, variables))
        assert (found is not None) == brute_affine(table, 3)
        if found:
            chosen, constant = found
            for k in range(8):
                assert table >> k & 1 == constant ^ (sum(k >> j for j in chosen) & 1)


@given(st.integers(0, 2**16 - 1), st.lists(st.integers(1, 15), min_size=4, max_size=4))
def test_dependent_forms_are_judged_over_the_state(table: int, forms: list[int]) -> None:
    """Where the forms depend on each other the answer is that of the function over the state bits themselves."""
    algebra = Diagrams()
    variables = [algebra.variable(form, k) for k, form in enumerate(forms)]
    freed = algebra.freed(diagram_of(algebra, table, variables))
    over_state = 0
    for state in range(16):
        key = sum(((form & state).bit_count() & 1) << k for k, form in enumerate(forms))
        over_state |= (table >> key & 1) << state
    found = algebra.affine(freed)
    assert (found is not None) == brute_affine(over_state, 4)
    if found:
        row = 0
        for number in found[0]:
            row ^= algebra.forms[number]
        for state in range(16):
            assert over_state >> state & 1 == found[1] ^ ((row & state).bit_count() & 1)


def test_a_sum_of_300_forms_is_a_chain_and_301_are_too_many() -> None:
    """The support limit is a stated bound: at it the answer comes, beyond it the question is undecided."""
    algebra = Diagrams()
    total = algebra.constant(0)
    for k in reversed(range(300)):
        total = algebra.add(total, algebra.variable(1 << (299 - k), k))
    found = algebra.affine(total)
    assert found is not None
    assert len(found[0]) == 300
    with pytest.raises(TooLargeError, match="301 affine nets"):
        algebra.add(total, algebra.variable(1 << 300, 300))


def test_the_node_limit_stops_a_function_without_small_diagram() -> None:
    """A function whose diagram grows exponentially in the given order meets the node limit; later ones still work."""
    algebra = Diagrams(node_limit=2000)
    left = [algebra.variable(1 << k, k) for k in range(16)]
    right = [algebra.variable(1 << (16 + k), 16 + k) for k in range(16)]
    products = [algebra.conjoin(a, b) for a, b in zip(left, right, strict=True)]
    with pytest.raises(TooLargeError, match="work limit"):
        reduce(algebra.disjoin, products)
    assert algebra.affine(algebra.add(left[0], right[0])) == (frozenset({0, 16}), 0)


def test_cofactors_fix_one_form() -> None:
    """A multiplexer with its select fixed is the input selected."""
    algebra = Diagrams()
    select, a, b = (algebra.variable(1 << k, k) for k in range(3))
    multiplexer = algebra.disjoin(algebra.conjoin(select, a), algebra.conjoin(-select, b))
    assert algebra.affine(multiplexer) is None
    for bit in (0, 1):
        assert algebra.affine(algebra.with_constant(multiplexer, 0, bit)) == (frozenset({1 if bit else 2}), 0)


def test_branches_lead_to_every_value() -> None:
    """Following the branches by the bits of an assignment ends at the function's value there."""
    for table in range(256):
        algebra = Diagrams()
        variables = [algebra.variable(1 << k, k) for k in range(3)]
        diagram = diagram_of(algebra, table, variables)
        for assignment in range(8):
            node = diagram
            while algebra.constant_of(node) is None:
                variable, low, high = algebra.branches(node)
                node = high if assignment >> variable & 1 else low
            assert algebra.constant_of(node) == table >> assignment & 1
            bits = {k: assignment >> k & 1 for k in range(3)}
            assert algebra.constant_of(algebra.restricted(diagram, bits)) == table >> assignment & 1
