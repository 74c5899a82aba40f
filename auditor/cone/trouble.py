"""The troubles of a cone: collected over the whole walk and told together, the unknown cells in one list."""

from dataclasses import dataclass, field

from auditor.cells.cell_table import stub
from auditor.cone.wiring import OUTPUT, UNKNOWN_CELL, UNLISTED, Wiring
from auditor.errors import TroubleList
from auditor.notation import SourcePlace, natural_order

MOST_TOLD = 100  # instances of a loop that its trouble names


@dataclass(slots=True)
class ConeTroubles:
    """Notes what keeps the cone from being closed.

    ``loose`` takes nets without driver and open pins: they are told only where no cell is unknown, because an
    unknown cell may well drive or ignore them. ``others`` takes the rest.
    """

    wiring: Wiring
    others: TroubleList = field(default_factory=TroubleList)
    loose: TroubleList = field(default_factory=TroubleList)
    unknown: dict[int, None] = field(default_factory=dict)  # instances of cells without description

    def unknown_cell(self, instance: int) -> None:
        """Note an instance inside the cone whose behaviour no description gives."""
        self.unknown[instance] = None

    def driverless(self, net: int) -> list[int]:
        """Note a net inside the cone that nothing drives; return the unknown cells that may drive it after all."""
        netlist = self.wiring.netlist
        suspects = [self.wiring.pin_of(pin)[0] for pin in self.wiring.pins_on(net, UNKNOWN_CELL)]
        if suspects:
            self.unknown.update(dict.fromkeys(suspects))
            return suspects
        name, place = netlist.net_names[net], netlist.net_place(net)
        unlisted = [self.wiring.pin_of(pin) for pin in self.wiring.pins_on(net, UNLISTED)]
        if net in netlist.undefined:
            self.loose.add(f"net {name} inside the cone is tied to x or z", "tie it to 0 or 1", place)
        elif unlisted:
            instance, pin = unlisted[0]
            self.loose.add(
                f"net {name} inside the cone hangs on pin {pin} of {netlist.instance_names[instance]}, "
                f"which cell {netlist.cell_of(instance).name} does not have as an input or output",
                "mend the pin's name or the cell's description",
                netlist.instance_place(instance),
            )
        else:
            self.loose.add(
                f"net {name} inside the cone has no driver",
                "connect it, make it a port, or give --mode a value for it",
                place,
            )
        return []

    def several_drivers(self, net: int) -> None:
        """Note a net inside the cone with two drivers or more, and name them all."""
        netlist = self.wiring.netlist
        pins = [self.wiring.pin_of(pin) for pin in self.wiring.pins_on(net, OUTPUT)]
        drivers = [
            f"input port {bit}"
            for port in netlist.ports
            if port.direction != "output"
            for bit, port_net in zip(port.bits, port.nets, strict=True)
            if port_net == net
        ]
        drivers += [f"{netlist.instance_names[i]}.{name} ({netlist.instance_place(i)})" for i, name in pins]
        self.others.add(
            f"net {netlist.net_names[net]} has {len(drivers)} drivers: {', '.join(drivers)}",
            "leave one driver to each net",
            netlist.instance_place(pins[0][0]),
        )

    def three_state(self, instance: int, pin: str) -> None:
        """Note a driver that the mode does not hold enabled."""
        netlist = self.wiring.netlist
        self.others.add(
            f"three-state output {pin} of {netlist.instance_names[instance]} is not enabled by the mode",
            "give --mode the constant that enables it",
            netlist.instance_place(instance),
        )

    def open_pin(self, instance: int, pin: str) -> None:
        """Note an input inside the cone that is connected to nothing, and the pins written that its cell has not."""
        netlist, cell = self.wiring.netlist, self.wiring.cell(instance)
        strange = [name for name, _ in netlist.pins_of(instance) if cell and name not in cell.pins]
        mistaken = f"; its cell has no pin {', '.join(strange)}" if strange else ""
        self.loose.add(
            f"input {pin} of {netlist.instance_names[instance]} ({netlist.cell_of(instance).name}) "
            f"inside the cone is not connected{mistaken}",
            "connect it or tie it to 0 or 1",
            netlist.instance_place(instance),
        )

    def loop(self, instances: list[int]) -> None:
        """Note a loop without storage, as the whole path; of a very long one its ends."""
        netlist = self.wiring.netlist
        names = [netlist.instance_names[i] for i in [*instances, instances[0]]]
        if len(names) > MOST_TOLD:
            names[MOST_TOLD // 2 : -MOST_TOLD // 2] = ["..."]
        path = " → ".join(names)
        self.others.add(
            f"loop without storage: {path}",
            "break the loop or give --mode a constant that opens it",
            netlist.instance_place(instances[0]),
        )

    def raise_any(self) -> None:
        """Raise all troubles together, the unknown cells as one list with a cell-table stub."""
        if self.unknown:
            self.others.add(*self._unknown_cells())
        else:
            self.others.troubles.extend(self.loose.troubles)
        self.others.raise_any()

    def _unknown_cells(self) -> tuple[str, str, SourcePlace]:
        netlist = self.wiring.netlist
        kinds: dict[str, list[int]] = {}
        for instance in self.unknown:
            kinds.setdefault(netlist.cell_of(instance).name, []).append(instance)
        lines, stubs = [], []
        for name in sorted(kinds, key=natural_order):
            instances = sorted(kinds[name])
            pins = list(dict.fromkeys(pin for i in instances for pin, _ in netlist.pins_of(i)))
            cell = self.wiring.cell(instances[0])
            because = f", {cell.not_understood}" if cell and cell.not_understood else ""
            lines.append(
                f"  {name} ({', '.join(pins)}): {len(instances)} in the cone, first "
                f"{netlist.instance_names[instances[0]]} at {netlist.instance_place(instances[0])}{because}"
            )
            stubs.append(stub(name, pins))
        return (
            f"{len(kinds)} unknown cell{'s' if len(kinds) > 1 else ''} inside the cone:\n" + "\n".join(lines),
            "give --cells a Liberty file that has them, or a cell table with these entries filled in:\n\n"
            + "\n".join(stubs),
            netlist.instance_place(min(self.unknown)),
        )
