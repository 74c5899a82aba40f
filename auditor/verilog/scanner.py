"""The fast lane: regular expressions over statements, which read all that is plain and leave the rest waiting.

Plain instances are read one behind the other (``instances``). Every other statement is cut into items, each tried as
plain once more; what is not plain waits in its draft for the grammar lane.
"""

import re
from bisect import bisect_right
from collections.abc import Callable, Container
from typing import NamedTuple

from auditor.errors import TroubleList
from auditor.verilog.draft import Draft
from auditor.verilog.instances import PlainInstances
from auditor.verilog.items import BOUNDS, NET_KINDS, Items, direction_and_kind
from auditor.verilog.plain import (
    GATES,
    MAX_DEPTH,
    NAME,
    RESERVED,
    SPACE,
    DepthError,
    plain_name,
)
from auditor.verilog.statements import Range, Reading
from auditor.verilog.text import SourceText

S = SPACE
_WORD = re.compile(rf"{S}(?:([A-Za-z_][\w$]*+)|(\\\S++\s)|(.))")
_STATEMENT = re.compile(r'(?>[^;\\"]++|\\\S++\s|"(?:[^"\\\n]|\\.)*+")*+;')
_MODULE_WORD = re.compile(r"\\\S++|\b(endmodule|module|macromodule)\b")
_SPECIFY_END = re.compile(r"\\\S++|\b(endspecify)\b")
_PRIMITIVE = re.compile(rf"primitive\b{S}({NAME})")
_PRIMITIVE_END = re.compile(r"\\\S++|\b(endprimitive|module|macromodule)\b")
_HEAD = re.compile(rf"(?:macro)?module\b{S}({NAME}){S}")
_LABEL = re.compile(rf"{S}:{S}{NAME}")
_NAME_LIST = re.compile(
    rf"{S}(?:(input|output|inout)\b{S}(?:(wire|tri|logic)\b{S})?|(wire|tri|logic|supply0|supply1)\b{S})(?:{BOUNDS}{S})?"
    rf"({NAME}{S}(?:,{S}{NAME}{S})*+);"
)
_BARE_NAME = re.compile(r"[A-Za-z_][\w$]*+|\\\S++")


class Scanned(NamedTuple):
    """The modules of a text in the making, and the names of the primitives that it defines."""

    drafts: list[Draft]
    primitives: list[str]


def scan(
    source: SourceText, troubles: TroubleList, reading: Reading, plain: bool = True, cells: Container[str] = ()
) -> Scanned:
    """Return what a blanked text holds; with ``plain`` False all waits for the grammar lane.

    Of a module that is one of ``cells`` only the ports are read.
    """
    return _Scanner(source, troubles, reading, plain, cells).run()


class _Scanner(PlainInstances):
    """Where the scan stands in one text.

    Within a module ``line`` counts as the module does: less by the ``shift`` of its draft.
    """

    def __init__(
        self, source: SourceText, troubles: TroubleList, reading: Reading, plain: bool, cells: Container[str]
    ) -> None:
        super().__init__(source.text)
        self.source, self.troubles, self.reading, self.plain = source, troubles, reading, plain
        self.primitives: list[str] = []
        self.cells, self.timed = cells, set[str]()
        self.items = Items(self.names, self.values)
        self.drafts: list[Draft] = []
        self.draft: Draft | None = None

    def run(self) -> Scanned:
        """Read the whole text."""
        while True:
            if self.draft and self.draft.plain and not self.draft.described:
                self.plain_instances(self.draft)
            match = _WORD.match(self.text, self.position)
            if not match:
                break
            line = self.line_at(match.start(match.lastindex or 0))
            try:
                self._statement(match, line)
            except DepthError as error:
                found = f"brackets are nested deeper than {MAX_DEPTH}"
                self._trouble(found, "break the expression into nets of its own", error.line)
        if self.draft:
            self._trouble(
                f"the file ends inside module {self.draft.name}", "end it with endmodule", self.draft.place.line
            )
            self._close()
        return Scanned(self.drafts, self.primitives)

    def _statement(self, match: re.Match[str], line: int) -> None:
        """Read the statement whose first word was matched."""
        word, escaped, sign = match.groups()
        self.position = match.start(match.lastindex or 0)
        if sign == ";":
            self.position += 1
        elif word == "endmodule":
            self._end_module(line)
        elif word in ("module", "macromodule"):
            self._begin_module(line)
        elif word == "primitive" and self.draft is None:
            self._primitive(line)
        elif self.draft is None:
            self._trouble(f"{match[0].strip()} stands outside a module", "put it into a module or leave it out", line)
            self._skip_to("module", "macromodule")
        elif sign:
            self._trouble(f"found {sign} where a statement should begin", "mend the text", line)
            self._take_statement(line)
        elif escaped or word in _HANDLERS or word not in RESERVED:
            if word in _DECLARING and self.draft.plain and self._name_list(self.draft):
                return
            statement = self._take_statement(line)
            if self.draft.described and word not in _SAYING_PORTS:
                self.draft.passed_over = True
            elif statement is not None:
                _HANDLERS.get(word, Items.instances)(self.items, self.draft, statement, line)
        else:
            self._refused(self.draft, word, line)

    def _refused(self, draft: Draft, word: str, line: int) -> None:
        """Pass over what is not structural: timing with a note in each file, all else with a trouble."""
        if word == "specify":
            place = draft.place_of(line)
            if place.file not in self.timed:
                self.timed.add(place.file)
                draft.note("specify blocks from here on are passed over: timing has no part in the audit", line)
            self._skip_past(_SPECIFY_END)
        elif draft.described:
            draft.passed_over = True
            self._skip_to("endmodule")
        elif word == "trireg":
            self._trouble("trireg nets store charge", "store the bit in a cell", line)
            self._take_statement(line)
        elif word in ("pullup", "pulldown"):
            self._trouble(f"a {word} is a second driver of its net", "tie the net, or leave it out", line)
            self._take_statement(line)
        else:
            self._trouble(
                f"module {draft.name} is not structural: found {word}", "give a netlist mapped to gates", line
            )
            self._skip_to("endmodule")

    def _begin_module(self, line: int) -> None:
        if self.draft:
            self._trouble(
                f"a module begins inside module {self.draft.name}, which begins on line {self.draft.place.line}",
                "end that module with endmodule first",
                line,
            )
            line += self.draft.shift
            self._close()
        statement = self._take_statement(line)
        if statement is None:
            return
        head = _HEAD.match(statement)
        if not head or head[1] in RESERVED:
            self._trouble("module without a name", "name it", line)
            self._skip_past(_MODULE_WORD)
            return
        place = self.source.spans.place(line)
        kinds = self.source.net_types
        ruling = bisect_right(kinds, line, key=lambda entry: entry[0])
        name = plain_name(head[1])
        described = name in self.cells
        self.draft = Draft(
            name,
            place,
            line,
            self.source.spans,
            # Whatever else such a module holds may be no netlist.
            TroubleList() if described else self.troubles,
            self.reading,
            self.plain,
            described=described,
            implicit_nets=not ruling or kinds[ruling - 1][1] != "none",
        )
        self.drafts.append(self.draft)
        self.line -= self.draft.shift
        self.items.header(self.draft, statement, head.end(), place.line)

    def _close(self) -> None:
        """Leave the module at hand; lines are those of the whole text again."""
        if self.draft:
            self.draft.last_line = self.line
            self.line += self.draft.shift
        self.draft = None

    def _primitive(self, line: int) -> None:
        """Pass over the table of a primitive: its name is that of a cell from here on."""
        if head := _PRIMITIVE.match(self.text, self.position):
            self.primitives.append(plain_name(head[1]))
        end = _find(_PRIMITIVE_END, self.text, self.position)
        if end is None or end[1] != "endprimitive":
            self._trouble("a primitive begins here and never ends", "end it with endprimitive", line)
        self.position = len(self.text) if end is None else end.end() if end[1] == "endprimitive" else end.start()

    def _name_list(self, draft: Draft) -> bool:
        """Read a plain list of declared names in one go, if it is one: lists may hold a million."""
        match = _NAME_LIST.match(self.text, self.position)
        if not match:
            return False
        word, port_kind, kind, left, right, names = match.groups()
        direction, kind = direction_and_kind(word or kind, port_kind)
        bounds = Range(int(left), int(right)) if left else None
        line = self.line_at(match.start(6))
        for number, chunk in enumerate(names.split("\n"), line):
            written = _BARE_NAME.findall(chunk)
            if not RESERVED.isdisjoint(written):
                self._trouble(f"found {min(RESERVED & set(written))} in a list of names", "mend the text", number)
            draft.declare_all(list(map(plain_name, written)), direction, kind, bounds, number)
        self.position = match.end()
        return True

    def _end_module(self, line: int) -> None:
        self.position += len("endmodule")
        if label := _LABEL.match(self.text, self.position):
            self.position = label.end()
        if not self.draft:
            self._trouble("endmodule without a module", "leave it out or mend what stands before it", line)
        self._close()

    def _take_statement(self, line: int) -> str | None:
        """Return the text up to the next ``;`` and pass over it, or None after noting that it is not ended."""
        match = _STATEMENT.match(self.text, self.position)
        begun = self.text[self.position : match.end() if match else len(self.text)]
        first = _WORD.match(begun)
        inner = _find(_MODULE_WORD, begun, first.end() if first else 0)
        if match and not inner:
            self.position = match.end()
            return begun[:-1]
        self._trouble(
            f"the statement that begins with {begun.split(maxsplit=1)[0]} is not ended", "end it with ;", line
        )
        self.position += inner.start() if inner else len(begun)
        return None

    def _skip_to(self, *words: str) -> None:
        """Go on at the next of these words, or at the end of the text."""
        match = _find(_MODULE_WORD, self.text, self.position)
        while match and match[1] not in words:
            match = _find(_MODULE_WORD, self.text, match.end())
        self.position = match.start() if match else len(self.text)

    def _skip_past(self, pattern: re.Pattern[str]) -> None:
        match = _find(pattern, self.text, self.position)
        self.position = match.end() if match else len(self.text)

    def _trouble(self, found: str, remedy: str, line: int) -> None:
        place = self.draft.place_of(line) if self.draft else self.source.spans.place(line)
        self.troubles.add(found, remedy, place)


def _find(pattern: re.Pattern[str], text: str, start: int) -> re.Match[str] | None:
    """Find a keyword outside escaped identifiers."""
    return next((match for match in pattern.finditer(text, start) if match[1]), None)


_Handler = Callable[[Items, Draft, str, int], None]
_DECLARING = dict.fromkeys(("input", "output", "inout", *NET_KINDS), Items.declaration)
_SAYING_PORTS = frozenset({*_DECLARING, "parameter", "localparam"})
_HANDLERS: dict[str, _Handler] = {
    **_DECLARING,
    **dict.fromkeys(GATES, Items.instances),
    "assign": Items.assign,
    "parameter": Items.parameter,
    "localparam": Items.parameter,
    "defparam": Items.defparam,
}
