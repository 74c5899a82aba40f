"""Where the streams of a register leave it: output ports and shift registers that XORs and pipelines of it feed."""

from collections import deque
from collections.abc import Container, Iterable, Mapping
from dataclasses import dataclass, field
from typing import NamedTuple

from auditor.cells.library import Cell
from auditor.cone.fold import OPEN_PIN, Folded, fold
from auditor.cone.wiring import Wiring
from auditor.drafting.justify import OWN_BIT, WIDEST, root_of, settled
from auditor.drafting.part import loads

SHORTEST_CHAIN = 8  # shift stages; fewer are a pipeline
LONGEST_WALK = 20_000  # stages followed behind one net
ALL_WALKS = 400_000
MOST_NETS = 200_000  # nets followed out of a register
_TIES = {0: 0, 1: 1}


@dataclass(frozen=True, slots=True)
class Exit:
    """A net that carries a stream out of the registers.

    ``port``    the output port that it is, or empty
    ``chain``   stages of the longest shift register that it feeds; 0 where it feeds none
    ``mixed``   whether a gate of several inputs or a pipeline stands between
    """

    net: int
    port: str
    chain: int
    mixed: bool


class _Step(NamedTuple):
    """A cell that passes a net on: the select (net, value) that it needs, whether it stores, the nets behind it."""

    select: tuple[int, int] | None
    stored: bool
    outputs: list[int]


@dataclass(slots=True)
class _Way:
    """The nets that some registers decide, alone or with open ports, under constants: net → pipeline stages passed."""

    wiring: Wiring
    known: Mapping[int, int]
    ports: Container[int]
    inside: frozenset[int]
    reached: dict[int, int] = field(default_factory=dict)
    mixed: set[int] = field(default_factory=set)
    chains: dict[int, int] = field(default_factory=dict)
    passed: dict[int, None] = field(default_factory=dict)  # storage between the registers and what they decide
    steps: int = 0
    selects: dict[int, tuple[int, bool]] = field(default_factory=dict)

    def follow(self, starts: Iterable[int]) -> None:
        """Walk on from the registers' outputs."""
        self.reached = dict.fromkeys((net for net in starts if net not in self.known), 0)
        waiting = deque(self.reached)
        while waiting and len(self.reached) < MOST_NETS:
            net = waiting.popleft()
            for instance, pin in loads(self.wiring, net):
                cell = self.wiring.cell(instance)
                if cell is None or cell.not_understood or instance in self.inside:
                    continue
                waiting += self._through(net, instance, cell, pin)

    def _through(self, net: int, instance: int, cell: Cell, pin: str) -> list[int]:
        """Return the nets behind a cell that are newly reached; a shift register is measured and not entered."""
        nets = dict(self.wiring.nets_of(instance))
        wire_of = {**nets, **dict.fromkeys((storage.variable for storage in cell.storage), OWN_BIT)}
        step = self._shifts(net, instance)
        if step and (step.stored or step.select):
            chain = self.chain(net, instance)
            if chain >= SHORTEST_CHAIN:
                self.chains[net] = max(chain, self.chains.get(net, 0))
                return []
        stages: dict[str, int] = {}
        for storage in cell.storage:
            data = fold(storage.data, wire_of, self.known)
            if pin in storage.data.inputs and self._is_decided(data):
                stages[storage.variable] = 1 + self._stage(data)
                self.passed[instance] = None
        fresh = []
        for output in cell.pins.values():
            out = nets.get(output.name)
            if output.function is None or out is None or out in self.reached or out in self.known:
                continue
            variables = [name for name in output.function.inputs if name in wire_of and name not in nets]
            folded = fold(output.function, wire_of, self.known)
            if any(name not in stages for name in variables) or not self._is_decided(folded):
                continue
            stage = max([self._stage(folded), *(stages[name] for name in variables)])
            if stage < SHORTEST_CHAIN:
                self.reached[out] = stage
                if variables or len(folded.wires) > 1 or self.mixed.intersection(folded.wires):
                    self.mixed.add(out)
                fresh.append(out)
        return fresh

    def _is_decided(self, folded: Folded) -> bool:
        wires = [wire for wire in folded.wires if wire != OWN_BIT]
        return OPEN_PIN not in wires and all(wire in self.reached or wire in self.ports for wire in wires)

    def _stage(self, folded: Folded) -> int:
        return max((self.reached.get(wire, 0) for wire in folded.wires), default=0)

    def chain(self, net: int, first: int) -> int:
        """Return how many stages shift one after the other from a net on, the first in the cell ``first``.

        A stage takes the bit before it, or does so under one value of a multiplexer's select; the select is the
        same for all. Constants of the mode are left aside: a mode for the register may well stop the chain.
        """
        count, select = 0, None
        step, seen = self._shifts(net, first), {first} | self.inside
        while step and count < LONGEST_WALK and self.steps < ALL_WALKS:
            select = select or step.select
            count += step.stored
            step = self._next(step, select, seen)
        return count

    def _next(self, step: "_Step", select: tuple[int, int] | None, seen: set[int]) -> "_Step | None":
        """Return the step behind a step, into a cell not seen yet."""
        for net in step.outputs:
            for instance, _ in loads(self.wiring, net):
                self.steps += 1
                after = None if instance in seen else self._shifts(net, instance)
                if after and not (select and after.select and after.select != select):
                    seen.add(instance)
                    return after
        return None

    def _shifts(self, net: int, instance: int) -> "_Step | None":
        """Return how a cell passes a net on, None where it does something else with it."""
        cell = self.wiring.cell(instance)
        if cell is None or cell.not_understood:
            return None
        nets = self.wiring.nets_of(instance)
        wire_of = {**nets, **dict.fromkeys((storage.variable for storage in cell.storage), OWN_BIT)}
        stored = bool(cell.storage)
        functions = [(storage.data, storage.variable) for storage in cell.storage]
        functions = functions or [(p.function, p.name) for p in cell.pins.values() if p.function is not None]
        for function, name in functions:
            passes, select = self._passes(fold(function, wire_of, _TIES), net)
            if passes:
                outputs = [
                    nets[p.name]
                    for p in cell.pins.values()
                    if p.function is not None and p.name in nets and (name in p.function.inputs or p.name == name)
                ]
                return _Step(select, stored, outputs)
        return None

    def _passes(self, folded: Folded, net: int) -> tuple[bool, tuple[int, int] | None]:
        """Tell whether a function is the net alone, or is a multiplexer that can be; then with the select it needs."""
        if folded.wires == (net,):
            return True, None
        if net not in folded.wires or len(folded.wires) > WIDEST:
            return False, None
        for wire in folded.wires:
            for bit in (0, 1):
                if wire < 0 or wire == net or settled(folded, {wire: bit}).wires != (net,):
                    continue
                other = settled(folded, {wire: 1 - bit}).wires
                if other and net not in other:
                    if wire not in self.selects:
                        self.selects[wire] = root_of(self.wiring, wire, _TIES)
                    root, inverted = self.selects[wire]
                    return True, (root, bit ^ inverted)
        return False, None


def find_exits(
    wiring: Wiring, ports: Container[int], known: Mapping[int, int], inside: Iterable[int], starts: Iterable[int]
) -> tuple[list[Exit], list[int]]:
    """Return the exits of the registers whose instances are ``inside`` and whose outputs are ``starts``.

    Beside them stand the storage instances of the pipelines in between.

    Output ports come in the order of the top, then shift registers by net.
    """
    way = _Way(wiring, known, ports, frozenset(inside))
    way.follow(starts)
    outputs = [port for port in wiring.netlist.ports if port.direction == "output"]
    shown: dict[int, str] = {}
    for port in sorted(outputs, key=lambda port: -len(port.nets)):  # where two ports show a net, the wider one names it
        for bit, net in zip(port.bits, port.nets, strict=True):
            if net in way.reached:
                shown.setdefault(net, bit)
    bits = [(net, bit) for port in outputs for net, bit in zip(port.nets, port.bits, strict=True)]
    rest = sorted(net for net in way.chains if net not in shown)
    exits = [
        *(Exit(net, bit, way.chains.get(net, 0), net in way.mixed) for net, bit in bits if shown.get(net) == bit),
        *(Exit(net, "", way.chains[net], net in way.mixed) for net in rest),
    ]
    return exits, sorted(way.passed)
