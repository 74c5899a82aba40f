"""Resolves compiler directives: conditions, macros, includes (IEEE 1364-2005, clause 19).

The result is one text without directives, and where each of its lines comes from. Macros stay defined for the files
that follow; a default net type does not. Comments, strings and escaped names are passed over untouched.
"""

import re
from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass, field
from pathlib import Path

from auditor.errors import TroubleList, near_misses
from auditor.notation import SourcePlace
from auditor.verilog.macros import IDENTIFIER, STRING, Macro, MacroError, arguments_of, defined
from auditor.verilog.statements import Lines, Reading
from auditor.verilog.text import SourceText, read_text

MOST_INCLUDES = 10_000
DEEPEST_INCLUDE = 64
DEEPEST_MACRO = 256
MOST_FROM_ONE_USE = 1 << 22  # characters, with all macros in its text; each of these counts for 32 at least
MOST_CHARACTERS = 1 << 27  # from macros, and as many again from includes

_UP_TO_DIRECTIVE = re.compile(rf'(?:[^`\\"/]++|\\\S++|{STRING}|//[^\n]*+|/\*(?s:.*?)(?:\*/|\Z)|[\\"/])*+')
_WORD = re.compile(rf"`({IDENTIFIER})?")
_NAME = re.compile(rf"[ \t]*+({IDENTIFIER})")
_FILE = re.compile(r'[ \t]*+(?:"([^"\n]++)"|<([^>\n]++)>)')
_BRACKET = re.compile(r"\s*+(?=\()")
_LINE = re.compile(r"[^\n]*?(?=/[/*]|\n|\Z)")
_HARMLESS = {
    "timescale": re.compile(r"\s*+\d++\s*+\w++\s*+/\s*+\d++\s*+\w++"),
    "begin_keywords": re.compile(r'\s*+"[^"\n]*+"'),
    "line": _LINE,
    **dict.fromkeys(
        (
            *("celldefine", "endcelldefine", "nounconnected_drive", "end_keywords"),
            *("suppress_faults", "nosuppress_faults", "enable_portfaults", "disable_portfaults"),
            *("delay_mode_path", "delay_mode_distributed", "delay_mode_unit", "delay_mode_zero"),
        ),
        re.compile(""),
    ),
}


@dataclass(slots=True)
class _Condition:
    """An open `` `ifdef ``: whether its text counts now, whether a branch of it did, whether `` `else `` was met."""

    counts: bool
    done: bool
    place: SourcePlace
    last: bool = False


@dataclass(slots=True)
class _Frame:
    """A text that is being read: a file, or the text of a macro (``macro``); ``after`` follows when it ends."""

    text: str
    path: Path
    macro: str = ""
    after: str = ""
    position: int = 0
    counted: int = 0
    line: int = 1
    conditions: list[_Condition] = field(default_factory=list)

    def line_at(self, position: int) -> int:
        """Return the line of a position not before the last one asked for."""
        if not self.macro:
            self.line += self.text.count("\n", self.counted, position)
            self.counted = position
        return self.line


class _StopError(Exception):
    """Going on makes no sense; the trouble is noted."""


class Preprocessor:
    """Reads the files of a run one after the other. ``include`` are the folders behind that of the including file."""

    def __init__(
        self, defines: Mapping[str, str], include: Sequence[Path], troubles: TroubleList, reading: Reading
    ) -> None:
        self.macros = {name: Macro(name, None, value) for name, value in defines.items()}
        self.include, self.troubles, self.reading = include, troubles, reading
        self.undefined: set[str] = set()
        self.expanded = self.taken_in = self.includes = 0

    def run(self, text: str, path: Path) -> SourceText | None:
        """Return a text with its directives resolved, or None after noting why it cannot be."""
        if "`" not in text:
            return SourceText(text, Lines((1,), (str(path),), (1,)))
        before = len(self.troubles.troubles)
        run = _Run(self, _Frame(text, path))
        try:
            run.read()
        except _StopError:
            return None
        if len(self.troubles.troubles) > before:
            return None
        starts, files, firsts = zip(*run.spans, strict=True)
        return SourceText("".join(run.pieces), Lines(starts, files, firsts), tuple(run.net_types))


class _Run:
    """One file and all that it takes in. ``frames`` are the open texts, the innermost last."""

    def __init__(self, owner: Preprocessor, frame: _Frame) -> None:
        self.owner, self.macros = owner, owner.macros
        self.frames, self.files = [frame], [frame]
        self.pieces: list[str] = []
        self.line = 1
        self.from_one_use = 0
        self.spans = [(1, str(frame.path), 1)]
        self.net_types: list[tuple[int, str]] = []

    def read(self) -> None:
        """Read all frames to their ends."""
        while self.frames:
            frame = self.frames[-1]
            plain = _UP_TO_DIRECTIVE.match(frame.text, frame.position)
            end = plain.end() if plain else frame.position
            self._emit(frame.text[frame.position : end])
            frame.position = end
            if end == len(frame.text):
                self._leave(frame)
            else:
                self._directive(frame)

    @property
    def counts(self) -> bool:
        """Whether the text at hand counts, under the conditions that are open in its file."""
        conditions = self.files[-1].conditions
        return not conditions or conditions[-1].counts

    def _emit(self, text: str) -> None:
        lines = text.count("\n")
        self.line += lines
        self.pieces.append(text if self.counts else "\n" * lines)

    def _leave(self, frame: _Frame) -> None:
        """End a frame; behind an included file its includer goes on on a line of its own."""
        self.frames.pop()
        if frame.macro:
            self._emit(frame.after)
            return
        for condition in frame.conditions:
            self._note("a condition begins here and never ends", "end it with `endif", condition.place)
        frame.conditions.clear()
        self.files.pop()
        if self.files:
            self._emit("\n")
            outer = self.files[-1]
            self.spans.append((self.line, str(outer.path), outer.line_at(outer.position)))

    def _directive(self, frame: _Frame) -> None:
        """Read the directive, or the use of a macro, that stands at the frame's position."""
        match = _WORD.match(frame.text, frame.position)
        word = (match[1] if match else None) or ""
        place = SourcePlace(str(self.files[-1].path), self.files[-1].line_at(self.files[-1].position))
        frame.position += 1 + len(word)
        if word in _CONDITIONS:
            self._condition(word, frame, place)
        elif not self.counts:
            return
        elif word in _HARMLESS:
            self._pass(_HARMLESS[word], word, frame, place)
        elif word in _HANDLERS:
            _HANDLERS[word](self, frame, place)
        elif word in self.macros:
            self._use(self.macros[word], frame, place)
        elif not word:
            self._note("found ` alone", "mend the text", place)
        elif word not in self.owner.undefined:
            self.owner.undefined.add(word)
            few = len(self.owner.undefined) < 20
            remedy = (
                few and near_misses(word, self.macros)
            ) or f"give --define {word}=VALUE or the file that defines it"
            self._note(f"macro `{word} is not defined", remedy, place)

    def _pass(self, pattern: re.Pattern[str], word: str, frame: _Frame, place: SourcePlace) -> str:
        """Pass over what belongs to a directive and return it; its line ends are kept."""
        match = pattern.match(frame.text, frame.position)
        if not match:
            self._note(f"directive `{word} is not complete", "mend or remove it", place)
            return ""
        frame.position = match.end()
        self._emit("\n" * match[0].count("\n"))
        return next((group for group in match.groups() if group), "")

    def _condition(self, word: str, frame: _Frame, place: SourcePlace) -> None:
        conditions = self.files[-1].conditions
        name = "" if word in ("else", "endif") else self._pass(_NAME, word, frame, place)
        if word in ("ifdef", "ifndef"):
            possible = self.counts
            counts = possible and (name in self.macros) == (word == "ifdef")
            conditions.append(_Condition(counts, counts or not possible, place))
            return
        if not conditions or (conditions[-1].last and word != "endif"):
            self._note(f"`{word} without an open `ifdef", "remove it or mend what stands before it", place)
        elif word == "endif":
            conditions.pop()
        else:
            open_one = conditions[-1]
            open_one.counts = not open_one.done and (word == "else" or name in self.macros)
            open_one.done |= open_one.counts
            open_one.last = word == "else"

    def _define(self, frame: _Frame, place: SourcePlace) -> None:
        name = self._pass(_NAME, "define", frame, place)
        if not name:
            return
        if name in _CONDITIONS or name in _HARMLESS or name in _HANDLERS:
            self._note(f"`{name} is a directive and no name for a macro", "give the macro another name", place)
        try:
            macro, end = defined(name, frame.text, frame.position, place)
        except MacroError as error:
            self._note(error.found, error.remedy, place)
            return
        self._emit("\n" * frame.text.count("\n", frame.position, end))
        frame.position = end
        before = self.macros.get(name)
        if before and before[1:3] != macro[1:3]:
            first = f"at {before.place}" if before.place else "by --define"
            self.owner.reading.notes.append(f"{place}: macro `{name} is defined anew, first {first}")
        self.macros[name] = macro
        self.owner.undefined.discard(name)

    def _undef(self, frame: _Frame, place: SourcePlace) -> None:
        self.macros.pop(self._pass(_NAME, "undef", frame, place), None)

    def _default_nettype(self, frame: _Frame, place: SourcePlace) -> None:
        kind = self._pass(_NAME, "default_nettype", frame, place)
        if kind in ("wire", "tri", "uwire", "none"):
            self.net_types.append((self.line, kind))
        elif kind:
            self._note(f"`default_nettype {kind} makes undeclared nets more than wires", "declare the nets", place)

    def _pragma(self, frame: _Frame, place: SourcePlace) -> None:
        start = frame.position
        self._pass(_LINE, "pragma", frame, place)
        if frame.text[start : frame.position].split()[:1] == ["protect"]:
            self._note("the text is encrypted from here on", "give it in the clear", place)
            raise _StopError

    def _unconnected_drive(self, frame: _Frame, place: SourcePlace) -> None:
        kind = self._pass(_NAME, "unconnected_drive", frame, place)
        self._note(f"`unconnected_drive {kind} drives pins that are open", "tie these pins and remove it", place)

    def _use(self, macro: Macro, frame: _Frame, place: SourcePlace) -> None:
        """Begin the text of a macro; line ends among its arguments follow behind it."""
        arguments: list[str] = []
        start = frame.position
        if macro.parameters is not None:
            bracket = _BRACKET.match(frame.text, start)
            found = arguments_of(frame.text, bracket.end()) if bracket else None
            if found is None:
                takes = ", ".join(name for name, _ in macro.parameters)
                self._note(f"macro `{macro.name} is used without its arguments", f"write `{macro.name}({takes})", place)
                return
            arguments, frame.position = found
        try:
            text = macro.expanded(arguments)
        except MacroError as error:
            self._note(error.found, error.remedy, place)
            return
        cost = max(len(text), 32)
        self.from_one_use = cost + (self.from_one_use if frame.macro else 0)
        self.owner.expanded += cost
        if len(self.frames) - len(self.files) >= DEEPEST_MACRO:
            again = any(open_one.macro == macro.name for open_one in self.frames)
            found_out = "is part of its own text" if again else f"stands more than {DEEPEST_MACRO} macros deep"
            self._stop(f"macro `{macro.name} {found_out}", "mend its definition", place)
        if self.from_one_use > MOST_FROM_ONE_USE or self.owner.expanded > MOST_CHARACTERS:
            found_out = f"macros make too much text here, at last `{macro.name}"
            self._stop(found_out, "mend the definitions, or give the netlist with macros resolved", place)
        after = "\n" * frame.text.count("\n", start, frame.position)
        if text:
            self.frames.append(_Frame(text, frame.path, macro.name, after))
        else:
            self._emit(after)

    def _include(self, frame: _Frame, place: SourcePlace) -> None:
        """Begin an included file, on a line of its own."""
        name = self._pass(_FILE, "include", frame, place)
        if not name:
            return
        folders = [self.files[-1].path.parent, *self.owner.include]
        path = next((folder / name for folder in folders if (folder / name).exists()), None)
        if path is None:
            self._note(f"there is no file {name} to include", "give its folder with --include DIR", place)
            return
        if len(self.files) > DEEPEST_INCLUDE:
            names = [str(open_one.path) for open_one in self.files]
            again = f"{path} includes itself" if str(path) in names else f"files include each other {len(names)} deep"
            self._stop(f"{again}, here through {self.files[-1].path}", "break the circle", place)
        before = len(self.owner.troubles.troubles)
        text = read_text(path, self.owner.troubles, may_be_empty=True)
        self.owner.includes += 1
        self.owner.taken_in += len(text or "")
        if self.owner.includes > MOST_INCLUDES or self.owner.taken_in > MOST_CHARACTERS:
            self._stop(f"more than {MOST_INCLUDES} files or {MOST_CHARACTERS} characters are included",
                       "mend the includes, or give the files by themselves", place)  # fmt: skip
        if text is None or len(self.owner.troubles.troubles) > before:
            return
        if path not in self.owner.reading.included:
            self.owner.reading.included.append(path)
        self._emit("\n")
        self.spans.append((self.line, str(path), 1))
        inner = _Frame(text, path)
        self.frames.append(inner)
        self.files.append(inner)

    def _note(self, found: str, remedy: str, place: SourcePlace) -> None:
        self.owner.troubles.add(found, remedy, place)

    def _stop(self, found: str, remedy: str, place: SourcePlace) -> None:
        self._note(found, remedy, place)
        raise _StopError


_CONDITIONS = frozenset({"ifdef", "ifndef", "elsif", "else", "endif"})
_HANDLERS: dict[str, Callable[[_Run, _Frame, SourcePlace], None]] = {
    "define": _Run._define,
    "undef": _Run._undef,
    "undefineall": lambda run, _frame, _place: run.macros.clear(),
    "include": _Run._include,
    "default_nettype": _Run._default_nettype,
    "resetall": lambda run, _frame, _place: run.net_types.append((run.line, "wire")),
    "pragma": _Run._pragma,
    "unconnected_drive": _Run._unconnected_drive,
}
