"""Refuses what would read as something else than it means: signed values that are extended, and wired logic.

A plain assign makes nets one, and a net with several drivers is refused where it matters; so a wired net may be read
as a plain one where no assign adds a driver that could go unseen. ``tri0`` and ``tri1`` pull only a net that nothing
drives, which is refused as well.
"""

from collections.abc import Iterator

from auditor.verilog.draft import Draft
from auditor.verilog.plain import WIRED
from auditor.verilog.statements import Assign, Concatenation, Constant, Expression, Operation, Select

_SELF_DETERMINED = frozenset({"&r", "|r", "^r"})


def check(draft: Draft) -> None:
    """Note troubles with the assigns of a module that is read."""
    if draft.signed:
        for assign in draft.assigns:
            _check_signed(draft, assign)
    wired = {name for name, declaration in draft.nets.items() if declaration.kind in WIRED}
    if wired:
        _check_wired(draft, wired)


def _check_signed(draft: Draft, assign: Assign) -> None:
    """Note where a value is filled with its sign: all its operands are signed, and one is narrower than another.

    A bit- or part-select and a concatenation are unsigned, and so is an expression with one (IEEE 1364-2005, 5.5.1).
    """
    operands = [operand for operand in _operands(assign.right) if not isinstance(operand, Constant)]
    if not operands or not all(isinstance(operand, str) and operand in draft.signed for operand in operands):
        return
    widths = {_width(draft, operand) for operand in operands}
    if widths != {sum(_width(draft, part) for part in _parts(assign.left))}:
        found = f"{operands[0]} is signed, and its sign would fill the wider net"
        draft.trouble(found, "write the sign bits out, or declare it without signed", assign.line)


def _operands(root: Expression) -> Iterator[Expression]:
    """Yield the operands of a value whose widths meet: not conditions, nor what is reduced or joined."""
    stack = [root]
    while stack:
        value = stack.pop()
        if isinstance(value, Operation) and value.operator not in _SELF_DETERMINED:
            stack.extend(value.operands[value.operator == "?:" :])
        else:
            yield value


def _parts(root: Expression) -> Iterator[Expression]:
    """Yield the parts of a concatenation, or the value that is none."""
    stack = [root]
    while stack:
        value = stack.pop()
        if isinstance(value, Concatenation):
            stack.extend(value.parts)
        else:
            yield value


def _width(draft: Draft, value: Expression) -> int:
    if isinstance(value, Select):
        return abs(value.left - value.right) + 1
    bounds = draft.nets[value].range if isinstance(value, str) and value in draft.nets else None
    return abs(bounds.left - bounds.right) + 1 if bounds else 1


def _check_wired(draft: Draft, wired: set[str]) -> None:
    """Note each wired net that is assigned a constant, or one bit of which is assigned twice."""
    met: dict[str, set[int | None]] = {}
    for assign in draft.assigns:
        constant = any(isinstance(part, Constant) for part in _parts(assign.right))
        for part in _parts(assign.left):
            net = part.net if isinstance(part, Select) else part
            if not isinstance(net, str) or net not in wired:
                continue
            bounds = part[1:] if isinstance(part, Select) else draft.nets[net].range
            bits: set[int | None] = set(range(min(bounds), max(bounds) + 1)) if bounds else {None}
            before = met.setdefault(net, set())
            if constant or not bits.isdisjoint(before):
                kind = draft.nets[net].kind
                draft.trouble(f"{kind} net {net} is wired logic here", "drive the net by one gate", assign.line)
            before |= bits
