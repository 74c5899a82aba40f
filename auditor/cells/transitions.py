"""What a table says of one stored bit, and which flip-flop or latch does exactly that.

A sequential primitive of Verilog, a state table of Liberty and an ``always`` block all come down to this: one input
changes, and the bit becomes something. The structure is found by trying each input as the clock, in both
directions, and is accepted only if it agrees with the table after every change of every input from every state that
can occur. No name is looked at.
"""

from collections.abc import Sequence
from dataclasses import dataclass
from typing import Literal

from auditor.cells.library import Function
from auditor.cells.storage import Described
from auditor.cells.truth import TableSpace, function_between

MOST_INPUTS = 12  # a table over them and the state has 8192 places


@dataclass(frozen=True, slots=True)
class Transitions:
    """The behaviour of a stored bit over n inputs.

    ``ones[i]`` and ``zeros[i]`` are tables over the inputs and, as name n, the state: 1 at the inputs and the old
    state from which the bit is 1 (or 0) once input i has just changed to the value it has there. What is in neither
    is unknown. ``clock`` restricts which input may be the clock: its index, or None for any.
    """

    inputs: tuple[str, ...]
    ones: tuple[int, ...]
    zeros: tuple[int, ...]
    clock: int | None = None


def recognise(transitions: Transitions, variable: str) -> Described | None:
    """Return the flip-flop or latch that ``transitions`` describe, None if they describe neither.

    ``variable`` names its state, and must be none of the inputs.
    """
    count = len(transitions.inputs)
    if count > MOST_INPUTS:
        return None
    latch = recognise_latch(transitions, variable) if transitions.clock is None else None
    if latch:
        return latch
    search = _Search(transitions, (*transitions.inputs, variable), TableSpace(count + 1))
    for clock in range(count) if transitions.clock is None else [transitions.clock]:
        for edge in (1, 0):
            found = search.flip_flop(clock, edge)
            if found:
                return found
    return None


def recognise_latch(transitions: Transitions, variable: str) -> Described | None:
    """Return the latch that ``transitions`` describe, None if they describe none."""
    count = len(transitions.inputs)
    if count > MOST_INPUTS:
        return None
    return _Search(transitions, (*transitions.inputs, variable), TableSpace(count + 1)).latch()


@dataclass(frozen=True, slots=True)
class _Forced:
    """The places at which the bit is forced to 1 and to 0; elsewhere it holds. No place depends on the state."""

    to_1: int
    to_0: int


@dataclass(frozen=True, slots=True)
class _Search:
    """Looks for structures; ``names`` are the inputs and the state, ``space`` their tables."""

    table: Transitions
    names: tuple[str, ...]
    space: TableSpace

    def latch(self) -> Described | None:
        """Return the latch, where the bit depends on levels alone."""
        everywhere = [self.space.mask] * len(self.table.inputs)
        forced = self._forced(everywhere)
        if forced is None or not self._agrees(forced, everywhere) or not self._lives(forced):
            return None
        for gate in range(len(self.table.inputs)):
            for level in (1, 0):
                found = self._latch_with_gate(forced, gate, level)
                if found:
                    return found
        return self._latch_without_gate(forced)

    def flip_flop(self, clock: int, edge: int) -> Described | None:
        """Return the flip-flop that takes its data where ``clock`` changes to ``edge``."""
        quiet = [self.space.mask] * len(self.table.inputs)
        quiet[clock] = self._at(clock, 1 - edge)
        forced = self._forced(quiet)
        if forced is None:
            return None
        to_1, to_0 = self.space.either(forced.to_1, clock), self.space.either(forced.to_0, clock)
        forced = _Forced(to_1, to_0)
        if to_1 & to_0 or not self._agrees(forced, quiet) or not self._lives(forced):
            return None
        edges = self._at(clock, edge) & self._reachable_before(forced, clock)
        ones, zeros = self.table.ones[clock] & edges, self.table.zeros[clock] & edges
        if ones & to_0 or zeros & to_1 or ones & zeros or (ones | zeros) != edges:
            return None
        free = ~(to_1 | to_0)
        data = function_between(self.names, ones & free, zeros & free)
        if data == self._literal(-1, 1):
            return None  # what no edge changes shows no clock
        return self._described("flip-flop", self._literal(clock, edge), data, forced)

    def _forced(self, where: Sequence[int]) -> _Forced | None:
        """Return where a change of input i at ``where[i]`` forces the bit; None if somewhere it toggles."""
        state = self.space.columns[-1]
        rises = falls = 0
        for ones, zeros, places in zip(self.table.ones, self.table.zeros, where, strict=True):
            rises |= ones & places & ~state
            falls |= zeros & places & state
        last = len(self.names) - 1
        forced = _Forced(self.space.either(rises, last), self.space.either(falls, last))
        return None if forced.to_1 & forced.to_0 else forced

    def _agrees(self, forced: _Forced, where: Sequence[int]) -> bool:
        """Return whether ``forced``, and else holding, is what the table says after every change at ``where``."""
        expected_1 = forced.to_1 | (self.space.columns[-1] & ~forced.to_0)
        for i, places in enumerate(where):
            concerned = places & self._reachable_before(forced, i)
            if concerned & expected_1 & ~self.table.ones[i] or concerned & ~expected_1 & ~self.table.zeros[i]:
                return False
        return True

    def _lives(self, forced: _Forced) -> bool:
        """Return whether the bit both rises and falls from states that can occur: one that is stuck fits anything."""
        state = self.space.columns[-1]
        rises = falls = 0
        for i, (ones, zeros) in enumerate(zip(self.table.ones, self.table.zeros, strict=True)):
            before = self._reachable_before(forced, i)
            rises |= before & ones & ~state
            falls |= before & zeros & state
        return rises != 0 and falls != 0

    def _reachable_before(self, forced: _Forced, i: int) -> int:
        """Return the places (inputs after the change of input i, state before) whose state can occur before."""
        state = self.space.columns[-1]
        impossible = (forced.to_1 & ~state) | (forced.to_0 & state)
        return self.space.mask & ~self.space.flip(impossible, i)

    def _latch_with_gate(self, forced: _Forced, gate: int, level: int) -> Described | None:
        """Return the latch that is open while ``gate`` is at ``level``; what acts otherwise is clear and preset."""
        opened, closed = self._at(gate, level), self._at(gate, 1 - level)
        always = _Forced(self.space.either(forced.to_1 & closed, gate), self.space.either(forced.to_0 & closed, gate))
        if opened & (always.to_1 & ~forced.to_1 | always.to_0 & ~forced.to_0 | ~(forced.to_1 | forced.to_0)):
            return None
        free = opened & ~(always.to_1 | always.to_0)
        data = function_between(self.names, forced.to_1 & free, forced.to_0 & free)
        return self._described("latch", self._literal(gate, level), data, always) if data.inputs else None

    def _latch_without_gate(self, forced: _Forced) -> Described:
        """Return set and reset alone if no input belongs to both; else a latch with a function for its gate."""
        holds = self.space.mask & ~(forced.to_1 | forced.to_0)
        clear, preset, _ = self._conditions(forced)
        if clear and preset and not set(clear.inputs) & set(preset.inputs):
            keeps = Function((self.names[-1],), ("$0",))
            return self._described("latch", Function((), ("0",)), keeps, forced)
        clock = function_between(self.names, forced.to_1 | forced.to_0, holds)
        data = function_between(self.names, forced.to_1, forced.to_0)
        return self._described("latch", clock, data, _Forced(0, 0))

    def _described(
        self, kind: Literal["flip-flop", "latch"], clock: Function, data: Function, forced: _Forced
    ) -> Described:
        clear, preset, both = self._conditions(forced)
        return Described(self.names[-1], "", kind, clock, data, clear, preset, both)

    def _conditions(self, forced: _Forced) -> tuple[Function | None, Function | None, Literal["0", "1", ""]]:
        """Return clear and preset, each over as few inputs as it can, and what wins while both are active."""
        holds = self.space.mask & ~(forced.to_1 | forced.to_0)
        clear = function_between(self.names, forced.to_0, holds) if forced.to_0 else None
        preset = function_between(self.names, forced.to_1, holds) if forced.to_1 else None
        if clear is None or preset is None:
            return clear, preset, ""
        meeting = self._table(clear) & self._table(preset)
        if not meeting & forced.to_0:
            return clear, preset, "1" if meeting else ""
        if not meeting & forced.to_1:
            return clear, preset, "0"
        return (
            function_between(self.names, forced.to_0, self.space.mask & ~forced.to_0),
            function_between(self.names, forced.to_1, self.space.mask & ~forced.to_1),
            "",
        )

    def _table(self, function: Function) -> int:
        """Return the table of a function over all names."""
        index = {name: j for j, name in enumerate(self.names)}
        values = [self.space.columns[index[name]] for name in function.inputs]
        return function.evaluate(values, self.space.algebra)

    def _at(self, j: int, bit: int) -> int:
        """Return the places where name j is ``bit``."""
        return self.space.columns[j] if bit else self.space.mask & ~self.space.columns[j]

    def _literal(self, j: int, bit: int) -> Function:
        return Function((self.names[j],), ("$0",) if bit else ("$0", "!"))
