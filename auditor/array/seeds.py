"""The seeds of the plan: lock-up or not, how far apart they stand on their cycles, what their tests share."""

from collections.abc import Mapping
from itertools import combinations
from math import gcd

from auditor.array.loads import distinct_loads
from auditor.array.orbits import next_state
from auditor.array.scan_array import SeedPair, SeedRun, Seeds
from auditor.errors import TroubleList
from auditor.machine.machine import LinearMachine
from auditor.notation import SourcePlace, Vector
from auditor.phases.separations import find_close_pair
from auditor.phases.table import PhaseTable
from auditor.plan import Patterns


def check_seeds(machine: LinearMachine, seeds: Mapping[str, Vector], place: SourcePlace | None) -> None:
    """Refuse seeds that have more bits than the machine has elements. Raises ``InputError``."""
    troubles = TroubleList()
    for name, state in seeds.items():
        if state >> machine.size:
            troubles.add(
                f"seed {name} has {state.bit_length()} bits, but the generator has {machine.size} storage elements",
                f"give at most {-(-machine.size // 4)} hexadecimal digits, bit k for element k of the report",
                place,
            )
    troubles.raise_any()


def find_seeds(
    machine: LinearMachine, orbits: PhaseTable, first: int, seeds: Mapping[str, Vector], patterns: Patterns | None
) -> Seeds:
    """Return what the seeds do; channel ``first`` + k of ``orbits`` is the run from seed k."""
    clocks = patterns.clocks_per_pattern if patterns else 0
    runs = []
    for number, (name, state) in enumerate(seeds.items()):
        group = orbits.phases[first + number].group
        period = None if group is None else orbits.classes[group].modulus
        distinct = distinct_loads(period, clocks) if patterns else None
        runs.append(SeedRun(name, state, stuck_registers(machine, state), period, distinct))
    pairs, apart, undecided = [], 0, 0
    for i, k in combinations(range(len(runs)), 2):
        one, other = orbits.phases[first + i], orbits.phases[first + k]
        if one.group is not None and other.group is not None and one.group != other.group:
            apart += 1
            continue
        pair = _pair(orbits, (i, k), first, patterns)
        undecided += pair is None
        pairs += [pair] if pair else []
    at_least = (orbits.window or 0) if undecided else None
    return Seeds(tuple(runs), tuple(sorted(pairs, key=lambda p: (p.cycles, p.seeds))), apart, undecided, at_least)


def stuck_registers(machine: LinearMachine, state: Vector) -> tuple[int, ...]:
    """Return the registers, by number, that do not move from the state once the transient is over.

    What an element does is told by n + 1 cycles, because its differences obey a recurrence of that length.
    """
    for _ in range(machine.transient):
        state = next_state(machine, state)
    masks = {number: sum(1 << k for k in register) for number, register in enumerate(machine.registers)}
    for _ in range(machine.size + 1):
        if not masks:
            break
        after = next_state(machine, state)
        masks = {number: mask for number, mask in masks.items() if not (state ^ after) & mask}
        state = after
    return tuple(masks)


def _pair(orbits: PhaseTable, seeds: tuple[int, int], first: int, patterns: Patterns | None) -> SeedPair | None:
    """Return how two seeds of one cycle meet, None while their distance or its length is undecided."""
    i, k = seeds
    one, other = orbits.phases[first + i], orbits.phases[first + k]
    modulus = None if one.group is None else orbits.classes[one.group].modulus
    if one.lead is not None and other.lead is not None and modulus:
        ahead = (one.lead - other.lead) % modulus
        if 2 * ahead > modulus:
            i, k, ahead = k, i, modulus - ahead
    elif close := find_close_pair(orbits, first + i, first + k):
        i, k, ahead = close[0] - first, close[1] - first, close[2]
    else:
        return None
    if patterns is None:
        return SeedPair((i, k), ahead, 0, 0)
    clocks = patterns.clocks_per_pattern
    overlap = max(0, patterns.count * clocks - ahead)
    return SeedPair((i, k), ahead, overlap, repeated_patterns(ahead, modulus, clocks, patterns.count))


def repeated_patterns(ahead: int, modulus: int | None, clocks: int, count: int) -> int:
    """Count the pairs of patterns of two tests that start ``ahead`` cycles apart and load the same bits.

    Pattern p of the first and pattern p + q of the second do if q clocks = ahead modulo the length of the cycle.
    """
    if modulus is None:
        quotient, rest = divmod(ahead, clocks)
        return 0 if rest else max(0, count - quotient)
    common = gcd(clocks, modulus)
    if ahead % common:
        return 0
    step = modulus // common
    later = ahead // common * pow(clocks // common, -1, step) % step
    # The values q of one residue in (-count, count): count - |q| pairs each, an arithmetic progression either way.
    return _progression(count - later, step) + _progression(count - (step - later), step)


def _progression(first: int, step: int) -> int:
    """Return first + (first - step) + ... over the positive terms."""
    if first <= 0:
        return 0
    terms = -(-first // step)
    return terms * first - step * (terms * (terms - 1) // 2)
