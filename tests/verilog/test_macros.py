"""Macros: what a definition says and what a use of it stands for."""

import pytest

from auditor.notation import SourcePlace
from auditor.verilog.macros import Macro, MacroError, arguments_of, defined, flat

_PLACE = SourcePlace("f.v", 1)


@pytest.mark.parametrize(
    ("text", "parameters", "body", "rest"),
    [
        (" 4 // four\nx", None, "4", "\nx"),
        ("\nx", None, "", "\nx"),
        (" a \\\n b\nx", None, "a   b", "\nx"),
        (" a // one \\\n b\nx", None, "a    b", "\nx"),
        (" a /* c\n d */ b\n", None, "a   b", "\n"),
        (' "// no comment" \\e//f \n', None, '"// no comment" \\e//f ', "\n"),
        ("(a, b = (1, 2)) a+b\n", (("a", None), ("b", "(1, 2)")), "a+b", "\n"),
        ("() a\n", (), "a", "\n"),
        (" (a)\n", None, "(a)", "\n"),
    ],
)
def test_a_definition_ends_with_its_line(
    text: str, parameters: tuple[tuple[str, str | None], ...] | None, body: str, rest: str
) -> None:
    """Continued lines and comments in it are one line without them; brackets right behind the name are parameters."""
    macro, end = defined("M", text, 0, _PLACE)
    assert macro == Macro("M", parameters, body, _PLACE)
    assert text[end:].lstrip(" ") == rest


@pytest.mark.parametrize(
    ("parameters", "body", "arguments", "text"),
    [
        ((("a", None),), 'a ab a.a \\a  "a" `a 4\'ha', ["X"], 'X ab X.X \\a  "a" `a 4\'ha'),
        ((("n", None),), "u``n``_x", ["7"], "u7_x"),
        ((("a", None), ("b", "2")), "a+b", ["1"], "1+2"),
        ((("a", None), ("b", "2")), "a+b", ["1", ""], "1+2"),
        ((("a", None),), "[a]", [""], "[]"),
        ((), "x", [""], "x"),
        (None, "x``y", [], "xy"),
        ((("a", None),), 'f(`"a`")', ["x"], 'f("x")'),
    ],
)
def test_arguments_take_the_place_of_names(
    parameters: tuple[tuple[str, str | None], ...] | None, body: str, arguments: list[str], text: str
) -> None:
    """Whole names are replaced, not parts of words, strings, escaped names or macros; `` joins (IEEE 1800, 22.5.1)."""
    assert Macro("M", parameters, body).expanded(arguments) == text


@pytest.mark.parametrize(
    ("parameters", "arguments", "message"),
    [
        ((("a", None), ("b", None)), ["1"], "macro `M is given 1 argument"),
        ((("a", None),), ["1", "2"], "macro `M is given 2 arguments"),
        ((), ["1"], "macro `M is given 1 argument"),
    ],
)
def test_a_wrong_number_of_arguments_is_refused(
    parameters: tuple[tuple[str, str | None], ...], arguments: list[str], message: str
) -> None:
    """Too many, or too few without defaults, is an error that counts them."""
    with pytest.raises(MacroError, match=message):
        Macro("M", parameters, "x").expanded(arguments)


def test_lists_of_arguments_end_at_their_bracket() -> None:
    """Brackets, strings and escaped names protect commas; comments and line ends become blanks."""
    text = '(a, {b, c}, f(d,\n e), ",", \\x,y , /* , */ g // )\n) rest'
    assert arguments_of(text, 0) == (["a", "{b, c}", "f(d,  e)", '","', "\\x,y ", "g"], len(text) - len(" rest"))
    assert arguments_of("(a, (b)", 0) is None


def test_an_escaped_name_keeps_the_blank_that_ends_it() -> None:
    """Without it the name would go on into what follows the use."""
    assert flat(" \\a[0] ") == "\\a[0] "
    assert flat(" a[0] ") == "a[0]"
