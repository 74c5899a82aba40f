"""From a netlist and a mode to the cone of the channels: the main verb of this room."""

from collections import Counter
from collections.abc import Iterable, Iterator, Mapping, Sequence
from dataclasses import dataclass

from auditor.cells.library import CellLibrary
from auditor.cone.asynchronous import Asynchronous
from auditor.cone.buses import check_ties
from auditor.cone.clock import ClockTree
from auditor.cone.cone import Channel, Cone, Gate, Obstacle
from auditor.cone.constants import TIES, check_forced, resolve_mode, spread
from auditor.cone.graph import cone_graph, feedback_parts, gates_in_order
from auditor.cone.loads import find_loads
from auditor.cone.names import find_channels
from auditor.cone.storage import clock_all, element_of, name_of
from auditor.cone.trouble import ConeTroubles
from auditor.cone.walk import Stored, Walk
from auditor.cone.wiring import Wiring, connect
from auditor.errors import TroubleList, fail
from auditor.netlist.netlist import Netlist
from auditor.notation import natural_order


def extract_cone(netlist: Netlist, library: CellLibrary, mode: Mapping[str, int], channels: Sequence[str] = ()) -> Cone:
    """Return the cone of the channels under the mode (net or port name → 0 or 1).

    Raises ``InputError`` with everything that keeps the cone from being closed: unknown names, contradictory
    constants, unknown cells, nets without driver or with several, ties that a cell drives, loops without storage,
    clocks left open, two clocks, no storage.
    """
    names = TroubleList()
    forced_values = resolve_mode(netlist, mode, names)
    wanted = find_channels(netlist, channels, names)
    wiring = connect(netlist, library)
    ports = frozenset(net for port in netlist.ports if port.direction != "output" for net in port.nets)
    forced = check_forced(wiring, forced_values, ports, names)
    names.raise_any()
    if not wanted:
        raise fail(f"{netlist.top} has no output ports", "give --channels the nets that feed the scan chains")
    known = {**TIES, **forced_values}
    spread(wiring, known, list(known))
    closed = _close(wiring, known, ports, [net for _, net in wanted])
    check_ties(wiring, known, closed.walk.troubles.others)
    return _assemble(wiring, closed, wanted, tuple(forced))


@dataclass(frozen=True, slots=True)
class _Closed:
    """A finished walk and what its asynchronous pins gave.

    ``assumed``    port → the value at which the pins behind it are inactive
    ``reset_by``   port → how many elements its other value sets or clears
    ``obstacles``  stored wire → why its pins stand in the way, and the cure
    """

    walk: Walk
    assumed: Mapping[int, int]
    reset_by: Mapping[int, int]
    obstacles: Mapping[int, tuple[str, str]]


def _close(wiring: Wiring, known: dict[int, int], ports: frozenset[int], channels: list[int]) -> _Closed:
    """Walk until the mode, the assumed asynchronous ports and what follows from both no longer change."""
    asynchronous = Asynchronous(wiring, ports)
    assumed: dict[int, int] = {}
    while True:
        walk = Walk(wiring, known, ports, ConeTroubles(wiring))
        walk.from_channels(channels)
        fresh = dict(walk.settled)
        obstacles = {}
        for stored in walk.met():
            inactive, because, cure = asynchronous.inactive(stored, {**known, **fresh})
            assumed.update(inactive)
            fresh.update(inactive)
            if because:
                obstacles[stored.wire] = (because, cure)
        if not fresh:
            break
        known.update(fresh)
        spread(wiring, known, list(fresh))
    reset_by: Counter[int] = Counter()
    for stored in walk.met():
        walk.resets[stored.wire], by = asynchronous.reset_value(stored, known)
        reset_by.update(by)
    return _Closed(walk, assumed, reset_by, obstacles)


def _assemble(wiring: Wiring, closed: _Closed, wanted: list[tuple[str, int]], forced: tuple[int, ...]) -> Cone:
    netlist, walk, troubles = wiring.netlist, closed.walk, closed.walk.troubles
    stored = sorted(walk.met(), key=lambda s: natural_order(name_of(netlist, s)))
    if not stored:
        troubles.raise_any()
        raise fail(f"no storage behind the channels of {netlist.top}", "give --channels nets that a register feeds")
    order, loop = gates_in_order(walk.gates)
    if loop:
        troubles.loop(loop)
    graph = cone_graph(walk.gates, {s.wire: (walk.data[s.wire], s.instance) for s in stored})
    feedback = feedback_parts(graph, {s.wire: number for number, s in enumerate(stored)})
    tree = ClockTree(walk)
    clocking = clock_all(tree, stored, feedback, graph)
    clock_order, clock_loop = gates_in_order(tree.gates)
    if clock_loop:
        troubles.loop(clock_loop)
    troubles.raise_any()
    inside = [instance for _, instance in (*walk.gates.values(), *tree.gates.values())]
    inside += [s.instance for s in stored]
    elements = tuple(element_of(wiring, walk, clocking, s) for s in stored)
    return Cone(
        netlist=netlist,
        channels=tuple(Channel(name, net, walk.known.get(net)) for name, net in wanted),
        gates=tuple(Gate(net, *walk.gates[net][0], walk.gates[net][1]) for net in order),
        clock_gates=tuple(Gate(net, *tree.gates[net][0], tree.gates[net][1]) for net in clock_order),
        clock_latches=tuple(latch for wire, latch in tree.latches.items() if wire not in walk.data),
        elements=elements,
        free_inputs=tuple(sorted(walk.free, key=lambda net: natural_order(netlist.net_names[net]))),
        constants=walk.known,
        clock=clocking.root,
        clock_edge=clocking.edge,
        graph=graph,
        feedback=feedback,
        loads=find_loads(wiring, elements),
        obstacles=_obstacles(netlist, stored, closed.obstacles),
        forced=forced,
        assumed=(*_assumptions(netlist, closed), *_ignored_pins(wiring, inside)),
    )


def _obstacles(
    netlist: Netlist, stored: Sequence[Stored], because: Mapping[int, tuple[str, str]]
) -> tuple[Obstacle, ...]:
    return tuple(
        Obstacle(number, *because[s.wire], netlist.instance_place(s.instance))
        for number, s in enumerate(stored)
        if s.wire in because
    )


def _ignored_pins(wiring: Wiring, instances: Iterable[int]) -> Iterator[str]:
    """Yield a sentence a cell of the cone whose instances have pins that its description lacks: supplies, mostly."""
    ignored: dict[str, tuple[dict[str, None], list[int]]] = {}
    for instance in sorted(set(instances)):
        cell = wiring.cell(instance)
        names = [pin for pin in wiring.nets_of(instance) if cell and pin not in cell.pins]
        if cell and names:
            pins, where = ignored.setdefault(cell.name, ({}, []))
            pins.update(dict.fromkeys(names))
            where.append(instance)
    for name in sorted(ignored, key=natural_order):
        pins, where = ignored[name]
        more = f" and {len(where) - 1} more" if len(where) > 1 else ""
        first = wiring.netlist.instance_names[where[0]]
        yield f"cell {name} has no pin {', '.join(pins)} in its description: ignored at {first}{more}"


def _assumptions(netlist: Netlist, closed: _Closed) -> tuple[str, ...]:
    sentences = []
    for net in sorted({*closed.assumed, *closed.reset_by}, key=lambda net: natural_order(netlist.net_names[net])):
        name, value = netlist.net_names[net], closed.walk.known[net]
        parts = [f"{name} = {value}: the asynchronous pins behind it are inactive"] if net in closed.assumed else []
        if count := closed.reset_by.get(net):
            parts.append(f"{name} = {1 - value} gives the reset state of {count} storage element{'s' * (count > 1)}")
        sentences.append("; ".join(parts))
    return tuple(sentences)
