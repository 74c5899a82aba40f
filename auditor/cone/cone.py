"""The part of a netlist that decides what the channels carry: the noun of this room.

The cone is cut at storage: its gates run from sources (stored bits, free inputs, constants) to sinks (next states,
channels). A wire is a net number of the netlist; a number from ``len(netlist.net_names)`` on is the stored bit of an
element. Everything here holds under the mode; the load figures alone come from the whole, unpruned netlist.
"""

from collections.abc import Mapping
from dataclasses import dataclass
from typing import NamedTuple

import networkx as nx

from auditor.cells.library import Function
from auditor.netlist.netlist import Netlist
from auditor.notation import SourcePlace


@dataclass(frozen=True, slots=True)
class Gate:
    """One output of one instance: ``function`` over the wires ``inputs``, which stand in the order of its inputs.

    Constants of the mode are folded in: no input is constant and the function is not.
    """

    output: int
    function: Function
    inputs: tuple[int, ...]
    instance: int


@dataclass(frozen=True, slots=True)
class StorageElement:
    """One stored bit inside the cone.

    ``bit``       which of the cell's stored bits it is, from 0
    ``wire``      the number under which gates read the stored bit, as at Q
    ``data``      next state over the wires ``inputs`` (its own wire among them where it can hold)
    ``step``      the half-cycle step at which it takes its data: 0 or 2 for a flip-flop, 1 or 3 for a latch
    ``clock``     the function of the wires ``clock_inputs`` whose rising edge (latch: whose 1) takes the data
    ``reset``     the value that the asynchronous pins give, or None
    ``outputs``   the nets that carry the stored bit (False) or its complement (True)
    """

    name: str
    cell: str
    instance: int
    bit: int
    wire: int
    data: Function
    inputs: tuple[int, ...]
    step: int
    clock: Function
    clock_inputs: tuple[int, ...]
    reset: int | None
    outputs: tuple[tuple[int, bool], ...]


class ClockLatch(NamedTuple):
    """The stored bit of a clock gate that the mode holds open: it carries no data, but lets the clock pass."""

    instance: int
    bit: int
    wire: int


@dataclass(frozen=True, slots=True)
class Channel:
    """A serial stream that feeds one scan chain: its name, and the wire that carries it or its constant."""

    name: str
    wire: int
    constant: int | None = None


@dataclass(frozen=True, slots=True)
class Load:
    """The fan-out of one element, from the unpruned netlist; a tuple has one entry an output pin that carries the bit.

    ``direct``    input pins on the output's net
    ``leaf``      input pins reached through buffers and inverters
    ``capacitance_ff``  of the directly driven pins, without wire; None if the library gives none
    ``limit_ff``  the library's largest load of that output, or None
    """

    element: int
    pins: tuple[str, ...]
    direct: tuple[int, ...]
    leaf: tuple[int, ...]
    capacitance_ff: tuple[float | None, ...]
    limit_ff: tuple[float | None, ...]


@dataclass(frozen=True, slots=True)
class Obstacle:
    """A storage element that cannot be linear as the mode stands: an open enable or asynchronous pin.

    ``because`` says what stands in the way; ``cure`` names the constant that would remove it, or is empty.
    """

    element: int
    because: str
    cure: str
    place: SourcePlace


@dataclass(frozen=True, slots=True)
class Cone:
    """The cone of all channels under one mode.

    ``gates``, ``clock_gates``  in topological order, sources first; the clock gates run from the root to the clock pins
    ``clock_latches``  the stored bits of the clock gates on that way; they are no elements
    ``elements``     in the natural order of their names; element k is bit k of every state vector
    ``free_inputs``  wires that nothing in the cone determines: input ports left open by the mode, in natural order
    ``constants``    net → 0 or 1: the mode, ties, and what follows from them
    ``clock``        the net at the root of every clock pin; ``clock_edge`` is its edge at step 0: "rising" or "falling"
    ``graph``        nodes are wires; an edge runs from every input of a gate or next state to its output, with the
                     attribute ``instance``; an edge into stored bits has ``storage=True``
    ``feedback``     the feedback registers as tuples of element numbers: the strongly connected parts of the storage
    ``forced``       internal nets that the mode forces although their driver could take both values
    ``assumed``      sentences on what was taken for granted (asynchronous pins inactive ...)
    """

    netlist: Netlist
    channels: tuple[Channel, ...]
    gates: tuple[Gate, ...]
    clock_gates: tuple[Gate, ...]
    clock_latches: tuple[ClockLatch, ...]
    elements: tuple[StorageElement, ...]
    free_inputs: tuple[int, ...]
    constants: Mapping[int, int]
    clock: int
    clock_edge: str
    graph: nx.DiGraph
    feedback: tuple[tuple[int, ...], ...]
    loads: tuple[Load, ...]
    obstacles: tuple[Obstacle, ...]
    forced: tuple[int, ...]
    assumed: tuple[str, ...]

    def wire_name(self, wire: int) -> str:
        """Return the net's name, or the element's where the wire is a stored bit."""
        nets = len(self.netlist.net_names)
        if wire < nets:
            return self.netlist.net_names[wire]
        return next(element.name for element in self.elements if element.wire == wire)
