"""What a structural Verilog text says, as plain data: the noun of this room.

Both lanes (``scanner`` and ``grammar``) give these and nothing else; ``netlist/`` reads nothing else. Names are
stored without the backslash and the blank of an escaped identifier.
"""

from collections.abc import Mapping
from dataclasses import dataclass, field
from typing import Literal, NamedTuple, TypeAlias

from auditor.notation import SourcePlace

Direction: TypeAlias = Literal["input", "output", "inout"]


class Select(NamedTuple):
    """``net[left:right]``, or ``net[left]`` with left == right; the bounds are as written."""

    net: str
    left: int
    right: int


class Constant(NamedTuple):
    """A literal; ``bits`` holds 0 1 x z, most significant first, one character a bit.

    An unsized literal is 32 bits wide (IEEE 1364-2005, 3.5.1) and ``sized`` is False.
    """

    bits: str
    sized: bool = True


class Concatenation(NamedTuple):
    """``{a, b}``, most significant part first; replications are written out."""

    parts: tuple["Expression", ...]


class Operation(NamedTuple):
    """``operator`` is one of ``~ & | ^ ?:`` on vectors, bit by bit, or ``&r |r ^r`` which reduce one vector to a bit.

    ``?:`` has the operands condition, then, else. Other spellings (``~^ ~& ! && || == !=``) are written with these.
    """

    operator: str
    operands: tuple["Expression", ...]


# A plain string is a whole net, scalar or vector.
Expression: TypeAlias = str | Select | Constant | Concatenation | Operation


class Connection(NamedTuple):
    """What one pin of an instance is tied to: ``pin`` None where connected by position, ``value`` None where open."""

    pin: str | None
    value: Expression | None


class Range(NamedTuple):
    """The bounds of a vector or of an array of instances as written, in either order, also negative."""

    left: int
    right: int


class Instance(NamedTuple):
    """One instance, or ``array`` of them, of a module, a cell or (``primitive``) a gate primitive of the language."""

    cell: str
    name: str
    connections: tuple[Connection, ...]
    line: int
    primitive: bool = False
    array: Range | None = None


class Assign(NamedTuple):
    """A continuous assignment."""

    left: Expression
    right: Expression
    line: int


class Declaration(NamedTuple):
    """A net or port as declared; ``kind`` is wire, supply0, supply1 ...; ``range`` None for a scalar."""

    kind: str
    range: Range | None
    line: int


class HeaderPort(NamedTuple):
    """A port of the header in order; ``inside`` is what it is connected to within (mostly the net of its own name)."""

    name: str
    inside: Expression


@dataclass(frozen=True, slots=True)
class Module:
    """A module as written. ``ports`` in header order; ``directions`` by the names of the nets declared as ports."""

    name: str
    place: SourcePlace
    ports: tuple[HeaderPort, ...]
    directions: Mapping[str, Direction]
    nets: Mapping[str, Declaration]
    instances: list[Instance] = field(default_factory=list)
    assigns: list[Assign] = field(default_factory=list)
