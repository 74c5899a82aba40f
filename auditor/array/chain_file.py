"""Reads the scan chains from a CSV file with a header line, in one of two forms.

    channel,length                         channel,cell,delay,inverted
    so[0],200                              so[0],u_core.r1_ff,1,0
    so[1],180                              so[0],u_core.r2_ff,2,1

In the second form a line is a scan cell; those of a chain stand in order from its scan input, and a channel has one
chain. The columns ``delay`` (default: the place of the cell, from 1) and ``inverted`` (default 0) may be left out.
"""

from collections.abc import Collection, Mapping
from dataclasses import dataclass, field
from pathlib import Path

from auditor.array.csv_file import csv_lines
from auditor.array.scan_array import Chain, ScanArray, ScanCell
from auditor.errors import TroubleList, fail, near_misses
from auditor.notation import SourcePlace
from auditor.plan import LONGEST_CHAIN

_OPTIONAL = ("delay", "inverted")
_REMEDY = "write channel,length or channel,cell,delay,inverted"


def read_chain_file(path: Path, channels: Collection[str]) -> ScanArray:
    """Return the chains in the file; every channel it names is one of ``channels``. Raises ``InputError``."""
    place = SourcePlace(str(path), 1)
    lines = csv_lines(path, "chains", "--chains", _REMEDY)
    header = next(lines, (1, []))[1]
    reader = _Reader(str(path), channels)
    if header == ["channel", "length"]:
        for number, words in lines:
            reader.chain(number, dict(zip(header, words, strict=False)), len(words) == 2)
    elif header[:2] == ["channel", "cell"] and set(header[2:]) <= set(_OPTIONAL) and len(set(header)) == len(header):
        for number, words in lines:
            reader.cell(number, dict(zip(header, words, strict=False)), len(words) == len(header))
    else:
        raise fail(f"the chains have the header {','.join(header) or '(none)'}", _REMEDY, place)
    if not reader.lengths and not reader.troubles.troubles:
        raise fail("the file names no chain", "add a line for each chain or scan cell", place)
    reader.troubles.raise_any()
    return ScanArray(
        tuple(Chain(name, length, tuple(reader.cells.get(name, ()))) for name, length in reader.lengths.items()),
        "file",
    )


@dataclass(slots=True)
class _Reader:
    """Collects chains and what is wrong with their lines."""

    file: str
    channels: Collection[str]
    lengths: dict[str, int] = field(default_factory=dict)
    cells: dict[str, list[ScanCell]] = field(default_factory=dict)
    names: set[str] = field(default_factory=set)
    troubles: TroubleList = field(default_factory=TroubleList)

    def chain(self, line: int, words: Mapping[str, str], whole: bool) -> None:
        """Take a line of the first form."""
        if not self._known(line, words, whole):
            return
        name = words["channel"]
        if name in self.lengths:
            self._wrong(line, f"channel {name} has a chain already", "give each channel one chain")
        elif (length := whole_number(words["length"])) is None or not 1 <= length <= LONGEST_CHAIN:
            remedy = f"give a whole number from 1 to {LONGEST_CHAIN}"
            self._wrong(line, f"the chain of {name} has the length {words['length']}", remedy)
        else:
            self.lengths[name] = length

    def cell(self, line: int, words: Mapping[str, str], whole: bool) -> None:
        """Take a line of the second form."""
        if not self._known(line, words, whole):
            return
        name, cell = words["channel"], words["cell"]
        cells = self.cells.setdefault(name, [])
        delay = whole_number(words.get("delay", str(len(cells) + 1)))
        if not cell or cell in self.names:
            self._wrong(line, f"scan cell {cell} stands twice" if cell else "a scan cell has no name", "mend its name")
        elif delay is None or delay > LONGEST_CHAIN:
            self._wrong(line, f"the delay of {cell} is {words['delay']}", f"give a number from 0 to {LONGEST_CHAIN}")
        elif words.get("inverted", "0") not in ("0", "1"):
            self._wrong(line, f"inverted of {cell} is {words['inverted']}", "write 0 or 1")
        else:
            self.names.add(cell)
            cells.append(ScanCell(cell, delay, words.get("inverted") == "1"))
            self.lengths[name] = len(cells)

    def _known(self, line: int, words: Mapping[str, str], whole: bool) -> bool:
        """Whether the line has all its words and names a channel; what is wrong is noted."""
        if not whole:
            self._wrong(line, "the line has not one word for each column", "give each column of the header a word")
        elif words["channel"] not in self.channels:
            remedy = near_misses(words["channel"], self.channels) or "name one of the channels"
            self._wrong(line, f"{words['channel']} is no channel", remedy)
        return whole and words["channel"] in self.channels

    def _wrong(self, line: int, found: str, remedy: str) -> None:
        self.troubles.add(found, remedy, SourcePlace(self.file, line))


def whole_number(word: str) -> int | None:
    """Return a whole number from 0 on, None for anything else."""
    return int(word) if word.isascii() and word.isdecimal() and len(word) < 20 else None
