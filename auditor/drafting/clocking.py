"""The constants that let the clock through to a register and keep its asynchronous pins inactive."""

import re
from collections import Counter
from itertools import combinations, product

from auditor.cells.library import Function, Storage
from auditor.cone.fold import OPEN_PIN, Folded, fold
from auditor.cone.wiring import NO_DRIVER
from auditor.drafting.justify import Constants, justify, settled, sources
from auditor.drafting.part import storage_of

_LIKE_A_CLOCK = re.compile(r"cl(oc)?k|\bck|_ck|ck\b", re.IGNORECASE)
_IDENTITY = Function(("0",), ("$0",))
LATCHED = -10  # wires from here down stand for the stored bits of a clock gate


def open_clocks(constants: Constants) -> dict[int, int]:
    """Return what opens the clock gates and turns the clock multiplexers on the way to the elements.

    The clock is the source that stands behind most of their clock pins. Nothing is returned for a clock that
    cannot be opened; the proof then says why.
    """
    wiring = constants.part.wiring
    pins = _clock_nets(constants)
    behind = {net: _clock_sources(constants, net) for net in dict.fromkeys(pins)}
    votes = Counter(source for net in pins for source in behind[net])
    if not votes:
        return {}
    names = wiring.netlist.net_names
    root = max(votes, key=lambda net: (votes[net], bool(_LIKE_A_CLOCK.search(names[net])), -net))
    found: dict[int, int] = {}
    for net, starts in behind.items():
        if root in starts:
            found |= _open_way(constants.with_also(found), net, root)
    return found


def release_resets(constants: Constants) -> dict[int, int]:
    """Return what keeps asynchronous pins inactive where no single port decides them: those an audit assumes itself."""
    wiring, found = constants.part.wiring, dict[int, int]()
    now = constants
    for active in dict.fromkeys(_asynchronous(constants)):
        behind = sources(wiring, active.wires, now.known)
        if behind and not (len(behind) == 1 and behind <= constants.part.ports):
            found |= justify(now, active, 0) or {}
            now = constants.with_also(found)
    return found


def _asynchronous(constants: Constants) -> list[Folded]:
    """Return the conditions of all asynchronous pins of the elements, as far as they are connected."""
    wiring = constants.part.wiring
    conditions = [
        fold(condition, wiring.nets_of(instance), constants.known)
        for instance in constants.part.elements
        for storage in storage_of(wiring, instance)
        for condition in (storage.clear, storage.preset)
        if condition is not None
    ]
    return [folded for folded in conditions if OPEN_PIN not in folded.wires]


def _clock_nets(constants: Constants) -> list[int]:
    """Return the net of every clock pin of the elements, and those of the latches among their clock gates."""
    wiring, nets = constants.part.wiring, []
    for instance in range(len(wiring.netlist.instance_type)):
        for storage in storage_of(wiring, instance):
            wires = fold(storage.clock, wiring.nets_of(instance), constants.known).wires
            nets += [wire for wire in wires if wire != OPEN_PIN]
    return nets


def _clock_gate(constants: Constants, net: int) -> tuple[Folded, dict[int, tuple[int, Storage]]] | None:
    """Return what drives a clock net; the stored bits of a clock gate get wires of their own, told beside it."""
    wiring = constants.part.wiring
    driver = int(wiring.driver[net])
    if driver <= NO_DRIVER:
        return None
    instance, pin = wiring.pin_of(driver)
    cell = wiring.cell(instance)
    function = cell.pins[pin].function if cell else None
    if cell is None or function is None or any(storage.kind == "flip-flop" for storage in cell.storage):
        return None
    wire_of, latches = wiring.nets_of(instance), dict[int, tuple[int, Storage]]()
    if not set(function.inputs) & wire_of.keys():
        return None  # a latch by itself: its output is no gated clock
    for bit, storage in enumerate(cell.storage):
        wire_of[storage.variable] = LATCHED - bit
        latches[LATCHED - bit] = (instance, storage)
    folded = fold(function, wire_of, constants.known)
    return None if OPEN_PIN in folded.wires else (folded, latches)


def _clock_sources(constants: Constants, net: int) -> frozenset[int]:
    """Return the nets behind a clock net that no gate and no clock gate drives."""
    seen, waiting, found = {net}, [net], set()
    while waiting:
        behind = _clock_gate(constants, wire := waiting.pop())
        if behind is None:
            found.add(wire)
            continue
        fresh = [w for w in behind[0].wires if w >= 0 and w not in seen]
        seen.update(fresh)
        waiting += fresh
    return frozenset(found)


def _open_way(constants: Constants, net: int, root: int) -> dict[int, int]:
    """Return what makes one clock net follow the root."""
    found: dict[int, int] = {}
    passed = {net}
    while net != root:
        now = constants.with_also(found)
        behind = _clock_gate(now, net)
        if behind is None:
            break
        folded, latches = behind
        way = next((w for w in folded.wires if w >= 0 and root in _clock_sources(now, w)), None)
        if way is None or way in passed:
            break
        for wire, bit in _leaving_only(folded, way).items():
            goal = Folded(_IDENTITY, (wire,))
            if wire in latches:
                instance, storage = latches[wire]
                goal = fold(storage.data, now.part.wiring.nets_of(instance), now.known)
            found |= justify(constants.with_also(found), goal, bit) or {}
        net = way
        passed.add(net)
    return found


def _leaving_only(folded: Folded, way: int) -> dict[int, int]:
    """Return the fewest constants of the other wires under which a function depends on ``way`` alone."""
    others = [wire for wire in folded.wires if wire != way]
    for size in range(min(len(others), 4) + 1):
        for wires in combinations(others, size):
            for bits in product((1, 0), repeat=size):
                setting = dict(zip(wires, bits, strict=True))
                if settled(folded, setting).wires == (way,):
                    return setting
    return {}
