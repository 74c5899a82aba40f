"""pyverilog's syntax trees of expressions → expressions, with a stack of our own: trees may be deep.

Nodes are known by the name of their class, so that pyverilog need not be imported here.
"""

from collections.abc import Callable, Sequence
from typing import Any, TypeVar

from auditor.verilog.plain import MAX_BITS, RefusedError, literal, plain_name
from auditor.verilog.statements import Concatenation, Constant, Expression, Operation, Select

_Value = TypeVar("_Value")

Parameters = dict[str, Constant]


_ARITHMETIC: dict[str, Callable[[int, int], int]] = {
    "Plus": int.__add__,
    "Minus": int.__sub__,
    "Times": int.__mul__,
    "Divide": lambda a, b: abs(a) // abs(b) * (1 if a * b >= 0 else -1),
}
_BITWISE = {"And": "&", "Or": "|", "Xor": "^"}
_REDUCTIONS = {"Uand": ("&r", False), "Uor": ("|r", False), "Uxor": ("^r", False)} | {
    "Unand": ("&r", True),
    "Unor": ("|r", True),
    "Uxnor": ("^r", True),
    "Ulnot": ("|r", True),
}


def integer_of(root: Any, parameters: Parameters) -> int:
    """Return the value of a constant expression of literals, parameters and ``+ - * /``. Raises RefusedError."""

    def children(node: Any) -> Sequence[Any]:
        kind = type(node).__name__
        if kind in _ARITHMETIC:
            return (node.left, node.right)
        return (node.right,) if kind in ("Uminus", "Uplus") else ()

    def combine(node: Any, values: list[int]) -> int:
        kind = type(node).__name__
        if kind in _ARITHMETIC:
            if kind == "Divide" and values[1] == 0:
                raise RefusedError("a constant is divided by zero", "mend the constant")
            return _bounded(_ARITHMETIC[kind](*values))
        if values:
            return -values[0] if kind == "Uminus" else values[0]
        constant = _constant(node, parameters)
        if constant is None or not set(constant.bits) <= {"0", "1"}:
            raise RefusedError(f"found {_words(node)} where a constant number should stand", "write a number there")
        return int(constant.bits, 2)

    return _fold(root, children, combine)


def value_of(node: Any, parameters: Parameters) -> Constant:
    """Return the value of a constant expression, as wide as it is written. Raises RefusedError."""
    constant = _constant(node, parameters)
    if constant is None:
        constant = Constant(f"{integer_of(node, parameters) % (1 << 32):032b}", sized=False)
    return constant


def parameter_of(node: Any, parameters: Parameters, given: Parameters) -> tuple[str, Constant]:
    """Return the name and the value of a parameter, which may be given; a range that it has gives the width."""
    constant = given.get(plain_name(node.name)) if type(node).__name__ == "Parameter" else None
    if constant is None:
        constant = value_of(node.value.var, parameters)
    if node.width is not None:
        left, right = integer_of(node.width.msb, parameters), integer_of(node.width.lsb, parameters)
        width = abs(left - right) + 1
        if width > MAX_BITS:
            raise RefusedError(f"parameter {plain_name(node.name)} is {width} bits wide", "give it fewer")
        constant = Constant(constant.bits[-width:].rjust(width, "0"))
    return plain_name(node.name), constant


def expression_of(root: Any, parameters: Parameters) -> Expression:
    """Return the expression that a syntax tree stands for. Raises RefusedError where it is not structural."""
    return _fold(root, _operands, lambda node, values: _combined(node, values, parameters))


def _operands(node: Any) -> Sequence[Any]:
    kind = type(node).__name__
    if kind in ("Concat", "LConcat"):
        return tuple(node.list)
    if kind == "Repeat":
        return (node.value,)
    if kind == "Cond":
        return (node.cond, node.true_value, node.false_value)
    if kind in _BITWISE or kind in ("Xnor", "Land", "Lor", "Eq", "NotEq"):
        return (node.left, node.right)
    return (node.right,) if kind in _REDUCTIONS or kind == "Unot" else ()


def _combined(node: Any, values: list[Expression], parameters: Parameters) -> Expression:
    """Return the expression of a node from those of its operands."""
    kind = type(node).__name__
    if kind in _BITWISE:
        return Operation(_BITWISE[kind], tuple(values))
    if kind in _REDUCTIONS:
        operator, inverted = _REDUCTIONS[kind]
        reduced = Operation(operator, tuple(values))
        return _inverted_bit(reduced) if inverted else reduced
    match kind:
        case "Unot":
            return Operation("~", tuple(values))
        case "Xnor":
            return Operation("~", (Operation("^", tuple(values)),))
        case "Cond":
            return Operation("?:", tuple(values))
        case "Land" | "Lor":
            left, right = (Operation("|r", (value,)) for value in values)
            return Operation("&" if kind == "Land" else "|", (left, right))
        case "NotEq" | "Eq":
            differs = Operation("|r", (Operation("^", tuple(values)),))
            return differs if kind == "NotEq" else _inverted_bit(differs)
        case "Concat" | "LConcat":
            return Concatenation(tuple(values))
        case "Repeat":
            times = integer_of(node.times, parameters)
            if not 0 < times <= MAX_BITS:
                raise RefusedError(f"a replication of {times} times", "replicate between once and a million times")
            parts = values[0].parts if isinstance(values[0], Concatenation) else (values[0],)
            return Concatenation(parts * times)
    return _leaf(node, parameters)


def _inverted_bit(bit: Operation) -> Expression:
    """Return the complement of one bit; the braces keep it one bit where a wider context would invert its zeros."""
    return Concatenation((Operation("~", (bit,)),))


def _leaf(node: Any, parameters: Parameters) -> Expression:
    """Return a net, a select or a constant."""
    constant = _constant(node, parameters)
    if constant is not None:
        return constant
    kind = type(node).__name__
    if kind == "Identifier" and node.scope is None:
        return plain_name(node.name)
    if kind in ("Pointer", "Partselect") and type(node.var).__name__ == "Identifier":
        net = plain_name(node.var.name)
        if net in parameters:
            raise RefusedError(f"a select of the parameter {net}", "select from a net")
        if kind == "Pointer":
            index = integer_of(node.ptr, parameters)
            return Select(net, index, index)
        return Select(net, integer_of(node.msb, parameters), integer_of(node.lsb, parameters))
    raise RefusedError(f"found {_words(node)}, which is not structural", "write it with ~ & | ^ ?: or as gates")


def _constant(node: Any, parameters: Parameters) -> Constant | None:
    """Return the value of a literal or a parameter, None for anything else."""
    kind = type(node).__name__
    if kind == "IntConst":
        try:
            return literal(node.value)
        except ValueError as error:
            raise RefusedError(str(error), "write it as an unsigned vector of bits") from None
    if kind == "Identifier" and node.scope is None:
        return parameters.get(plain_name(node.name))
    return None


def _words(node: Any) -> str:
    """Name a node in words that stand in the text."""
    kind = type(node).__name__
    if kind == "Identifier":
        return plain_name(node.name)
    return {
        "Plus": "+", "Minus": "-", "Times": "*", "Divide": "/", "Mod": "%", "Power": "**", "Sll": "<<", "Srl": ">>",
        "Sla": "<<<", "Sra": ">>>", "LessThan": "<", "GreaterThan": ">", "LessEq": "<=", "GreaterEq": ">=",
        "Eql": "===", "NotEql": "!==", "Uminus": "unary -", "Uplus": "unary +", "FunctionCall": "a function call",
        "SystemCall": "a system call", "StringConst": "a string", "FloatConst": "a real number",
        "Pointer": "a select", "Partselect": "a part-select",
    }.get(kind, f"an expression ({kind})")  # fmt: skip


def _bounded(number: int) -> int:
    if abs(number) >> 40:
        raise RefusedError("a constant passes 40 bits", "write a smaller number")
    return number


def _fold(
    root: Any, children: Callable[[Any], Sequence[Any]], combine: Callable[[Any, list[_Value]], _Value]
) -> _Value:
    """Combine a tree from its leaves up, without recursion."""
    stack: list[tuple[Any, bool]] = [(root, False)]
    values: list[_Value] = []
    while stack:
        node, ready = stack.pop()
        below = () if ready else children(node)
        if below:
            stack.append((node, True))
            stack.extend((child, False) for child in reversed(below))
            continue
        count = len(children(node)) if ready else 0
        operands = values[len(values) - count :]
        del values[len(values) - count :]
        values.append(combine(node, operands))
    return values[0]
