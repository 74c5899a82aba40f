"""Proof, cure, proof again: the mode of one part, up to a bound. Constants come from refusals, not by enumeration."""

from collections import Counter
from collections.abc import Iterator, Mapping
from dataclasses import dataclass, field

from auditor.cone.fold import fold
from auditor.drafting.arcs import find_arcs
from auditor.drafting.candidate import Attempt, Ground
from auditor.drafting.clocking import open_clocks, release_resets
from auditor.drafting.justify import OWN_BIT, Constants, justify_net, sources
from auditor.drafting.loops import find_loops
from auditor.drafting.part import LARGEST_PART, Part, storage_of

LEAST_ELEMENTS = 3  # smaller loops are flags and toggles
MOST_CONSTANTS = 24
CURES = 8  # nets of which cures are tried in one round
FORCED = 2  # gates whose output may be held
INTERNAL = 4  # constants of cures that no port decides

_CURE = "--mode "


@dataclass(slots=True)
class Search:
    """The search on one part.

    ``keep``     how many elements form the loop; the others of the part are pipelines behind it
    ``reasons``  of the constants found, by net of the part
    ``internal``, ``forced``  how many cures held a net that no port decides, and a gate's output
    """

    part: Part
    constants: Constants
    keep: int
    reasons: dict[int, str] = field(default_factory=dict)
    internal: int = 0
    forced: int = 0

    def loops(self, constants: Constants) -> list[tuple[int, ...]]:
        """Return the elements of the loops that are left under constants, the largest loop first."""
        arcs = find_arcs(self.part.wiring, constants.known)
        loops = find_loops(arcs, len(self.part.netlist.net_names), LEAST_ELEMENTS)
        return sorted((loop.elements for loop in loops), key=len, reverse=True)

    def take(self, more: Mapping[int, int], reason: str) -> None:
        """Go on with more constants."""
        self.reasons.update(dict.fromkeys(more, reason))
        self.constants = self.constants.with_also(more)

    def names(self, constants: Constants) -> dict[str, int]:
        """Return constants by name."""
        return {self.part.netlist.net_names[net]: bit for net, bit in constants.chosen.items()}

    def attempt(self, ground: Ground, constants: Constants) -> Attempt:
        """Try to prove the elements linear under constants."""
        nets = [net for k in self.part.elements for net in self.part.state_nets(k)]
        return ground.prove(self.part.netlist, self.names(constants), [self.part.netlist.net_names[n] for n in nets])


def cure(ground: Ground, search: Search) -> tuple[Attempt, list[tuple[int, ...]]]:
    """Cure until the part is proved or nothing helps; return the last attempt and the loops left, the largest first.

    Stops where a cure takes elements out of the loop: what is left becomes a part of its own. The loops are empty
    where nothing fell off.
    """
    search.take(release_resets(search.constants), "keeps asynchronous pins of the register inactive")
    search.take(open_clocks(search.constants), "lets the clock through to the register")
    while True:
        attempt = search.attempt(ground, search.constants)
        if attempt.cone is None or attempt.machine or len(search.reasons) > MOST_CONSTANTS:
            return attempt, []
        best = _best(ground, search, attempt)
        if best is None:
            return attempt, []
        reason = _reason(search, best)
        search.internal += best.internal
        search.forced += best.forced
        search.take(best.constants, reason)
        if best.kept < search.keep:
            return attempt, best.loops


@dataclass(frozen=True, slots=True)
class _Trial:
    """Constants that may cure a refusal, the loops that they leave (the largest first), nets that no port decides."""

    constants: dict[int, int]
    loops: list[tuple[int, ...]]
    internal: int
    forced: bool
    rank: int

    @property
    def kept(self) -> int:
        """The size of the largest loop."""
        return len(self.loops[0]) if self.loops else 0


def _best(ground: Ground, search: Search, attempt: Attempt) -> _Trial | None:
    """Return the cure that keeps most of the loop; among equals one that holds no net, then the fewest refusals."""
    trials = [
        trial
        for trial in _trials(search, attempt)
        if search.forced + trial.forced <= FORCED and search.internal + trial.internal <= INTERNAL
    ]
    most = max((trial.kept for trial in trials), default=0)
    if most < max(LEAST_ELEMENTS, search.keep // 4):
        return None
    trials = [trial for trial in trials if trial.kept == most]
    trials = [trial for trial in trials if not trial.forced] or trials
    if len(trials) == 1 or most < search.keep:
        return min(trials, key=lambda trial: trial.rank)
    return min(trials, key=lambda trial: _worth(ground, search, trial))


def _worth(ground: Ground, search: Search, trial: _Trial) -> tuple[int, int, bool, int]:
    """Return a key for trials that keep the loop: elements that read no other one, refusals, not primitive, rank."""
    constants, part = search.constants.with_also(trial.constants), search.part
    others = {k: set(part.state_nets(k)) for k in part.elements}
    stored = set().union(*others.values())
    idle = sum(not (_read(part, constants, k) & stored) - others[k] for k in part.elements)
    attempt = search.attempt(ground, constants)
    refusals = len(attempt.extraction.refusals) if attempt.extraction else LARGEST_PART
    registers = ground.describe(attempt.machine) if attempt.machine else ()
    return idle, refusals, not any(register.primitive for register in registers), trial.rank


def _trials(search: Search, attempt: Attempt) -> Iterator[_Trial]:
    """Yield what gives each cured net its value, and for an input the other value too."""
    part, netlist = search.part, search.part.netlist
    wanted: Counter[tuple[int, int]] = Counter()
    for refusal in attempt.extraction.refusals if attempt.extraction else ():
        name, bit = cured(refusal.cure)
        if name in netlist.net_of_name:
            wanted[netlist.net_of_name[name], bit] += 1
    nets = dict.fromkeys(net for (net, _), _ in wanted.most_common(CURES))
    rank = 0
    for net in nets:
        bits = (0, 1) if wanted[net, 0] >= wanted[net, 1] else (1, 0)
        for value in bits if net in part.ports | part.cut else bits[:1]:
            constants = justify_net(search.constants, net, value)
            if not constants:
                continue
            internal = sum(n not in part.ports for n in constants)
            forced = any(n not in part.ports | part.cut for n in constants)
            loops = search.loops(search.constants.with_also(constants))
            yield _Trial(constants, loops, internal, forced, rank)
            rank += 1


def cured(cure: str) -> tuple[str, int]:
    """Return the net and the value that a refusal names as its cure; an empty name where it names none."""
    name, _, bit = cure.removeprefix(_CURE).rpartition("=")
    return (name, int(bit)) if cure.startswith(_CURE) and bit in ("0", "1") else ("", 0)


def _reason(search: Search, trial: _Trial) -> str:
    """Return what the constants do, by what the opposite value of the first would do."""
    part, size = search.part, len(search.part.elements)
    net, bit = next(iter(trial.constants.items()))
    if trial.forced:
        return "held, because its gate keeps the register from being linear: what is audited is not the whole truth"
    other = search.constants.with_also({**trial.constants, net: 1 - bit})
    held = sum(_holds(part, other, k) for k in part.elements)
    if held:
        return f"an enable: with {1 - bit}, {held} of {size} elements hold their state"
    left = max(map(len, search.loops(other)), default=0)
    if left < trial.kept:
        return (
            f"selects the feedback (else scan path or load): with {1 - bit}, {left} of {size} elements stay in the loop"
        )
    return f"one of two choices, for {1 - bit} leaves a loop of {left} elements too: check which is meant"


def _holds(part: Part, constants: Constants, instance: int) -> bool:
    """Tell whether an element only holds under constants: nothing but itself decides its next state."""
    read = _read(part, constants, instance)
    return bool(read) and read <= {OWN_BIT, *part.state_nets(instance)}


def _read(part: Part, constants: Constants, instance: int) -> set[int]:
    """Return the stored bits and inputs that decide an element's next state; OWN_BIT is its own, inside the cell."""
    stored, nets = storage_of(part.wiring, instance), part.wiring.nets_of(instance)
    wire_of = {**nets, **dict.fromkeys((storage.variable for storage in stored), OWN_BIT)}
    data = [wire for storage in stored for wire in fold(storage.data, wire_of, constants.known).wires]
    own = {OWN_BIT}.intersection(data)
    return own | sources(part.wiring, [wire for wire in data if wire >= 0], constants.known)
