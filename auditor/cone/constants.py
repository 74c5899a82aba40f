"""The mode: which nets are constant, and what follows from that through the gates, in three values."""

from collections import deque
from collections.abc import Iterable, Mapping

from auditor.cells.function import TERNARY
from auditor.cells.library import Function
from auditor.cone.names import find_net
from auditor.cone.wiring import NO_DRIVER, Wiring, gate_functions
from auditor.errors import TroubleList
from auditor.netlist.netlist import CONSTANT_0, CONSTANT_1, Netlist

TIES = {CONSTANT_0: 0, CONSTANT_1: 1}


def resolve_mode(
    netlist: Netlist, mode: Mapping[str, int], troubles: TroubleList, what: str = "mode"
) -> dict[int, int]:
    """Return net → value for the names of the mode; unknown names and contradictions go to ``troubles``.

    ``what`` the constants are of, for the texts.
    """
    values: dict[int, int] = {}
    said: dict[int, str] = {}
    for name, value in mode.items():
        net = find_net(netlist, name, f"{what} pin", troubles)
        if net is None:
            continue
        known = TIES.get(net, values.get(net))
        if known is not None and known != value:
            other = f"{what} gives {said[net]} = {known}" if net in said else f"it is tied to {known}"
            troubles.add(
                f"contradictory constants: {what} gives {name} = {value}, but {other} and both are one net",
                "give each net one value",
                netlist.net_place(net),
            )
        values[net], said[net] = value, name
    return values


def spread(wiring: Wiring, known: dict[int, int], fresh: Iterable[int]) -> None:
    """Add to ``known`` every net whose value follows from it; ``fresh`` are the nets that are new in it.

    A net that is in ``known`` already keeps its value: a forced net is stronger than its driver.
    """
    waiting = deque(fresh)
    while waiting:
        for instance in wiring.gate_inputs_on(waiting.popleft()):
            cell = wiring.cell(instance)
            functions = gate_functions(cell) if cell else []
            nets = wiring.nets_of(instance)
            for output, function in functions:
                net = nets.get(output)
                if net is None or net in known:
                    continue
                value = evaluate_known(function, nets, known)
                if value is not None:
                    known[net] = value
                    waiting.append(net)


def evaluate_known(function: Function, nets: Mapping[str, int], known: Mapping[int, int]) -> int | None:
    """Return the value of a cell function under the constants, None where they do not decide it."""
    return function.evaluate([known.get(nets.get(name, -1)) for name in function.inputs], TERNARY)


def check_forced(wiring: Wiring, mode: Mapping[int, int], ports: frozenset[int], troubles: TroubleList) -> list[int]:
    """Return the internal nets that the mode truly forces; one whose driver cannot take the value is a trouble."""
    netlist = wiring.netlist
    known = {**TIES, **{net: value for net, value in mode.items() if net in ports}}
    spread(wiring, known, list(known))
    forced = []
    for net, value in mode.items():
        if net in ports or wiring.driver[net] == NO_DRIVER:
            continue
        if known.get(net) == 1 - value:
            troubles.add(
                f"contradictory constants: mode forces {netlist.net_names[net]} = {value}, "
                f"but its driver gives {1 - value} under the other constants",
                "drop the forced net or mend the constants of the ports",
                netlist.net_place(net),
            )
        elif net not in known:
            forced.append(net)
    return forced
