"""Two small machines compared by brute force: the sets of their streams from all states, without auditor."""

from collections.abc import Iterable
from itertools import permutations

from tests.support.machines import Machine

Window = tuple[int, ...]  # what all channels show in a stretch of cycles, bit i of an entry = channel i


def windows(machine: Machine, start: int, length: int) -> set[Window]:
    """Return what the channels show in cycles start ... start + length - 1, from every state."""
    return {tuple(shown(machine, state, start + length)[start:]) for state in range(1 << machine.size)}


def shown(machine: Machine, state: int, cycles: int) -> list[int]:
    """Return what all channels show in each cycle."""
    words = []
    for _ in range(cycles):
        words.append(sum(machine.output(i, state) << i for i in range(len(machine.channels))))
        state = machine.step(state)
    return words


def masked(found: Iterable[Window], mask: int) -> set[Window]:
    """Return the windows with the channels of the mask inverted."""
    return {tuple(word ^ mask for word in window) for window in found}


def reordered(found: Iterable[Window], order: tuple[int, ...]) -> set[Window]:
    """Return the windows with channel i showing what channel order[i] showed."""
    return {tuple(sum((word >> k & 1) << i for i, k in enumerate(order)) for word in window) for window in found}


def same_from(old: Machine, new: Machine, last: int) -> int | None:
    """Return the first cycle, up to ``last``, from which both machines have the same set of streams."""
    length = old.size + new.size + 2
    for start in range(last + 1):
        if windows(old, start, length) == windows(new, start, length):
            return start
    return None


def inversions(old: Machine, new: Machine, start: int) -> list[int]:
    """Return every set of channels (as a mask) whose inversion makes the sets of streams equal, fewest first."""
    length = old.size + new.size + 2
    ours, theirs = windows(old, start, length), windows(new, start, length)
    masks = sorted(range(1 << len(old.channels)), key=lambda mask: (mask.bit_count(), mask))
    return [mask for mask in masks if masked(ours, mask) == theirs]


def orders(old: Machine, new: Machine, start: int) -> list[tuple[int, ...]]:
    """Return every order of the channels under which the sets of streams are equal."""
    length = old.size + new.size + 2
    ours, theirs = windows(old, start, length), windows(new, start, length)
    return [order for order in permutations(range(len(old.channels))) if reordered(ours, order) == theirs]


def decimated(old: Machine, new: Machine, start: int, factor: int) -> bool:
    """Tell whether every d-th bit of the old streams, on cycles, gives the set of the new ones; backwards for d < 0."""
    length = old.size + new.size + 2
    span = (length - 1) * abs(factor) + 1
    picked = {window[:: abs(factor)] for window in windows(old, start, span)}
    if factor < 0:
        picked = {window[::-1] for window in picked}
    return picked == windows(new, start, length)
