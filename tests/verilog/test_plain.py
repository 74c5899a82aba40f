"""Names, literals, plain values and lists of items."""

import pytest

from auditor.verilog.plain import (
    MAX_DEPTH,
    DepthError,
    Item,
    NotPlainError,
    PlainValues,
    closing,
    literal,
    plain_name,
    split_list,
)
from auditor.verilog.statements import Concatenation, Constant, Expression, Select


@pytest.mark.parametrize(
    ("text", "bits", "sized"),
    [
        ("4'b10_1", "0101", True),
        ("2'b101", "01", True),
        ("4'bx", "xxxx", True),
        ("6'hz1", "zz0001", True),
        ("6'h?1", "zz0001", True),
        ("3 'o 7", "111", True),
        ("8'D200", "11001000", True),
        ("2'dx", "xx", True),
        ("5", "00000000000000000000000000000101", False),
        ("'h1", "00000000000000000000000000000001", False),
    ],
)
def test_literals_have_the_bits_of_the_standard(text: str, bits: str, sized: bool) -> None:
    """Size, filling and cutting follow IEEE 1364-2005, 3.5.1."""
    assert literal(text) == Constant(bits, sized)


@pytest.mark.parametrize("text", ["4'sb1", "1'b2", "0'b1", "9999999999", "4'q1", "3'd1x", "8'o8", "1048577'b0"])
def test_what_is_no_unsigned_vector_is_refused(text: str) -> None:
    """Signed, impossible or unreadable literals raise with the text in the message."""
    with pytest.raises(ValueError, match=text.replace("'", ".")):
        literal(text)


@pytest.mark.parametrize(
    ("text", "value"),
    [
        (" n1 ", "n1"),
        ("", None),
        ("\\a[3] ", "a[3]"),
        ("\\a[3] [2]", Select("a[3]", 2, 2)),
        ("v [ -1 : 2 ]", Select("v", -1, 2)),
        ("1'b0", Constant("0")),
        ("{a, v[1],2'b10}", Concatenation(("a", Select("v", 1, 1), Constant("10")))),
    ],
)
def test_plain_values_are_read(text: str, value: Expression | None) -> None:
    """Nets, selects, literals and flat concatenations need no grammar."""
    assert PlainValues()[text] == value


@pytest.mark.parametrize("text", ["a b", "~a", "{a,{b}}", "wire", "{a,}", "v[W]", "1'b2", "a[1][2]", "\\a", "a$ b"])
def test_other_values_are_left_to_the_grammar(text: str) -> None:
    """What is not surely plain raises, keywords and bad literals included."""
    with pytest.raises(NotPlainError):
        PlainValues()[text]


def test_lists_are_cut_at_outer_commas_with_lines() -> None:
    """Brackets, strings and escaped names protect their commas; each item has the line of its first word."""
    text = 'a(x,y),\n {b,c},\n\n "d,e", \\f,g , h'
    assert [(item.text.strip(), item.line) for item in split_list(text, 5)] == [
        ("a(x,y)", 5),
        ("{b,c}", 6),
        ('"d,e"', 8),
        ("\\f,g", 8),
        ("h", 8),
    ]
    assert list(split_list("", 1)) == [Item("", 1)]


def test_deep_brackets_raise_with_their_line() -> None:
    """Depth is bounded in the text, before any parser sees it."""
    with pytest.raises(DepthError) as caught:
        list(split_list("a,\n" + "(" * (MAX_DEPTH + 1), 1))
    assert caught.value.line == 2
    assert len(list(split_list("(" * MAX_DEPTH, 1))) == 1


def test_the_closing_bracket_is_found() -> None:
    """Brackets in escaped names do not count, and a missing one is -1."""
    assert closing("x(a(\\) )) y", 1, 1) == 9
    assert closing("(a", 0, 1) == -1


def test_an_escaped_name_loses_backslash_and_blank() -> None:
    """The name is what stands between them (IEEE 1364-2005, 3.7.1)."""
    assert [plain_name(text) for text in ("\\a+b\t", "a")] == ["a+b", "a"]
