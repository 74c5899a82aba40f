"""A page loses nothing, keeps to its width and lets no text act on the terminal."""

import io
import unicodedata

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from rich.cells import cell_len
from rich.console import Console

from auditor.report.page import Column, Page, Row, harmless

LETTERS = st.text("abcXYZ019[].$ 漢é", max_size=60)


def _page(width: int) -> Page:
    return Page(Console(file=io.StringIO(), width=width, force_terminal=True, color_system=None))


def _marks(*texts: str) -> list[str]:
    """Return the characters other than blanks, sorted: what must survive folding."""
    return sorted(character for text in texts for character in text if not character.isspace())


@settings(deadline=None)
@given(st.integers(40, 140), st.lists(st.tuples(LETTERS, LETTERS, LETTERS, LETTERS), min_size=1, max_size=4), LETTERS)
def test_a_table_keeps_to_the_width_and_loses_no_character(width, rows, remark):
    """Whatever the cells hold, no line is wider than the page and every character of every cell is on it."""
    page = _page(width)
    columns = [Column("name"), Column("long count", True), Column("other", joined=True), Column("taps")]
    page.table(columns, [Row(tuple(cells), remark) for cells in rows])
    lines = [line.plain for line in page.lines]
    assert max(map(cell_len, lines)) <= width
    headings = [column.heading for column in columns]
    assert _marks(*lines) == _marks(*headings, *(text for cells in rows for text in (*cells, remark)))


@settings(deadline=None)
@given(st.integers(40, 140), LETTERS, LETTERS)
def test_a_paragraph_keeps_to_the_width_and_loses_no_character(width, text, name):
    """Paragraphs and labelled entries fold, also inside a word that is wider than the line."""
    page = _page(width)
    page.say(text * 5, first="- ")
    page.entry("label", name * 9)
    lines = [line.plain for line in page.lines]
    assert max(map(cell_len, lines)) <= width
    assert _marks(*lines) == _marks("- ", text * 5, "label", name * 9)


def test_columns_that_do_not_fit_take_a_second_line():
    """Where the columns do not fit side by side, a row takes two lines; where they do, one."""
    columns = [Column("name"), Column("lead", True), Column("nearest"), Column("separation", True, joined=True)]
    cells = ("chain[0]", "1" * 39, "chain[17]", "2" * 38)
    narrow, wide = _page(80), _page(140)
    for page in (narrow, wide):
        page.table(columns, [Row(cells)])
    assert [line.plain.split() for line in wide.lines[1:]] == [list(cells)]
    assert [line.plain.split() for line in narrow.lines[2:]] == [list(cells[:2]), list(cells[2:])]


def test_numbers_stand_under_each_other():
    """Numeric columns are aligned at their last digit."""
    page = _page(80)
    page.table([Column("lead", True), Column("name")], [Row(("7", "a")), Row(("1234567", "b"))])
    assert page.lines[1].plain.index("7") == page.lines[2].plain.index("7")


@pytest.mark.parametrize(
    ("text", "shown"),
    [
        ("plain[3].q", "plain[3].q"),
        ("\x1b[31mred\x1b]0;title\x07", "\\x1b[31mred\\x1b]0;title\\x07"),
        ("a\nb\r\tc\x00\x7f\x9b", "a\\nb\\r\\tc\\x00\\x7f\\x9b"),
        ("\u202egnp\u2066x\u200b", "\\u202egnp\\u2066x\\u200b"),
        ("e\u0301\u20dd", "e\\u0301\\u20dd"),
        ("\ud800", "\\ud800"),
        ("[bold]x[/bold] :smile: [link=http://x]", "[bold]x[/bold] :smile: [link=http://x]"),
        ("漢é", "漢é"),
    ],
)
def test_harmless_text_spells_out_what_could_act(text, shown):
    """Control codes, direction marks, piled-up marks and lone surrogates are spelled out, the rest stays."""
    assert harmless(text, "utf-8") == shown


@settings(deadline=None)
@given(st.text(), st.sampled_from(["utf-8", "ascii", "latin-1", "cp437"]))
def test_harmless_text_can_be_encoded_and_holds_no_control_code(text, encoding):
    """For any text and encoding: what is returned is encodable there and has no character of the control groups."""
    shown = harmless(text, encoding)
    shown.encode(encoding)
    assert not [c for c in shown if unicodedata.category(c) in {"Cc", "Cf", "Cs", "Co", "Cn", "Zl", "Zp", "Mn", "Me"}]
