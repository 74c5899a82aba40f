"""Expressions: precedence, names, messages, depth; random ones against a direct evaluation of their tree."""

import random
import time

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from auditor.cells.expression import ExpressionError, is_read_differently, parse_expression
from auditor.cells.function import BitAlgebra, truth_table

# A tree is a name, 0, 1, or (operator, operands...).
LEAVES = st.sampled_from(["A", "B", "C[2]", "n.x", 0, 1])
TREES = st.recursive(
    LEAVES,
    lambda inner: st.one_of(
        st.tuples(st.just("!"), inner),
        st.tuples(st.sampled_from(["&", "|", "^"]), inner, inner),
    ),
    max_leaves=25,
)
SPELLINGS = {"&": [" & ", "*", " "], "|": ["|", " + "], "^": ["^", " ^ "]}
STRENGTH = {"|": 1, "&": 2, "^": 3, "!": 4}


def write(tree, choose):
    """Return a tree as text with as few parentheses as the precedence of Liberty allows, and its strength."""
    if not isinstance(tree, tuple):
        if isinstance(tree, int):
            return str(tree), 5
        return choose([tree, f'"{tree}"']), 5
    strength = STRENGTH[tree[0]]
    if tree[0] == "!":
        inner, inner_strength = write(tree[1], choose)
        if inner_strength < 4:
            inner = f"({inner})"
        return (f"{inner}'", 5) if choose([True, False]) and inner_strength != 4 else (f"!{inner}", 4)
    (left, left_strength), (right, right_strength) = write(tree[1], choose), write(tree[2], choose)
    left = left if left_strength >= strength else f"({left})"
    right = right if right_strength > strength else f"({right})"
    return f"{left}{choose(SPELLINGS[tree[0]])}{right}", strength


def value(tree, bits):
    """Return the value of a tree under ``bits``."""
    if not isinstance(tree, tuple):
        return tree if isinstance(tree, int) else bits[tree]
    operands = [value(part, bits) for part in tree[1:]]
    if tree[0] == "!":
        return 1 - operands[0]
    return {"&": min(operands), "|": max(operands), "^": sum(operands) % 2}[tree[0]]


@settings(deadline=None)
@given(TREES, st.integers(0, 2**32))
def test_random_expressions_mean_their_tree(tree, seed):
    """Whatever the spelling and however few the parentheses, the truth table is that of the tree."""
    text, _ = write(tree, random.Random(seed).choice)
    function = parse_expression(text)
    for k in range(1 << len(function.inputs)):
        bits = dict.fromkeys(["A", "B", "C[2]", "n.x"], 0)
        bits |= {name: k >> j & 1 for j, name in enumerate(function.inputs)}
        assert function.evaluate(list(map(bits.get, function.inputs)), BitAlgebra(1)) == value(tree, bits)


@pytest.mark.parametrize(
    ("text", "inputs", "table"),
    [
        ("A+B*C", ("A", "B", "C"), 0b11101010),
        ("A^B&C", ("A", "B", "C"), 0b01100000),  # (A ^ B) & C
        ("A B'", ("A", "B"), 0b0010),
        ("!A'", ("A",), 0b10),
        ("(A|B)'", ("A", "B"), 0b0001),
        ("!(A&B)C", ("A", "B", "C"), 0b01110000),
        ('"1A" + "B C"', ("1A", "B C"), 0b1110),
        ('"1" & 1', ("1",), 0b10),  # between quotes it is a name
        ("u1.D[3] ^ 1", ("u1.D[3]",), 0b01),
        (" ( A )\t", ("A",), 0b10),
        ("0", (), 0),
    ],
)
def test_precedence_and_names(text, inputs, table):
    """Prefix and postfix inversion bind most, then ^, then all forms of AND, then OR; quotes make any name."""
    function = parse_expression(text)
    assert function.inputs == inputs
    assert truth_table(function) == table


@pytest.mark.parametrize(
    ("text", "message"),
    [
        ("", 'it is empty, at column 1 of the expression, near ""'),
        ("A &", 'it ends where a pin is expected, at column 4 of the expression, near "A &"'),
        ("A & | B", "'|' stands where a pin is expected, at column 5 of the expression, near \"A & | B\""),
        ("'A", '"\'" stands where a pin is expected, at column 1 of the expression, near "\'A"'),
        ("()", "')' stands where a pin is expected, at column 2 of the expression, near \"()\""),
        ("A)", "')' closes nothing, at column 2 of the expression, near \"A)\""),
        ("(A", 'a parenthesis is not closed, at column 3 of the expression, near "(A"'),
        ("A ~ B", "unexpected '~', at column 3 of the expression, near \"A ~ B\""),
        ('A "B', 'unexpected \'"\', at column 3 of the expression, near "A "B"'),
    ],
)
def test_a_broken_expression_says_what_stands_where(text, message):
    """Every error names the sign and its column."""
    with pytest.raises(ExpressionError) as caught:
        parse_expression(text)
    assert str(caught.value) == message


@pytest.mark.parametrize(
    ("text", "doubtful"),
    [
        ("A ^ B C", True),
        ("A B ^ C", True),
        ("A (B) ^ C", True),
        ("(A ^ B C) & D", True),
        ("A ^ (B C)", False),
        ("(A ^ B) C", False),
        ("A ^ B & C D", False),
        ("A B | C ^ D", False),
        ("A ^ B & C", False),
    ],
)
def test_doubtful_mixtures_are_recognised(text, doubtful):
    """Only ^ beside juxtaposition within one run of operands is doubtful."""
    assert is_read_differently(text) is doubtful


def test_depth_costs_no_stack_and_no_time():
    """A hundred thousand parentheses or inversions parse and evaluate in a moment."""
    depth = 100_000
    start = time.perf_counter()
    nested = parse_expression("(" * depth + "A" + ")" * depth)
    inverted = parse_expression("!" * depth + "A")
    chained = parse_expression("!(A ^ " * depth + "B" + ")" * depth)
    assert time.perf_counter() - start < 5
    assert truth_table(nested) == truth_table(inverted) == 0b10
    assert truth_table(chained) == 0b1100  # an even number of inversions and of A cancels: B is left
