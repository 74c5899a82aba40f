"""Rules on the distances between channels: streams in lockstep, and chains that hold the same bits."""

from collections.abc import Iterator, Mapping
from dataclasses import replace
from typing import NamedTuple

from auditor.phases.overlap import overlap
from auditor.phases.separations import pairs_closer_than
from auditor.risks.evidence import Evidence, decimal
from auditor.risks.finding import Finding
from auditor.risks.levels import finding
from auditor.risks.waivers import waiver_reason

MOST_PAIRS = 1000  # listed one by one, the closest; beyond, one finding more counts them all


class _Pair(NamedTuple):
    """Two channels by number, i < j, and how far apart they are; ``complement``: one carries the inverse."""

    i: int
    j: int
    cycles: int
    complement: bool


def channels_in_lockstep(evidence: Evidence) -> Iterator[Finding]:
    """Report channels that carry the stream of an earlier one, or its complement, at the same time."""
    followers: set[int] = set()
    for pair in _pairs(evidence, 1):
        if pair.i in followers or pair.j in followers:
            continue  # both are in step with a channel before them, which is reported
        followers.add(pair.j)
        names = _names(evidence, pair)
        what = "the inverse of the stream" if pair.complement else "the stream"
        effect = "opposite" if pair.complement else "the same"
        yield finding(
            "channels-in-lockstep",
            names,
            f"{names[1]} carries {what} of {names[0]}, so scan cells at the same place of the two chains "
            f"always hold {effect} bits and no fault that needs another combination of them is detected.",
            {"separation": "0", "streams": _relation(pair)},
            evidence.net_place(names[1]),
        )


def windows_overlap(evidence: Evidence) -> Iterator[Finding]:
    """Report pairs of channels closer than the chain length or the stated separation, the closest first.

    A long list is cut after ``MOST_PAIRS`` behind a finding that counts all of it. Waived pairs are cut apart from
    the others, so that neither count hides one of the other kind.
    """
    bound = evidence.bound
    if bound is None:
        return
    counted: list[_Pair] = []
    waived: list[_Pair] = []
    windows, plain = evidence.windows(), evidence.plain_chains()
    for pair in _pairs(evidence, bound):
        if not _meets(evidence, pair, windows):
            continue
        reason = waiver_reason("windows-overlap", _names(evidence, pair), evidence.plan.waivers)
        (counted if reason is None else waived).append(pair)
    if len(counted) > MOST_PAIRS:
        yield _count(bound, counted)
    if len(waived) > MOST_PAIRS:
        yield replace(_count(bound, waived), waived="every pair of this list is waived by the plan")
    for pair in counted[:MOST_PAIRS] + waived[:MOST_PAIRS]:
        yield _overlap(evidence, pair, windows if plain.issuperset(_names(evidence, pair)) else {})


def _meets(evidence: Evidence, pair: _Pair, windows: Mapping[str, int]) -> bool:
    """Whether two chains share bits, or their channels are closer than the limit; chains may differ in length."""
    if pair.cycles < (evidence.plan.limits.separation or 0):
        return True
    lengths = [windows.get(name, 0) for name in _names(evidence, pair)]
    if lengths[0] == lengths[1]:
        return pair.cycles < lengths[0]
    shared = overlap(evidence.phases, pair.i, pair.j, *lengths) if evidence.phases and all(lengths) else None
    return shared is not None and shared.pairs > 0


def _pairs(evidence: Evidence, bound: int) -> list[_Pair]:
    """Return the pairs of channels that feed chains and are closer than the bound, the closest first."""
    if evidence.phases is None:
        return []
    fed = {number for number, _ in evidence.channels()}
    pairs = (_Pair(*pair) for pair in pairs_closer_than(evidence.phases, bound))
    return sorted((pair for pair in pairs if pair.i in fed and pair.j in fed), key=lambda p: (p.cycles, p.i, p.j))


def _names(evidence: Evidence, pair: _Pair) -> tuple[str, str]:
    observed = evidence.machine.observed if evidence.machine else ()
    return observed[pair.i].name, observed[pair.j].name


def _relation(pair: _Pair) -> str:
    return "complementary" if pair.complement else "equal"


def _overlap(evidence: Evidence, pair: _Pair, windows: Mapping[str, int]) -> Finding:
    """Return the finding on one pair; where ``windows`` has its chains' lengths it counts cells that share a bit."""
    names, limit = _names(evidence, pair), evidence.plan.limits.separation
    lengths = [windows[name] for name in names if name in windows]
    figures: dict[str, int | float | str | None] = {"separation": decimal(pair.cycles), "streams": _relation(pair)}
    if limit is not None:
        figures["limit"] = decimal(limit)
    distance = f"{decimal(pair.cycles)} cycle{'s' * (pair.cycles != 1)} apart"
    says = f"{names[0]} and {names[1]} carry {_relation(pair)} streams {distance}"
    shared = overlap(evidence.phases, pair.i, pair.j, *lengths) if len(lengths) == 2 and evidence.phases else None
    if lengths:
        figures["chain_length"] = ", ".join(map(decimal, dict.fromkeys(lengths)))
    if shared and shared.example:
        figures["identical_pairs"] = decimal(shared.pairs)
        figures["example"] = "chain {} cell {} = {}chain {} cell {}".format(
            names[0], shared.example[0], "NOT " if shared.complement else "", names[1], shared.example[1]
        )
        bits = "opposite" if pair.complement else "the same"
        says += (
            f", so in every pattern {decimal(shared.pairs)} pairs of scan cells of their chains hold {bits} bits, and "
            "no fault that needs another combination in such a pair is detected."
        )
    else:
        says += (
            f", less than the {decimal(evidence.bound or 0)} asked for: their chains come close to the same patterns."
        )
    return finding("windows-overlap", names, says, figures, evidence.net_place(names[1]))


def _count(bound: int, pairs: list[_Pair]) -> Finding:
    """Return the finding that counts a list too long to be shown; it has no objects, so no waiver can hide it."""
    return finding(
        "windows-overlap",
        (),
        f"{len(pairs)} pairs of channels are closer than {decimal(bound)} cycles, of which the {MOST_PAIRS} closest "
        "are listed: their scan chains share bits in every pattern, and faults that need other combinations escape.",
        {"pairs": len(pairs), "separation": decimal(pairs[0].cycles), "bound": decimal(bound)},
    )
