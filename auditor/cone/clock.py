"""Every clock pin traced to its root: one net, through buffers, inverters and gates that the mode decides."""

from collections.abc import Sequence
from dataclasses import dataclass, field

from auditor.cells.function import TERNARY, Ternary, truth_table
from auditor.cells.library import Cell, Function, Storage
from auditor.cone.buses import driver_of
from auditor.cone.cone import ClockLatch
from auditor.cone.fold import Folded, fold
from auditor.cone.trouble import ConeTroubles
from auditor.cone.walk import Stored, Walk
from auditor.cone.wiring import NO_DRIVER, SEVERAL_DRIVERS, Wiring


@dataclass(frozen=True, slots=True)
class Root:
    """Where a clock net comes from; ``inverted`` where it is the complement of the root."""

    net: int
    inverted: bool


@dataclass(slots=True)
class ClockTree:
    """Traces clock pins under what a finished walk knows.

    ``gates``    the gates on the way: output net → (folded function, instance)
    ``latches``  the stored bits of the clock gates among them, which the mode holds open
    """

    walk: Walk
    gates: dict[int, tuple[Folded, int]] = field(default_factory=dict)
    latches: dict[int, ClockLatch] = field(default_factory=dict)
    roots: dict[int, Root | None] = field(default_factory=dict)

    @property
    def wiring(self) -> Wiring:
        """The netlist with directions."""
        return self.walk.wiring

    @property
    def troubles(self) -> ConeTroubles:
        """Where troubles are noted."""
        return self.walk.troubles

    def root_of(self, stored: Stored) -> tuple[Root, Folded] | None:
        """Return the root of a stored bit's clock function and that function on its wire.

        ``inverted`` then says how the clock function itself follows the root. None after noting a trouble.
        """
        folded = fold(stored.storage.clock, self.wiring.nets_of(stored.instance), self.walk.known)
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
        driver = driver_of(self.wiring, net, self.walk.known)
        if net in self.walk.ports and driver == NO_DRIVER:
            return Folded(Function((), ("0",)), ())
        if driver == SEVERAL_DRIVERS or net in self.walk.ports:
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
        name = self.wiring.netlist.net_names[net]
        held = self._held_open(instance, cell, function, name)
        if held is None:
            return None
        known = {**self.walk.known, **held} if held else self.walk.known
        folded = fold(function, self.walk.wires_of(instance, cell), known)
        if not self._single(folded, instance, f"clock net {name}"):
            return None
        gate = self.wiring.netlist.instance_names[instance]
        for bit in (latch.bit for wire, latch in self.latches.items() if wire in held):
            own_clock = fold(cell.storage[bit].clock, self.walk.wires_of(instance, cell), self.walk.known)
            if own_clock.wires != folded.wires:
                self.troubles.others.add(
                    f"the latch of clock gate {gate} has another clock than its gate",
                    "give --mode the constants that select one clock",
                    self.wiring.netlist.instance_place(instance),
                )
                return None
        self.gates[net] = (folded, instance)
        return folded

    def _held_open(self, instance: int, cell: Cell, function: Function, name: str) -> dict[int, int] | None:
        """Return what the mode holds in the latches of a clock gate; None after noting that it holds nothing.

        A latch whose data is constant carries that constant once its own clock has run for a cycle.
        """
        held: dict[int, int] = {}
        wire_of = self.walk.wires_of(instance, cell)
        for bit, storage in enumerate(cell.storage):
            if storage.variable not in function.inputs:
                continue
            data = fold(storage.data, wire_of, self.walk.known)
            if storage.kind != "latch" or data.constant is None:
                self._stored_clock(instance, storage, data, name)
                return None
            wire = wire_of[storage.variable]
            held[wire] = data.constant
            self.latches[wire] = ClockLatch(instance, bit, wire)
        return held

    def _stored_clock(self, instance: int, storage: Storage, data: Folded, name: str) -> None:
        """Note a clock that a flip-flop makes, or a clock gate left open with the condition under which it passes."""
        netlist = self.wiring.netlist
        gate, place = netlist.instance_names[instance], netlist.instance_place(instance)
        if storage.kind == "flip-flop":
            self.troubles.others.add(
                f"clock net {name} comes from the storage element {gate}",
                "give --mode a constant that selects a clock from a port",
                place,
            )
            return
        told = [self._wire_name(wire) for wire in data.wires]
        passes = condition_text(data.function, told)
        self.troubles.others.add(
            f"clock net {name} is left open by the mode: the clock gate {gate} passes it only after {passes}",
            f"give --mode a value for {' and '.join(told)}",
            place,
        )

    def _wire_name(self, wire: int) -> str:
        names = self.wiring.netlist.net_names
        return names[wire] if 0 <= wire < len(names) else "a stored bit" if wire >= 0 else "an open pin"

    def _single(self, folded: Folded, instance: int, what: str) -> bool:
        if len(folded.wires) == 1 and folded.wires[0] >= 0:
            return True
        netlist = self.wiring.netlist
        place = netlist.instance_place(instance)
        if not folded.wires:
            self.troubles.others.add(f"{what} is constant under the mode", "change the mode so that it runs", place)
            return False
        names = [self._wire_name(wire) for wire in folded.wires]
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


def condition_text(function: Function, names: Sequence[str]) -> str:
    """Return in words when a function of few inputs is 1: as settings of all of them, joined by or."""
    if len(names) > 3:
        return f"a condition on {', '.join(names)}"
    table = truth_table(function)
    settings = [k for k in range(1 << len(names)) if table >> k & 1]
    return " or ".join(" and ".join(f"{name} = {k >> j & 1}" for j, name in enumerate(names)) for k in settings)
