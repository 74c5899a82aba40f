"""What a structural Verilog text says, as plain data: the noun of this room.

Both lanes (``scanner`` and ``grammar``) give these and nothing else; ``netlist/`` reads nothing else. Names are
stored without the backslash and the blank of an escaped identifier.
"""

from bisect import bisect_right
from collections.abc import Mapping
from dataclasses import dataclass, field
from pathlib import Path
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


@dataclass(slots=True)
class Reading:
    """What a reading met beside the modules: files taken in by `` `include ``, and what a reviewer should know."""

    included: list[Path] = field(default_factory=list)
    notes: list[str] = field(default_factory=list)


@dataclass(frozen=True, slots=True)
class Lines:
    """Where the lines of a text come from that takes in other files.

    From line ``starts[k]`` of the text on they are the lines of ``files[k]`` from ``firsts[k]`` on; ``starts`` ascends.
    """

    starts: tuple[int, ...]
    files: tuple[str, ...]
    firsts: tuple[int, ...]

    def place(self, line: int) -> SourcePlace:
        """Return the file and the line in it that a line of the text comes from."""
        k = self._run(line)
        return SourcePlace(self.files[k], self.firsts[k] + line - self.starts[k])

    def between(self, first: int, last: int) -> "Lines | None":
        """Return lines ``first`` .. ``last`` numbered on from that of ``first`` in its file, None if all are in it."""
        low, high = self._run(first), self._run(last) + 1
        if high == low + 1:
            return None
        shift = first - self.place(first).line
        return Lines(
            tuple(start - shift for start in self.starts[low:high]), self.files[low:high], self.firsts[low:high]
        )

    def _run(self, line: int) -> int:
        return max(0, bisect_right(self.starts, line) - 1)


@dataclass(frozen=True, slots=True)
class Module:
    """A module as written. ``ports`` in header order; ``directions`` by the names of the nets declared as ports.

    Lines are counted on from the module's first one through the files that it includes, and ``place_of`` finds them
    there; ``spans`` is None where it includes none. ``implicit_nets`` is False where `` `default_nettype none `` holds.
    """

    name: str
    place: SourcePlace
    ports: tuple[HeaderPort, ...]
    directions: Mapping[str, Direction]
    nets: Mapping[str, Declaration]
    instances: list[Instance] = field(default_factory=list)
    assigns: list[Assign] = field(default_factory=list)
    spans: Lines | None = None
    implicit_nets: bool = True

    def place_of(self, line: int) -> SourcePlace:
        """Return where a line of this module stands."""
        return self.spans.place(line) if self.spans else SourcePlace(self.place.file, line)
