"""Chains read from the netlist: from the scan outputs back to the channels, under the mode.

Behind a scan output come the gates of a compactor, if there is one, then scan cells whose data the mode ties to one
net each: the cell before, or the channel. Flip-flops are scan cells; a latch between two of them is a lock-up latch.

A scan cell's delay follows from the half-cycle steps. What an element takes at its step was taken in the same cycle if
it comes from an element of an earlier step, or from a latch of the same one; else it is a cycle older. A channel shows
its register: elements that the cell reads through it count in the same way.
"""

from collections.abc import Iterator, Mapping
from dataclasses import dataclass, field
from typing import NamedTuple

from auditor.array.scan_array import Chain, ScanArray, ScanCell
from auditor.cells.function import truth_table
from auditor.cells.library import Function
from auditor.cone.cone import Cone, Gate, StorageElement
from auditor.errors import TroubleList, fail
from auditor.notation import SourcePlace

_INVERTER = 0b01


class _Link(NamedTuple):
    """An element of a chain, and whether it stores the complement of what the one before it stores."""

    element: StorageElement
    inverted: bool


def trace_chains(outputs: Cone, cone: Cone) -> ScanArray:
    """Return the chains that end at the channels of ``outputs``, the cone of the scan outputs.

    ``cone`` is that of the channels, over the same netlist. Raises ``InputError`` with everything that is no chain.
    """
    channels = {channel.wire: channel.name for channel in cone.channels if channel.constant is None}
    tracer = _Tracer(outputs, channels, 0 if outputs.clock_edge == cone.clock_edge else 2)
    chains = [chain for end in tracer.ends() if (chain := tracer.chain(end))]
    tracer.troubles.raise_any()
    if not chains:
        raise fail("no scan output leads back to a channel", "name the nets at which the scan chains end")
    order = {channel.name: place for place, channel in enumerate(cone.channels)}
    return ScanArray(tuple(sorted(chains, key=lambda chain: order[chain.channel])), "netlist")


@dataclass(slots=True)
class _Tracer:
    """``channels``: the wire of each channel → its name; ``turned``: steps from the outputs' count to the channels'."""

    outputs: Cone
    channels: Mapping[int, str]
    turned: int
    gates: dict[int, Gate] = field(init=False)
    elements: dict[int, StorageElement] = field(init=False)
    troubles: TroubleList = field(default_factory=TroubleList)

    def __post_init__(self) -> None:
        self.gates = {gate.output: gate for gate in self.outputs.gates}
        self.elements = {element.wire: element for element in self.outputs.elements}

    def ends(self) -> Iterator[int]:
        """Yield the wires of the last elements of all chains, each once: those that the compactor's gates read."""
        waiting = [channel.wire for channel in reversed(self.outputs.channels)]
        seen: set[int] = set()
        while waiting:
            wire = waiting.pop()
            if wire in seen:
                continue
            seen.add(wire)
            if wire in self.elements:
                yield wire
            elif wire in self.gates and wire not in self.channels:
                waiting += reversed(self.gates[wire].inputs)

    def chain(self, end: int) -> Chain | None:
        """Return the chain that ends at an element, None after noting why it is none."""
        links: list[_Link] = []
        wire = end
        passed: set[int] = set()
        while wire not in self.channels or not links:
            element = self.elements.get(wire)
            if element is None or wire in passed:
                self._broken(end, wire, wire in passed)
                return None
            passed.add(wire)
            if len(element.inputs) != 1:
                self._open(element)
                return None
            inverted, wire = self._through(element.inputs[0])
            links.append(_Link(element, inverted != _inverts(element.data)))
        return self._timed(self.channels[wire], wire, links)

    def _through(self, wire: int) -> tuple[bool, int]:
        """Go back through buffers and inverters to a channel, a stored bit or a gate of several inputs."""
        inverted = False
        while wire not in self.channels and (gate := self.gates.get(wire)) and len(gate.inputs) == 1:
            inverted ^= _inverts(gate.function)
            wire = gate.inputs[0]
        return inverted, wire

    def _timed(self, channel: str, wire: int, links: list[_Link]) -> Chain | None:
        """Return the chain with the delay of every scan cell, from the scan input on."""
        sources = self._stored_behind(wire)
        cells: list[ScanCell] = []
        delay, inverted = 0, False
        before: StorageElement | None = None
        for link in reversed(links):
            element = link.element
            same_cycle = {self._in_the_same_cycle(one, element) for one in ([before] if before else sources)}
            if len(same_cycle) > 1:
                place = self.outputs.netlist.instance_place(element.instance)
                self.troubles.add(
                    f"scan cell {element.name} takes channel {channel} while some of its sources have moved and some "
                    "have not",
                    "let all sources of a channel move at one edge, or leave this chain out",
                    place,
                )
                return None
            delay += not same_cycle.pop()
            inverted ^= link.inverted
            if element.step % 2 == 0:
                cells.append(ScanCell(element.name, delay, inverted))
            before = element
        if cells:
            return Chain(channel, len(cells), tuple(cells))
        self.troubles.add(f"the chain behind channel {channel} holds latches alone", "name the chain's scan cells")
        return None

    def _in_the_same_cycle(self, source: StorageElement, taker: StorageElement) -> bool:
        """Whether the taker gets what its source took in the same cycle."""
        given, taken = ((element.step + self.turned) % 4 for element in (source, taker))
        return given < taken or (given == taken and given % 2 == 1)

    def _stored_behind(self, wire: int) -> list[StorageElement]:
        """Return the elements that a channel reads."""
        waiting, seen, found = [wire], {wire}, []
        while waiting:
            here = waiting.pop()
            if here in self.elements:
                found.append(self.elements[here])
            elif here in self.gates:
                new = [other for other in self.gates[here].inputs if other not in seen]
                seen.update(new)
                waiting += new
        return found

    def _broken(self, end: int, wire: int, circle: bool) -> None:
        """Note that a chain does not lead back to a channel."""
        netlist = self.outputs.netlist
        last = self.elements[end]
        place: SourcePlace | None = netlist.instance_place(last.instance)
        remedy = "give --mode the constants of the scan shift, or name another scan output"
        if circle:
            found = f"the chain that ends at {last.name} closes on itself and no channel feeds it"
        elif wire in self.gates:
            gate = netlist.instance_names[self.gates[wire].instance]
            place = netlist.instance_place(self.gates[wire].instance)
            found = f"in the chain that ends at {last.name} the gate {gate} adds or selects between several nets"
        else:
            found = f"the chain that ends at {last.name} begins at {self.outputs.wire_name(wire)}, which is no channel"
        self.troubles.add(found, remedy, place)

    def _open(self, element: StorageElement) -> None:
        names = [self.outputs.wire_name(wire) for wire in element.inputs[:4]]
        more = f" and {len(element.inputs) - 4} more" if len(element.inputs) > 4 else ""
        self.troubles.add(
            f"scan cell {element.name} does not shift under the mode: it takes a function of {', '.join(names)}{more}",
            "give --mode the constants of the scan shift",
            self.outputs.netlist.instance_place(element.instance),
        )


def _inverts(function: Function) -> bool:
    """Whether a function of one wire is its complement."""
    return truth_table(function) == _INVERTER
