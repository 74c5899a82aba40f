"""Why a row is not affine: the gate that spoils it, the affine nets behind it, and the constant that would help."""

from typing import NamedTuple

from auditor.cone.cone import Cone
from auditor.machine.diagrams import TooLargeError
from auditor.machine.machine import Refusal
from auditor.machine.prover import Crossing, Prover

REGION_LIMIT = 200  # gates between affine nets and the sink; beyond, the sink's own gate is named


class Spoiler(NamedTuple):
    """The wire whose function spoils a row: replaced by a free variable it would leave the row affine.

    ``behind`` are the affine wires under it; ``cures`` are (wire, value) pairs any of which makes the row affine.
    """

    wire: int
    behind: tuple[int, ...]
    cures: tuple[tuple[int, int], ...]


def find_spoiler(prover: Prover, sink: int, own_state: int | None = None) -> Spoiler:
    """Return the earliest wire that alone spoils the row of ``sink``; the sink itself where no single wire does.

    ``own_state`` is the wire of the stored bit that the row feeds: a constant that only makes it hold is no cure.
    """
    region = _region(prover, sink)
    spoiler = sink
    if len(region) <= REGION_LIMIT:
        spoiler = next((wire for wire in region if _affine_without(prover, region, sink, wire)), sink)
    behind = tuple(prover.algebra.wires[n] for n in sorted(prover.algebra.support(prover.diagrams[spoiler])))
    cures = _input_cures(prover, sink, spoiler, own_state) or _net_cures(prover, spoiler, sink)
    return Spoiler(spoiler, behind, tuple(cures))


def _region(prover: Prover, sink: int) -> list[int]:
    """Return the wires that are not affine behind a sink, sources first, the sink last."""
    found, waiting = {sink}, [sink]
    while waiting:
        for wire in prover.crossings[waiting.pop()].wires:
            if wire in prover.crossings and wire not in found:
                found.add(wire)
                waiting.append(wire)
    return [wire for wire in prover.crossings if wire in found]


def _affine_without(prover: Prover, region: list[int], sink: int, cut: int) -> bool:
    """Tell whether the sink is affine once ``cut`` is a variable of its own, on which it truly depends."""
    algebra = prover.algebra
    fresh_form = 1 << (prover.constant_bit.bit_length() + 1)
    fresh = algebra.variable(fresh_form, cut)
    local = {cut: fresh}
    try:
        for wire in region:
            if wire not in local:
                crossing: Crossing = prover.crossings[wire]
                inputs = [local.get(w) or prover.diagram(w) for w in crossing.wires]
                local[wire] = crossing.function.evaluate(inputs, algebra)
        chain = algebra.affine(algebra.freed(local[sink]))
    except TooLargeError:
        return False
    return chain is not None and bool(chain[0] & algebra.support(fresh))


def _input_cures(prover: Prover, sink: int, spoiler: int, own_state: int | None) -> list[tuple[int, int]]:
    """Return constants of single free inputs under the spoiler that make the sink affine, the most telling first."""
    algebra, diagram = prover.algebra, prover.diagrams[sink]
    holding = [] if own_state is None else [prover.rows[own_state]]
    good = []
    for number in sorted(algebra.support(prover.diagrams[spoiler]) & algebra.support(diagram)):
        form = algebra.forms[number]
        if form not in prover.inputs:
            continue
        for bit in (1, 0):
            chain = algebra.affine(algebra.freed(algebra.with_constant(diagram, number, bit)))
            if chain and chain[0] and [algebra.forms[n] for n in chain[0]] != holding:
                good.append((-len(chain[0]), prover.inputs[form], bit))
    return [(wire, bit) for _, wire, bit in sorted(good, key=lambda cure: cure[0])]


def _net_cures(prover: Prover, spoiler: int, sink: int) -> list[tuple[int, int]]:
    """Return the value that the spoiler takes most of the time, if it is a net other than the sink."""
    if spoiler == sink:
        return []
    diagram = prover.diagrams[spoiler]
    variables = len(prover.algebra.support(diagram))
    ones = prover.algebra.manager.count(diagram, variables)
    return [(spoiler, int(2 * ones > 2**variables))]


def refuse(
    cone: Cone, prover: Prover, what: str, sink: int, instance: int, own_state: int | None = None
) -> tuple[Refusal, Spoiler | None]:
    """Return the refusal of a row, and what spoils it unless the question is undecided.

    ``sink`` is the wire whose row was asked for; ``instance`` stands for it where it is no net (a next state).
    """
    netlist = cone.netlist
    if sink in prover.too_large:
        place = netlist.instance_place(instance)
        return Refusal(what, netlist.instance_names[instance], prover.too_large[sink], "", place, undecided=True), None
    spoiler = find_spoiler(prover, sink, own_state)
    gate = prover.instance_of.get(spoiler.wire, instance)
    names = [cone.wire_name(wire) for wire in spoiler.behind]
    told = ", ".join(names[:4]) + (f" and {len(names) - 4} more" if len(names) > 4 else "")
    because = f"{netlist.cell_of(gate).name} {netlist.instance_names[gate]} is no XOR of {told}"
    return Refusal(
        what, netlist.instance_names[gate], because, _cure(cone, spoiler), netlist.instance_place(gate)
    ), spoiler


def _cure(cone: Cone, spoiler: Spoiler) -> str:
    """Return the first cure as a command-line option."""
    for wire, bit in spoiler.cures:
        return f"--mode {cone.wire_name(wire)}={bit}"
    return ""
