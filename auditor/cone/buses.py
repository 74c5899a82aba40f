"""Nets with several drivers: a bus whose three-state drivers the mode turns off but for one has a driver."""

from collections.abc import Mapping

from auditor.cone.fold import fold
from auditor.cone.wiring import OUTPUT, SEVERAL_DRIVERS, Wiring


def driver_of(wiring: Wiring, net: int, known: Mapping[int, int]) -> int:
    """Return the output pin that drives a net under the constants, NO_DRIVER or SEVERAL_DRIVERS."""
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
