"""Which terminals of a netlist are connected, as the front end pyslang elaborates it: the outside reference.

Source: pyslang (PyPI, MIT), the Python binding of the slang SystemVerilog front end. A terminal is ``(instance path,
pin, bit)`` of a module without content, ``(instance path, number, 0)`` of a gate primitive, ``("", port, bit)`` of the
top, or ``("", "constant", 0 or 1)``. Bits count from the least significant one.
"""

from collections.abc import Iterator
from typing import Any

from pyslang.ast import Compilation
from pyslang.syntax import SyntaxTree

from auditor.netlist.netlist import OPEN, Netlist

Terminal = tuple[str, str, int]
Partition = frozenset[frozenset[Terminal]]


class _Classes:
    def __init__(self) -> None:
        self.parent: dict[Any, Any] = {}

    def root(self, item: Any) -> Any:
        self.parent.setdefault(item, item)
        while self.parent[item] != item:
            item = self.parent[item]
        return item

    def tie(self, first: Any, second: Any) -> None:
        self.parent[self.root(first)] = self.root(second)


def slang_partition(text: str) -> Partition:
    """Return the classes of connected terminals below the module ``top`` of a text."""
    compilation = Compilation()
    compilation.addSyntaxTree(SyntaxTree.fromText(text))
    (top,) = (instance for instance in compilation.getRoot().topInstances if instance.name == "top")
    classes = _Classes()
    terminals: dict[Terminal, Any] = {("", "constant", bit): f"constant {bit}" for bit in (0, 1)}
    for member in top.body:
        if type(member).__name__ == "PortSymbol":
            for bit, key in enumerate(_bits(_Net(member.internalSymbol), "")):
                terminals["", member.name, bit] = key
    stack = [(top, "")]
    while stack:
        instance, path = stack.pop()
        for member in instance.body:
            for child, name in _instances(member):
                below = f"{path}.{name}" if path else name
                if _is_leaf(child):
                    for pin, bits in _connections(child, path, below):
                        for number, bit in enumerate(bits):
                            terminals[below, pin, number] = bit
                else:
                    for inner, bits in _port_ties(child, path, below):
                        for inside, outside in zip(inner, bits, strict=True):
                            classes.tie(inside, outside)
                    stack.append((child, below))
            for left, right in _assignments(member, path):
                for target, source in zip(left, right, strict=False):
                    classes.tie(target, source)
    return _partition({terminal: classes.root(key) for terminal, key in terminals.items()})


def our_partition(netlist: Netlist) -> Partition:
    """Return the classes of connected terminals of a netlist of ours; generated gates must not occur."""
    nets: dict[Terminal, Any] = {("", "constant", bit): bit for bit in (0, 1)}
    for port in netlist.ports:
        order = port.nets if len(port.bits) == 1 or _least_first(port.bits) else port.nets[::-1]
        nets |= {("", port.name, bit): net for bit, net in enumerate(order)}
    for number, name in enumerate(netlist.instance_names):
        seen: dict[str, list[int]] = {}
        for pin, net in netlist.pins_of(number):
            seen.setdefault(pin.partition("[")[0], []).append(net)
        for pin, bits in seen.items():
            if netlist.cell_of(number).primitive_inputs:
                pin = "0" if pin == "out" else str(int(pin[2:]) + 1)  # noqa: PLW2901  (the number of a terminal)
            for bit, net in enumerate(reversed(bits)):
                nets[name, pin, bit] = net if net != OPEN else (name, pin, bit)
    return _partition(nets)


def _least_first(bits: tuple[str, ...]) -> bool:
    """Ports of the texts in these tests are declared [high:low] unless their name says ``up``."""
    return not bits[0].startswith("up")


def _partition(keys: dict[Terminal, Any]) -> Partition:
    groups: dict[Any, set[Terminal]] = {}
    for terminal, key in keys.items():
        groups.setdefault(key, set()).add(terminal)
    return frozenset(map(frozenset, groups.values()))


class _Net:
    """A net symbol dressed as the expression that names it."""

    def __init__(self, symbol: Any) -> None:
        self.symbol = symbol


def _instances(member: Any) -> Iterator[tuple[Any, str]]:
    kind = type(member).__name__
    if kind in ("InstanceSymbol", "PrimitiveInstanceSymbol"):
        yield member, member.name
    elif kind == "InstanceArraySymbol":
        lowest = min(member.range.left, member.range.right)
        for index, element in enumerate(member.elements, lowest):
            yield element, f"{member.name}[{index}]"


def _is_leaf(instance: Any) -> bool:
    if type(instance).__name__ == "PrimitiveInstanceSymbol":
        return True
    content = ("InstanceSymbol", "PrimitiveInstanceSymbol", "InstanceArraySymbol", "ContinuousAssignSymbol")
    return not any(type(member).__name__ in content for member in instance.body)


def _outside(connection: Any, path: str) -> list[Any] | None:
    expression = connection.expression
    if expression is None:
        return None
    if type(expression).__name__ == "AssignmentExpression":
        expression = expression.left
    return _bits(expression, path)


def _connections(instance: Any, path: str, below: str) -> Iterator[tuple[str, list[Any]]]:
    if type(instance).__name__ == "PrimitiveInstanceSymbol":
        for number, expression in enumerate(instance.portConnections):
            is_output = type(expression).__name__ == "AssignmentExpression"
            yield str(number), _bits(expression.left if is_output else expression, path)
        return
    for connection in instance.portConnections:
        bits = _outside(connection, path)
        if bits is None:
            width = connection.port.type.bitWidth
            bits = [(below, connection.port.name, bit) for bit in range(width)]
        yield connection.port.name, bits


def _port_ties(instance: Any, path: str, below: str) -> Iterator[tuple[list[Any], list[Any]]]:
    for connection in instance.portConnections:
        bits = _outside(connection, path)
        if bits is not None:
            yield _inside(connection.port, below), bits


def _inside(port: Any, path: str) -> list[Any]:
    """Return what a port is connected to within its module."""
    if type(port).__name__ == "MultiPortSymbol":
        return [bit for part in reversed(list(port.ports)) for bit in _inside(part, path)]
    expression = port.internalExpr
    return _bits(_Net(port.internalSymbol) if expression is None else expression, path)


def _assignments(member: Any, path: str) -> Iterator[tuple[list[Any], list[Any]]]:
    if type(member).__name__ == "ContinuousAssignSymbol":
        left, right = member.assignment.left, member.assignment.right
        yield _bits(left, path), _bits(right, path)


def _bits(expression: Any, path: str) -> list[Any]:
    """Return a key for each bit of an expression without operators, least significant first."""
    kind = type(expression).__name__
    if kind in ("NamedValueExpression", "_Net"):
        symbol = expression.symbol
        supply = getattr(getattr(symbol, "netType", None), "name", "").removeprefix("supply")
        if supply in ("0", "1"):
            return [f"constant {supply}"] * symbol.type.bitWidth
        return [(path, symbol.name, bit) for bit in range(symbol.type.bitWidth)]
    if kind == "ConversionExpression":
        width = expression.type.bitWidth
        bits = _bits(expression.operand, path)[:width]
        return bits + ["constant 0"] * (width - len(bits))
    if kind == "IntegerLiteral":
        return [f"constant {int(expression.value) >> bit & 1}" for bit in range(expression.type.bitWidth)]
    if kind == "ConcatenationExpression":
        return [bit for operand in reversed(list(expression.operands)) for bit in _bits(operand, path)]
    if kind == "ReplicationExpression":
        count = int(expression.count.constant.value)
        return _bits(expression.concat, path) * count
    if kind in ("ElementSelectExpression", "RangeSelectExpression"):
        whole = _bits(expression.value, path)
        bounds = expression.value.type.range
        chosen = [expression.selector] if kind == "ElementSelectExpression" else [expression.right, expression.left]
        places = [abs(_constant(index) - bounds.right) for index in chosen]
        return whole[places[0] : places[-1] + 1]
    raise AssertionError(f"the texts of these tests hold no {kind}")


def _constant(expression: Any) -> int:
    kind = type(expression).__name__
    if kind == "UnaryExpression":  # the texts of these tests know one: minus
        return -_constant(expression.operand)
    if kind == "NamedValueExpression":  # a parameter
        return int(expression.symbol.value.value)
    return _constant(expression.operand) if kind == "ConversionExpression" else int(expression.value)
