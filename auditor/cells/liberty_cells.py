"""Turns a ``cell`` group of Liberty into a ``Cell``.

What cannot be taken from the description ends up in words in ``not_understood``: such a cell still loads its nets.
"""

from collections.abc import Mapping
from dataclasses import dataclass, replace
from typing import Literal

from auditor.cells.compose import NotUnderstood, put_into_each_other
from auditor.cells.expression import ExpressionError, parse_expression
from auditor.cells.liberty import Group
from auditor.cells.liberty_pins import MOST_BITS, DeclaredPins, LibraryDefaults, declared_pins, number
from auditor.cells.library import Cell, Function, Pin, Storage
from auditor.cells.state_table import state_table
from auditor.cells.storage import Described, rewrite, settle
from auditor.notation import SourcePlace

_CLOCK_AND_DATA = {"ff": ("clocked_on", "next_state"), "latch": ("enable", "data_in")}
_FORCED: dict[str, Literal["0", "1", ""]] = {"H": "1", "L": "0"}
_OPPOSITE: dict[str, Literal["0", "1", ""]] = {"H": "0", "L": "1"}


def liberty_cell(group: Group, defaults: LibraryDefaults) -> Cell:
    """Return the cell that a ``cell`` group describes; raises nothing, see ``Cell.not_understood``."""
    name = group.arguments[0] if group.arguments else ""
    place = SourcePlace(defaults.file, group.line)
    area = number(group.value("area"))
    pins: dict[str, Pin] = {}
    try:
        declared = declared_pins(group, defaults)
        pins = {name: pin.pin for name, pin in declared.pins.items()}
        pins_with_functions, storage = _behaviour(group, declared)
    except NotUnderstood as reason:
        return Cell(name, pins, (), area, place, str(reason))
    return Cell(name, pins_with_functions, storage, area, place)


def _behaviour(group: Group, declared: DeclaredPins) -> tuple[dict[str, Pin], tuple[Storage, ...]]:
    """Return the pins with their functions and the stored bits, all in terms of input pins and state variables."""
    table = state_table(group, declared.pins)
    shown = table.functions if table else {}
    banks = [_Bank.of(storage) for storage in group.inside("ff", "latch", "ff_bank", "latch_bank")]
    reader = _Reader(
        declared.vectors | {name: bank.bits_of(name) for bank in banks if bank.width for name in bank.names}
    )
    written = {
        name: reader.read(pin.function or shown[name], f"function of pin {name}", pin.bit)
        for name, pin in declared.pins.items()
        if pin.function or name in shown
    }
    variables = {variable for bank in banks for name in bank.names for variable in bank.bits_of(name)}
    if table and table.bit:
        variables.add(table.bit.first)
    functions = put_into_each_other(written, variables)
    inner = {name: function for name, function in functions.items() if name not in variables}
    described = [bit for bank in banks for bit in bank.described(reader, inner)]
    if table and table.bit:
        described.append(table.bit)
    storage, meaning = settle(described, declared.pins)
    pins = {}
    for name, pin in declared.pins.items():
        function = rewrite(functions[name], meaning) if name in functions else None
        three_state = None
        if pin.three_state:
            what = f"three_state of pin {name}"
            three_state = rewrite(rewrite(reader.read(pin.three_state, what, pin.bit), inner), meaning)
        pins[name] = replace(pin.pin, function=function, three_state=three_state)
    _refuse_unknown_names(pins, storage)
    return pins, storage


def _refuse_unknown_names(pins: Mapping[str, Pin], storage: tuple[Storage, ...]) -> None:
    """Raise ``NotUnderstood`` where a function uses what is neither an input pin nor a state variable."""
    known = {name for name, pin in pins.items() if pin.direction in ("input", "inout")}
    known |= {bit.variable for bit in storage}
    used: list[tuple[str, Function | None]] = []
    for name, pin in pins.items():
        used += [(f"the function of pin {name}", pin.function), (f"three_state of pin {name}", pin.three_state)]
    for bit in storage:
        used += [("its clock", bit.clock), ("its data", bit.data)]
        used += [("its clear", bit.clear), ("its preset", bit.preset)]
    for what, function in used:
        for name in function.inputs if function else ():
            if name not in known:
                why = "a pin without a function" if name in pins else "neither a pin nor a state variable"
                raise NotUnderstood(f"{what} uses {name}, which is {why}")


@dataclass(frozen=True, slots=True)
class _Reader:
    """Reads expressions of one cell; a bus or bundle in them means its bit at the position asked for."""

    vectors: Mapping[str, tuple[str, ...]]

    def read(self, text: str, what: str, bit: int | None) -> Function:
        """Return the function; ``what`` names it in the reason for a failure (``NotUnderstood``)."""
        try:
            function = parse_expression(text)
        except ExpressionError as error:
            raise NotUnderstood(f"the {what} cannot be read: {error}") from None
        members = {}
        for vector in function.inputs:
            if vector in self.vectors:
                if bit is None or bit >= len(self.vectors[vector]):
                    raise NotUnderstood(f"the {what} uses {vector}, which has several bits, as one")
                members[vector] = Function((self.vectors[vector][bit],), ("$0",))
        return rewrite(function, members)


@dataclass(frozen=True, slots=True)
class _Bank:
    """A group ``ff``, ``latch``, ``ff_bank`` or ``latch_bank``; ``width`` is 0 for the first two.

    Its variables are known by position: the last two arguments, or before the width of a bank the first two.
    """

    group: Group
    names: tuple[str, ...]
    width: int

    @classmethod
    def of(cls, group: Group) -> "_Bank":
        """Return the bank that a group opens. Raises ``NotUnderstood`` if variables or width are missing."""
        names, width = group.arguments[-2:], "0"
        if group.kind.endswith("_bank"):
            names, width = group.arguments[:2], "".join(group.arguments[2:3])
        if not names or not width.isdecimal() or int(width) > MOST_BITS:
            raise NotUnderstood(f"its {group.kind} group does not name its variables and width")
        return cls(group, names, int(width))

    def bits_of(self, name: str) -> tuple[str, ...]:
        """Return the names of the single bits of one of its variables."""
        return tuple(f"{name}[{k}]" for k in range(self.width)) if self.width else (name,)

    def described(self, reader: _Reader, inner: Mapping[str, Function]) -> list[Described]:
        """Return its stored bits; ``inner`` are the functions of internal pins that its expressions may use."""
        return [self._bit(k, reader, inner) for k in range(self.width or 1)]

    def _bit(self, k: int, reader: _Reader, inner: Mapping[str, Function]) -> Described:
        def read(attribute: str) -> Function | None:
            text = self.group.value(attribute)
            what = f"{attribute} of its {self.group.kind}"
            return rewrite(reader.read(text, what, k if self.width else None), inner) if text else None

        kind = self.group.kind.removesuffix("_bank")
        for second in ("clocked_on_also", "enable_also"):
            if second in self.group.attributes:
                raise NotUnderstood(f"its {self.group.kind} has a second clock ({second}), which is not read")
        clock, data = map(read, _CLOCK_AND_DATA[kind])
        clear, preset = read("clear"), read("preset")
        variables = [self.bits_of(name)[k] for name in self.names]
        if kind == "latch" and clock is None and data is None and (clear or preset):
            clock, data = Function((), ("0",)), Function((variables[0],), ("$0",))  # set and reset alone
        if clock is None or data is None:
            missing = _CLOCK_AND_DATA[kind][clock is not None]
            raise NotUnderstood(f"its {self.group.kind} has no {missing}")
        return Described(
            first=variables[0],
            second="".join(variables[1:]),
            kind="flip-flop" if kind == "ff" else "latch",
            clock=clock,
            data=data,
            clear=clear,
            preset=preset,
            both=self._both() if clear and preset else "",
        )

    def _both(self) -> Literal["0", "1", ""]:
        """Return the first variable while clear and preset are both active; "" where the two do not complement."""
        first, second = (self.group.value(f"clear_preset_var{k}").upper() for k in (1, 2))
        if not first:
            return _OPPOSITE.get(second, "")
        forced = _FORCED.get(first, "")
        return forced if not second or _OPPOSITE.get(second) == forced else ""
