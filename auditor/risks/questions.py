"""What was asked and is not decided: a sentence each, for the report and the exit status."""

from collections.abc import Iterator

from auditor.risks.evidence import Evidence, decimal, register_name


def open_questions(evidence: Evidence) -> tuple[str, ...]:
    """Return a sentence for every question of this audit that stays open."""
    parts = (_guesses, _proofs, _orders, _separations, _test_length, _array, _capture)
    return tuple(sentence for part in parts for sentence in part(evidence))


def _guesses(evidence: Evidence) -> Iterator[str]:
    if evidence.plan.guesses:
        yield "Whether the drafted mode and channels are those that are meant is not decided: state them in a plan."


def _proofs(evidence: Evidence) -> Iterator[str]:
    for refusal in evidence.extraction.refusals:
        if refusal.undecided:
            yield f"Whether {refusal.what} is affine is not decided: {refusal.because} (at {refusal.gate})."
    if evidence.machine is None:
        yield "Without a machine nothing is known about polynomials, periods, taps, leads and separations."


def _orders(evidence: Evidence) -> Iterator[str]:
    for register in evidence.registers:
        if register.period is None:
            name = register_name(evidence.storage_names(register))
            yield f"The period of register {name} is not decided: the factors of an order it needs are not known."


def _separations(evidence: Evidence) -> Iterator[str]:
    """Yield a sentence where a bound needs leads that have no value and is not certified without them."""
    bound, table = evidence.bound, evidence.phases
    if bound is None or table is None or evidence.machine is None:
        return
    if table.decides(bound):
        return
    phases = [table.phases[number] for number, _ in evidence.channels()]
    unknown = [phase.no_lead_because for phase in phases if phase.kind == "undecided"]
    certified = table.certified_at_least
    if unknown and (certified is None or certified < bound):
        reasons = "; ".join(dict.fromkeys(filter(None, unknown)))
        because = f" ({reasons})" if reasons else ""
        yield (
            f"Whether all channels are {decimal(bound)} cycles apart is not decided: {len(unknown)} of {len(phases)} "
            f"leads have no value{because}, and at least {decimal(certified or 0)} cycles are certified."
        )


def _test_length(evidence: Evidence) -> Iterator[str]:
    clocks, table = evidence.test_clocks, evidence.phases
    if clocks is None or table is None or evidence.machine is None:
        return
    for group in table.classes:
        if group.modulus is None and evidence.chain_fed(group):
            name = evidence.machine.observed[group.reference].name
            yield (
                f"Whether the stream of {name} repeats within the {decimal(clocks)} cycles of the planned test is not "
                "decided: its period is not known."
            )


def _array(evidence: Evidence) -> Iterator[str]:
    array, patterns = evidence.array, evidence.plan.patterns
    if array is None:
        return
    yield from array.open
    loads = array.loads
    enough = loads and (loads.beyond or (loads.distinct is not None and patterns and loads.distinct >= patterns.count))
    if patterns and loads and not loads.exact and loads.counted is None and enough:
        yield (
            f"Whether all {decimal(patterns.count)} planned patterns differ is not decided: the scan cells do not tell "
            "all states of the generator apart."
        )


def _capture(evidence: Evidence) -> Iterator[str]:
    capture, patterns = evidence.capture, evidence.plan.patterns
    if capture is None:
        return
    nets = capture.nets
    if nets.undecided:
        yield (
            f"Whether {len(nets.undecided)} of {nets.examined} nets behind scan cells toggle is not decided, such as "
            f"{capture.circuit.wire_name(nets.undecided[0])}."
        )
    if patterns and not nets.patterns:
        yield (
            "Which nets the planned patterns leave frozen is not decided: neither a seed nor reset gives a state from "
            "which the generator runs."
        )
