"""The cell table: a small TOML file of ours for cells that no other file describes.

    [cell.MX]
    inputs = ["A", "B", "S"]
    outputs = { Y = "(A & !S) | (B & S)" }
    power = ["VDD", "VSS"]                      # optional, as is everything below
    capacitance_ff = { A = 1.2, B = 1.2, S = 2 }
    limit_ff = { Y = 60 }                       # the largest load of an output
    three_state = { Y = "!EN" }                 # where this is 1 the output is Z
    area = 3.2

    [cell.FF]
    inputs = ["CK", "D", "RN"]
    outputs = { Q = "state", QN = "!state" }
    [cell.FF.flip-flop]                         # or [cell.NAME.latch]
    clock = "CK"                                # rising edge of this expression; a latch is open while it is 1
    data = "D"
    clear = "!RN"                               # active at 1; preset likewise
    both = "0"                                  # the state while clear and preset are both active

Expressions are those of Liberty (``expression``); ``state`` is the stored bit, usable in outputs and data.
"""

import json
import re
from collections.abc import Iterable, Sequence
from typing import Literal

from auditor.cells.expression import ExpressionError, is_read_differently, parse_expression
from auditor.cells.library import Cell, Function, Pin, Storage
from auditor.cells.storage import Described, rewrite, settle
from auditor.cells.toml_section import Section, TomlText
from auditor.errors import TroubleList, near_misses

_CELL_KEYS = ("inputs", "outputs", "power", "capacitance_ff", "limit_ff", "three_state", "area", "flip-flop", "latch")
_STORAGE_KEYS = ("clock", "data", "clear", "preset", "both")
_KINDS: tuple[Literal["flip-flop", "latch"], ...] = ("flip-flop", "latch")
_BOTH: dict[str, Literal["0", "1", ""]] = {"0": "0", "1": "1"}
_STATE = "state"
_BLANK = "?"
_HEADER = re.compile(r"^[ \t]*\[[ \t]*cell\b", re.MULTILINE)


def looks_like_table(text: str) -> bool:
    """Return whether a line of the text opens a table ``[cell...``."""
    return _HEADER.search(text) is not None


def table_cells(text: str, file: str) -> dict[str, Cell]:
    """Return the cells of a cell table; ``file`` is its name in messages.

    Raises ``InputError`` with every trouble of the text.
    """
    troubles = TroubleList()
    content = TomlText(text, file, troubles).parse()
    content.check_keys(["cell"])
    entries = content.section("cell")
    cells = {name: _cell(name, entries.section(name)) for name in entries.values}
    troubles.raise_any()
    return cells


def stub(name: str, pins: Sequence[str]) -> str:
    """Return a cell-table entry for an unknown cell, with blanks to fill in.

    It is valid TOML; the reader rejects it until the blanks are filled in.
    """
    outputs = ", ".join(f'{_key(pin)} = "{_BLANK}"' for pin in pins)
    return f"""[cell.{_key(name)}]
# Leave each pin in the one list where it belongs, and give each output its function.
inputs = [{", ".join(map(_quoted, pins))}]
outputs = {{ {outputs} }}
power = []
# If it stores a bit, write its outputs as "{_STATE}" or "!{_STATE}", and:
# [cell.{_key(name)}.flip-flop]
# clock = "{_BLANK}"
# data = "{_BLANK}"
"""


def _quoted(name: str) -> str:
    """Return a name as a TOML string."""
    return json.dumps(name, ensure_ascii=False).replace("\x7f", "\\u007f")


def _key(name: str) -> str:
    return name if re.fullmatch(r"[A-Za-z0-9_-]+", name) else _quoted(name)


def _cell(name: str, entry: Section) -> Cell:
    """Return the cell of one entry; troubles are noted."""
    outputs, three_state = entry.section("outputs"), entry.section("three_state")
    storage_sections = [entry.section(kind) for kind in _KINDS if kind in entry.values]
    blanks = [
        section.name(key)
        for section in (outputs, three_state, *storage_sections)
        for key, value in section.values.items()
        if value == _BLANK
    ]
    if blanks:
        entry.note(
            f"the cell {name} is not filled in yet: {', '.join(blanks)}",
            "write the function of each output, and leave each pin in one list",
        )
        return Cell(name, {})
    entry.check_keys(_CELL_KEYS)
    inputs, power = entry.names("inputs"), entry.names("power")
    names = [*inputs, *outputs.values, *power]
    for pin in dict.fromkeys(names):
        if names.count(pin) > 1:
            entry.note(f"the cell {name} names its pin {pin} twice", "leave it in one list")
    three_state.check_keys(outputs.values, "output")
    storage, meaning = _storage(storage_sections, entry, names, inputs)
    known = [*inputs, _STATE] if storage_sections else inputs
    loads, limits = entry.section("capacitance_ff"), entry.section("limit_ff")
    loads.check_keys(inputs, "input")
    limits.check_keys(outputs.values, "output")
    pins = {pin: Pin(pin, "input", capacitance_ff=loads.number(pin)) for pin in inputs}
    for pin in outputs.values:
        function, off = (_function(section, pin, known) for section in (outputs, three_state))
        pins[pin] = Pin(
            pin,
            "output",
            rewrite(function, meaning) if function else None,
            rewrite(off, meaning) if off else None,
            limit_ff=limits.number(pin),
        )
    pins |= {pin: Pin(pin, "power") for pin in power}
    return Cell(name, pins, storage, entry.number("area"), entry.source.place(entry.path))


def _storage(
    sections: Sequence[Section], entry: Section, pins: Sequence[str], inputs: Sequence[str]
) -> tuple[tuple[Storage, ...], dict[str, Function]]:
    """Return the stored bit of a cell, if it has one, and what ``state`` means in terms of it."""
    if not sections:
        return (), {}
    if len(sections) > 1:
        entry.note("a cell stores one bit", "leave either flip-flop or latch")
    if _STATE in pins:
        entry.note(f"a pin is named {_STATE}, as the stored bit is", "describe the cell in a Liberty file", _STATE)
    section = sections[0]
    section.check_keys(_STORAGE_KEYS)
    for key in ("clock", "data"):
        if key not in section.values:
            section.note(f"{section.name(key)} is missing", f"add {key}, an expression over the inputs")
    known = [*inputs, _STATE]
    clock, data, clear, preset = (_function(section, key, known) for key in ("clock", "data", "clear", "preset"))
    both = section.text("both")
    if both is not None and both not in _BOTH:
        section.wrong("both", '"0" or "1"')
    if clock is None or data is None:
        return (), {}
    kind = _KINDS[section.path[-1] == "latch"]
    bit = Described(_STATE, "", kind, clock, data, clear, preset, _BOTH.get(both or "", ""))
    return settle([bit], pins)


def _function(section: Section, key: str, known: Iterable[str]) -> Function | None:
    """Return the function written under ``key`` over the names ``known``, None where there is none."""
    written = section.text(key)
    if written is None:
        return None
    try:
        function = parse_expression(written)
    except ExpressionError as error:
        section.note(f"{section.name(key)} cannot be read: {error}", "write an expression such as A & !B", key)
        return None
    if is_read_differently(written):
        section.note(f"{section.name(key)} mixes ^ with operands side by side", "add parentheses", key)
    for name in function.inputs:
        if name not in known:
            remedy = near_misses(name, known) or "name it among the inputs"
            section.note(f"{section.name(key)} uses {name}, which is no input of the cell", remedy, key)
    return function
