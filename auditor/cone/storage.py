"""Storage elements of the cone: their names, their place in the clock cycle, the nets that carry them."""

from collections.abc import Mapping, Sequence
from dataclasses import dataclass

import networkx as nx

from auditor.cells.function import truth_table
from auditor.cone.clock import ClockTree, Root
from auditor.cone.cone import StorageElement
from auditor.cone.fold import Folded
from auditor.cone.graph import latch_loop
from auditor.cone.walk import Stored, Walk
from auditor.cone.wiring import Wiring
from auditor.netlist.netlist import Netlist
from auditor.notation import natural_order


@dataclass(frozen=True, slots=True)
class Clocking:
    """The one clock: its root net, the root's edge at step 0, and per stored wire its step and clock function."""

    root: int
    edge: str
    steps: Mapping[int, int]
    functions: Mapping[int, Folded]


def name_of(netlist: Netlist, stored: Stored) -> str:
    """Return the instance path, with the bit where the cell stores several."""
    bit = f"[{stored.index}]" if len(stored.cell.storage) > 1 else ""
    return netlist.instance_names[stored.instance] + bit


def clock_all(
    tree: ClockTree, stored: Sequence[Stored], feedback: Sequence[tuple[int, ...]], graph: nx.DiGraph
) -> Clocking:
    """Trace every clock pin, demand one root, and give each stored bit its half-cycle step (see ``notation``).

    Step 0 is the edge of the first flip-flop of the largest feedback register. Troubles go to the tree's list.
    """
    roots: dict[int, Root] = {}
    functions: dict[int, Folded] = {}
    for s in stored:
        traced = tree.root_of(s)
        if traced:
            roots[s.wire], functions[s.wire] = traced
    _demand_one_root(tree, stored, roots)
    if len(roots) < len(stored):
        return Clocking(-1, "", {}, {})
    flip_flops = [s for s in stored if s.storage.kind == "flip-flop"]
    in_register = max(map(frozenset, feedback), key=len, default=frozenset())
    leading = [s for n, s in enumerate(stored) if n in in_register and s.storage.kind == "flip-flop"]
    first = roots[(leading or flip_flops or stored)[0].wire]
    steps = {}
    for s in stored:
        later = roots[s.wire].inverted != first.inverted
        steps[s.wire] = 2 * later + (s.storage.kind == "latch")
    for step in (1, 3):
        loop = latch_loop(graph, [wire for wire, its in steps.items() if its == step])
        if loop:
            instance_of = {s.wire: s.instance for s in stored}
            tree.troubles.loop([instance_of[w] if w in instance_of else _driver(tree.wiring, w) for w in loop])
    return Clocking(first.net, "falling" if first.inverted else "rising", steps, functions)


def _driver(wiring: Wiring, net: int) -> int:
    return wiring.pin_of(int(wiring.driver[net]))[0]


def _demand_one_root(tree: ClockTree, stored: Sequence[Stored], roots: Mapping[int, Root]) -> None:
    """Note two clocks or more, each with one element as example."""
    example: dict[int, tuple[str, int]] = {}
    netlist = tree.wiring.netlist
    for s in stored:
        if s.wire in roots:
            name, count = example.get(roots[s.wire].net, (name_of(netlist, s), 0))
            example[roots[s.wire].net] = (name, count + 1)
    if len(example) < 2:
        return
    clocks = sorted(example, key=lambda net: natural_order(netlist.net_names[net]))
    told = [f"{netlist.net_names[net]} ({example[net][1]} elements, such as {example[net][0]})" for net in clocks]
    tree.troubles.others.add(
        f"{len(clocks)} clocks inside the cone: {', '.join(told)}",
        "give --mode the constants that select one clock, or narrow --channels",
        netlist.net_place(clocks[0]),
    )


def element_of(wiring: Wiring, walk: Walk, clocking: Clocking, stored: Stored) -> StorageElement:
    """Return the element of a stored bit that has been walked and clocked."""
    data, clock = walk.data[stored.wire], clocking.functions[stored.wire]
    return StorageElement(
        name=name_of(wiring.netlist, stored),
        cell=stored.cell.name,
        instance=stored.instance,
        bit=stored.index,
        wire=stored.wire,
        data=data.function,
        inputs=data.wires,
        step=clocking.steps[stored.wire],
        clock=clock.function,
        clock_inputs=clock.wires,
        reset=walk.resets[stored.wire],
        outputs=_outputs(wiring, stored),
    )


def _outputs(wiring: Wiring, stored: Stored) -> tuple[tuple[int, bool], ...]:
    """Return the nets of the pins whose function is the stored bit or its complement."""
    nets = wiring.nets_of(stored.instance)
    return tuple(
        (nets[pin.name], truth_table(pin.function) == 0b01)
        for pin in stored.cell.pins.values()
        if pin.function is not None and pin.function.inputs == (stored.storage.variable,) and pin.name in nets
    )
