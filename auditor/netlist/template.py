"""One module under local net numbers: what every instance of it has in common, and what all modules share."""

from collections.abc import Collection, Mapping
from dataclasses import dataclass, field

from auditor.errors import TroubleList
from auditor.netlist.netlist import CellType
from auditor.netlist.scope import PortBits, Scope
from auditor.verilog.statements import Module


@dataclass(frozen=True, slots=True)
class Child:
    """An instance of a module that is expanded; ``pairs`` of (net in the child, net here)."""

    module: str
    name: str
    line: int
    pairs: list[tuple[int, int]]


@dataclass(slots=True)
class Template:
    """The columns of one module, as in Netlist, over local nets; ``pin_count`` by instance."""

    scope: Scope
    ports: dict[str, PortBits]
    names: list[str] = field(default_factory=list)
    types: list[int] = field(default_factory=list)
    lines: list[int] = field(default_factory=list)
    pin_count: list[int] = field(default_factory=list)
    pin_name: list[int] = field(default_factory=list)
    pin_net: list[int] = field(default_factory=list)
    children: list[Child] = field(default_factory=list)


@dataclass(slots=True)
class Registry:
    """What all templates of a netlist share: types, pin names, and the ports of modules."""

    modules: Mapping[str, Module]
    expanded: Collection[str]
    types: dict[CellType, int] = field(default_factory=dict)
    pins: dict[str, int] = field(default_factory=dict)
    templates: dict[str, Template] = field(default_factory=dict)
    interfaces: dict[str, dict[str, PortBits] | None] = field(default_factory=dict)

    def interface(self, cell: str) -> dict[str, PortBits] | None:
        """Return the ports of a cell or module in order, or None where no module describes it."""
        if cell in self.templates:
            return self.templates[cell].ports
        if cell not in self.interfaces:
            module = self.modules.get(cell)
            self.interfaces[cell] = None if module is None else Scope(module, TroubleList()).ports()
        return self.interfaces[cell]

    def type_number(self, cell: CellType) -> int:
        """Return the index of a cell type."""
        return self.types.setdefault(cell, len(self.types))

    def pin_number(self, pin: str) -> int:
        """Return the index of a pin name."""
        return self.pins.setdefault(pin, len(self.pins))
