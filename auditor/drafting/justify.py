"""Which constants give a net a value: walked back to ports where that works, else the net itself is held."""

from collections.abc import Iterable, Mapping
from dataclasses import dataclass, field
from itertools import combinations, product

from auditor.cells.function import truth_table
from auditor.cells.library import Function
from auditor.cone.constants import spread
from auditor.cone.fold import OPEN_PIN, Folded, fold
from auditor.cone.wiring import NO_DRIVER, Wiring
from auditor.drafting.part import Part

STEPS = 200  # gates that one walk passes
OWN_BIT = -2  # the wire of a stored bit inside its own cell
WIDEST = 5  # wires of a gate for which combinations of constants are tried


@dataclass(slots=True)
class Constants:
    """The constants of a part as they grow: what was ``chosen`` (net → value), and all that follows."""

    part: Part
    chosen: dict[int, int] = field(default_factory=dict)
    known: dict[int, int] = field(default_factory=lambda: {0: 0, 1: 1})

    def __post_init__(self) -> None:
        self.known.update(self.chosen)
        spread(self.part.wiring, self.known, list(self.known))

    def with_also(self, more: Mapping[int, int]) -> "Constants":
        """Return these constants and some more."""
        return Constants(self.part, {**self.chosen, **more})

    def value_of(self, folded: Folded) -> int | None:
        """Return the value of a function under the constants, None where they leave it open."""
        return settled(folded, self.known).constant


def gate_behind(wiring: Wiring, net: int, known: Mapping[int, int]) -> Folded | None:
    """Return the gate that drives a net, under the constants; None where a port, storage or the unknown drives it."""
    driver = int(wiring.driver[net])
    if driver <= NO_DRIVER:
        return None
    instance, pin = wiring.pin_of(driver)
    cell = wiring.cell(instance)
    function = cell.pins[pin].function if cell and not cell.not_understood else None
    if cell is None or function is None or any(storage.variable in function.inputs for storage in cell.storage):
        return None
    folded = fold(function, wiring.nets_of(instance), known)
    return None if OPEN_PIN in folded.wires else folded


def sources(wiring: Wiring, nets: Iterable[int], known: Mapping[int, int]) -> frozenset[int]:
    """Return the nets that decide some nets and that no gate drives: ports and stored bits."""
    seen = {net for net in nets if net not in known}
    waiting, found = list(seen), set()
    while waiting:
        net = waiting.pop()
        behind = gate_behind(wiring, net, known)
        if behind is None:
            found.add(net)
            continue
        for wire in behind.wires:
            if wire not in seen:
                seen.add(wire)
                waiting.append(wire)
    return frozenset(found)


def justify(constants: Constants, goal: Folded, value: int) -> dict[int, int] | None:
    """Return constants under which the function ``goal`` has the value, or None.

    The walk goes back gate by gate and takes at each the single input that decides it, a port where there is one.
    It does not try again: where it meets a contradiction, or would hold an element of the register, the inputs of
    the goal are held themselves.
    """
    part = constants.part
    for deep in (True, False):
        found = _walk(constants, goal, value, deep)
        if found is None or (deep and not found.keys() <= part.ports | part.cut):
            continue
        if constants.with_also(found).value_of(goal) == value:
            return found
    return None


def justify_net(constants: Constants, net: int, value: int) -> dict[int, int] | None:
    """Return constants under which a net has the value; the net itself where nothing behind it gives that."""
    return justify(constants, Folded(Function(("0",), ("$0",)), (net,)), value)


def _walk(constants: Constants, goal: Folded, value: int, deep: bool) -> dict[int, int] | None:
    wiring, ports = constants.part.wiring, constants.part.ports
    found: dict[int, int] = {}
    decided = dict(constants.known)
    waiting = [*_settings(goal, value, ports)]
    for _ in range(STEPS):
        if not waiting:
            return found
        net, bit = waiting.pop()
        if net in decided:
            if decided[net] != bit:
                return None
            continue
        decided[net] = bit
        behind = gate_behind(wiring, net, decided) if deep and net not in ports else None
        if behind is None or not behind.wires:
            found[net] = bit
        else:
            waiting += _settings(behind, bit, ports)
    return None


def _settings(folded: Folded, value: int, ports: frozenset[int]) -> list[tuple[int, int]]:
    """Return the fewest wire values that give a function the value, a port before an internal net."""
    count = len(folded.wires)
    if count > WIDEST:
        return [(wire, bit) for wire in folded.wires[:1] for bit in (0, 1) if _fixed(folded, {wire: bit}) == value]
    order = sorted(range(count), key=lambda k: (folded.wires[k] not in ports, k))
    for size in range(1, count + 1):
        for places in combinations(order, size):
            for bits in product((1, 0), repeat=size):
                setting = {folded.wires[k]: bit for k, bit in zip(places, bits, strict=True)}
                if _fixed(folded, setting) == value:
                    return list(setting.items())
    return []


def _fixed(folded: Folded, setting: Mapping[int, int]) -> int | None:
    return settled(folded, setting).constant


def settled(folded: Folded, setting: Mapping[int, int]) -> Folded:
    """Return a function on its wires with some of them constant."""
    return fold(folded.function, dict(zip(folded.function.inputs, folded.wires, strict=True)), setting)


def is_sum(folded: Folded) -> bool:
    """Tell whether a function of at most ``WIDEST`` wires is their XOR or its complement."""
    count = len(folded.wires)
    if not 0 < count <= WIDEST:
        return False
    parity = sum((k.bit_count() & 1) << k for k in range(1 << count))
    return truth_table(folded.function) in (parity, parity ^ (1 << (1 << count)) - 1)


def root_of(wiring: Wiring, net: int, known: Mapping[int, int]) -> tuple[int, bool]:
    """Return the net at the start of a line of buffers and inverters, and whether the line inverts."""
    inverted, seen = False, {net}
    while (behind := gate_behind(wiring, net, known)) and len(behind.wires) == 1 and behind.wires[0] not in seen:
        inverted ^= truth_table(behind.function) == 0b01
        net = behind.wires[0]
        seen.add(net)
    return net, inverted
