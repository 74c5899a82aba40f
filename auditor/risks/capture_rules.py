"""Rules on the circuit under test: cones whose input combinations do not all occur, nets that never toggle."""

from collections.abc import Callable, Iterator, Sequence
from dataclasses import replace

from auditor.array.circuit import CaptureFacts, CellSet, ConeFacts, FrozenNet
from auditor.gf2.matrix import ones
from auditor.risks.evidence import Evidence, decimal
from auditor.risks.finding import Finding
from auditor.risks.levels import finding

_MOST_NAMED = 12


def cone_short_of_rank(evidence: Evidence) -> Iterator[Finding]:
    """Report the cones that can never see some combination of their scan cells, once for each set of cells."""
    if capture := evidence.capture:
        loaded = capture.circuit.loaded
        yield from _short_cones(evidence, capture.cones, lambda cell: capture.circuit.wire_name(loaded[cell]))
    if given := evidence.given:
        yield from _short_cones(evidence, given.cones, lambda cell: given.names[cell])


def _short_cones(evidence: Evidence, facts: ConeFacts, name: Callable[[int], str]) -> Iterator[Finding]:
    """Report the cones short of rank; ``name`` gives the name of a scan cell by its number."""
    sinks: dict[int, list[str]] = {}
    for cone in facts.cones:
        sinks.setdefault(cone.cells, []).append(cone.name)
    for number, names in sinks.items():
        cells = facts.sets[number]
        if cells.short:
            told = [name(bit.cell) + (" a cycle before" if bit.earlier else "") for bit in cells.relation]
            yield _short_cone(evidence, cells, names, told, facts.random_share_of_full_rank(cells.size))


def _short_cone(evidence: Evidence, cells: CellSet, names: list[str], told: list[str], full_rank: float) -> Finding:
    """Return the finding on a set of scan cells; ``told`` are the bits of its relation."""
    sinks = names[0] if len(names) == 1 else f"{names[0]} and {len(names) - 1} more"
    share = 2.0 ** (cells.rank - cells.size)
    return finding(
        "cone-short-of-rank",
        tuple(names),
        f"The {cells.size} bits that decide {sinks} take 2^{cells.rank} of 2^{cells.size} combinations: a fault that "
        f"needs another one is never detected, in particular one with {_sum(told)} = {1 - cells.constant}.",
        {
            "size": cells.size,
            "rank": cells.rank,
            "combinations": decimal(1 << cells.rank),
            "share_of_combinations": share,
            "never_seen": f"{_sum(told)} = {1 - cells.constant}",
            "random_rows_of_full_rank": full_rank,
        },
        evidence.net_place(names[0]),
    )


def net_frozen(evidence: Evidence) -> Iterator[Finding]:
    """Report the nets that the generator never toggles, and name behind each those that are frozen with it."""
    capture = evidence.capture
    if capture is None:
        return
    behind = _frozen_behind(capture)
    for net in capture.nets.frozen:
        if not net.follows:
            yield _frozen(evidence, capture, net, behind[net.net])


def _frozen(evidence: Evidence, capture: CaptureFacts, net: FrozenNet, behind: int) -> Finding:
    name = capture.circuit.wire_name(net.net)
    also = f" {behind} more frozen net{'s lie' if behind > 1 else ' lies'} behind it." if behind else ""
    figures = {"value": net.value, "scope": net.scope, "proved_by": net.proved_by, "nets_behind": behind}
    found = finding(
        "net-frozen",
        (name,),
        _says(name, net, capture.nets.patterns) + also,
        {**figures, **_witness(capture, net)},
        evidence.net_place(name),
    )
    return found if net.scope == "every-state" else replace(found, level="warning")


def _says(name: str, net: FrozenNet, patterns: int) -> str:
    """Return the sentence on what a frozen net costs."""
    if net.value is None:
        return (
            f"Net {name} does not toggle under the generator: only inputs and sources outside the chains move it, so "
            "while they are held one of its stuck-at faults is never excited."
        )
    if net.scope == "planned-patterns":
        return (
            f"Net {name} stays {net.value} in all {patterns} planned patterns, although some state of the generator "
            f"would toggle it: stuck-at-{net.value} on it is never excited in this test."
        )
    return (
        f"Net {name} stays {net.value} in every state outside lock-up, although free scan cells would let it toggle: "
        f"stuck-at-{net.value} on it can never be excited, nor any fault that needs it at {1 - net.value}."
    )


def _witness(capture: CaptureFacts, net: FrozenNet) -> dict[str, int | float | str | None]:
    """Return what the net would need, and why that never comes."""
    if not net.needs:
        return {}
    sources = (*capture.circuit.loaded, *capture.circuit.free)
    needs = [f"{capture.circuit.wire_name(sources[source])} = {bit}" for source, bit in net.needs]
    bits = dict(net.needs)
    total = sum(bits[source] for source in net.relation) & 1
    never = f"{_sum([_bit_name(capture, source) for source in net.relation])} = {total}" if net.relation else None
    return {"toggles_with": _listed(needs), "never_seen": never or "that is lock-up"}


def _frozen_behind(capture: CaptureFacts) -> dict[int, int]:
    """Return, for each frozen net without one before it, how many frozen nets it reaches through frozen ones."""
    starts = [net.net for net in capture.nets.frozen if not net.follows]
    reached_from = {net: 1 << k for k, net in enumerate(starts)}
    frozen = {net.net for net in capture.nets.frozen}
    counts = dict.fromkeys(starts, 0)
    for gate in capture.circuit.gates:
        if gate.output in frozen and gate.output not in counts:
            total = 0
            for wire in gate.inputs:
                total |= reached_from.get(wire, 0)
            reached_from[gate.output] = total
            for k in ones(total):
                counts[starts[k]] += 1
    return counts


def _bit_name(capture: CaptureFacts, number: int) -> str:
    return capture.circuit.wire_name(capture.circuit.loaded[number])


def _sum(names: Sequence[str]) -> str:
    return " + ".join(names) if len(names) <= _MOST_NAMED else f"the sum of {_listed(names)}"


def _listed(names: Sequence[str]) -> str:
    more = f" and {len(names) - _MOST_NAMED} more" if len(names) > _MOST_NAMED else ""
    return ", ".join(names[:_MOST_NAMED]) + more
