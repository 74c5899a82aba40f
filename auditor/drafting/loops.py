"""The loops of a netlist: strongly connected parts of its arcs that hold storage."""

from dataclasses import dataclass

import numpy as np

from auditor.drafting.arcs import GATE, Arcs
from auditor.netlist.netlist import Column

PEELINGS = 24  # rounds in which arcs from and to dead ends are dropped before the exact search


@dataclass(frozen=True, slots=True)
class Loop:
    """Storage instances whose next states depend on each other, ascending; ``arcs`` counts the arcs inside."""

    elements: tuple[int, ...]
    arcs: int


def find_loops(arcs: Arcs, nets: int, least: int) -> list[Loop]:
    """Return the loops with ``least`` storage instances or more, by their first instance."""
    part = strong_parts(arcs.source, arcs.target, nets)
    inside = (part[arcs.source] == part[arcs.target]) & (part[arcs.source] >= 0)
    sizes = np.bincount(part[arcs.source[inside]], minlength=1)
    stored = inside & (arcs.element != GATE)
    pairs = np.unique(np.stack([part[arcs.source[stored]], arcs.element[stored]]), axis=1)
    numbers, first, counts = np.unique(pairs[0], return_index=True, return_counts=True)
    loops = [
        Loop(tuple(pairs[1, begin : begin + count].tolist()), int(sizes[number]))
        for number, begin, count in zip(numbers.tolist(), first.tolist(), counts.tolist(), strict=True)
        if count >= least
    ]
    return sorted(loops, key=lambda loop: loop.elements)


def strong_parts(source: Column, target: Column, nets: int) -> Column:
    """Return for each net (N,) the number of its strongly connected part, -1 where it lies on no cycle.

    Dead ends are peeled off in whole columns first; what is left goes through the one-pass search of
    R. Tarjan (1972), with a stack of its own.
    """
    for _ in range(PEELINGS):
        entered, left = np.zeros(nets, dtype=bool), np.zeros(nets, dtype=bool)
        entered[target], left[source] = True, True
        kept = entered[source] & left[target]
        if kept.all():
            break
        source, target = source[kept], target[kept]
    order = np.argsort(source, kind="stable")
    nodes = np.unique(np.concatenate([source, target]))
    number = np.full(nets, -1, dtype=np.int32)
    number[nodes] = np.arange(len(nodes), dtype=np.int32)
    first = np.searchsorted(source[order], np.append(nodes, nets)).tolist()
    part = np.full(nets, -1, dtype=np.int32)
    part[nodes] = _tarjan(first, number[target[order]].tolist())
    return part


def _tarjan(first: list[int], after: list[int]) -> list[int]:
    """Return the part of each node; the successors of node v are after[first[v]:first[v + 1]]."""
    count = len(first) - 1
    index, low, part = [0] * count, [0] * count, [-1] * count
    place = first[:-1]
    met, parts = 0, 0
    open_nodes: list[int] = []
    for start in range(count):
        if index[start]:
            continue
        met += 1
        index[start] = low[start] = met
        open_nodes.append(start)
        way = [start]
        while way:
            node = way[-1]
            if place[node] < first[node + 1]:
                child = after[place[node]]
                place[node] += 1
                if not index[child]:
                    met += 1
                    index[child] = low[child] = met
                    open_nodes.append(child)
                    way.append(child)
                elif part[child] < 0 and index[child] < low[node]:
                    low[node] = index[child]
                continue
            way.pop()
            if way and low[node] < low[way[-1]]:
                low[way[-1]] = low[node]
            if low[node] == index[node]:
                while part[node] < 0:
                    part[open_nodes.pop()] = parts
                parts += 1
    return part
