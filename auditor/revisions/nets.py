"""Which gates did it: nets whose function changed although all that their drivers read kept theirs.

Both cones are evaluated from the same random states, the flip-flops being matched, with many states to a word. Two
values that differ prove that the functions do; equal ones leave a doubt of one in 2^256, which costs at most a line
of a report. One step is enough: what changed is found where it stands, not where it shows.
"""

import random
from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field

from auditor.cells.function import BitAlgebra
from auditor.cone.cone import Cone, StorageElement
from auditor.revisions.comparison import ChangedNet

STATES = 256
SEED = 0xEC0
# Names of nets are a guide where at least this share of the nets of one name is driven by instances of one name.
_TRUST = 0.75

Matched = Mapping[int, tuple[int, bool]]  # new element → old element, and whether it stores the complement


@dataclass(slots=True)
class _Sides:
    """Both cones evaluated.

    ``stored``  the new stored bits that have an old one
    ``same_by_name``  nets of one name stand for each other, else nets of one function do: ``functions``
    """

    old: Cone
    new: Cone
    stored: frozenset[int]
    old_values: dict[int, int]
    new_values: dict[int, int]
    same_by_name: bool = True
    functions: frozenset[int] = field(default=frozenset())

    def kept(self, wire: int) -> bool:
        """Whether a wire of the new cone has the function that it, or some wire, had before."""
        if wire >= len(self.new.netlist.net_names):
            return wire in self.stored
        before = self.old.netlist.net_of_name.get(self.new.netlist.net_names[wire])
        if self.same_by_name and before in self.old_values:
            return self.old_values[before] == self.new_values[wire]
        return self.new_values[wire] in self.functions


def changed_nets(old: Cone, new: Cone, matched: Matched, channels: Sequence[tuple[int, int]]) -> tuple[ChangedNet, ...]:
    """Return the drivers that changed the channels of these pairs, or the next state of a matched element.

    Numbers are those of the cones' channels and elements; results by place in the source, then by name.
    """
    sides = _evaluate(old, new, matched)
    drivers = {gate.output: number for number, gate in enumerate(new.gates)}
    causes: dict[tuple[str, int], tuple[set[str], set[str]]] = {}
    for i, j in channels:
        before, after = old.channels[i], new.channels[j]
        if _value(sides.old_values, before.wire, before.constant) != _value(
            sides.new_values, after.wire, after.constant
        ):
            rewired = after.constant is not None or (sides.same_by_name and sides.kept(after.wire))
            for cause in [("channel", j)] if rewired else _frontier(sides, drivers, [after.wire]):
                causes.setdefault(cause, (set(), set()))[0].add(after.name)
    for number, (other, complement) in matched.items():
        element = new.elements[number]
        if _moved(sides, old.elements[other], element, complement):
            inputs = [wire for wire in element.inputs if not sides.kept(wire)]
            found = _frontier(sides, drivers, inputs) if inputs else [("element", number)]
            for cause in found:
                causes.setdefault(cause, (set(), set()))[1].add(element.name)
    nets = [_net(new, kind, number, feeds, rows) for (kind, number), (feeds, rows) in causes.items()]
    return tuple(sorted(nets, key=lambda net: (net.place, net.instance, net.net)))


def _evaluate(old: Cone, new: Cone, matched: Matched) -> _Sides:
    rng = random.Random(SEED)
    algebra = BitAlgebra(STATES)
    start = {element.wire: rng.getrandbits(STATES) for element in old.elements}
    begin = {element.wire: rng.getrandbits(STATES) for element in new.elements}
    for number, (other, complement) in matched.items():
        begin[new.elements[number].wire] = start[old.elements[other].wire] ^ (algebra.mask if complement else 0)
    named = {old.wire_name(wire): rng.getrandbits(STATES) for wire in old.free_inputs}
    start |= {wire: named[old.wire_name(wire)] for wire in old.free_inputs}
    begin |= {wire: named.get(new.wire_name(wire), rng.getrandbits(STATES)) for wire in new.free_inputs}
    for cone, values in ((old, start), (new, begin)):
        for gate in cone.gates:
            values[gate.output] = gate.function.evaluate([values[wire] for wire in gate.inputs], algebra)
    stored = frozenset(new.elements[number].wire for number in matched)
    sides = _Sides(old, new, stored, start, begin, functions=frozenset(start.values()))
    sides.same_by_name = _names_are_kept(old, new)
    return sides


def _names_are_kept(old: Cone, new: Cone) -> bool:
    drivers = {old.wire_name(gate.output): old.netlist.instance_names[gate.instance] for gate in old.gates}
    common = [(drivers.get(new.wire_name(gate.output)), gate.instance) for gate in new.gates]
    same = [driver == new.netlist.instance_names[instance] for driver, instance in common if driver is not None]
    return bool(same) and sum(same) >= _TRUST * len(same)


def _value(values: Mapping[int, int], wire: int, constant: int | None) -> int:
    return values[wire] if constant is None else -constant & (1 << STATES) - 1


def _moved(sides: _Sides, old: StorageElement, new: StorageElement, complement: bool) -> bool:
    """Whether an element takes something else than before, or at another edge."""
    algebra = BitAlgebra(STATES)
    before = old.data.evaluate([sides.old_values[wire] for wire in old.inputs], algebra)
    after = new.data.evaluate([sides.new_values[wire] for wire in new.inputs], algebra)
    edges = [(e.step >= 2) ^ (cone.clock_edge == "falling") for e, cone in ((old, sides.old), (new, sides.new))]
    return before ^ after != (algebra.mask if complement else 0) or edges[0] != edges[1]


def _frontier(sides: _Sides, drivers: Mapping[int, int], wires: Sequence[int]) -> list[tuple[str, int]]:
    """Return the gates behind wires that changed which changed although what they read did not."""
    found: list[tuple[str, int]] = []
    pending = list(wires)
    seen = set(pending)
    for wire in pending:
        if wire not in drivers:
            continue
        gate = sides.new.gates[drivers[wire]]
        behind = [other for other in gate.inputs if not sides.kept(other)]
        if not behind:
            found.append(("gate", drivers[wire]))
        pending += [other for other in behind if other not in seen]
        seen.update(behind)
    return found


def _net(cone: Cone, kind: str, number: int, feeds: set[str], rows: set[str]) -> ChangedNet:
    """Return the driver as the report names it."""
    netlist = cone.netlist
    if kind == "channel":
        net = cone.channels[number].wire
        return ChangedNet(cone.channels[number].name, "", "", netlist.net_place(net), _sorted(feeds), _sorted(rows))
    if kind == "gate":
        instance, name = cone.gates[number].instance, cone.wire_name(cone.gates[number].output)
    else:
        instance = cone.elements[number].instance
        outputs = [cone.wire_name(net) for net, _ in cone.elements[number].outputs]
        name = outputs[0] if outputs else cone.elements[number].name
    place, cell = netlist.instance_place(instance), netlist.cell_of(instance).name
    return ChangedNet(name, netlist.instance_names[instance], cell, place, _sorted(feeds), _sorted(rows))


def _sorted(names: set[str]) -> tuple[str, ...]:
    return tuple(sorted(names))
