"""Finds the mode under which one loop of storage is a linear register: proof, cure, proof again, up to a bound."""

from collections import Counter
from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass

from auditor.cells.library import CellLibrary
from auditor.cone.fold import fold
from auditor.cone.wiring import Wiring
from auditor.drafting.arcs import find_arcs
from auditor.drafting.candidate import Attempt, Candidate, Constant, Describe, Prove
from auditor.drafting.clocking import open_clocks, release_resets
from auditor.drafting.justify import OWN_BIT, Constants, justify_net, sources
from auditor.drafting.loops import find_loops
from auditor.drafting.part import LARGEST_PART, Part, cut_out, storage_of
from auditor.drafting.tangle import LARGEST_LOOP, is_tangled
from auditor.notation import natural_order

LEAST_ELEMENTS = 3  # smaller loops are flags and toggles
ROUNDS = 12  # times that a loop falls into smaller ones
MOST_CONSTANTS = 24
CURES = 8  # nets of which cures are tried in one round
FORCED = 2  # gates whose output may be held
INTERNAL = 4  # constants that no port decides

STATED = "stated"
TANGLED = "so many gates stand behind its next states that it was not put to the proof"
_CURE = "--mode "


@dataclass(frozen=True, slots=True)
class Ground:
    """The whole netlist, its input ports (net → name), and the verbs that drafting may use."""

    wiring: Wiring
    library: CellLibrary
    ports: Mapping[int, str]
    prove: Prove
    describe: Describe

    def constant(self, net: int, bit: int, reason: str) -> Constant:
        """Return a constant of a net of the whole, by the name of its port where it has one."""
        name = self.ports.get(net) or self.wiring.netlist.net_names[net]
        return Constant(net, name, bit, net in self.ports, reason)


@dataclass(slots=True)
class _Search:
    """The search on one part; ``reasons`` by net of the part."""

    part: Part
    constants: Constants
    reasons: dict[int, str]

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


def settle(
    ground: Ground, elements: tuple[int, ...], start: Sequence[Constant]
) -> tuple[Candidate, list[tuple[tuple[int, ...], tuple[Constant, ...]]]]:
    """Return what becomes of a loop under the constants at the start and those that are found.

    Beside it stand smaller loops that fell off, each with the constants under which it did.
    """
    found = {constant.net: constant for constant in start}
    aside: list[tuple[tuple[int, ...], tuple[Constant, ...]]] = []
    for _ in range(ROUNDS):
        fixed = {net: constant.value for net, constant in found.items()}
        small = len(elements) <= LARGEST_LOOP
        part = cut_out(ground.wiring, ground.library, ground.ports, elements, fixed) if small else None
        local = {net: fixed[whole] for net, whole in enumerate(part.nets) if whole in fixed} if part else {}
        if part is None or is_tangled(part, local):
            break
        search = _Search(part, Constants(part, local), {})
        attempt, loops = _cure(ground, search)
        for net, reason in search.reasons.items():
            whole = part.nets[net]
            found[whole] = ground.constant(whole, search.constants.chosen[net], reason)
        if len(loops[0]) == len(elements):
            return _candidate(ground, search, attempt, tuple(found.values())), aside
        elements, *others = (tuple(part.instances[k] for k in loop) for loop in loops)
        aside += [(loop, tuple(found.values())) for loop in others]
    return Candidate(elements, _names(ground, elements), (), tuple(found.values()), None, (), "", TANGLED), aside


def _cure(ground: Ground, search: _Search) -> tuple[Attempt, list[tuple[int, ...]]]:
    """Cure until the part is proved or nothing helps; return the last attempt and the loops left, the largest first.

    Stops where a cure takes elements out of the loop: what is left becomes a part of its own.
    """
    search.take(release_resets(search.constants), "keeps asynchronous pins of the register inactive")
    search.take(open_clocks(search.constants), "lets the clock through to the register")
    forced = 0
    while True:
        attempt = search.attempt(ground, search.constants)
        internal = sum(net not in search.part.ports for net in search.reasons)
        if attempt.cone is None or attempt.machine or len(search.reasons) > MOST_CONSTANTS or internal > INTERNAL:
            return attempt, [search.part.elements]
        best = _best(ground, search, attempt, forced < FORCED)
        if best is None:
            return attempt, [search.part.elements]
        reason = _reason(search, best)
        forced += any(net not in search.part.ports | search.part.cut for net in best.constants)
        search.take(best.constants, reason)
        if best.kept < len(search.part.elements):
            return attempt, best.loops


@dataclass(frozen=True, slots=True)
class _Trial:
    """Constants that may cure a refusal, the loops that they leave, the largest first, and whether a net is held."""

    constants: dict[int, int]
    loops: list[tuple[int, ...]]
    forced: bool
    rank: int

    @property
    def kept(self) -> int:
        """The size of the largest loop."""
        return len(self.loops[0]) if self.loops else 0


def _best(ground: Ground, search: _Search, attempt: Attempt, may_force: bool) -> _Trial | None:
    """Return the cure that keeps most of the loop; among equals one that holds no net, then the fewest refusals."""
    trials = [trial for trial in _trials(search, attempt) if may_force or not trial.forced]
    most = max((trial.kept for trial in trials), default=0)
    if most < max(LEAST_ELEMENTS, len(search.part.elements) // 4):
        return None
    trials = [trial for trial in trials if trial.kept == most]
    trials = [trial for trial in trials if not trial.forced] or trials
    if len(trials) == 1 or most < len(search.part.elements):
        return min(trials, key=lambda trial: trial.rank)
    return min(trials, key=lambda trial: _worth(ground, search, trial))


def _worth(ground: Ground, search: _Search, trial: _Trial) -> tuple[int, bool, int]:
    """Return a key for trials that keep the whole loop: refusals left, not primitive, rank."""
    attempt = search.attempt(ground, search.constants.with_also(trial.constants))
    refusals = len(attempt.extraction.refusals) if attempt.extraction else LARGEST_PART
    registers = ground.describe(attempt.machine) if attempt.machine else ()
    return refusals, not any(register.primitive for register in registers), trial.rank


def _trials(search: _Search, attempt: Attempt) -> Iterator[_Trial]:
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
            forced = any(n not in part.ports | part.cut for n in constants)
            loops = search.loops(search.constants.with_also(constants))
            yield _Trial(constants, loops, forced, rank)
            rank += 1


def cured(cure: str) -> tuple[str, int]:
    """Return the net and the value that a refusal names as its cure; an empty name where it names none."""
    name, _, bit = cure.removeprefix(_CURE).rpartition("=")
    return (name, int(bit)) if cure.startswith(_CURE) and bit in ("0", "1") else ("", 0)


def _reason(search: _Search, trial: _Trial) -> str:
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
    stored, nets = storage_of(part.wiring, instance), part.wiring.nets_of(instance)
    wire_of = {**nets, **dict.fromkeys((storage.variable for storage in stored), OWN_BIT)}
    data = [wire for storage in stored for wire in fold(storage.data, wire_of, constants.known).wires]
    behind = sources(part.wiring, [wire for wire in data if wire >= 0], constants.known)
    return bool(behind or OWN_BIT in data) and behind <= set(part.state_nets(instance))


def _candidate(ground: Ground, search: _Search, attempt: Attempt, constants: tuple[Constant, ...]) -> Candidate:
    part = search.part
    elements = tuple(part.instances[k] for k in part.elements)
    outputs = tuple(part.nets[net] for k in part.elements for net in part.state_nets(k))
    machine, cone = attempt.machine, attempt.cone
    facts, because = None, attempt.because
    if machine is not None:
        facts = max(ground.describe(machine), key=lambda register: len(register.elements), default=None)
        because = "" if facts else "its elements only hold"
    free = machine.free_inputs if machine and any(machine.input_matrix) else ()
    clock = f"{part.netlist.net_names[cone.clock]}, {cone.clock_edge} edge" if cone else ""
    return Candidate(elements, _names(ground, elements), outputs, constants, facts, free, clock, because)


def _names(ground: Ground, elements: tuple[int, ...]) -> tuple[str, ...]:
    return tuple(sorted((ground.wiring.netlist.instance_names[k] for k in elements), key=natural_order))
