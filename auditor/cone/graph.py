"""The cone as a graph: order of the gates, loops without storage, feedback registers. The one user of networkx."""

from collections.abc import Iterable, Mapping, Sequence

import networkx as nx

from auditor.cone.fold import Folded


def cone_graph(gates: Mapping[int, tuple[Folded, int]], data: Mapping[int, tuple[Folded, int]]) -> nx.DiGraph:
    """Return the graph of wires: an edge runs from every input of a gate, or of a next state, to its output.

    Both mappings give output wire → (function on its wires, instance). Edges into stored bits carry
    ``storage=True``.
    """
    graph = nx.DiGraph()
    for storage, drivers in ((False, gates), (True, data)):
        for output, (folded, instance) in drivers.items():
            graph.add_node(output)
            for wire in folded.wires:
                graph.add_edge(wire, output, instance=instance, storage=storage)
    return graph


def gates_in_order(gates: Mapping[int, tuple[Folded, int]]) -> tuple[list[int], list[int]]:
    """Return the output wires of gates, sources first; and, if there is one, the instances of a loop instead."""
    graph = nx.DiGraph()
    graph.add_nodes_from(gates)
    graph.add_edges_from((wire, output) for output, (folded, _) in gates.items() for wire in folded.wires)
    try:
        return [wire for wire in nx.topological_sort(graph) if wire in gates], []
    except nx.NetworkXUnfeasible:
        return [], [gates[output][1] for output in _loop(graph)]


def feedback_parts(graph: nx.DiGraph, element_of: Mapping[int, int]) -> tuple[tuple[int, ...], ...]:
    """Return the feedback registers: element numbers of each strongly connected part that holds storage."""
    parts = []
    for part in nx.strongly_connected_components(graph):
        elements = sorted(element_of[wire] for wire in part if wire in element_of)
        if len(part) > 1 or any(graph.has_edge(wire, wire) for wire in part):
            parts.append(tuple(elements))
    return tuple(sorted(part for part in parts if part))


def latch_loop(graph: nx.DiGraph, open_together: Iterable[int]) -> Sequence[int]:
    """Return the wires of a loop through latches that are open at the same time, or nothing."""
    latches = set(open_together)
    if not latches:
        return []
    through = graph.edge_subgraph(
        (a, b) for a, b, storage in graph.edges(data="storage") if not storage or b in latches
    )
    return _loop(through)


def _loop(graph: nx.DiGraph) -> list[int]:
    """Return the wires of a loop, or nothing.

    Inside a strongly connected part a search meets its own path before it has to turn back, so it takes linear
    time; over the whole graph the package's search is quadratic.
    """
    for part in nx.strongly_connected_components(graph):
        if len(part) > 1 or any(graph.has_edge(wire, wire) for wire in part):
            return [wire for _, wire in nx.find_cycle(graph.subgraph(part).copy())]
    return []
