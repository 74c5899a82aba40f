"""A page of the terminal report: text made harmless, folded to the width, laid out without lines or boxes."""

import unicodedata
from collections.abc import Iterable, Sequence
from dataclasses import dataclass
from itertools import takewhile
from typing import NamedTuple

from rich.cells import cell_len
from rich.console import Console
from rich.text import Text

# In a pipe nothing is folded that a person or a line-wise tool would rather have on one line.
PIPE_WIDTH = 400
EMPTY = "-"
_GAP = 2
_LABEL = 16
_MARGIN = 2


def harmless(text: str, encoding: str) -> str:
    r"""Return text that can do nothing to a terminal: what is not printable there is spelled out, as in ``\x1b``.

    That takes in control codes, marks that turn the direction of writing or pile up on a letter, and what the
    encoding does not have.
    """
    if text.isascii() and text.isprintable():
        return text
    text = "".join(c if _stands_alone(c) else c.encode("unicode_escape").decode("ascii") for c in text)
    return text.encode(encoding, "backslashreplace").decode(encoding)


def _stands_alone(character: str) -> bool:
    """Say whether the character is visible and takes a place of its own."""
    return character.isprintable() and unicodedata.category(character) not in {"Mn", "Me"}


@dataclass(frozen=True, slots=True)
class Column:
    """A column of a table.

    ``numeric``  its cells stand to the right and are folded only where the page is narrower than they are
    ``joined``   it stays on the line of the column before it, unless they are wider than the page
    """

    heading: str
    numeric: bool = False
    joined: bool = False


class Row(NamedTuple):
    """A row of a table, and a remark that follows it on a line of its own."""

    cells: tuple[str, ...]
    remark: str = ""


class Page:
    """Collects lines and prints them at once. Every text that it is given counts as hostile."""

    def __init__(self, console: Console) -> None:
        self.console = console
        self.width = max(20, console.width) if console.is_terminal else PIPE_WIDTH
        self.lines: list[Text] = []

    def show(self) -> None:
        """Print the page: with styles on a terminal, plain in a pipe or where no colour is wanted."""
        whole = Text("\n").join(self.lines)
        if not self.console.is_terminal or self.console.no_color:
            whole = Text(whole.plain)
        self.console.print(whole, soft_wrap=True)

    def heading(self, title: str) -> None:
        """Open a section."""
        self.lines.append(Text())
        self.say(title, margin=0, style="bold")

    def say(self, text: str, margin: int = _MARGIN, style: str = "", first: str = "", first_style: str = "") -> None:
        """Add a paragraph; ``first`` stands in front of its first line, and further lines stand under the text."""
        lead = " " * margin + self._harmless(first)
        for number, line in enumerate(self._fold(self._harmless(text), self.width - len(lead))):
            front = (lead, first_style) if number == 0 else " " * len(lead)
            self.lines.append(Text.assemble(front, (line, style)))

    def entry(self, label: str, text: str, style: str = "") -> None:
        """Add a paragraph with a label in front, as ``clock    clk, rising edge``."""
        self.say(text, first=f"{label:<{_LABEL}}", first_style="dim", style=style)

    def table(self, columns: Sequence[Column], rows: Iterable[Row]) -> None:
        """Add a table. Where its columns do not fit side by side, a row takes several lines, the later ones set in.

        The last column takes what room is left. No cell is cut: what is wider than its column is folded.
        """
        safe = [Row(tuple(map(self._harmless, row.cells)), row.remark) for row in rows]
        natural = [
            max([*map(cell_len, column.heading.split()), *(cell_len(row.cells[k]) for row in safe)])
            for k, column in enumerate(columns)
        ]
        bands = self._bands(columns, natural)
        for number, band in enumerate(bands):
            self._band(columns, band, [column.heading for column in columns], number, heading=True)
        for row in safe:
            for number, band in enumerate(bands):
                if number == 0 or any(row.cells[k] != EMPTY for k in band):
                    self._band(columns, band, row.cells, number)
            if row.remark:
                self.say(row.remark, margin=3 * _MARGIN)

    def _bands(self, columns: Sequence[Column], natural: Sequence[int]) -> list[dict[int, int]]:
        """Distribute the columns over lines; a band maps a column to its width."""
        whole, last = self.width - 3 * _MARGIN, len(columns) - 1
        widths = [
            min(natural[k], whole if column.numeric or k == last else max(16, whole // 3))
            for k, column in enumerate(columns)
        ]
        bands: list[dict[int, int]] = [{}]
        room = self.width - _MARGIN
        for k, column in enumerate(columns):
            following = list(takewhile(lambda other: columns[other].joined, range(k + 1, last + 1)))
            needed = widths[k] if column.joined else sum(widths[other] + _GAP for other in [k, *following]) - _GAP
            # The last column is folded beside the others where a line of its own would save no line.
            folds = k == last and room > whole // 4 and natural[k] <= 2 * room
            if bands[-1] and needed > room and not folds:
                bands.append({})
                room = whole
            bands[-1][k] = min(widths[k], room)
            room -= bands[-1][k] + _GAP
        return bands

    def _band(
        self, columns: Sequence[Column], band: dict[int, int], cells: Sequence[str], number: int, heading: bool = False
    ) -> None:
        """Add the lines of one row in one band; headings stand on the last of their lines, cells on the first."""
        folded = {k: self._fold(cells[k], width) for k, width in band.items()}
        height = max(map(len, folded.values()))
        for line in range(height):
            text = " " * (_MARGIN if number == 0 else 3 * _MARGIN)
            for k, width in band.items():
                at = line - (height - len(folded[k]) if heading else 0)
                piece = folded[k][at] if 0 <= at < len(folded[k]) else ""
                padding = " " * (width - cell_len(piece))
                text += (padding + piece if columns[k].numeric else piece + padding) + " " * _GAP
            if text.strip():
                self.lines.append(Text(text.rstrip(), style="dim" if heading else ""))

    def _harmless(self, text: str) -> str:
        return harmless(text, self.console.encoding)

    def _fold(self, text: str, width: int) -> list[str]:
        """Break at blanks, and inside a word that is wider than the line; at least one line."""
        if cell_len(text) <= width:
            return [text]
        folded = Text(text).wrap(self.console, max(1, width), overflow="fold")
        return [line.plain.rstrip() for line in folded]
