"""Resolves the directives of Verilog cell models: conditions, macros without arguments, includes.

The result is one text without comments and directives, and where each of its lines comes from. What is defined stays
defined for the files that follow, as IEEE 1364-2005, clause 19, has it.
"""

import os
import re
from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass, field
from pathlib import Path

from auditor.cells.source_text import read_text
from auditor.errors import InputError, TroubleList
from auditor.notation import SourcePlace

_DEEPEST_INCLUDE = 64
_MOST_INCLUDES = 100_000  # for one file given
_LONGEST_TEXT = 1_000_000_000
_MOST_EXPANSIONS = 1000  # of macros in macros, in one use
_LONGEST_EXPANSION = 1_000_000
_STRING = r'"(?:[^"\\\n]|\\.)*+"'
_BLANKED = re.compile(
    rf"""\\\S++ | {_STRING} | //[^\n]*+ | /\*(?s:.*?)(?:\*/|\Z) | \(\*(?!\s*\))(?:{_STRING}|[^*"]|\*(?!\)))*+\*\)""",
    re.VERBOSE,
)
_WORD = re.compile(r"`([A-Za-z_][\w$]*+)?")
_NAME = re.compile(r"\s*+([A-Za-z_][\w$]*+)")
_FILE = re.compile(r'\s*+(?:"([^"]++)"|<([^>]++)>)')
_HARMLESS = {
    "timescale": re.compile(r"\s*+\d++\s*+\w++\s*+/\s*+\d++\s*+\w++"),
    "begin_keywords": re.compile(r'\s*+"[^"]*+"'),
    **dict.fromkeys(("default_nettype", "unconnected_drive"), _NAME),
    **dict.fromkeys(("line", "pragma"), re.compile(r".*+")),
    **dict.fromkeys(
        (
            *("celldefine", "endcelldefine", "resetall", "nounconnected_drive", "end_keywords"),
            *("suppress_faults", "nosuppress_faults", "enable_portfaults", "disable_portfaults"),
            *("delay_mode_path", "delay_mode_distributed", "delay_mode_unit", "delay_mode_zero"),
        ),
        re.compile(""),
    ),
}


@dataclass(slots=True)
class ModelText:
    """A text whose line k (from 0) stands at ``places[k]``."""

    text: str
    places: list[SourcePlace]


@dataclass(slots=True)
class _Condition:
    """An open `` `ifdef ``: whether its lines count now, whether a branch of it did, whether they could at all."""

    counts: bool
    done: bool
    possible: bool
    place: SourcePlace


@dataclass(slots=True)
class _Source:
    """A file being read: its lines, how many are taken, and the conditions open in it."""

    path: Path
    lines: list[str]
    taken: int = 0
    conditions: list[_Condition] = field(default_factory=list)

    @property
    def place(self) -> SourcePlace:
        return SourcePlace(str(self.path), self.taken)

    @property
    def counts(self) -> bool:
        return not self.conditions or self.conditions[-1].counts


class Preprocessor:
    """Reads files one after the other; ``defines`` holds the macros, None for one that takes arguments."""

    def __init__(self, defines: Mapping[str, str], folders: Sequence[Path]) -> None:
        self.defines: dict[str, str | None] = dict(defines)
        self.folders = folders
        self.troubles = TroubleList()
        self._open: list[_Source] = []
        self._lines: list[str] = []
        self._places: list[SourcePlace] = []
        self._told: set[str] = set()
        self._included = self._size = 0

    def read(self, path: Path, text: str, troubles: TroubleList) -> ModelText:
        """Return the text of a file with its includes; troubles are noted."""
        self.troubles = troubles
        self._lines, self._places = [], []
        self._included = self._size = 0
        self._push(path, text)
        while self._open:
            source = self._open[-1]
            if source.taken == len(source.lines):
                for condition in source.conditions:
                    self._trouble("this condition is not ended", "end it with `endif", condition.place)
                self._open.pop()
                continue
            line = source.lines[source.taken]
            source.taken += 1
            if "`" in line:
                self._directives(source, line)
            elif source.counts:
                self._keep(line, source.place)
        return ModelText("\n".join(self._lines), self._places)

    def _keep(self, line: str, place: SourcePlace) -> None:
        """Put a line into the result; what has grown beyond any set of cells is broken off."""
        self._lines.append(line)
        self._places.append(place)
        self._size += len(line)
        if self._size > _LONGEST_TEXT:
            self._trouble("macros and includes make this longer than a gigabyte", "mend them", place)
            self._open.clear()
            self._size = 0

    def _push(self, path: Path, text: str) -> None:
        self._open.append(_Source(path, self._without_comments(path, text).split("\n")))

    def _without_comments(self, path: Path, text: str) -> str:
        """Return the text with blanks for comments and attributes; line ends stay."""

        def replacement(match: re.Match[str]) -> str:
            token = match[0]
            if token[0] in '\\"':
                return token
            if token.startswith("/*") and (len(token) < 4 or not token.endswith("*/")):
                place = SourcePlace(str(path), 1 + text.count("\n", 0, match.start()))
                self._trouble("a comment opens here and is not closed", "close it with */", place)
            return " " + "\n" * token.count("\n")

        return _BLANKED.sub(replacement, text)

    def _directives(self, source: _Source, line: str) -> None:
        """Take a line with directives or macros in it."""
        place, position = source.place, 0
        kept: list[str] = []
        while found := _WORD.search(line, position):
            if source.counts:
                kept.append(line[position : found.start()])
            word, position = found[1] or "", found.end()
            if word in _CONDITIONS:
                position = _CONDITIONS[word](self, source, line, position)
            elif source.counts and word == "include":
                self._include(source, line[position:])
                position = len(line)
            elif source.counts and word in ("define", "undef"):
                position = self._define(source, line, position, word)
            elif source.counts and word in _HARMLESS:
                ended = _HARMLESS[word].match(line, position)
                position = ended.end() if ended else position
            elif source.counts:
                kept.append(self._expanded(word, place))
        if source.counts:
            kept.append(line[position:])
        if any(map(str.strip, kept)):
            for part in "".join(kept).split("\n"):
                self._keep(part, place)

    def _begin_condition(self, source: _Source, line: str, position: int, wanted: bool) -> int:
        name = _NAME.match(line, position)
        if name is None:
            self._trouble("the condition names no macro", "name it", source.place)
        possible = source.counts
        counts = possible and name is not None and (name[1] in self.defines) == wanted
        source.conditions.append(_Condition(counts, counts, possible, source.place))
        return name.end() if name else position

    def _ifdef(self, source: _Source, line: str, position: int) -> int:
        return self._begin_condition(source, line, position, True)

    def _ifndef(self, source: _Source, line: str, position: int) -> int:
        return self._begin_condition(source, line, position, False)

    def _elsif(self, source: _Source, line: str, position: int) -> int:
        name = _NAME.match(line, position)
        if not source.conditions or name is None:
            self._trouble("`elsif without `ifdef or without a name", "mend the conditions", source.place)
            return position
        condition = source.conditions[-1]
        condition.counts = condition.possible and not condition.done and name[1] in self.defines
        condition.done = condition.done or condition.counts
        return name.end()

    def _else(self, source: _Source, _line: str, position: int) -> int:
        if source.conditions:
            condition = source.conditions[-1]
            condition.counts = condition.possible and not condition.done
            condition.done = True
        else:
            self._trouble("`else without `ifdef", "leave it out or mend the conditions", source.place)
        return position

    def _endif(self, source: _Source, _line: str, position: int) -> int:
        if source.conditions:
            source.conditions.pop()
        else:
            self._trouble("`endif without `ifdef", "leave it out or mend the conditions", source.place)
        return position

    def _include(self, source: _Source, rest: str) -> None:
        """Go on in another file, found beside this one or in one of the folders."""
        named = _FILE.match(rest)
        if named is None or rest[named.end() :].strip():
            self._trouble('`include is not followed by one file name in "", alone on its line', "mend it", source.place)
            return
        name = named[1] or named[2]
        self._included += 1
        if len(self._open) >= _DEEPEST_INCLUDE or self._included > _MOST_INCLUDES:
            found = f"files include each other without end, here {name}"
            self._trouble(found, "guard each with `ifndef", source.place)
            self._open.clear()
            return
        candidates = [folder / name for folder in (source.path.parent, *self.folders)]
        path = next((_tidy(candidate) for candidate in candidates if candidate.is_file()), None)
        if path is None:
            self._trouble(f"the included file {name} is missing", "put it beside this one", source.place)
            return
        if path.stat().st_size == 0:
            return
        try:
            self._push(path, read_text(path))
        except InputError as error:
            self.troubles.troubles += error.troubles

    def _define(self, source: _Source, line: str, position: int, word: str) -> int:
        """Define or forget a macro; a definition takes the rest of its line, and more lines after a backslash."""
        name = _NAME.match(line, position)
        if name is None:
            self._trouble(f"`{word} names no macro", "name it", source.place)
            return len(line)
        if word == "undef":
            self.defines.pop(name[1], None)
            return name.end()
        text = line[name.end() :]
        while text.endswith("\\") and source.taken < len(source.lines):
            text = text[:-1] + "\n" + source.lines[source.taken]
            source.taken += 1
        self.defines[name[1]] = None if text.startswith("(") else text.strip()
        return len(line)

    def _expanded(self, word: str, place: SourcePlace) -> str:
        """Return what a macro stands for, macros in it expanded too; each trouble with one is noted once."""
        text = f"`{word}"
        for _ in range(_MOST_EXPANSIONS):
            found = _WORD.search(text)
            if found is None:
                return text
            name = found[1] or ""
            replacement = self.defines.get(name)
            if replacement is None:
                self._no_macro(name, place)
                return ""
            text = text[: found.start()] + replacement + text[found.end() :]
            if len(text) > _LONGEST_EXPANSION:
                break
        self._trouble(f"the macro `{word} grows without end", "mend its definition", place)
        return ""

    def _no_macro(self, name: str, place: SourcePlace) -> None:
        if name in self._told:
            return
        self._told.add(name)
        if name in self.defines:
            self._trouble(f"the macro `{name} takes arguments, which is not read in cell models", "write it out", place)
        else:
            self._trouble(f"the macro `{name} is not defined", f"define it: --define {name}=VALUE", place)

    def _trouble(self, found: str, remedy: str, place: SourcePlace) -> None:
        self.troubles.add(found, remedy, place)


def _tidy(path: Path) -> Path:
    """Return a path without ``..`` in the middle, where that is the same file, so that one file has one name."""
    short = Path(os.path.normpath(path))
    return short if short.is_file() and short.samefile(path) else path


_CONDITIONS: dict[str, Callable[[Preprocessor, _Source, str, int], int]] = {
    "ifdef": Preprocessor._ifdef,
    "ifndef": Preprocessor._ifndef,
    "elsif": Preprocessor._elsif,
    "else": Preprocessor._else,
    "endif": Preprocessor._endif,
}
