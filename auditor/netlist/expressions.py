"""Expressions → bits, with gate primitives for their operations.

Widths follow IEEE 1364-2005, 5.4.1: operands of ``~ & | ^`` and the two values of ``?:`` take the width of their
context, filled with 0 on the left; parts of a concatenation, operands of reductions and a condition keep their own.
No recursion: expressions may be deep.
"""

from collections.abc import Callable, Sequence

from auditor.netlist.netlist import CONSTANT_0, CONSTANT_1
from auditor.netlist.scope import MAX_WIDTH, Scope
from auditor.verilog.statements import Concatenation, Expression, Operation

# Places a gate primitive: gate, nets of its inputs → net of its output.
PlaceGate = Callable[[str, Sequence[int]], int]

_REDUCTIONS = {"&r": "and", "|r": "or", "^r": "xor"}
_BITWISE = {"&": "and", "|": "or", "^": "xor", "~": "not", "?:": "mux"}


def width_of(root: Expression | None, scope: Scope) -> int:
    """Return the width of an expression of its own."""
    return _widths(root, scope)[id(root)]


def bits_of(
    root: Expression | None, scope: Scope, place_gate: PlaceGate, context: int = 0, implicit: bool = False
) -> list[int]:
    """Return the bits of an expression, most significant first, at least ``context`` wide.

    ``implicit`` allows undeclared nets, though never below an operator.
    """
    if not isinstance(root, Concatenation | Operation):
        return _padded(scope.bits_of(root, implicit), context)
    widths = _widths(root, scope)
    if widths[id(root)] > MAX_WIDTH:
        scope.trouble(f"an expression is {widths[id(root)]} bits wide", f"keep below {MAX_WIDTH} bits")
        return [CONSTANT_0]
    results: list[list[int]] = []
    stack: list[tuple[Expression, int, bool, bool]] = [(root, max(context, widths[id(root)]), implicit, False)]
    while stack:
        node, width, allowed, ready = stack.pop()
        if not isinstance(node, Concatenation | Operation):
            results.append(_padded(scope.bits_of(node, allowed), width))
        elif ready:
            count = len(_operands(node))
            operands = results[len(results) - count :]
            del results[len(results) - count :]
            results.append(_padded(_combined(node, operands, place_gate), width))
        else:
            stack.append((node, width, allowed, True))
            allowed = allowed and isinstance(node, Concatenation)
            for place, operand in reversed(list(enumerate(_operands(node)))):
                in_context = _takes_context(node, place)
                stack.append((operand, width if in_context else widths[id(operand)], allowed, False))
    return results[0]


def _widths(root: Expression | None, scope: Scope) -> dict[int, int]:
    """Return the width that each part of an expression has of its own, by identity."""
    widths: dict[int, int] = {}
    stack: list[tuple[Expression | None, bool]] = [(root, False)]
    while stack:
        node, ready = stack.pop()
        if id(node) in widths:
            continue
        if not isinstance(node, Concatenation | Operation):
            widths[id(node)] = scope.width_of(node)
        elif not ready:
            stack.append((node, True))
            stack.extend((operand, False) for operand in _operands(node))
        elif isinstance(node, Concatenation):
            widths[id(node)] = sum(widths[id(part)] for part in node.parts)
        else:
            in_context = [operand for place, operand in enumerate(node.operands) if _takes_context(node, place)]
            widths[id(node)] = max((widths[id(operand)] for operand in in_context), default=1)
    return widths


def _operands(node: Concatenation | Operation) -> tuple[Expression, ...]:
    return node.parts if isinstance(node, Concatenation) else node.operands


def _takes_context(node: Concatenation | Operation, place: int) -> bool:
    """Say whether the operand at a place takes the width of the context."""
    if isinstance(node, Concatenation) or node.operator in _REDUCTIONS:
        return False
    return node.operator != "?:" or place > 0


def _combined(node: Concatenation | Operation, operands: list[list[int]], place_gate: PlaceGate) -> list[int]:
    """Return the bits of a node from those of its operands."""
    if isinstance(node, Concatenation):
        return [bit for operand in operands for bit in operand]
    if node.operator in _REDUCTIONS:
        return [_gate(_REDUCTIONS[node.operator], operands[0], place_gate)]
    if node.operator == "?:":
        condition = _gate("or", operands[0], place_gate)
        operands = [[condition] * len(operands[1]), *operands[1:]]
    return [_gate(_BITWISE[node.operator], inputs, place_gate) for inputs in zip(*operands, strict=True)]


def _gate(gate: str, inputs: Sequence[int], place_gate: PlaceGate) -> int:
    """Return the output net of a gate; one with constant inputs only, or with nothing to combine, is not placed."""
    if len(inputs) == 1 and gate != "not":
        return inputs[0]
    if all(net in (CONSTANT_0, CONSTANT_1) for net in inputs):
        match gate:
            case "and":
                return min(inputs)
            case "or":
                return max(inputs)
            case "xor":
                return sum(inputs) % 2
            case "not":
                return 1 - inputs[0]
        return inputs[1] if inputs[0] == CONSTANT_1 else inputs[2]
    return place_gate(gate, inputs)


def _padded(bits: list[int], width: int) -> list[int]:
    return [CONSTANT_0] * (width - len(bits)) + bits
