"""A state of one machine that no state of the other can follow, and how long the best one can."""

from collections.abc import Sequence

from auditor.gf2 import matrix
from auditor.machine.machine import LinearMachine
from auditor.notation import Vector
from auditor.phases.streams import Streams
from auditor.revisions.comparison import FromReset, Witness


def reset_witness(
    machines: tuple[LinearMachine, LinearMachine], pairs: Sequence[tuple[int, int]], reset: FromReset
) -> Witness | None:
    """Return the reset states as a witness, where the streams differ from there."""
    if reset.first is None:
        return None
    cycle, place = reset.first
    states = [machine.reset_known & machine.reset_state for machine in machines]
    return _witness(machines, pairs[place], states, cycle, "both from reset")


def followed_witness(
    machines: tuple[LinearMachine, LinearMachine],
    streams: tuple[Streams, Streams],
    pairs: Sequence[tuple[int, int]],
    start: int,
) -> Witness | None:
    """Return a witness that the machines have different sets of streams; None if they have the same.

    The two states agree on all channels from ``start`` up to the cycle of the witness, and whatever the state of the
    other machine, it could not agree longer.
    """
    for leader in (0, 1):
        found = _unfollowed(streams[leader], streams[1 - leader], [(p[leader], p[1 - leader]) for p in pairs], start)
        if found:
            led, follows, cycle, place = found
            states = [_spread(led, streams[leader]), _spread(follows, streams[1 - leader])]
            names = ("OLD", "NEW") if leader == 0 else ("NEW", "OLD")
            meant = f"no state of {names[1]} follows this one of {names[0]} longer"
            return _witness(machines, pairs[place], states if leader == 0 else states[::-1], cycle, meant)
    return None


def _unfollowed(
    leader: Streams, follower: Streams, pairs: Sequence[tuple[int, int]], start: int
) -> tuple[Vector, Vector, int, int] | None:
    """Return (leader's state, follower's state, cycle, place), states with the constant in bit 0.

    What the channels show is asked of the follower, cycle by cycle. Where the answer follows from earlier ones, it
    must follow for the leader in the same way; if it does not, some state of the leader shows it.
    """
    settled = [matrix.power(streams.step, start) for streams in (leader, follower)]
    led = [matrix.row_times(leader.rows[i], settled[0]) for i, _ in pairs]
    followed = [matrix.row_times(follower.rows[j], settled[1]) for _, j in pairs]
    span, asked, answers = matrix.Span(), list[Vector](), list[Vector]()
    cycle, grown = start, True
    while grown:
        grown = False
        for place, (ours, theirs) in enumerate(zip(led, followed, strict=True)):
            rest, combination = span.reduce(theirs & ~1)
            if rest:
                span.add(theirs & ~1)
                asked.append(theirs)
                answers.append(ours)
                grown = True
                continue
            constant = (theirs ^ matrix.row_times(combination, asked)) & 1
            gap = ours ^ matrix.row_times(combination, answers) ^ constant
            if gap:
                state = 1 if gap & 1 else 1 | gap & -gap
                return state, _answering(asked, answers, state, len(follower.step)), cycle, place
        led = [matrix.row_times(row, leader.step) for row in led]
        followed = [matrix.row_times(row, follower.step) for row in followed]
        cycle += 1
    return None


def _answering(asked: Sequence[Vector], answers: Sequence[Vector], state: Vector, width: int) -> Vector:
    """Return the follower's state that shows what the leader's state does, on independent rows."""
    values = matrix.apply(answers, state) ^ sum((row & 1) << k for k, row in enumerate(asked))
    solution = matrix.solve_columns([row >> 1 for row in asked], values, width - 1)
    return 1 | (solution or 0) << 1


def _spread(state: Vector, streams: Streams) -> Vector:
    """Return a state over the machine's own elements; elements that no channel sees are 0."""
    return sum((state >> place & 1) << element for place, element in enumerate(streams.elements, start=1))


def _witness(
    machines: tuple[LinearMachine, LinearMachine],
    pair: tuple[int, int],
    states: Sequence[Vector],
    cycle: int,
    start: str,
) -> Witness:
    old, new = (machine.observed[channel].name for machine, channel in zip(machines, pair, strict=True))
    return Witness(states[0], states[1], cycle, old, new, start)
