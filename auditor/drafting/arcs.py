"""Which net decides which, through gates and through storage: the whole netlist in columns, under constants."""

from collections.abc import Iterator, Mapping
from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

from auditor.cells.function import restrict, support
from auditor.cells.library import Cell, Function
from auditor.cone.wiring import Wiring
from auditor.netlist.netlist import OPEN, Column

GATE = -1  # in ``element``: no storage stands between


@dataclass(frozen=True, slots=True)
class Arcs:
    """A arcs between nets: ``target`` depends on ``source``. All shapes (A,).

    ``element`` is the storage instance between the two, or GATE. A stored bit that only holds has no arc to itself;
    clocks and asynchronous pins give none.
    """

    source: Column
    target: Column
    element: Column

    def among(self, chosen: npt.NDArray[np.bool_]) -> "Arcs":
        """Return the arcs between chosen nets; ``chosen`` (N,) is True for those."""
        kept = chosen[self.source] & chosen[self.target]
        return Arcs(self.source[kept], self.target[kept], self.element[kept])


def find_arcs(wiring: Wiring, known: Mapping[int, int]) -> Arcs:
    """Return the arcs of all instances whose cell is described, those that the constants cut left out."""
    value = np.full(len(wiring.netlist.net_names) + 1, -1, dtype=np.int8)  # the last entry stands for OPEN
    for net, bit in known.items():
        value[net] = bit
    parts = [part for kind in _by_type(wiring) for part in _type_arcs(*kind, value)]
    if not parts:
        empty = np.empty(0, dtype=np.int32)
        return Arcs(empty, empty, empty)
    source, target, element = (np.concatenate(column) for column in zip(*parts, strict=True))
    alive = (source != OPEN) & (target != OPEN)
    alive &= (value[source] < 0) & (value[target] < 0)
    return Arcs(source[alive], target[alive], element[alive])


def _by_type(wiring: Wiring) -> Iterator[tuple[Cell, Column, dict[str, Column]]]:
    """Yield each described cell with its instances (K,) and, per pin name, the net of each instance (K,) or OPEN."""
    netlist = wiring.netlist
    width = max(1, len(netlist.pin_names))
    kind = netlist.instance_type[wiring.instance].astype(np.int64) * width + netlist.pin_name
    order = np.argsort(kind, kind="stable").astype(np.int32)
    codes, first = np.unique(kind[order], return_index=True)
    last = [*first[1:].tolist(), len(order)]
    pins_of: dict[int, list[tuple[str, Column]]] = {}
    for code, begin, end in zip(codes.tolist(), first.tolist(), last, strict=True):
        pins_of.setdefault(code // width, []).append((netlist.pin_names[code % width], order[begin:end]))
    for number, pins in pins_of.items():
        cell = wiring.cells[number]
        if cell is None or cell.not_understood:
            continue
        instances = np.flatnonzero(netlist.instance_type == number).astype(np.int32)
        nets = {}
        for name, where in pins:
            nets[name] = np.full(len(instances), OPEN, dtype=np.int32)
            nets[name][np.searchsorted(instances, wiring.instance[where])] = netlist.pin_net[where]
        yield cell, instances, nets


def _type_arcs(
    cell: Cell, instances: Column, nets: Mapping[str, Column], value: npt.NDArray[np.int8]
) -> Iterator[tuple[Column, Column, Column]]:
    """Yield (source, target, element) of all instances of a cell, one pattern of constant pins after another."""
    read = sorted({name for f in functions_of(cell) for name in f.inputs if name in nets})
    code = np.zeros(len(instances), dtype=np.int64)
    for name in read:
        code = code * 3 + value[nets[name]] + 1
    patterns, where = np.unique(code, return_inverse=True)
    for k, left in enumerate(patterns.tolist()):
        rows = np.flatnonzero(where == k) if len(patterns) > 1 else slice(None)
        digits = [left // 3**place % 3 for place in range(len(read))]
        constants = {name: digit - 1 for name, digit in zip(reversed(read), digits, strict=True) if digit}
        for source, target, stored in _dependences(cell, constants):
            if source in nets and target in nets:
                element = instances[rows] if stored else np.full(len(instances[rows]), GATE, dtype=np.int32)
                yield nets[source][rows], nets[target][rows], element


def functions_of(cell: Cell) -> Iterator[Function]:
    """Yield what the stored bits of a cell take and what its outputs show."""
    yield from (storage.data for storage in cell.storage)
    yield from (pin.function for pin in cell.pins.values() if pin.function is not None)


def _dependences(cell: Cell, constants: Mapping[str, int]) -> list[tuple[str, str, bool]]:
    """Return (input pin, output pin, whether storage stands between) for a cell with some pins constant."""
    behind = {storage.variable: set(support(restrict(storage.data, constants))) for storage in cell.storage}
    for _ in cell.storage:  # a bit may take its data from another bit of the same cell
        behind = {own: names.union(*(behind[v] for v in names & behind.keys())) for own, names in behind.items()}
    found: dict[tuple[str, str, bool], None] = {}
    for pin in cell.pins.values():
        if pin.function is None:
            continue
        for name in support(restrict(pin.function, constants)):
            if name in behind:
                found |= {(source, pin.name, True): None for source in sorted(behind[name] - behind.keys())}
            else:
                found[name, pin.name, False] = None
    return list(found)
