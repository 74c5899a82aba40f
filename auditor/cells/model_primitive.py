"""Reads the table of a user-defined primitive (IEEE 1364-2005, clause 8) into rows over 0 and 1."""

import re
from collections.abc import Iterator, Sequence
from itertools import combinations

from auditor.cells.model import AT_0, AT_1, AT_X, ModuleText, Primitive, Row
from auditor.errors import TroubleList
from auditor.notation import SourcePlace

_MOST_ROWS = 2000
_LEVELS = {"0": "0", "1": "1", "x": "x", "?": "01x", "b": "01"}
_BIT = {"0": AT_0, "1": AT_1, "x": AT_X}
_EDGES = {
    "r": ("01",),
    "f": ("10",),
    "p": ("01", "0x", "x1"),
    "n": ("10", "1x", "x0"),
    "*": tuple(before + after for before in "01x" for after in "01x" if before != after),
}
_ALL = AT_0 | AT_1 | AT_X
_ENTRY = re.compile(r"\s*+(?:\(\s*+([01xX?bB])\s*+([01xX?bB])\s*+\)|([01xX?bBrRfFpPnN*:;-])|(\S))")
_DECLARATION = re.compile(r"\s*+(?:(output|input|reg|initial)\b\s*+(reg\b)?)?([^;]*+);")
_IDENTIFIER = re.compile(r"[A-Za-z_][\w$]*+|\\\S++")
_HEADER = re.compile(r"\s*+\(([^()]*+)\)\s*+;")
_TABLE = re.compile(r"\btable\b(.*?)\bendtable\b\s*+\Z", re.DOTALL)


class _BadTableError(Exception):
    """What is wrong, what to do and where, in a primitive that cannot be read."""


def read_primitive(text: ModuleText, troubles: TroubleList) -> Primitive | None:
    """Return the primitive, None after noting why it has none."""
    try:
        return _read(text)
    except _BadTableError as error:
        found, remedy, place = error.args
        troubles.add(f"primitive {text.name}: {found}", remedy, place)
        return None


def _read(text: ModuleText) -> Primitive:
    table = _TABLE.search(text.text)
    if table is None:
        raise _BadTableError("it has no table ... endtable", "add its table, and end it", text.place)
    header = _HEADER.match(text.text)
    if header is None:
        raise _BadTableError("its ports cannot be read", "list them in parentheses", text.place)
    ports = [_bare(name) for name in _IDENTIFIER.findall(header[1]) if name not in ("input", "output", "reg")]
    stores = re.search(r"\breg\b", text.text[: table.start()]) is not None
    inputs = set(_inputs(header[1], text.text[header.end() : table.start()]))
    if len(ports) < 2 or len(set(ports)) < len(ports) or inputs != set(ports[1:]):
        raise _BadTableError(
            "its ports are not one output, named first, and inputs, each declared once", "mend them", text.place
        )
    first = text.text.count("\n", 0, table.start(1))
    rows = tuple(_rows(table[1], text.places[first:], ports[1:], stores))
    if not rows:
        raise _BadTableError("its table is empty", "give it rows", text.places[first])
    _refuse_contradictions(rows)
    return Primitive(text.name, text.place, ports[0], tuple(ports[1:]), stores, rows)


def _bare(name: str) -> str:
    return name.removeprefix("\\")


def _inputs(header: str, declarations: str) -> Iterator[str]:
    """Yield the names declared as inputs, in the header or behind it."""
    direction = ""
    for word in _IDENTIFIER.findall(header):
        if word in ("input", "output"):
            direction = word
        elif direction == "input":
            yield _bare(word)
    for found in _DECLARATION.finditer(declarations):
        if found[1] == "input":
            yield from map(_bare, _IDENTIFIER.findall(found[3]))


def _rows(text: str, places: Sequence[SourcePlace], inputs: Sequence[str], stores: bool) -> Iterator[Row]:
    """Yield the rows of a table. Raises ``_BadTableError`` at the first that cannot be read."""
    entries: list[str] = []
    line = counted = number = 0
    for found in _ENTRY.finditer(text):
        at = found.end() - 1
        line, counted = line + text.count("\n", counted, at), at
        before, after, sign, stray = found.groups()
        if stray:
            raise _BadTableError(f"{stray} is no symbol of a table", "use 0 1 x ? b * r f p n - or (01)", places[line])
        if sign != ";":
            entries.append(sign.lower() if sign else (before + after).lower())
            continue
        number += 1
        if number > _MOST_ROWS:
            raise _BadTableError(f"its table has more than {_MOST_ROWS} rows", "describe it by gates", places[line])
        yield _row(entries, inputs, stores, places[line])
        entries = []
    if entries:
        raise _BadTableError("the last row is not ended", "end it with ;", places[line])


def _row(entries: Sequence[str], inputs: Sequence[str], stores: bool, place: SourcePlace) -> Row:
    """Return the row with these symbols; an edge is written as two levels or one letter."""
    count = len(inputs)
    form = [count, 1, 1] if stores else [count, 1]
    parts = [part.split() for part in " ".join(entries).split(":")]
    if [len(part) for part in parts] != form:
        wanted = f"{count} inputs, " + ("the state and the next state" if stores else "and the output")
        raise _BadTableError(f'the row "{" ".join(entries)}" does not hold {wanted}', "mend it", place)
    fields: list[int] = []
    edge = None
    for j, symbol in enumerate(parts[0]):
        if symbol in _LEVELS:
            fields.append(sum(_BIT[level] for level in _LEVELS[symbol]))
            continue
        if symbol == "-" or edge is not None or not stores:
            why = "a row has one edge at most, and a table without state none" if symbol != "-" else "- is an output"
            raise _BadTableError(f"{_shown(symbol)} cannot stand for {inputs[j]}: {why}", "mend the row", place)
        edge = j
        fields.append(_edge_ends(symbol, place))
    before = _ALL
    if stores:
        (state,) = parts[1]
        if state not in _LEVELS:
            raise _BadTableError(f"{_shown(state)} is no present state", "use 0 1 x ? or b", place)
        before = sum(_BIT[level] for level in _LEVELS[state])
    (after,) = parts[-1]
    if after not in "01x" and not (stores and after == "-"):
        known = "0 1 x or -" if stores else "0 1 or x"
        raise _BadTableError(f"{_shown(after)} is no output", f"use {known}", place)
    return Row(tuple(fields), edge, before, after, place)


def _shown(symbol: str) -> str:
    return f"({symbol})" if len(symbol) == 2 else symbol


def _edge_ends(symbol: str, place: SourcePlace) -> int:
    """Return the set of levels to which an edge goes from the other one of 0 and 1."""
    if len(symbol) == 1:
        pairs: Sequence[str] = _EDGES[symbol]
    else:
        pairs = [a + b for a in _LEVELS[symbol[0]] for b in _LEVELS[symbol[1]] if a != b]
        if not pairs:
            raise _BadTableError(f"{_shown(symbol)} is no change", "mend the row", place)
    return (AT_1 if "01" in pairs else 0) | (AT_0 if "10" in pairs else 0)


def _refuse_contradictions(rows: Sequence[Row]) -> None:
    """Raise ``_BadTableError`` for two rows that give different outputs for the same 0s and 1s.

    A row of levels and one with an edge may meet: the levels count (IEEE 1364-2005, 8.8).
    """
    groups: dict[int | None, list[tuple[int, Row]]] = {}
    for row in rows:
        fields = [levels & (AT_0 | AT_1) for levels in (*row.fields, row.before)]
        if all(fields):
            code = sum(levels << 2 * j for j, levels in enumerate(fields))
            groups.setdefault(row.edge, []).append((code, row))
    low = sum(1 << 2 * j for j in range(len(rows[0].fields) + 1))
    last = 2 * len(rows[0].fields)
    for group in groups.values():
        for (code, row), (other_code, other) in combinations(group, 2):
            if row.after == other.after:
                continue
            meeting = code & other_code
            if (meeting | meeting >> 1) & low == low and _differ(row.after, other.after, meeting >> last):
                raise _BadTableError(
                    f"rows contradict each other: next {row.after} here, {other.after} at line {other.place.line} "
                    "for the same inputs",
                    "mend one of them",
                    row.place,
                )


def _differ(after: str, other: str, states: int) -> bool:
    """Return whether two outputs differ for one of the present states."""
    return any(
        (level if after == "-" else after) != (level if other == "-" else other)
        for level, bit in (("0", AT_0), ("1", AT_1))
        if states & bit
    )
