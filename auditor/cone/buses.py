"""Nets with several drivers: a bus of three-state drivers, and a cell that drives a net tied to 0 or 1."""

from collections.abc import Mapping

from auditor.cells.library import Function
from auditor.cone.constants import TIES
from auditor.cone.fold import fold
from auditor.cone.wiring import OUTPUT, SEVERAL_DRIVERS, Wiring
from auditor.errors import TroubleList


def driver_of(wiring: Wiring, net: int, known: Mapping[int, int]) -> int:
    """Return the output pin that drives a net under the constants, NO_DRIVER or SEVERAL_DRIVERS.

    A bus whose three-state drivers the mode turns off but for one has that driver.
    """
    driver = int(wiring.driver[net])
    if driver != SEVERAL_DRIVERS:
        return driver
    left = [pin for pin in wiring.pins_on(net, OUTPUT) if not _is_off(wiring, pin, known)]
    return left[0] if len(left) == 1 else SEVERAL_DRIVERS


def _is_off(wiring: Wiring, pin: int, known: Mapping[int, int]) -> bool:
    """Tell whether the mode holds a driver at Z."""
    instance, name = wiring.pin_of(pin)
    cell = wiring.cell(instance)
    disabled = cell.pins[name].three_state if cell else None
    return disabled is not None and fold(disabled, wiring.nets_of(instance), known).constant == 1


def check_ties(wiring: Wiring, known: Mapping[int, int], troubles: TroubleList) -> None:
    """Note every output that drives a net which the text ties to a constant; a tie cell of that constant is fine.

    All nets tied to 0 are one net, so it cannot be told which of them the cone reads: the whole netlist is checked.
    """
    netlist = wiring.netlist
    for net, value in TIES.items():
        for pin in wiring.pins_on(net, OUTPUT):
            instance, name = wiring.pin_of(pin)
            cell = wiring.cell(instance)
            if (cell and cell.pins[name].function == Function((), (str(value),))) or _is_off(wiring, pin, known):
                continue
            troubles.add(
                f"output {name} of {netlist.instance_names[instance]} ({netlist.cell_of(instance).name}) drives a net "
                f"that is tied to {value} as well",
                "leave the cell or the tie out",
                netlist.instance_place(instance),
            )
