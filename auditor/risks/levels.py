"""Every finding there is: its slug, its default level and what it means in a line."""

from collections.abc import Mapping
from typing import NamedTuple

from auditor.notation import SourcePlace
from auditor.risks.finding import Finding, Level


class Kind(NamedTuple):
    """The default level of a finding and its meaning, a line for the reader who meets the slug."""

    level: Level
    meaning: str


KINDS: dict[str, Kind] = {
    "channels-in-lockstep": Kind("error", "two channels carry the same stream, or its complement, at the same time"),
    "windows-overlap": Kind("error", "two channels are closer than the chain length or the separation limit"),
    "single-tap-channel": Kind("note", "a channel carries one register element, unmixed"),
    "constant-channel": Kind("error", "a channel does not change"),
    "not-affine": Kind("error", "a next state or a channel is no XOR of stored bits, so the audit stops there"),
    "free-input": Kind("note", "an input that the mode leaves open acts on the generator"),
    "period-short-of-maximum": Kind("warning", "a register repeats before 2^n - 1 cycles"),
    "period-short-of-test": Kind("error", "a stream repeats before the planned test is over"),
    "resets-into-lock-up": Kind("error", "the reset state of a register is a state that it never leaves"),
    "no-reset-and-no-load": Kind("warning", "nothing puts a register, or a part of it, into a known state"),
    "registers-in-step": Kind("error", "two registers share a factor and so can produce the same streams"),
    "fan-out-over-limit": Kind("warning", "a flip-flop drives more pins, or more capacitance, than is allowed"),
    "taps-over-limit": Kind("warning", "a channel has more taps than is allowed"),
    "depth-over-limit": Kind("warning", "a channel passes more XOR nodes in a row than is allowed"),
    "scan-cells-twinned": Kind("error", "two scan cells hold the same bit, or opposite ones, whatever the state"),
    "scan-cell-relation": Kind("note", "three or four scan cells whose sum is the same whatever the state"),
    "cone-short-of-rank": Kind("warning", "a cone of the circuit never sees some combination of its scan cells"),
    "net-frozen": Kind("error", "a net of the circuit toggles with free scan cells, but not under the generator"),
    "patterns-repeat": Kind("error", "the planned patterns are not all different"),
    "seeds-overlap": Kind("error", "the tests from two seeds run through the same states"),
    "seed-in-lock-up": Kind("error", "a seed is a state that a register never leaves"),
    "forced-net": Kind("note", "the mode forces an internal net whose driver could take the other value"),
}


def finding(
    slug: str,
    where: tuple[str, ...],
    says: str,
    figures: Mapping[str, int | float | str | None],
    place: SourcePlace | None = None,
) -> Finding:
    """Return a finding at the default level of its slug."""
    return Finding(slug, KINDS[slug].level, where, says, figures, place)
