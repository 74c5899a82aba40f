"""Every clock pin traced to its root: one net, through buffers, inverters and gates that the mode decides."""

from collections.abc import Mapping
from dataclasses import dataclass, field

from auditor.cells.function import TERNARY, Ternary
from auditor.cells.library import Function
from auditor.cone.fold import Folded, fold
from auditor.cone.trouble import ConeTroubles
from auditor.cone.walk import Stored
from auditor.cone.wiring import NO_DRIVER, SEVERAL_DRIVERS, Wiring


@dataclass(frozen=True, slots=True)
class Root:
    """Where a clock net comes from; ``inverted`` where it is the complement of the root."""

    net: int
    inverted: bool


@dataclass(slots=True)
class ClockTree:
    """Traces clock pins and keeps the gates on the way: output net → (folded function, instance)."""

    wiring: Wiring
    known: Mapping[int, int]
    ports: frozenset[int]
    troubles: ConeTroubles
    gates: dict[int, tuple[Folded, int]] = field(default_factory=dict)
    roots: dict[int, Root | None] = field(default_factory=dict)

    def root_of(self, stored: Stored) -> tuple[Root, Folded] | None:
        """Return the root of a stored bit's clock function and that function on its wire.

        ``inverted`` then says how the clock function itself follows the root. None after noting a trouble.
        """
        folded = fold(stored.storage.clock, self.wiring.nets_of(stored.instance), self.known)
        name = self.wiring.netlist.instance_names[stored.instance]
        if not self._single(folded, stored.instance, f"the clock of {name}"):
            return None
        root = self._root_of_net(folded.wires[0])
        if root is None:
            return None
        return Root(root.net, root.inverted != _inverts(folded)), folded

    def _root_of_net(self, net: int) -> Root | None:
        """Walk back to a root or to a net whose root is known, then tell every net on the way."""
        way: dict[int, bool] = {}  # net → whether the gate behind it inverts
        root: Root | None = None
        while net not in self.roots:
            if net in way:
                self.troubles.loop([self.gates[passed][1] for passed in way])
                break
            behind = self._behind(net)
            if behind is None:
                break
            if not behind.wires:
                root = Root(net, False)
                way[net] = False
                break
            way[net] = _inverts(behind)
            net = behind.wires[0]
        else:
            root = self.roots[net]
        for passed, inverts in reversed(way.items()):
            root = root and Root(root.net, root.inverted != inverts)
            self.roots[passed] = root
        return root

    def _behind(self, net: int) -> Folded | None:
        """Return the buffer or inverter behind a clock net; without wires if the net is a root; None in trouble."""
        driver = int(self.wiring.driver[net])
        if net in self.ports and driver == NO_DRIVER:
            return Folded(Function((), ("0",)), ())
        if driver == SEVERAL_DRIVERS or net in self.ports:
            self.troubles.several_drivers(net)
            return None
        if driver == NO_DRIVER:
            self.troubles.driverless(net)
            return None
        instance, pin = self.wiring.pin_of(driver)
        cell = self.wiring.cell(instance)
        function = cell.pins[pin].function if cell else None
        if cell is None or function is None or cell.not_understood:
            self.troubles.unknown_cell(instance)
            return None
        nets = self.wiring.nets_of(instance)
        name = self.wiring.netlist.net_names[net]
        if any(storage.variable in function.inputs for storage in cell.storage):
            self.troubles.others.add(
                f"clock net {name} comes from the storage element {self.wiring.netlist.instance_names[instance]}",
                "give --mode a constant that selects a clock from a port",
                self.wiring.netlist.instance_place(instance),
            )
            return None
        folded = fold(function, nets, self.known)
        if not self._single(folded, instance, f"clock net {name}"):
            return None
        self.gates[net] = (folded, instance)
        return folded

    def _single(self, folded: Folded, instance: int, what: str) -> bool:
        if len(folded.wires) == 1 and folded.wires[0] >= 0:
            return True
        netlist = self.wiring.netlist
        place = netlist.instance_place(instance)
        if not folded.wires:
            self.troubles.others.add(f"{what} is constant under the mode", "change the mode so that it runs", place)
            return False
        names = [netlist.net_names[wire] if wire >= 0 else "an open pin" for wire in folded.wires]
        self.troubles.others.add(
            f"{what} is left open by the mode: {netlist.instance_names[instance]} makes it of {' and '.join(names)}",
            "give --mode a value for all of them but the clock",
            place,
        )
        return False


def _inverts(folded: Folded) -> bool:
    """Tell whether a function of one wire, which depends on it, is its complement."""
    at_zero: list[Ternary] = [0]
    return folded.function.evaluate(at_zero, TERNARY) == 1
