"""A page of the terminal report: text made harmless, folded to the width, laid out without lines or boxes."""

from collections.abc import Iterable, Sequence
from dataclasses import dataclass
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

    That takes in control codes, marks that turn the direction of writing, and what the encoding does not have.
    """
    if not text.isprintable():
        text = "".join(c if c.isprintable() else c.encode("unicode_escape").decode("ascii") for c in text)
    return text if text.isascii() else text.encode(encoding, "backslashreplace").decode(encoding)


@dataclass(frozen=True, slots=True)
class Column:
    """A column of a table; ``numeric`` ones stand to the right and are folded only where the page is narrower."""

    heading: str
    numeric: bool = False


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
            self._band(columns, band, [column.heading for column in columns], number, "dim")
        for row in safe:
            for number, band in enumerate(bands):
                if number == 0 or any(row.cells[k] != EMPTY for k in band):
                    self._band(columns, band, row.cells, number, "")
            if row.remark:
                self.say(row.remark, margin=3 * _MARGIN)

    def _bands(self, columns: Sequence[Column], natural: Sequence[int]) -> list[dict[int, int]]:
        """Distribute the columns over lines; a band maps a column to its width."""
        bands: list[dict[int, int]] = [{}]
        room = whole = self.width - _MARGIN
        for k, column in enumerate(columns):
            last = k == len(columns) - 1
            most = whole if column.numeric or last else max(16, whole // 3)
            least = min(natural[k], most if not last else whole // 4)
            if bands[-1] and least > room:
                bands.append({})
                room = whole = self.width - 3 * _MARGIN
            width = min(natural[k], room if last else min(most, room))
            bands[-1][k] = width
            room -= width + _GAP
        return bands

    def _band(
        self, columns: Sequence[Column], band: dict[int, int], cells: Sequence[str], number: int, style: str
    ) -> None:
        """Add the lines of one row in one band; headings (the ones with a style) stand on the last line."""
        folded = {k: self._fold(cells[k], width) for k, width in band.items()}
        height = max(map(len, folded.values()))
        margin = _MARGIN if number == 0 else 3 * _MARGIN
        for line in range(height):
            text = " " * margin
            for k, width in band.items():
                at = line - (height - len(folded[k]) if style else 0)
                piece = folded[k][at] if 0 <= at < len(folded[k]) else ""
                padding = " " * (width - cell_len(piece))
                text += (padding + piece if columns[k].numeric else piece + padding) + " " * _GAP
            if text.strip():
                self.lines.append(Text(text.rstrip(), style=style))

    def _harmless(self, text: str) -> str:
        return harmless(text, self.console.encoding)

    def _fold(self, text: str, width: int) -> list[str]:
        """Break at blanks, and inside a word that is wider than the line; at least one line."""
        if cell_len(text) <= width:
            return [text]
        folded = Text(text).wrap(self.console, max(1, width), overflow="fold")
        return [line.plain.rstrip() for line in folded]
