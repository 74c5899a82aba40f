"""Rules on what the channels carry: refused rows, constants, distances, single taps, open inputs."""

from collections.abc import Iterator

from auditor.machine.machine import LinearMachine, Refusal
from auditor.notation import Vector
from auditor.risks.evidence import Evidence, open_input_reach
from auditor.risks.finding import Finding
from auditor.risks.levels import finding


def not_affine(evidence: Evidence) -> Iterator[Finding]:
    """Report every next state and channel that was proved not to be affine."""
    channels = {channel.name for channel in evidence.cone.channels}
    for refusal in evidence.extraction.refusals:
        if not refusal.undecided:
            if refusal.what in channels:
                consequence = "it has no taps and no lead, and what its chain shares with others stays unknown"
            elif evidence.machine is None:
                consequence = "a register depends on it, so no polynomial, period, lead or separation can be given"
            else:
                consequence = "what it feeds has no taps and no lead"
            yield _refused(refusal, consequence)


def _refused(refusal: Refusal, consequence: str) -> Finding:
    cure = f" ({refusal.cure} would make it one)" if refusal.cure else ""
    return finding(
        "not-affine",
        (refusal.what,),
        f"{refusal.what} is no XOR of stored bits, because {refusal.because}{cure}: {consequence}.",
        {"gate": refusal.gate, "because": refusal.because, "cure": refusal.cure or None},
        refusal.place,
    )


def constant_channel(evidence: Evidence) -> Iterator[Finding]:
    """Report channels that do not change: tied, cut off from every register, or holding one value."""
    machine = evidence.machine
    if machine is None or evidence.phases is None:
        for channel in evidence.cone.channels:
            if channel.constant is not None:
                yield _constant(evidence, channel.name, channel.constant)
        return
    reached = open_input_reach(machine)
    for number, observed in evidence.channels():
        row, phase = observed.row, evidence.phases.phases[number]
        if row is None or row.inputs or row.state & reached:
            continue
        held = phase.group is not None and evidence.phases.classes[phase.group].modulus == 1
        if held or phase.kind == "none":
            yield _constant(evidence, observed.name, None if row.state else row.constant)


def _constant(evidence: Evidence, name: str, value: int | None) -> Finding:
    what = "one value that the start state decides" if value is None else f"the constant {value}"
    return finding(
        "constant-channel",
        (name,),
        f"The chain behind {name} is filled with {what} in every pattern, so no fault is detected that needs "
        "the other value in one of its scan cells.",
        {"value": value},
        evidence.net_place(name),
    )


def single_tap_channel(evidence: Evidence) -> Iterator[Finding]:
    """Report channels that carry one register element without any other."""
    if evidence.machine is None:
        return
    for _, observed in evidence.channels():
        if len(observed.taps) == 1 and observed.row is not None and not observed.row.inputs:
            tap = observed.taps[0]
            element = evidence.machine.storage[tap.element]
            delay = f", {tap.delay} cycle{'s' * (tap.delay != 1)} later" if tap.delay else ""
            yield finding(
                "single-tap-channel",
                (observed.name,),
                f"{observed.name} carries the stream of {element} unmixed{delay}: no XOR moves it away from its "
                "neighbours, so its chain is only as far from others as the elements of the register are.",
                {"element": element, "delay": tap.delay},
                evidence.net_place(observed.name),
            )


def free_input(evidence: Evidence) -> Iterator[Finding]:
    """Report inputs that the mode leaves open and that act on the generator."""
    machine = evidence.machine
    if machine is not None:
        names = machine.free_inputs
    else:
        names = tuple(evidence.cone.wire_name(wire) for wire in evidence.cone.free_inputs)
    for number, name in enumerate(names):
        yield finding(
            "free-input",
            (name,),
            f"{name} is open under this mode and acts on what the chains receive: patterns and signature can be "
            "predicted only for a known sequence there; periods, leads and separations are given for all such inputs "
            "at 0.",
            {} if machine is None else _reach(evidence, machine, 1 << number),
            evidence.net_place(name),
        )


def _reach(evidence: Evidence, machine: LinearMachine, free: Vector) -> dict[str, int | float | str | None]:
    """Return how many elements and channels a free input acts on, at once or later."""
    elements = open_input_reach(machine, free)
    rows = [observed.row for _, observed in evidence.channels() if observed.row is not None]
    channels = sum(bool(row.inputs & free or row.state & elements) for row in rows)
    return {"elements": elements.bit_count(), "channels": channels}
