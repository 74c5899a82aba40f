"""What becomes of one loop of storage: the mode under which it is a linear register, or why there is none."""

from collections.abc import Sequence

from auditor.drafting.candidate import Attempt, Candidate, Constant, Ground
from auditor.drafting.cure import Search, cure
from auditor.drafting.justify import Constants
from auditor.drafting.part import cut_out
from auditor.drafting.tangle import LARGEST_LOOP, is_tangled
from auditor.notation import natural_order

ROUNDS = 12  # times that a loop falls into smaller ones
STATED = "stated"
TANGLED = "so many gates stand behind its next states that it was not put to the proof"


def settle(
    ground: Ground, elements: tuple[int, ...], start: Sequence[Constant]
) -> tuple[Candidate, list[tuple[tuple[int, ...], tuple[Constant, ...]]]]:
    """Return what becomes of a loop under the constants at the start and those that are found.

    Beside it stand smaller loops that fell off, each with the constants under which it did.
    """
    found = {constant.net: constant for constant in start}
    aside: list[tuple[tuple[int, ...], tuple[Constant, ...]]] = []
    internal = forced = 0
    for _ in range(ROUNDS):
        search = _search(ground, elements, found, len(elements))
        if search is None:
            break
        search.internal, search.forced = internal, forced
        attempt, loops = cure(ground, search)
        constants = _note(ground, search, found)
        if not loops:
            return _candidate(ground, search, attempt, constants), aside
        internal, forced = search.internal, search.forced
        elements, *others = (tuple(search.part.instances[k] for k in loop) for loop in loops)
        aside += [(loop, constants) for loop in others]
    return Candidate(elements, _names(ground, elements), (), tuple(found.values()), None, (), "", TANGLED), aside


def complete(
    ground: Ground, registers: Sequence[Candidate], pipelines: Sequence[int], start: Sequence[Constant]
) -> list[Constant]:
    """Return the constants of proved registers and those that the storage behind them needs as well."""
    found = {constant.net: constant for constant in start}
    keep = max(len(register.elements) for register in registers)
    elements = (*(k for register in registers for k in register.elements), *pipelines)
    search = _search(ground, elements, found, keep)
    if search is None:
        return list(start)
    _, loops = cure(ground, search)
    return list(start) if loops else list(_note(ground, search, found))


def _search(ground: Ground, elements: tuple[int, ...], found: dict[int, Constant], keep: int) -> Search | None:
    """Return a search on the part around elements; None where it is too much for a proof."""
    if len(elements) > LARGEST_LOOP:
        return None
    fixed = {net: constant.value for net, constant in found.items()}
    part = cut_out(ground.wiring, ground.library, ground.ports, elements, fixed)
    if part is None:
        return None
    local = {net: fixed[whole] for net, whole in enumerate(part.nets) if whole in fixed}
    return None if is_tangled(part, local) else Search(part, Constants(part, local), keep)


def _note(ground: Ground, search: Search, found: dict[int, Constant]) -> tuple[Constant, ...]:
    """Add what a search found to the constants by net of the whole, and return all."""
    for net, reason in search.reasons.items():
        whole = search.part.nets[net]
        found[whole] = ground.constant(whole, search.constants.chosen[net], reason)
    return tuple(found.values())


def _candidate(ground: Ground, search: Search, attempt: Attempt, constants: tuple[Constant, ...]) -> Candidate:
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
