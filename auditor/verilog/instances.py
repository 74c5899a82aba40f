"""The loop that a large netlist spends its time in: plain instances that follow each other."""

import re
from itertools import repeat

from auditor.verilog.draft import Draft
from auditor.verilog.items import NAMED_BODY, PINS, connect, instantiate
from auditor.verilog.plain import (
    GATES,
    NAME,
    RESERVED,
    SPACE,
    NotPlainError,
    PlainNames,
    PlainPins,
    PlainValues,
    plain_name,
)
from auditor.verilog.statements import Connection

S = SPACE
_POSITION = r"(?>[^(),{}\\;.]++|\\\S++\s)++"
_POSITIONS = re.compile(_POSITION)
_INSTANCE = re.compile(rf"{S}({NAME}){S}({NAME}|){S}\((?:({NAMED_BODY})|({_POSITION}(?:,{_POSITION})*+))\){S};")
# Without brackets in names, so that a connection can be cut at its own.
_BARE = r"[A-Za-z_][\w$]*+"
_TIE = rf"\.{_BARE}{S}\([^()\\;]*+(?:\\[^\s();]++\s[^()\\;]*+)*+\)"
_COMMON = re.compile(rf"{S}({_BARE})\s++({_BARE}|\\\S++\s){S}\(({S}{_TIE}(?:{S},{S}{_TIE})*+){S}\){S};")


class PlainInstances:
    """A position in a text, and the plain instances that are read from there on.

    ``counted`` is the position up to which lines are counted; names and values are worked out once for a text.
    """

    def __init__(self, text: str) -> None:
        self.text = text
        self.position, self.counted, self.line = 0, 0, 1
        self.names, self.values = PlainNames(), PlainValues()
        self.pins = PlainPins(self.names)

    def plain_instances(self, draft: Draft) -> None:
        """Read plain instances as long as they follow each other."""
        while True:
            self._common_instances(draft)
            if not self._plain_instance(draft):
                return

    def _common_instances(self, draft: Draft) -> None:
        """Read instances of the most common form: the loop that a large netlist spends its time in."""
        text, names = self.text, self.names
        pin, value = self.pins.__getitem__, self.values.__getitem__
        position, counted, line = self.position, self.counted, self.line
        match_instance, count, append = _COMMON.match, text.count, draft.instances.append
        new, kinds = tuple.__new__, repeat(Connection)  # faster than a call for each connection
        while match := match_instance(text, position):
            cell, name, body = match.groups()
            if name in RESERVED:
                break
            # No bracket stands in a pin or a value: between them stand in turn what names a pin and a value.
            parts = body.replace(")", "(").split("(")
            try:
                pairs = zip(map(pin, parts[:-1:2]), map(value, parts[1::2]), strict=False)
                connections = tuple(map(new, kinds, pairs))
                cell = names[cell]
            except NotPlainError:
                break
            start = match.start(1)
            line += count("\n", counted, start)
            counted = start
            own = plain_name(name) if name[0] == "\\" else name
            append(instantiate((cell, own, connections, line, False, None)))
            position = match.end()
        self.position, self.counted, self.line = position, counted, line

    def _plain_instance(self, draft: Draft) -> bool:
        """Read one plain instance of any form, if one is here."""
        match = _INSTANCE.match(self.text, self.position)
        if not match:
            return False
        cell, name, named, by_position = match.groups()
        primitive = cell in GATES
        if (cell in RESERVED and not (primitive and by_position)) or name in RESERVED:
            return False
        names, values = self.names, self.values
        try:
            if named:
                connections = tuple([connect((names[pin], values[value])) for pin, value in PINS.findall(named)])
            else:
                connections = tuple([connect((None, values[value])) for value in _POSITIONS.findall(by_position)])
        except NotPlainError:
            return False
        line = self.line_at(match.start(1))
        cell = cell if primitive else names[cell]
        draft.instances.append(instantiate((cell, plain_name(name), connections, line, primitive, None)))
        self.position = match.end()
        return True

    def line_at(self, position: int) -> int:
        """Return the line of a position not before the last one asked for."""
        self.line += self.text.count("\n", self.counted, position)
        self.counted = position
        return self.line
