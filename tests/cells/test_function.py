"""Operations on functions against truth tables and direct evaluation."""

import itertools

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from auditor.cells.expression import parse_expression
from auditor.cells.function import (
    TERNARY,
    BitAlgebra,
    restrict,
    substitute,
    support,
    truth_table,
    unateness,
)
from auditor.cells.library import Function

NAMES = ("A", "B", "C", "D")


@st.composite
def functions(draw, names=NAMES):
    """Draw a random postfix program over the names."""
    inputs = tuple(draw(st.permutations(names)))
    program, depth = [], 0
    for _ in range(draw(st.integers(1, 20))):
        choices = ["0", "1", *(f"${k}" for k in range(len(inputs)))]
        choices += ["!"] * 4 if depth else []
        choices += ["&", "|", "^"] * 3 if depth > 1 else []
        word = draw(st.sampled_from(choices))
        depth += 0 if word == "!" else -1 if word in "&|^" else 1
        program.append(word)
    program += [draw(st.sampled_from("&|^")) for _ in range(depth - 1)]
    return Function(inputs, tuple(program))


def value(function, bits):
    return function.evaluate([bits[name] for name in function.inputs], BitAlgebra(1))


def assignments(names=NAMES):
    for row in itertools.product((0, 1), repeat=len(names)):
        yield dict(zip(names, row, strict=True))


@settings(deadline=None)
@given(functions())
def test_truth_table_lists_every_assignment(function):
    """Bit k is the value for the assignment in which inputs[j] is bit j of k."""
    table = truth_table(function)
    for k in range(16):
        bits = {name: k >> j & 1 for j, name in enumerate(function.inputs)}
        assert table >> k & 1 == value(function, bits)
    assert table >> 16 == 0


@settings(deadline=None)
@given(functions(), st.dictionaries(st.sampled_from(NAMES), st.integers(0, 1)))
def test_restrict_fixes_inputs_and_leaves_no_constant(function, fixed):
    """The restricted function agrees wherever the fixed inputs have their values, and holds no constant but itself."""
    restricted = restrict(function, fixed)
    assert not set(restricted.inputs) & set(fixed)
    assert {f"${k}" for k in range(len(restricted.inputs))} == {w for w in restricted.program if w[0] == "$"}
    assert restricted.program in (("0",), ("1",)) or not {"0", "1"} & set(restricted.program)
    for bits in assignments():
        assert value(restricted, bits | fixed) == value(function, bits | fixed)


@pytest.mark.parametrize(
    ("text", "fixed", "inputs", "program"),
    [
        ("A & B", {"A": 0}, (), ("0",)),
        ("A & B", {"A": 1}, ("B",), ("$0",)),
        ("A | B", {"B": 1}, (), ("1",)),
        ("A | B", {"B": 0}, ("A",), ("$0",)),
        ("A ^ B", {"A": 0}, ("B",), ("$0",)),
        ("A ^ B", {"A": 1}, ("B",), ("$0", "!")),
        ("A ^ !B", {"A": 1}, ("B",), ("$0",)),
        ("!!A", {}, ("A",), ("$0",)),
        ("(A & B) | (C & !B)", {"B": 1}, ("A",), ("$0",)),
        ("C & A", {}, ("C", "A"), ("$0", "$1", "&")),
    ],
)
def test_restrict_folds(text, fixed, inputs, program):
    """Each folding rule gives the shortest program, inputs in their old order."""
    assert restrict(parse_expression(text), fixed) == Function(inputs, program)


@settings(deadline=None)
@given(functions(), st.dictionaries(st.sampled_from(NAMES), functions()))
def test_substitute_puts_functions_into_functions(function, replacements):
    """Substitution is simultaneous and agrees with evaluating the replacements first."""
    whole = substitute(function, replacements)
    for bits in assignments():
        inner = {name: value(replacements[name], bits) if name in replacements else bits[name] for name in NAMES}
        assert value(whole, bits) == value(function, inner)


@settings(deadline=None)
@given(functions())
def test_unateness_and_support_match_the_definition(function):
    """An input is positive where raising it can only raise the function, negative where it can only lower it."""
    for name, way in unateness(function).items():
        steps = {value(function, bits | {name: 1}) - value(function, bits | {name: 0}) for bits in assignments()} - {0}
        assert way == {(): "none", (1,): "positive", (-1,): "negative", (-1, 1): "mixed"}[tuple(sorted(steps))]
    ways = unateness(function)
    assert support(function) == tuple(name for name in function.inputs if ways[name] != "none")


def test_unateness_of_many_inputs_is_syntactic_and_cautious():
    """Above twelve inputs the inversions in the text decide; A ^ A is then mixed although it is nothing."""
    wide = parse_expression(" & ".join(f"P{k}" for k in range(13)) + " & !N & (X ^ X ^ 1)")
    ways = unateness(wide)
    assert {ways[f"P{k}"] for k in range(13)} == {"positive"}
    assert (ways["N"], ways["X"]) == ("negative", "mixed")
    assert len(support(wide)) == 15
    narrow = parse_expression("P & !N & (X ^ X ^ 1)")
    assert support(narrow) == ("P", "N")


@settings(deadline=None)
@given(functions())
def test_ternary_unknown_covers_both_values(function):
    """Where three-valued evaluation gives 0 or 1, every completion of the unknown inputs gives the same."""
    for row in itertools.product((0, 1, None), repeat=4):
        known = dict(zip(NAMES, row, strict=True))
        result = function.evaluate([known[name] for name in function.inputs], TERNARY)
        if result is not None:
            completions = [b for b in assignments() if all(v is None or b[n] == v for n, v in known.items())]
            assert {value(function, bits) for bits in completions} == {result}


@pytest.mark.parametrize(("text", "result"), [("A & B", 0), ("!A | B", 1), ("A ^ B", None), ("B", None)])
def test_ternary_decides_from_one_operand(text, result):
    """With A = 0 and B unknown, AND and OR are decided by A and XOR is not."""
    function = parse_expression(text)
    assert function.evaluate([{"A": 0, "B": None}[n] for n in function.inputs], TERNARY) == result


def test_bit_algebra_runs_many_evaluations_at_once():
    """Three evaluations in one int: the literal 1 and NOT stay inside the width."""
    function = parse_expression("!(A ^ B) & 1")
    assert function.evaluate([0b011, 0b010], BitAlgebra(3)) == 0b110


def test_a_function_that_was_evaluated_still_equals_one_that_was_not():
    """The numbers kept for speed take no part in equality, hash or text."""
    fresh, used = parse_expression("A & !B"), parse_expression("A & !B")
    truth_table(used)
    assert fresh == used
    assert hash(fresh) == hash(used)
    assert repr(fresh) == repr(used) == "Function(inputs=('A', 'B'), program=('$0', '$1', '!', '&'))"


def test_long_programs_are_handled_without_quadratic_cost():
    """Folding a program of 300,000 words takes a moment."""
    depth = 100_000
    function = Function(("A", "B"), ("$0", *("$1", "&", "!") * depth))
    folded = restrict(function, {"B": 1})
    assert folded == Function(("A",), ("$0",))
    assert len(restrict(function, {}).program) == len(function.program)
