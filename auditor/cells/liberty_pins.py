"""The pins that a Liberty cell declares, buses and bundles laid out bit by bit, without their functions."""

import math
import re
from collections.abc import Callable, Mapping
from dataclasses import dataclass
from typing import Literal, TypeAlias

from auditor.cells.compose import NotUnderstood
from auditor.cells.liberty import Group
from auditor.cells.library import Pin

Direction: TypeAlias = Literal["input", "output", "inout", "internal"]

_DIRECTIONS: dict[str, Direction] = {
    "input": "input",
    "output": "output",
    "inout": "inout",
    "internal": "internal",
}
GATE_ROLES = ("clock", "enable", "test", "obs", "out")  # as in clock_gate_enable_pin
MOST_BITS = 65536  # of a bus or a bank; more is a slip of the pen
_RANGE = re.compile(r"(.*)\[(-?\d+):(-?\d+)\]")


@dataclass(frozen=True, slots=True)
class LibraryDefaults:
    """What a library says for all its cells; capacitances in fF, None where it says nothing."""

    file: str
    unit_ff: float
    input_ff: float | None
    inout_ff: float | None
    limit_ff: float | None
    types: Mapping[str, Group]


@dataclass(frozen=True, slots=True)
class DeclaredPin:
    """A pin with the texts of its functions ("" if it has none); ``bit`` is its position in its bus or bundle.

    ``internal_node`` is the node of the state table that the pin shows; ``roles`` what a clock gate uses it for.
    """

    pin: Pin
    function: str = ""
    three_state: str = ""
    state_function: str = ""
    internal_node: str = ""
    roles: frozenset[str] = frozenset()
    bit: int | None = None


def library_defaults(library: Group, file: str) -> LibraryDefaults:
    """Return the library's unit of capacitance (pF where it states none) and its defaults."""
    amount, unit = (*library.attributes.get("capacitive_load_unit", ()), "1", "pf")[:2]
    unit_ff = (number(amount) or 1.0) * (1.0 if unit.lower() == "ff" else 1000.0)

    def default(name: str) -> float | None:
        return _scaled(number(library.value(name)), unit_ff)

    return LibraryDefaults(
        file,
        unit_ff,
        default("default_input_pin_cap"),
        default("default_inout_pin_cap"),
        default("default_max_capacitance"),
        {name: group for group in library.inside("type") for name in group.arguments},
    )


@dataclass(slots=True)
class DeclaredPins:
    """All pins of a cell by name, and the members of each bus and bundle in the order of its bits."""

    pins: dict[str, DeclaredPin]
    vectors: dict[str, tuple[str, ...]]


def declared_pins(cell: Group, defaults: LibraryDefaults) -> DeclaredPins:
    """Return the pins of a cell; a bit of a bus or bundle inherits what its own ``pin`` group does not say.

    Raises ``NotUnderstood`` for a bus whose bits are declared nowhere.
    """
    declared = DeclaredPins({}, {})
    types = dict(defaults.types) | {name: group for group in cell.inside("type") for name in group.arguments}
    for group in cell.groups:
        if group.kind == "pg_pin":
            for name in _names(group.arguments):
                declared.pins[name] = DeclaredPin(Pin(name, "power"))
        elif group.kind == "pin":
            for name in _names(group.arguments):
                declared.pins[name] = _pin(name, (group,), None, defaults)
        elif group.kind in ("bus", "bundle"):
            own = {name: pin for pin in group.inside("pin") for name in _names(pin.arguments)}
            for vector in group.arguments:
                members = _members(vector, group, own, types)
                declared.vectors[vector] = members
                for bit, name in enumerate(members):
                    levels = (own[name], group) if name in own else (group,)
                    declared.pins[name] = _pin(name, levels, bit, defaults)
    return declared


def _members(vector: str, group: Group, own: Mapping[str, Group], types: Mapping[str, Group]) -> tuple[str, ...]:
    """Return the pins of a bus or bundle in order: a bundle lists them, a bus has a type, or lists them as pins."""
    if group.kind == "bundle" and "members" in group.attributes:
        return tuple(_names(group.attributes["members"]))
    bus_type = types.get(group.value("bus_type"))
    if bus_type is not None:
        first, last = number(bus_type.value("bit_from", "0")), number(bus_type.value("bit_to", "0"))
        if first is not None and last is not None:
            return tuple(_range(vector, int(first), int(last)))
    if not own:
        raise NotUnderstood(f"its {group.kind} {vector} does not say which bits it has")
    return tuple(own)


def _names(arguments: tuple[str, ...]) -> list[str]:
    """Return the pin names in a list of arguments: ``"D[3:0]"`` is four, ``"A, B"`` two."""
    names: list[str] = []
    for word in re.split(r"[\s,]+", " ".join(arguments)):
        found = _RANGE.fullmatch(word)
        if found:
            names += _range(found[1], int(found[2]), int(found[3]))
        elif word:
            names.append(word)
    return names


def _range(vector: str, first: int, last: int) -> list[str]:
    """Return the names of the bits from ``first`` to ``last``, in that order."""
    if abs(last - first) >= MOST_BITS:
        raise NotUnderstood(f"its {vector} has more than {MOST_BITS} bits")
    step = 1 if last >= first else -1
    return [f"{vector}[{k}]" for k in range(first, last + step, step)]


def _pin(name: str, levels: tuple[Group, ...], bit: int | None, defaults: LibraryDefaults) -> DeclaredPin:
    """Return a pin described by the groups ``levels``, of which an earlier one counts before a later one."""

    def value(attribute: str) -> str:
        return next((level.value(attribute) for level in levels if attribute in level.attributes), "")

    function = value("function")
    direction = _DIRECTIONS.get(value("direction"), "output" if function else "input")
    capacitance = limit = None
    if direction in ("input", "inout"):
        capacitance = _capacitance(value, defaults.unit_ff)
        if capacitance is None:
            capacitance = defaults.input_ff if direction == "input" else defaults.inout_ff
    if direction in ("output", "inout"):
        limit = _scaled(number(value("max_capacitance")), defaults.unit_ff)
        limit = defaults.limit_ff if limit is None else limit
    pin = Pin(name, direction, capacitance_ff=capacitance, limit_ff=limit)
    roles = frozenset(role for role in GATE_ROLES if value(f"clock_gate_{role}_pin").lower() == "true")
    return DeclaredPin(pin, function, value("three_state"), value("state_function"), value("internal_node"), roles, bit)


def _capacitance(value: Callable[[str], str], unit_ff: float) -> float | None:
    """Return a pin's capacitance in fF: the stated one, or the larger of those for rising and falling."""
    stated = number(value("capacitance"))
    if stated is None:
        edges = [number(value("rise_capacitance")), number(value("fall_capacitance"))]
        stated = max((edge for edge in edges if edge is not None), default=None)
    return _scaled(stated, unit_ff)


def number(text: str) -> float | None:
    """Return a number, or None for what is none (an expression, a missing value, infinity)."""
    try:
        value = float(text)
    except ValueError:
        return None
    return value if math.isfinite(value) else None


def _scaled(amount: float | None, unit_ff: float) -> float | None:
    """Return an amount of the library's unit in fF, without the noise of the multiplication."""
    return None if amount is None else float(f"{amount * unit_ff:.12g}")
