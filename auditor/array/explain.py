"""Why a net is frozen: an example of what would free it, and the relation between scan cells that forbids it."""

from collections.abc import Mapping, Sequence

import numpy as np

from auditor.array.circuit import Circuit, FrozenNet
from auditor.array.proofs import Formulas
from auditor.array.simulation import simulation
from auditor.errors import InternalError
from auditor.gf2 import matrix
from auditor.machine.diagrams import TooLargeError
from auditor.notation import Vector


def with_example(
    frozen: FrozenNet, formulas: Formulas, sources: Mapping[int, int], rows: Sequence[Vector]
) -> FrozenNet:
    """Return a frozen net with an example of sources that would give it the other value.

    ``formulas`` are over independent sources, ``sources`` gives the number of each by its form, ``rows`` the forms of
    the loaded bits over the state. A net whose diagram is too large stays without example.
    """
    try:
        diagram = formulas.diagram(frozen.net)
    except TooLargeError:
        return frozen
    algebra, other = formulas.algebra, -1 if frozen.value else 1
    settings: dict[int, int] = {}
    node = diagram
    while abs(node) != 1:
        variable, low, high = algebra.branches(node)
        # In a reduced diagram every node but the constants leads to both values.
        bit = int(low == -other)
        settings[sources[algebra.forms[variable]]] = bit
        node = high if bit else low
    needs = tuple(sorted(settings.items()))
    return frozen._replace(needs=needs, relation=_contradicted(needs, rows))


def _contradicted(needs: Sequence[tuple[int, int]], rows: Sequence[Vector]) -> tuple[int, ...]:
    """Return the fewest bits, of those that elimination meets, whose rows have another sum than the values needed."""
    span, found = matrix.Span(), list[list[int]]()
    loaded = [(source, bit) for source, bit in needs if source < len(rows)]
    for source, _ in loaded:
        members = [loaded[k] for k in matrix.ones(span.add(rows[source] & ~1))]
        if sum(bit ^ rows[source] & 1 for source, bit in members) & 1:
            found.append(sorted(source for source, _ in members))
    shortest = min(found, key=len, default=[])
    return tuple(shortest)


def confirm_examples(circuit: Circuit, nets: Sequence[FrozenNet]) -> None:
    """Simulate every example, one a lane: the net must have the other value. Raises ``InternalError`` if not."""
    shown = [net for net in nets if net.needs]
    if not shown:
        return
    words = (len(shown) + 63) // 64
    sources = np.zeros((len(circuit.loaded) + len(circuit.free), words), dtype=np.uint64)
    for lane, net in enumerate(shown):
        for source, bit in net.needs:
            sources[source, lane // 64] |= np.uint64(bit << lane % 64)
    run = simulation(circuit, [net.net for net in shown])
    slot = {net: k for k, net in enumerate(run.gates)}
    values = run.run(sources[: len(circuit.loaded)], sources[len(circuit.loaded) :])
    for lane, net in enumerate(shown):
        if int(values[slot[net.net], lane // 64]) >> lane % 64 & 1 == net.value:
            raise InternalError(f"{circuit.wire_name(net.net)} is frozen in the example that would free it")
