"""What an ``always`` block of a cell model means: a function, a latch or a flip-flop for each net that it assigns.

Read are blocks of ``if``, ``else``, ``begin``, ``end`` and assignments, ``=`` or ``<=``, after one event control. The
block is evaluated once into the next value of each net over the values before; what that is as storage is found from
its table (``transitions``). With several edges the reading is the one of IEEE 1364.1-2002: one is the clock, the others
are asynchronous and act as levels.
"""

from collections.abc import Callable, Iterator
from dataclasses import dataclass, field
from typing import TypeAlias

from auditor.cells.compose import NotUnderstood
from auditor.cells.function import EXACT_INPUTS, support
from auditor.cells.library import Function
from auditor.cells.model import Process, Token, Tokens
from auditor.cells.model_expression import ONE, Lookup, choose, invert, is_name, join, read_expression, truth
from auditor.cells.storage import Described
from auditor.cells.transitions import Transitions, recognise, recognise_latch
from auditor.cells.truth import TableSpace

_DEEPEST = 100
_STATEMENTS = frozenset(
    ["case", "casex", "casez", "for", "while", "repeat", "forever", "wait", "disable", "fork", "else", "end", "assign"]
)
# From tokens to the single nets that they name, least significant bit first.
Targets: TypeAlias = Callable[[Tokens], list[str]]


def process_meaning(process: Process, lookup: Lookup, targets: Targets) -> Iterator[tuple[str, Function | Described]]:
    """Yield each net that the block assigns, with its function over other nets or its storage.

    The variable of a stored bit is the net itself. Raises ``NotUnderstood``.
    """
    events, body = _events(process, targets)
    block = _Block(lookup, targets, process)
    block.run(body)
    assigned = {**block.now, **block.later}
    edges = [(net, level) for net, level in events or [] if level is not None]
    if edges and len(edges) != len(events or []):
        raise NotUnderstood(f"the always block at {process.place} waits for edges and levels")
    for net, function in assigned.items():
        if edges:
            yield net, _flip_flop(net, function, edges, process)
        else:
            yield net, _level(net, function, None if events is None else {name for name, _ in events}, process)


def _events(process: Process, targets: Targets) -> tuple[list[tuple[str, int | None]] | None, Tokens]:
    """Return the nets waited for, each with the level to which it changes or None for any, and the statement.

    The list is None for ``@*``, which means all that is read.
    """
    tokens = process.tokens
    words = [token.text for token in tokens[:4]]
    if words[:2] == ["@", "*"]:
        return None, tokens[2:]
    if words[:4] == ["@", "(", "*", ")"]:
        return None, tokens[4:]
    end = next((k for k, token in enumerate(tokens) if token.text == ")"), 0)
    if words[:2] != ["@", "("] or not end:
        raise NotUnderstood(f"the always block at {process.place} does not begin with @(...)")
    events: list[tuple[str, int | None]] = []
    for event in _events_between(tokens[2:end]):
        level = {"posedge": 1, "negedge": 0}.get(event[0].text) if event else None
        events += [(net, level) for net in targets(event if level is None else event[1:])]
    return events, tokens[end + 1 :]


def _events_between(tokens: Tokens) -> Iterator[Tokens]:
    """Yield what stands between ``or`` and commas."""
    event: Tokens = []
    for token in tokens:
        if token.text in ("or", ","):
            yield event
            event = []
        else:
            event.append(token)
    yield event


@dataclass(slots=True)
class _Frame:
    """An open ``begin``, ``then`` or ``else``, and the condition under which what it holds is done."""

    kind: str
    condition: Function
    otherwise: Function = ONE


@dataclass(slots=True)
class _Block:
    """Evaluates statements; ``now`` holds what ``=`` has assigned so far, ``later`` what ``<=`` will have assigned."""

    lookup: Lookup
    targets: Targets
    process: Process
    now: dict[str, Function] = field(default_factory=dict)
    later: dict[str, Function] = field(default_factory=dict)

    def run(self, tokens: Tokens) -> None:
        """Evaluate one statement, which takes all tokens."""
        frames: list[_Frame] = []
        at = 0
        while at < len(tokens):
            word = tokens[at].text
            condition = frames[-1].condition if frames else ONE
            if len(frames) > _DEEPEST:
                raise self._refuse(tokens[at], "is nested too deep")
            if word == "begin":
                at += 3 if at + 1 < len(tokens) and tokens[at + 1].text == ":" else 1
                frames.append(_Frame("begin", condition))
                continue
            if word == "if":
                end = _closing(tokens, at + 1)
                chosen = truth(read_expression(tokens[at + 2 : end], self._value, tokens[at].place))
                frames.append(_Frame("then", join("&", condition, chosen), join("&", condition, invert(chosen))))
                at = end + 1
                continue
            if word == "end" and frames and frames[-1].kind == "begin":
                frames.pop()
                at += 1
            elif word == ";":
                at += 1
            else:
                at = self._assignment(tokens, at, condition)
            at = self._close(frames, tokens, at)
        if any(frame.kind == "begin" for frame in frames):
            raise self._refuse(tokens[-1], "ends inside begin")

    def _close(self, frames: list[_Frame], tokens: Tokens, at: int) -> int:
        """Close what a complete statement completes, go on at its ``else`` if one follows."""
        while frames and frames[-1].kind != "begin":
            frame = frames.pop()
            if frame.kind == "then" and at < len(tokens) and tokens[at].text == "else":
                frames.append(_Frame("else", frame.otherwise))
                return at + 1
        return at

    def _assignment(self, tokens: Tokens, at: int, condition: Function) -> int:
        """Take an assignment and return the position behind its ``;``."""
        end = next((k for k in range(at, len(tokens)) if tokens[k].text == ";"), None)
        sign = next((k for k in range(at, end or at) if tokens[k].text in ("=", "<=")), None)
        if end is None or sign is None or not _may_be_assigned(tokens[at].text):
            raise self._refuse(tokens[at], "is no assignment, if or begin")
        start = sign + 1
        if tokens[start].text == "#":
            start = _closing(tokens, start + 1) + 1 if tokens[start + 1].text == "(" else start + 2
        value = read_expression(tokens[start:end], self._value, tokens[sign].place)
        nets = self.targets(tokens[at:sign])
        value = (*value, *[invert(ONE)] * max(0, len(nets) - len(value)))
        assigned, other = (self.now, self.later) if tokens[sign].text == "=" else (self.later, self.now)
        for net, function in zip(nets, value, strict=False):
            if net in other:
                raise self._refuse(tokens[at], f"assigns {net} with = and with <=")
            before = assigned.get(net, Function((net,), ("$0",)))
            assigned[net] = choose(condition, function, before)
        return end + 1

    def _value(self, name: str, select: tuple[int, int] | None, token: Token) -> tuple[Function, ...]:
        """Return a name's bits as they are now."""
        bits = self.lookup(name, select, token)
        return tuple(self.now.get(bit.inputs[0], bit) if bit.program == ("$0",) else bit for bit in bits)

    def _refuse(self, token: Token, why: str) -> NotUnderstood:
        return NotUnderstood(
            f"the always block at {self.process.place} is not read: {token.text} at {token.place} {why}"
        )


def _may_be_assigned(word: str) -> bool:
    """Return whether what is assigned can begin with this word."""
    return word == "{" or (is_name(word) and word not in _STATEMENTS)


def _closing(tokens: Tokens, at: int) -> int:
    """Return the position of the parenthesis that closes the one at ``at``."""
    depth = 0
    for k in range(at, len(tokens)):
        depth += {"(": 1, ")": -1}.get(tokens[k].text, 0)
        if depth == 0:
            return k
    raise NotUnderstood("a parenthesis of an always block is not closed")


def _level(net: str, function: Function, events: set[str] | None, process: Process) -> Function | Described:
    """Return a net assigned whenever something changes: a function, or a latch if it holds its value."""
    needed = support(function)
    missing = [name for name in needed if name != net and events is not None and name not in events]
    if missing:
        raise NotUnderstood(f"the always block at {process.place} does not wait for {missing[0]}")
    if net not in needed:
        return function
    inputs = tuple(name for name in function.inputs if name != net)
    space, ones = _table(function, inputs, net)
    zeros = space.mask & ~ones
    bit = recognise_latch(Transitions(inputs, (ones,) * len(inputs), (zeros,) * len(inputs)), net)
    if bit is None:
        raise _neither(net, process)
    return bit


def _flip_flop(net: str, function: Function, edges: list[tuple[str, int]], process: Process) -> Described:
    """Return a net assigned at edges: each is tried as the clock, the others are then asynchronous."""
    waited = [name for name, _ in edges]
    if len(set(waited)) < len(waited):
        raise NotUnderstood(f"the always block at {process.place} waits for both edges of a net")
    inputs = tuple(dict.fromkeys([*waited, *(name for name in function.inputs if name != net)]))
    space, ones = _table(function, inputs, net)
    state = space.columns[-1]
    for clock, (_, edge) in enumerate(edges):
        asynchronous = set(range(len(edges))) - {clock}
        active = 0
        for k in asynchronous:
            active |= space.columns[k] if edges[k][1] else space.mask & ~space.columns[k]
        if any((ones ^ space.flip(ones, j)) & active for j in range(len(inputs) + 1) if j not in asynchronous):
            continue  # what an asynchronous input loads must be a constant
        clocked = space.columns[clock] if edge else space.mask & ~space.columns[clock]
        rising = tuple(
            evaluated & ones | state & ~evaluated
            for evaluated in (active | clocked if k == clock else active for k in range(len(inputs)))
        )
        falling = tuple(space.mask & ~column for column in rising)
        bit = recognise(Transitions(inputs, rising, falling, clock), net)
        if bit:
            return bit
    raise _neither(net, process)


def _table(function: Function, inputs: tuple[str, ...], net: str) -> tuple[TableSpace, int]:
    """Return the space of the inputs and the net itself, and the table of the function in it."""
    if len(inputs) > EXACT_INPUTS:
        raise NotUnderstood(f"an always block stores a function of more than {EXACT_INPUTS} inputs in {net}")
    names = (*inputs, net)
    space = TableSpace(len(names))
    values = [space.columns[names.index(name)] for name in function.inputs]
    return space, function.evaluate(values, space.algebra)


def _neither(net: str, process: Process) -> NotUnderstood:
    return NotUnderstood(f"the always block at {process.place} makes {net} neither a flip-flop nor a latch")
