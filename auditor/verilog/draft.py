"""A module while its text is read: what either lane has found so far, and what still waits for the grammar lane."""

from collections.abc import Sequence
from dataclasses import dataclass, field
from typing import Literal, NamedTuple, TypeAlias, TypeVar

from auditor.errors import TroubleList
from auditor.notation import SourcePlace
from auditor.verilog.plain import Item
from auditor.verilog.statements import Assign, Declaration, Direction, HeaderPort, Instance, Module, Range

_Element = TypeVar("_Element")

ItemKind: TypeAlias = Literal["declaration", "parameter", "instance", "assign"]


class Declared(NamedTuple):
    """One declared name; ``direction`` None for what is no port, ``kind`` None where only a direction is said."""

    name: str
    direction: Direction | None
    kind: str | None
    range: Range | None
    line: int


class Waiting(NamedTuple):
    """An item for the grammar lane, and where among the instances and assigns its result belongs."""

    kind: ItemKind
    item: Item
    instances_before: int
    assigns_before: int


@dataclass(slots=True)
class Draft:
    """A module in the making; ``port_nets`` are the ports that are declared as nets as well.

    ``plain`` turns False with the first parameter: any name may then be a number.
    """

    name: str
    place: SourcePlace
    troubles: TroubleList
    plain: bool = True
    ports: list[HeaderPort] = field(default_factory=list)
    directions: dict[str, Direction] = field(default_factory=dict)
    nets: dict[str, Declaration] = field(default_factory=dict)
    port_nets: set[str] = field(default_factory=set)
    instances: list[Instance] = field(default_factory=list)
    assigns: list[Assign] = field(default_factory=list)
    waiting: list[Waiting] = field(default_factory=list)

    def wait(self, kind: ItemKind, item: Item) -> None:
        """Leave an item to the grammar lane."""
        self.waiting.append(Waiting(kind, item, len(self.instances), len(self.assigns)))

    def trouble(self, found: str, remedy: str, line: int) -> None:
        """Note a trouble on a line of this module."""
        self.troubles.add(found, remedy, SourcePlace(self.place.file, line))

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
            found = f"{name} is declared again, first on line {before.line}"
            self.trouble(found, "leave one of the declarations out", line)
        elif before.range != bounds:
            found = f"{name} is declared with another range than on line {before.line}"
            self.trouble(found, "give both one range", line)
        else:
            self.nets[name] = Declaration(kind or before.kind, bounds, before.line)
            self.port_nets.add(name)
            if direction:
                self.directions[name] = direction

    def merge(self, results: Sequence[tuple[Waiting, Instance | Assign]]) -> None:
        """Put the results of the grammar lane where they stand in the text."""
        self.instances = _merged(
            self.instances, [(w.instances_before, r) for w, r in results if isinstance(r, Instance)]
        )
        self.assigns = _merged(self.assigns, [(w.assigns_before, r) for w, r in results if isinstance(r, Assign)])

    def finish(self) -> Module:
        """Return the module; instances of primitives without a name get a stable one."""
        if not all(instance.name for instance in self.instances):
            self._name_the_unnamed()
        return Module(
            self.name, self.place, tuple(self.ports), self.directions, self.nets, self.instances, self.assigns
        )

    def _name_the_unnamed(self) -> None:
        """Name them by gate and number in the order of the text; names that the user has taken are passed over."""
        taken = {instance.name for instance in self.instances} | self.nets.keys()
        count: dict[str, int] = {}
        for position, instance in enumerate(self.instances):
            if instance.name:
                continue
            if not instance.primitive:
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
