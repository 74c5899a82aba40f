"""Verilog cell models as data: user-defined primitives and modules, as the text has them.

Expressions stay lists of tokens until the cell is asked for: of a file of models most are never used.
"""

from collections.abc import Mapping
from dataclasses import dataclass, field
from typing import Literal, NamedTuple, TypeAlias

from auditor.notation import SourcePlace


class Token(NamedTuple):
    """A word, number, string or sign of the text and where it stands."""

    text: str
    place: SourcePlace


Tokens: TypeAlias = list[Token]

# The levels that a field of a table lets pass, as a set of bits.
AT_0, AT_1, AT_X = 1, 2, 4


class Row(NamedTuple):
    """A row of a table.

    ``fields``  a set of levels for each input; for the input that changes, the levels it changes to between 0 and 1
    ``edge``    the index of the input that changes, or None where levels alone count
    ``before``  the set of present states, all for a table without state
    ``after``   "0", "1", "x", or "-" for no change
    """

    fields: tuple[int, ...]
    edge: int | None
    before: int
    after: str
    place: SourcePlace


@dataclass(frozen=True, slots=True)
class Primitive:
    """A user-defined primitive (IEEE 1364-2005, clause 8); ``stores`` if its output is a state."""

    name: str
    place: SourcePlace
    output: str
    inputs: tuple[str, ...]
    stores: bool
    rows: tuple[Row, ...]


class Gate(NamedTuple):
    """A gate primitive with its terminals in order."""

    kind: str
    terminals: list[Tokens]
    place: SourcePlace


class Part(NamedTuple):
    """An instance of a module or a user-defined primitive; a pin is None where connected by position."""

    cell: str
    name: str
    connections: list[tuple[str | None, Tokens]]
    place: SourcePlace


class Assign(NamedTuple):
    """A continuous assignment."""

    left: Tokens
    right: Tokens
    place: SourcePlace


class Process(NamedTuple):
    """An ``always`` block: what stands after that word."""

    tokens: Tokens
    place: SourcePlace


Item: TypeAlias = Gate | Part | Assign | Process


@dataclass(slots=True)
class Module:
    """A module; ``kinds`` are wire, reg, supply0 ... by net, ``ranges`` the bounds of vectors as written.

    ``delayed`` holds nets that a timing check drives as late copies of others (IEEE 1364-2005, 15.5.2). ``unread`` says
    in words why the rest of the text is missing here, or is empty.
    """

    name: str
    place: SourcePlace
    ports: list[str] = field(default_factory=list)
    directions: dict[str, Literal["input", "output", "inout"]] = field(default_factory=dict)
    ranges: dict[str, tuple[int, int]] = field(default_factory=dict)
    kinds: dict[str, str] = field(default_factory=dict)
    delayed: dict[str, str] = field(default_factory=dict)
    items: list[Item] = field(default_factory=list)
    unread: str = ""


@dataclass(frozen=True, slots=True)
class ModuleText:
    """A module not yet read: its text from its name on, and the place of each of its lines."""

    name: str
    text: str
    places: list[SourcePlace]

    @property
    def place(self) -> SourcePlace:
        """Where the module begins."""
        return self.places[0]


Models: TypeAlias = Mapping[str, Primitive | ModuleText]
