"""A module while its text is read: what either lane has found so far, and what still waits for the grammar lane."""

from collections.abc import Container, Sequence
from dataclasses import dataclass, field, replace
from typing import Literal, NamedTuple, TypeAlias, TypeVar

from auditor.errors import TroubleList
from auditor.notation import SourcePlace
from auditor.verilog.plain import Item
from auditor.verilog.statements import (
    Assign,
    Connection,
    Constant,
    Declaration,
    Direction,
    HeaderPort,
    Instance,
    Lines,
    Module,
    Range,
    Reading,
)

# Stands in a list of connections, known by identity, for `.*`: every port that is not connected otherwise.
EVERY_PORT = Connection(".*", None)

_Element = TypeVar("_Element")

ItemKind: TypeAlias = Literal["declaration", "parameter", "defparam", "instance", "assign"]


class Declared(NamedTuple):
    """One declared name; ``direction`` None for what is no port, ``kind`` None where only a direction is said."""

    name: str
    direction: Direction | None
    kind: str | None
    range: Range | None
    line: int


class Waiting(NamedTuple):
    """An item for the grammar lane, and where among the instances and assigns its result belongs.

    ``extra`` is what the item says beside its text: the kind of a declared net, the instance of a defparam, or
    ``.*`` among the connections of an instance.
    """

    kind: ItemKind
    item: Item
    instances_before: int
    assigns_before: int
    extra: str


@dataclass(slots=True)
class Draft:
    """A module in the making; ``port_nets`` are the ports that are declared as nets as well.

    The module begins on line ``start`` of the whole text, whose lines ``spans`` places; its own lines are less by
    ``shift``, so that they are those of the file in which it begins. ``plain`` turns False with the first parameter:
    any name may then be a number.
    ``given`` are values for its parameters; ``every_port`` says whether an instance connects `.*`,
    ``described`` whether it is a cell that a library describes, so that only its ports matter, and
    ``passed_over`` whether it holds more than ports.
    """

    name: str
    place: SourcePlace
    start: int
    spans: Lines
    troubles: TroubleList
    reading: Reading
    plain: bool = True
    implicit_nets: bool = True
    last_line: int = 0
    every_port: bool = False
    described: bool = False
    passed_over: bool = False
    given: dict[str, Constant] = field(default_factory=dict)
    signed: set[str] = field(default_factory=set)
    ports: list[HeaderPort] = field(default_factory=list)
    directions: dict[str, Direction] = field(default_factory=dict)
    nets: dict[str, Declaration] = field(default_factory=dict)
    port_nets: set[str] = field(default_factory=set)
    instances: list[Instance] = field(default_factory=list)
    assigns: list[Assign] = field(default_factory=list)
    waiting: list[Waiting] = field(default_factory=list)

    @property
    def shift(self) -> int:
        """Return by how much the lines of the whole text are ahead of the module's."""
        return self.start - self.place.line

    def place_of(self, line: int) -> SourcePlace:
        """Return where a line of this module stands."""
        return self.spans.place(line + self.shift)

    def wait(self, kind: ItemKind, item: Item, extra: str = "") -> None:
        """Leave an item to the grammar lane."""
        self.waiting.append(Waiting(kind, item, len(self.instances), len(self.assigns), extra))

    def trouble(self, found: str, remedy: str, line: int) -> None:
        """Note a trouble on a line of this module."""
        self.troubles.add(found, remedy, self.place_of(line))

    def note(self, fact: str, line: int) -> None:
        """Note what is no trouble and should be known."""
        self.reading.notes.append(f"{self.place_of(line)}: {fact}")

    def variant(self, name: str, given: dict[str, Constant]) -> "Draft":
        """Return a copy under another name, with values for its parameters."""
        return replace(
            self,
            name=name,
            given=given,
            ports=[*self.ports],
            directions={**self.directions},
            nets={**self.nets},
            port_nets={*self.port_nets},
            signed={*self.signed},
            instances=[*self.instances],
            assigns=[*self.assigns],
            waiting=[*self.waiting],
        )

    def declare_all(
        self, names: Sequence[str], direction: Direction | None, kind: str | None, bounds: Range | None, line: int
    ) -> None:
        """Enter names of one declaration on one line."""
        if self.nets.keys().isdisjoint(names) and len(set(names)) == len(names):
            self.nets.update(dict.fromkeys(names, Declaration(kind or "wire", bounds, line)))
            if direction:
                self.directions.update(dict.fromkeys(names, direction))
            if direction and kind:
                self.port_nets.update(names)
        else:
            for name in names:
                self.declare(Declared(name, direction, kind, bounds, line))

    def declare(self, declared: Declared) -> None:
        """Enter a declared name. A port may be declared once as port and once as net, with the same range."""
        name, direction, kind, bounds, line = declared
        before = self.nets.get(name)
        if before is None:
            self.declare_all([name], direction, kind, bounds, line)
            return
        was_port, was_net = name in self.directions, name in self.port_nets or name not in self.directions
        if (direction and was_port) or (kind and was_net):
            found = f"{name} is declared again, first {self._where(before.line, line)}"
            self.trouble(found, "leave one of the declarations out", line)
        elif before.range != bounds:
            found = f"{name} is declared with another range than {self._where(before.line, line)}"
            self.trouble(found, "give both one range", line)
        else:
            self.nets[name] = Declaration(kind or before.kind, bounds, before.line)
            self.port_nets.add(name)
            if direction:
                self.directions[name] = direction

    def _where(self, line: int, now: int) -> str:
        """Say where a line stands, as seen from another."""
        place = self.place_of(line)
        return f"on line {place.line}" if place.file == self.place_of(now).file else f"at {place}"

    def merge(self, results: Sequence[tuple[Waiting, Instance | Assign]]) -> None:
        """Put the results of the grammar lane where they stand in the text."""
        self.instances = _merged(
            self.instances, [(w.instances_before, r) for w, r in results if isinstance(r, Instance)]
        )
        self.assigns = _merged(self.assigns, [(w.assigns_before, r) for w, r in results if isinstance(r, Assign)])

    def finish(self, primitives: Container[str]) -> Module:
        """Return the module; instances of gates and of the text's own primitives without a name get a stable one."""
        if not all(instance.name for instance in self.instances):
            self._name_the_unnamed(primitives)
        return Module(
            name=self.name,
            place=self.place,
            ports=tuple(self.ports),
            directions=self.directions,
            nets=self.nets,
            instances=self.instances,
            assigns=self.assigns,
            spans=self.spans.between(self.start, max(self.start, self.last_line + self.shift)),
            implicit_nets=self.implicit_nets,
        )

    def _name_the_unnamed(self, primitives: Container[str]) -> None:
        """Name them by gate and number in the order of the text; names that the user has taken are passed over."""
        taken = {instance.name for instance in self.instances} | self.nets.keys()
        count: dict[str, int] = {}
        for position, instance in enumerate(self.instances):
            if instance.name:
                continue
            if not instance.primitive and instance.cell not in primitives:
                self.trouble(f"an instance of {instance.cell} has no name", "name it", instance.line)
            count[instance.cell] = count.get(instance.cell, 0) + 1
            name = f"{instance.cell}${count[instance.cell]}"
            while name in taken:
                name += "$"
            taken.add(name)
            self.instances[position] = instance._replace(name=name)


def _merged(plain: list[_Element], results: list[tuple[int, _Element]]) -> list[_Element]:
    """Insert each result before the plain element of its index."""
    if not results:
        return plain
    merged: list[_Element] = []
    last = 0
    for index, element in results:
        merged += plain[last:index]
        merged.append(element)
        last = index
    return merged + plain[last:]
