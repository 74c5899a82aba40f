"""From a netlist to a starter plan: the main verb of this room."""

import re
from collections import Counter
from collections.abc import Mapping, Sequence
from itertools import islice

from auditor.cone.constants import TIES, spread
from auditor.drafting.arcs import find_arcs
from auditor.drafting.candidate import Attempt, Candidate, Constant, Ground
from auditor.drafting.cure import LEAST_ELEMENTS, cured
from auditor.drafting.exits import Exit, find_exits
from auditor.drafting.loops import Loop, find_loops
from auditor.drafting.proposal import ChannelGuess, Draft, Proposal
from auditor.drafting.settle import STATED, TANGLED, complete, settle
from auditor.drafting.tangle import fallen_loops
from auditor.machine.machine import ObservedRow

MOST_CANDIDATES = 24
MOST_TANGLES = 2
LOGIC = 12  # arcs an element inside a loop; a register has fewer, a state machine more
CHANNEL_CURES = 4
_DIGITS = re.compile(r"\d+")


def propose(ground: Ground, stated: Mapping[int, int]) -> Draft:
    """Return what is found in the netlist under the stated constants (net → value)."""
    netlist = ground.wiring.netlist
    known = {**TIES, **stated}
    spread(ground.wiring, known, list(known))
    loops = find_loops(find_arcs(ground.wiring, known), len(netlist.net_names), LEAST_ELEMENTS)
    candidates = _settle_all(ground, loops, [ground.constant(net, bit, STATED) for net, bit in stated.items()])
    exits = [_exits(ground, [c])[0] if c.facts and not c.compacts else [] for c in candidates]
    proposal, because = _choose(ground, candidates, exits)
    passed_over = max(0, len(loops) - MOST_CANDIDATES)
    return Draft(netlist.top, tuple(candidates), tuple(map(tuple, exits)), passed_over, proposal, because)


def _settle_all(ground: Ground, loops: Sequence[Loop], start: Sequence[Constant]) -> list[Candidate]:
    """Settle the loops that look most like registers, and what falls off them, up to the bound."""
    ranked = sorted(loops, key=lambda loop: (loop.arcs > LOGIC * len(loop.elements), -len(loop.elements)))
    waiting: list[tuple[tuple[int, ...], Sequence[Constant]]] = [(loop.elements, start) for loop in ranked]
    candidates: list[Candidate] = []
    while waiting and len(candidates) < MOST_CANDIDATES:
        elements, constants = waiting.pop(0)
        candidate, fallen = settle(ground, elements, constants)
        candidates.append(candidate)
        waiting[:0] = fallen
    for tangle in [c for c in candidates if c.because == TANGLED][:MOST_TANGLES]:
        given = {constant.net: constant.value for constant in start}
        known = {**TIES, **given}
        spread(ground.wiring, known, list(known))
        loose = fallen_loops(ground.wiring, ground.ports, known, frozenset(tangle.elements), LEAST_ELEMENTS)
        for elements, net, value in islice(loose, MOST_CANDIDATES):
            guess = ground.constant(net, value, "holds the multiplexers that tie the register to the rest of the chip")
            candidates.append(settle(ground, elements, [*start, guess])[0])
    return sorted(candidates, key=lambda c: (c.facts is None, c.compacts, -c.size, c.elements))


def _exits(ground: Ground, registers: Sequence[Candidate]) -> tuple[list[Exit], list[int]]:
    """Return the nets that can be channels of some registers, and the storage of the pipelines in between."""
    known = {**TIES, **{c.net: c.value for register in registers for c in register.constants}}
    spread(ground.wiring, known, list(known))
    inside = [k for register in registers for k in register.elements]
    starts = [net for register in registers for net in register.outputs]
    found, pipelines = find_exits(ground.wiring, ground.ports, known, inside, starts)
    return _fit(found), pipelines


def _fit(exits: list[Exit]) -> list[Exit]:
    """Return the exits that can be channels: output ports first, shift registers where no port shows a mixed stream."""
    ports, chains = [e for e in exits if e.port], [e for e in exits if e.chain]
    if any(e.mixed for e in ports) or not chains or len(ports) > len(chains):
        return ports
    return chains


def _choose(
    ground: Ground, candidates: Sequence[Candidate], exits: Sequence[Sequence[Exit]]
) -> tuple[Proposal | None, str]:
    """Return the proposal, or None and why none is clear."""
    order = [k for k, found in enumerate(exits) if found and not _is_wider(candidates, k)]
    order.sort(key=lambda k: (-len(exits[k]), _forced(candidates[k]), -candidates[k].size, k))
    if not order:
        return None, "no loop was proved linear whose streams reach an output port or a shift register"
    best = order[0]
    together = [best]
    for k in order[1:]:
        if _agree([candidates[j] for j in together], candidates[k]):
            together.append(k)
    for k in [k for k in order if k not in together]:
        if 2 * len(exits[k]) > len(exits[best]):
            return None, f"registers {best + 1} and {k + 1} need different modes or clocks, and each has channels"
    if len(together) > 1:
        proposal, _ = _prove(ground, candidates, together)
        if proposal:
            return proposal, ""
    return _prove(ground, candidates, [best])


def _is_wider(candidates: Sequence[Candidate], k: int) -> bool:
    """Tell whether a register that is not primitive holds elements of one that is: a scan path closed through it."""
    own, facts = set(candidates[k].elements), candidates[k].facts
    primitive = [c for c in candidates if c.facts and c.facts.primitive and not c.compacts]
    return not (facts and facts.primitive) and any(own.intersection(c.elements) for c in primitive)


def _forced(candidate: Candidate) -> int:
    return sum(not constant.is_port for constant in candidate.constants)


def _agree(chosen: Sequence[Candidate], other: Candidate) -> bool:
    """Tell whether a register runs under the mode and the clock of the others, but for constants of ports."""
    given = {c.net: c.value for candidate in chosen for c in candidate.constants}
    agree = all(given[c.net] == c.value if c.net in given else c.is_port for c in other.constants)
    return agree and other.clock == chosen[0].clock


def _prove(ground: Ground, candidates: Sequence[Candidate], chosen: Sequence[int]) -> tuple[Proposal | None, str]:
    """Audit the chosen registers in the whole netlist and keep the channels that come out linear."""
    netlist = ground.wiring.netlist
    registers = [candidates[k] for k in chosen]
    exits, pipelines = _exits(ground, registers)
    constants = list({c.net: c for register in registers for c in register.constants}.values())
    constants = complete(ground, registers, pipelines, constants)
    names = [e.port or netlist.net_names[e.net] for e in exits]
    if not names:
        return None, "nothing leaves the registers"
    for _ in range(CHANNEL_CURES):
        attempt = ground.prove(netlist, {c.name: c.value for c in constants}, names)
        if attempt.machine is None:
            return None, f"in the whole netlist the proof fails: {attempt.because}"
        cure = _channel_cure(ground, attempt, names, constants)
        if cure is None:
            break
        constants.append(cure)
    observed = attempt.machine.observed if attempt.machine else ()
    rows = {row.name: row for row in observed if not row.cut_from}
    lone = _lone(exits, names, rows)
    guesses = tuple(_guess(e, name, rows[name], name in lone) for e, name in zip(exits, names, strict=True))
    if not any(guess.kept for guess in guesses):
        return None, "no channel is linear"
    clock = f"{attempt.cone.wire_name(attempt.cone.clock)}, {attempt.cone.clock_edge} edge" if attempt.cone else ""
    lengths = tuple(sorted(e.chain for e, guess in zip(exits, guesses, strict=True) if not e.port and guess.kept))
    return Proposal(tuple(chosen), tuple(constants), guesses, clock, lengths), ""


def _channel_cure(
    ground: Ground, attempt: Attempt, names: Sequence[str], constants: Sequence[Constant]
) -> Constant | None:
    """Return the port constant that makes most of the refused channels linear, if there is one."""
    netlist, wanted = ground.wiring.netlist, Counter[int]()
    for row in attempt.machine.observed if attempt.machine else ():
        cure = row.refusal.cure if row.refusal else ""
        net = netlist.net_of_name.get(cured(cure)[0], -1)
        wanted[net] += net in ground.ports
    best: tuple[int, Constant] | None = None
    before = _linear(attempt)
    for net in [net for net, count in wanted.most_common(CHANNEL_CURES) if count]:
        for bit in (0, 1):
            guess = ground.constant(net, bit, "lets the streams through to the channels")
            tried = ground.prove(netlist, {c.name: c.value for c in [*constants, guess]}, names)
            gained = _linear(tried) - before
            if gained > (best[0] if best else 0):
                best = gained, guess
    return best[1] if best else None


def _linear(attempt: Attempt) -> int:
    """Return how many rows are linear and read a register."""
    return sum(bool(row.taps) and not row.cut_from for row in attempt.machine.observed) if attempt.machine else -1


def _lone(exits: Sequence[Exit], names: Sequence[str], rows: Mapping[str, ObservedRow]) -> set[str]:
    """Return names that show one stored bit unmixed and stand apart from the others by their name."""
    stems = Counter(_DIGITS.sub("", name) for name in names)
    unmixed = {name for e, name in zip(exits, names, strict=True) if not e.mixed and rows[name].row}
    if len(names) - len(unmixed) < 2:
        return set()
    return {name for name in unmixed if stems[_DIGITS.sub("", name)] == 1}


def _guess(found: Exit, name: str, row: ObservedRow, lone: bool) -> ChannelGuess:
    what = "output port" if found.port else f"feeds a shift register of {found.chain} stages"
    if row.row is None:
        return ChannelGuess(name, False, f"{what}, but not linear: {row.refusal.because if row.refusal else ''}")
    if not row.taps:
        return ChannelGuess(name, False, f"{what}, but shows no register")
    if lone:
        return ChannelGuess(name, False, f"{what}, but shows one stored bit unmixed, unlike the others")
    stages = f", behind {row.pipeline_stages} pipeline stages" if row.pipeline_stages else ""
    taps = f"{len(row.taps)} tap{'s' * (len(row.taps) > 1)}"
    return ChannelGuess(name, True, f"{what}: {taps}{stages}")
