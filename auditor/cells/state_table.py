"""Clock gates and other cells that Liberty describes by ``statetable`` and ``state_function``, or by one word.

A state table is evaluated over all binary inputs and single changes of them, and accepted where it is exactly one
flip-flop or latch (``transitions``). Where there is none, ``clock_gating_integrated_cell`` names a structure of the
Liberty standard: a latch that is open while the clock rests, with the test pin in front (precontrol) or behind.
"""

import re
from collections.abc import Mapping, Sequence
from typing import NamedTuple

from auditor.cells.compose import NotUnderstood
from auditor.cells.liberty import Group
from auditor.cells.liberty_pins import DeclaredPin
from auditor.cells.library import Function
from auditor.cells.storage import Described
from auditor.cells.transitions import MOST_INPUTS, Transitions, recognise
from auditor.cells.truth import TableSpace

_MOST_ROWS = 10_000
_LEVELS = {"L": "0", "H": "1", "-": "01"}
_PAIRS = {"L/H": ("L", "H"), "H/L": ("H", "L")}
_EDGES = ("R", "F", "~R", "~F")
_STYLE = re.compile(r"latch_(posedge|negedge)(?:_(precontrol|postcontrol))?")


class StateTable(NamedTuple):
    """The stored bit of a table or a clock gate, and the functions that pins thereby have, as texts.

    Pins that show the stored bit have its variable as function. ``bit`` is None where ``ff`` or ``latch`` describes it.
    """

    bit: Described | None
    functions: Mapping[str, str]


def state_table(group: Group, pins: Mapping[str, DeclaredPin]) -> StateTable | None:
    """Return what a ``cell`` group says by state table or by the word for a clock gate; None if it says nothing so.

    Raises ``NotUnderstood`` where that is no single flip-flop or latch.
    """
    tables = list(group.inside("statetable"))
    word = group.value("clock_gating_integrated_cell")
    described_otherwise = any(group.inside("ff", "latch", "ff_bank", "latch_bank"))
    if tables:
        if len(tables) > 1 or described_otherwise:
            raise NotUnderstood("its stored bits are described more than once")
        return _from_table(tables[0], pins)
    shown = {name: text for name, pin in pins.items() if (text := pin.state_function or pin.internal_node)}
    if shown and described_otherwise:
        return StateTable(None, shown)
    if shown:
        raise NotUnderstood(f"its pin {min(shown)} shows a stored bit, and no state table describes one")
    has_function = any(pin.function for pin in pins.values() if pin.pin.direction == "output")
    return None if not word or has_function else _from_word(word, pins)


def _from_table(table: Group, pins: Mapping[str, DeclaredPin]) -> StateTable:
    """Return the bit that a table describes; its pins are those with ``internal_node`` or ``state_function``."""
    inputs, nodes = ([*argument.split()] for argument in (*table.arguments, "", "")[:2])
    if len(nodes) != 1:
        raise NotUnderstood(f"its state table has {len(nodes)} internal nodes; one alone is read")
    if not inputs or len(inputs) > MOST_INPUTS:
        raise NotUnderstood(f"its state table has {len(inputs)} inputs; 1 to {MOST_INPUTS} are read")
    for name in inputs:
        if name not in pins or pins[name].pin.direction not in ("input", "inout"):
            raise NotUnderstood(f"its state table uses {name}, which is no input pin")
    (node,) = nodes
    if node in inputs:
        raise NotUnderstood(f"its state table has {node} as input and as internal node")
    bit = recognise(_transitions(_rows(table.value("table"), len(inputs)), inputs), node)
    if bit is None:
        raise NotUnderstood("its state table is neither a flip-flop nor a latch")
    functions = {}
    for name, pin in pins.items():
        if pin.internal_node and pin.internal_node != node:
            raise NotUnderstood(f"its pin {name} shows {pin.internal_node}, which is no node of its state table")
        if pin.internal_node or (name == node and not pin.function):
            functions[name] = bit.first
        elif pin.state_function:
            functions[name] = pin.state_function
    return StateTable(bit, functions)


class _Row(NamedTuple):
    """A row with one symbol for each input (``L H - R F ~R ~F``), the state before and after (``L H - N X``)."""

    inputs: tuple[str, ...]
    before: str
    after: str


def _rows(text: str, count: int) -> list[_Row]:
    """Return the rows of a table over ``count`` inputs, with L/H and H/L written out."""
    rows: list[_Row] = []
    written = [row for row in re.sub(r"\\\s", " ", text).split(",") if row.strip()]
    if len(written) > _MOST_ROWS:
        raise NotUnderstood(f"its state table has more than {_MOST_ROWS} rows")
    for number, row in enumerate(written, start=1):
        parts = [part.upper().split() for part in row.split(":")]
        if len(parts) != 3 or [len(part) for part in parts] != [count, 1, 1]:
            raise NotUnderstood(f"row {number} of its state table has not {count} inputs, a state and a next state")
        symbols = [*parts[0], *parts[1], *parts[2]]
        rows += (_checked(one, number) for one in _without_pairs(symbols, number))
    return rows


def _without_pairs(symbols: Sequence[str], number: int) -> list[list[str]]:
    """Return the row as it is, or the two that it stands for: a pair in the next state goes with one before it."""
    *before, after = symbols
    paired = [k for k, symbol in enumerate(before) if symbol in _PAIRS]
    if after not in _PAIRS:
        return [["-" if symbol in _PAIRS else symbol for symbol in before] + [after]]
    if len(paired) != 1:
        raise NotUnderstood(f"row {number} of its state table leaves open which {before} gives {after}")
    (k,) = paired
    choices = zip(_PAIRS[before[k]], _PAIRS[after], strict=True)
    return [[*before[:k], first, *before[k + 1 :], second] for first, second in choices]


def _checked(symbols: Sequence[str], number: int) -> _Row:
    *inputs, before, after = symbols
    for symbol, known in [*((s, (*_LEVELS, *_EDGES)) for s in inputs), (before, _LEVELS), (after, (*_LEVELS, *"NX"))]:
        if symbol not in known:
            raise NotUnderstood(f"row {number} of its state table holds {symbol}, which has no meaning there")
    return _Row(tuple(inputs), before, after)


def _transitions(rows: Sequence[_Row], inputs: Sequence[str]) -> Transitions:
    """Return what the rows say for every change of every input; rows that contradict each other are refused."""
    space = TableSpace(len(inputs) + 1)
    ones, zeros = [0] * len(inputs), [0] * len(inputs)
    for changed in range(len(inputs)):
        for row in rows:
            met = _met(row, changed, space)
            if row.after in "HN":
                ones[changed] |= met if row.after == "H" else met & space.columns[-1]
            if row.after in "LN":
                zeros[changed] |= met if row.after == "L" else met & ~space.columns[-1]
        if ones[changed] & zeros[changed]:
            raise NotUnderstood("rows of its state table contradict each other")
    return Transitions(tuple(inputs), tuple(ones), tuple(zeros))


def _met(row: _Row, changed: int, space: TableSpace) -> int:
    """Return the places at which the row holds after a change of input ``changed``."""
    met = space.mask
    for j, symbol in enumerate((*row.inputs, row.before)):
        at = {"1": space.columns[j], "0": space.mask & ~space.columns[j]}
        if symbol in _EDGES:
            moved = at["1"] if symbol[-1] == "R" else at["0"]
            here = moved if j == changed else 0
            met &= space.mask & ~here if symbol[0] == "~" else here
        elif symbol != "-":
            met &= at[_LEVELS[symbol]]
    return met


def _from_word(word: str, pins: Mapping[str, DeclaredPin]) -> StateTable:
    """Return the structure that the word names, over the pins that the cell marks for it."""
    what = f"it is an integrated clock gate ({word}) whose behaviour is given by that word alone"
    style = _STYLE.fullmatch(word)
    if style is None:
        raise NotUnderstood(f"{what}, and it names no latch with one gate")
    edge, control = style.groups()
    clock, enable, test, out = (_marked(role, pins) for role in ("clock", "enable", "test", "out"))
    if not out:
        out = [name for name, pin in pins.items() if pin.pin.direction == "output"]
    if [len(clock), len(enable), len(out), len(test)] != [1, 1, 1, 1 if control else 0] or _marked("obs", pins):
        tests = "one test" if control else "no test"
        raise NotUnderstood(f"{what}, and it does not mark one clock, one enable, {tests} and one output pin")
    state = f"{out[0]}.latch"
    before = [*enable, *(test if control == "precontrol" else [])]
    after = [state, *(test if control == "postcontrol" else [])]
    data = Function(tuple(before), ("$0",) if len(before) == 1 else ("$0", "$1", "|"))
    opened = Function((clock[0],), ("$0", "!") if edge == "posedge" else ("$0",))
    passes = " | ".join(f'"{name}"' for name in after)
    text = f'"{clock[0]}" & ({passes})' if edge == "posedge" else f'"{clock[0]}" | !({passes})'
    return StateTable(Described(state, "", "latch", opened, data), {out[0]: text})


def _marked(role: str, pins: Mapping[str, DeclaredPin]) -> list[str]:
    return [name for name, pin in pins.items() if role in pin.roles]
