"""Brings the stored bits of a description to one variable each, in the polarity stored at Q.

A description may store the complement of what Q shows: ``ff(IQN,IQNN)`` with ``next_state: "!D"`` and Q = IQNN, or
``ff(IQ,IQN)`` with ``next_state: "!D"`` and Q = IQN. The variable kept is the one that follows the data un-inverted.
"""

from collections.abc import Container, Mapping, Sequence
from dataclasses import dataclass
from typing import Literal

from auditor.cells.function import restrict, substitute, unateness
from auditor.cells.library import Function, Storage

_COMPLEMENT: dict[str, Literal["0", "1", ""]] = {"0": "1", "1": "0", "": ""}


@dataclass(frozen=True, slots=True)
class Described:
    """One stored bit as described: ``first`` takes the data, ``second`` ("" if there is none) is its complement.

    The other fields are those of ``Storage``; ``both`` is the value of ``first``. Every function may use the first
    and second variable of every stored bit of the cell.
    """

    first: str
    second: str
    kind: Literal["flip-flop", "latch"]
    clock: Function
    data: Function
    clear: Function | None = None
    preset: Function | None = None
    both: Literal["0", "1", ""] = ""


def settle(described: Sequence[Described], taken: Container[str]) -> tuple[tuple[Storage, ...], dict[str, Function]]:
    """Return the stored bits, and what each variable of the description is in terms of theirs.

    A variable named like a pin (one of ``taken``) gets the suffix ``.state``.
    """
    complements = {bit.second: Function((bit.first,), ("$0", "!")) for bit in described if bit.second}
    inverted = [_falls_with_data(bit, complements) for bit in described]
    meaning: dict[str, Function] = {}
    variables = []
    for bit, is_inverted in zip(described, inverted, strict=True):
        kept, other = (bit.second or f"{bit.first}.inverted", bit.first) if is_inverted else (bit.first, bit.second)
        variables.append(f"{kept}.state" if kept in taken else kept)
        meaning[kept] = Function((variables[-1],), ("$0",))
        if other:
            meaning[other] = Function((variables[-1],), ("$0", "!"))
    settled = tuple(map(_rewritten, described, variables, inverted, [meaning] * len(variables)))
    return settled, meaning


def rewrite(function: Function, meaning: Mapping[str, Function]) -> Function:
    """Return the function with each name replaced by its meaning, constants and double inversions folded."""
    return restrict(substitute(function, meaning), {})


def inverse(function: Function) -> Function:
    """Return NOT ``function``."""
    return Function(function.inputs, (*function.program, "!"))


def _falls_with_data(bit: Described, complements: Mapping[str, Function]) -> bool:
    """Return whether the first variable is negative unate in its data: in every input in which it is unate at all.

    Selecting inputs (an enable, a scan enable) are mixed and do not count; nor does the variable itself.
    """
    ways = {way for name, way in unateness(substitute(bit.data, complements)).items() if name != bit.first}
    return "negative" in ways and "positive" not in ways


def _rewritten(bit: Described, variable: str, inverted: bool, meaning: Mapping[str, Function]) -> Storage:
    clear, preset = (bit.preset, bit.clear) if inverted else (bit.clear, bit.preset)
    return Storage(
        variable,
        bit.kind,
        clock=rewrite(bit.clock, meaning),
        data=rewrite(inverse(bit.data) if inverted else bit.data, meaning),
        clear=rewrite(clear, meaning) if clear else None,
        preset=rewrite(preset, meaning) if preset else None,
        both=_COMPLEMENT[bit.both] if inverted else bit.both,
    )
