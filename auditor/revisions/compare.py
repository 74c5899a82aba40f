"""Two revisions -> Comparison: the main verb of this room. Its witness has still to be confirmed by a replay."""

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, replace

from auditor.gf2.effort import Effort
from auditor.machine.machine import LinearMachine
from auditor.phases.streams import read_streams
from auditor.revisions.causes import causes, matched_storage, named_channels
from auditor.revisions.channels import changes, pairs_by_behaviour, pairs_under
from auditor.revisions.classify import Classified, Lead, Pair, Question, Relation, classify
from auditor.revisions.comparison import (
    ALIKE,
    Comparison,
    FromReset,
    MatchedBy,
    Outcome,
    StateMap,
    Witness,
)
from auditor.revisions.encoding import (
    Element,
    inputs_act_alike,
    matched_elements,
    only_renamed,
    related_from,
    state_map,
)
from auditor.revisions.findings import compare_findings
from auditor.revisions.relations import Relations
from auditor.revisions.reset import from_reset
from auditor.revisions.revision import Revision
from auditor.revisions.steady import Steady, settle
from auditor.revisions.structure import flip_flop_changes, structure
from auditor.revisions.witness import followed_witness, reset_witness

# Names of storage speak for a map of the states where so many of the registers' elements kept theirs.
_NAMED_SHARE = 2
_WITHOUT_BOUNDS = Effort()


@dataclass(slots=True)
class _Result:
    """What comparing two linear machines gave."""

    parts: tuple[str, ...]
    related: dict[Pair, Relation]
    matched_by: dict[Pair, MatchedBy]
    elements: Mapping[int, Element]
    reset: FromReset
    witness: Witness | None = None
    holds_from: int | None = None
    state_map: StateMap | None = None
    classified: Classified | None = None
    remarks: tuple[str, ...] = ()


def compare_revisions(old: Revision, new: Revision, effort: Effort = _WITHOUT_BOUNDS) -> Comparison:
    """Compare two revisions under one mode; raises ``InternalError`` where a claim fails its proof.

    ``effort`` bounds the logarithms by which shifts are found.
    """
    result = _compare_machines(old, new, effort) if old.machine and new.machine else _refused(old, new)
    matched = matched_storage(old, new, result.elements)
    names = {old.cone.elements[other].name: new.cone.elements[k].name for k, (other, _, _) in matched.items()}
    names |= {old.cone.channels[i].name: new.cone.channels[j].name for i, j in result.related}
    outcome = _outcome(result)
    nets = causes(old, new, matched, tuple(result.related)) if outcome != "same" else ()
    decimation = result.classified.decimation if result.classified else None
    return Comparison(
        outcome=outcome,
        parts=result.parts,
        holds_from=result.holds_from,
        state_map=result.state_map,
        shift=result.classified.shift if result.classified else None,
        factor=decimation.factor if decimation else None,
        one_map=decimation is None or decimation.one_map,
        reset=result.reset,
        channels=changes(old, new, result.related, result.matched_by),
        findings=compare_findings(old.findings, new.findings, names),
        flip_flops=flip_flop_changes(old, new, matched),
        changed_nets=nets,
        witness=result.witness,
        before=structure(old),
        after=structure(new),
        remarks=result.remarks,
    )


def _outcome(result: _Result) -> Outcome:
    if "undecided" in result.parts:
        return "undecided"
    alike = result.parts[0] in ALIKE and len(result.parts) == 1
    return "same" if alike and result.reset.agree is not False else "differs"


def _refused(old: Revision, new: Revision) -> _Result:
    """Say what stands in the way where one is no linear machine; the gates can still be held side by side."""
    remarks = []
    for name, revision in (("OLD", old), ("NEW", new)):
        if revision.machine is None:
            first = revision.extraction.refusals[0]
            remarks.append(
                f"{name} is no linear machine, so its streams were not compared: {first.what}, {first.because}"
            )
    remarks.append("Findings, structure and single gates are compared, flip-flops and channels by name.")
    related = {pair: Relation("refused") for pair in named_channels(old, new)}
    by: dict[Pair, MatchedBy] = dict.fromkeys(related, "name")
    return _Result(
        ("undecided",), related, by, {}, FromReset(None, "there is no linear machine"), remarks=tuple(remarks)
    )


def _compare_machines(old: Revision, new: Revision, effort: Effort) -> _Result:
    machines = _machines(old, new)
    streams = read_streams(machines[0]), read_streams(machines[1])
    start = max(machine.transient for machine in machines)
    steadies = (
        settle(machines[0], start, [i for i, row in enumerate(old.observed) if row.row], streams[0]),
        settle(machines[1], start, [i for i, row in enumerate(new.observed) if row.row], streams[1]),
    )
    named = named_channels(old, new)
    by: MatchedBy = "name" if named else "behaviour"
    pairs = tuple(p for p in named if p[0] in steadies[0].rows and p[1] in steadies[1].rows)
    refused = [p for p in named if p not in pairs]
    pairs = pairs if named else pairs_by_behaviour(*steadies)
    remarks = _pairing_remarks(old, new, named, pairs)
    if not pairs:
        parts = ("undecided",) if refused else ("different",)
        lost = {p: Relation("refused") for p in refused}
        return _Result(parts, lost, dict.fromkeys(lost, "name"), {}, FromReset(None, "no channel in common"),
                       remarks=remarks)  # fmt: skip
    classified = classify(_question(old, new, steadies, pairs, effort))
    related = dict(zip(classified.pairs, classified.found, strict=True)) | {p: Relation("refused") for p in refused}
    matched_by: dict[Pair, MatchedBy] = dict.fromkeys(related, by)
    relations = _trusted(classified)
    if relations:
        _add_by_behaviour(steadies, relations, related, matched_by)
    reset = from_reset(machines, steadies, pairs, relations, effort)
    names = machines[0].storage, machines[1].storage
    stored = relations if _agree(classified) else classified.storage or relations
    elements = matched_elements(*steadies, stored, names) if stored else {}
    result = _Result((), related, matched_by, elements, reset, classified=classified, remarks=remarks)
    _name_class(result, machines, steadies, (old, new), refused)
    if result.parts[0] not in ALIKE or reset.agree is False:
        result.witness = reset_witness(machines, pairs, reset) or followed_witness(machines, streams, pairs, start)
    return result


def _machines(old: Revision, new: Revision) -> tuple[LinearMachine, LinearMachine]:
    if old.machine is None or new.machine is None:
        raise ValueError("both revisions need a machine")
    return old.machine, new.machine


def _question(
    old: Revision, new: Revision, steadies: tuple[Steady, Steady], pairs: tuple[Pair, ...], effort: Effort
) -> Question:
    registers = [
        {machine.storage[k]: k for register in machine.registers for k in register} for machine in _machines(old, new)
    ]
    names = [(k, registers[1][name]) for name, k in registers[0].items() if name in registers[1]]
    least = max(2, -(-max(map(len, registers)) // _NAMED_SHARE))
    return Question(*steadies, pairs, names, least, (_leads(old), _leads(new)), effort)


def _leads(revision: Revision) -> dict[int, Lead]:
    """Return the exact leads of a revision's channels."""
    found = {}
    for channel, phase in enumerate(revision.phases.phases if revision.phases else ()):
        modulus = phase.lead_modulus
        if phase.group is not None and phase.lead is not None and modulus and phase.kind in ("exact", "from"):
            found[channel] = Lead(phase.group, phase.lead, bool(phase.inverted), modulus)
    return found


def _pairing_remarks(old: Revision, new: Revision, named: Sequence[Pair], pairs: Sequence[Pair]) -> tuple[str, ...]:
    if named:
        return ()
    counts = f"{len(old.observed)} and {len(new.observed)} channels"
    if pairs:
        return (f"No channel kept its name: the {counts} are matched by what they carry.",)
    return (f"No channel kept its name, and no order of the {counts} makes their streams agree.",)


def _trusted(classified: Classified) -> Relations | None:
    """Return the state map, None where most channels disagree and nothing else speaks for it."""
    agreeing = sum(relation.status in ("same", "inverted", "permuted") for relation in classified.found)
    shifted = "shifted" in classified.parts
    by_names = classified.relations is not None and classified.relations is classified.storage
    trusted = shifted or by_names or 2 * agreeing > len(classified.found)
    return classified.relations if trusted else None


def _agree(classified: Classified) -> bool:
    """Whether the state map makes all pairs agree, inverted or in another order as may be."""
    return classified.relations is not None and not {"different", "undecided", "shifted"} & set(classified.parts)


def _add_by_behaviour(
    steadies: tuple[Steady, Steady],
    relations: Relations,
    related: dict[Pair, Relation],
    matched_by: dict[Pair, MatchedBy],
) -> None:
    """Pair what carries the same stream among the channels whose names are found in one revision only."""
    taken = [{pair[side] for pair in related} for side in (0, 1)]
    rows = [{k: row for k, row in steadies[side].rows.items() if k not in taken[side]} for side in (0, 1)]
    for i, j in pairs_under(relations, rows[0], rows[1]):
        inverted = not relations.holds(rows[0][i], rows[1][j])
        related[i, j] = Relation("inverted" if inverted else "same", 0, inverted)
        matched_by[i, j] = "behaviour"


def _name_class(
    result: _Result,
    machines: tuple[LinearMachine, LinearMachine],
    steadies: tuple[Steady, Steady],
    revisions: tuple[Revision, Revision],
    refused: Sequence[Pair],
) -> None:
    """Put the class together: how the channels changed, how the states are encoded, and what else is not the same."""
    classified = result.classified
    if classified is None:
        raise ValueError("no class without an answer")
    parts, relations, start = classified.parts, classified.relations, steadies[0].start
    if relations is None or not _agree(classified):
        result.parts = parts
    else:
        carried = [
            (i if r.carries is None else r.carries, j) for (i, j), r in result.related.items() if r.status != "refused"
        ]
        inverted = [bool(r.inverted) for r in result.related.values() if r.status != "refused"]
        since, whole = related_from(steadies[0].streams, steadies[1].streams, carried, inverted, start)
        result.holds_from = since
        result.state_map = state_map(machines, steadies, (relations, whole), since, result.elements)
        result.elements = _with_names(result.elements, machines)
        renamed = only_renamed(machines, result.elements, carried)
        result.parts = parts or (("identical",) if renamed and not since else ("re-encoded",))
    counts = [len(revision.observed) - len(result.related) for revision in revisions]
    if any(counts):
        result.remarks += (_counted(counts, result.parts),)
        if counts[0] == counts[1] and pairs_by_behaviour(*steadies):
            result.remarks += ("Matched without their names, all channels carry the same: they may be renamed only.",)
        result.parts = ("different",)
    if not inputs_act_alike(machines, (steadies[0].streams, steadies[1].streams), list(classified.pairs)):
        result.remarks += ("Free inputs do not do the same to the channels in both revisions.",)
        result.parts = ("different",)
    if refused and result.parts[0] in ALIKE:
        result.remarks += (f"{len(refused)} channels are not affine in one revision or both, and were not compared.",)
        result.parts = ("undecided",)


def _counted(counts: Sequence[int], parts: Sequence[str]) -> str:
    removed, added = counts
    told = [
        f"{count} channel{'s' * (count > 1)} {word}"
        for count, word in ((removed, "removed"), (added, "added"))
        if count
    ]
    return f"{' and '.join(told)}; the channels of both revisions are by themselves {', '.join(parts)}."


def _with_names(elements: Mapping[int, Element], machines: tuple[LinearMachine, LinearMachine]) -> dict[int, Element]:
    """Return the matched elements with those added that no channel sees in the long run and that kept their name."""
    found = dict(elements)
    left = {name: k for k, name in enumerate(machines[0].storage) if k not in {other for other, _ in found.values()}}
    for k, name in enumerate(machines[1].storage):
        if k not in found and name in left:
            found[k] = left[name], False
    return found


def confirmed(comparison: Comparison, witness: Witness) -> Comparison:
    """Return the comparison with a witness that the gates have confirmed."""
    return replace(comparison, witness=replace(witness, confirmed=True))
