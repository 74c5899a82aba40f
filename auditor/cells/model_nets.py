"""Lays a module of cell models out into single nets, each with what drives it, through all modules inside it.

Names inside an instance begin with the name of the instance and a point, so no two nets share a name.
"""

from collections.abc import Iterator, Sequence
from dataclasses import dataclass, field
from typing import Literal, NamedTuple, TypeAlias

from auditor.cells.compose import NotUnderstood
from auditor.cells.library import Function
from auditor.cells.model import Assign, Gate, Models, Module, ModuleText, Part, Primitive, Process, Token, Tokens
from auditor.cells.model_expression import ONE, ZERO, Value, bare, is_name, read_expression, select_of
from auditor.cells.model_module import read_module
from auditor.cells.model_process import process_meaning
from auditor.cells.primitives import primitive_cell
from auditor.cells.storage import Described, rewrite
from auditor.notation import SourcePlace

_MOST_DRIVERS = 20_000  # a cell has some ten
_MOST_BITS = 4096
_DEEPEST = 100
_SUPPLIES = {"supply0": ZERO, "supply1": ONE}
_PULLS = {"pulldown": ZERO, "pullup": ONE}
_PLAIN = frozenset(["wire", "tri", "uwire", "reg", "logic", *_SUPPLIES])


class Driver(NamedTuple):
    """A function of other nets; the net is Z where ``off`` is 1. ``wire`` marks a mere connection of two names."""

    function: Function
    off: Function | None = None
    wire: bool = False


class TableDriver(NamedTuple):
    """An instance of a user-defined primitive: the net of each of its inputs, None where one is open."""

    primitive: Primitive
    nets: tuple[str | None, ...]


class UnreadDriver(NamedTuple):
    """An assignment that is not read, and why: of a model for simulation much has no bearing on any output."""

    reason: str


AnyDriver: TypeAlias = Driver | TableDriver | UnreadDriver | Described


@dataclass(slots=True)
class Nets:
    """A module laid out: its ports bit by bit with their directions, and what drives each net."""

    ports: dict[str, Literal["input", "output", "inout"]] = field(default_factory=dict)
    drivers: dict[str, AnyDriver] = field(default_factory=dict)


def lay_out(name: str, models: Models, nets: Nets) -> None:
    """Enter the ports and nets of the module or primitive ``name`` in ``nets``, which is empty.

    Raises ``NotUnderstood``; ports that could be read are entered by then.
    """
    top = models[name]
    if isinstance(top, Primitive):
        nets.ports = {top.output: "output", **dict.fromkeys(top.inputs, "input")}
        nets.drivers[top.output] = TableDriver(top, top.inputs)
        return
    layout = _Layout(models, nets)
    scope = layout.opened(top, "", (name,))
    for port in scope.module.ports:
        direction = scope.module.directions.get(port)
        if direction:
            nets.ports |= dict.fromkeys(scope.bits(port), direction)
        elif not scope.module.unread:
            raise NotUnderstood(f"the port {port} of its model at {top.place} has no direction")
    while layout.waiting:
        layout.enter(layout.waiting.pop())


class _Scope:
    """A module inside the cell; ``prefix`` stands before its names, ``path`` are the modules that hold it."""

    def __init__(self, module: Module, prefix: str, path: tuple[str, ...]) -> None:
        self.module, self.prefix, self.path = module, prefix, path

    def bits(self, name: str, select: tuple[int, int] | None = None) -> list[str]:
        """Return the nets of a name or of its bits from left to right, least significant first."""
        bounds = self.module.ranges.get(name)
        if bounds is None:
            if select:
                raise NotUnderstood(f"its model at {self.module.place} selects a bit of {name}, which is no vector")
            return [f"{self.prefix}{name}"]
        left, right = select or bounds
        if abs(left - right) >= _MOST_BITS:
            raise NotUnderstood(f"{name} of its model at {self.module.place} has more than {_MOST_BITS} bits")
        if not min(bounds) <= min(left, right) <= max(left, right) <= max(bounds):
            raise NotUnderstood(f"its model at {self.module.place} selects a bit that {name} does not have")
        step = 1 if left >= right else -1
        return [f"{self.prefix}{name}[{k}]" for k in range(right, left + step, step)]

    def value(self, name: str, select: tuple[int, int] | None, _token: Token) -> Value:
        """Return the functions that a name stands for in an expression."""
        supply = _SUPPLIES.get(self.module.kinds.get(name, ""))
        return tuple(supply or Function((net,), ("$0",)) for net in self.bits(name, select))

    def targets(self, tokens: Tokens) -> list[str]:
        """Return the nets on the left of an assignment, least significant first."""
        inner = tokens[1:-1] if tokens and tokens[0].text == "{" else tokens
        found: list[list[str]] = []
        at = 0
        while at < len(inner):
            if not is_name(inner[at].text):
                raise NotUnderstood(f"{inner[at].text} at {inner[at].place} cannot be driven")
            select, end = select_of(inner, at + 1)
            found.append(self.bits(bare(inner[at].text), select))
            if end < len(inner) and inner[end].text != ",":
                raise NotUnderstood(f"{inner[end].text} at {inner[end].place} cannot stand in what is driven")
            at = end + 1
        if not found:
            raise NotUnderstood(f"its model at {self.module.place} drives nothing where a net should stand")
        return [net for nets in reversed(found) for net in nets]


class _Layout:
    """Fills ``nets``; ``waiting`` holds the scopes whose items are still to be entered."""

    def __init__(self, models: Models, nets: Nets) -> None:
        self.models, self.nets = models, nets
        self.waiting: list[_Scope] = []
        self.read: dict[str, Module] = {}
        self.added = 0

    def opened(self, text: ModuleText, prefix: str, path: tuple[str, ...]) -> _Scope:
        """Return the scope of a module, which then waits."""
        if text.name not in self.read:
            self.read[text.name] = read_module(text)
        scope = _Scope(self.read[text.name], prefix, path)
        self.waiting.append(scope)
        return scope

    def enter(self, scope: _Scope) -> None:
        """Enter all that drives nets in a module."""
        if scope.module.unread:
            raise NotUnderstood(scope.module.unread)
        for item in scope.module.items:
            if isinstance(item, Gate):
                self._gate(scope, item)
            elif isinstance(item, Assign):
                self._assign(scope, item)
            elif isinstance(item, Process):
                for net, meaning in process_meaning(item, scope.value, scope.targets):
                    self._drive(net, meaning if isinstance(meaning, Described) else Driver(meaning), item.place)
            else:
                self._part(scope, item)
        self._supplies(scope)
        self._late_copies(scope)

    def _supplies(self, scope: _Scope) -> None:
        """Drive the nets of supplies; refuse those that join their drivers in ways that no cell needs."""
        for name, kind in scope.module.kinds.items():
            if kind not in _PLAIN:
                raise NotUnderstood(f"{name} of its model at {scope.module.place} is {kind}, which is not read")
            if kind in _SUPPLIES:
                self.nets.drivers.update(dict.fromkeys(scope.bits(name), Driver(_SUPPLIES[kind])))

    def _late_copies(self, scope: _Scope) -> None:
        """Drive the nets that a timing check drives."""
        for copy, net in scope.module.delayed.items():
            for late, early in zip(_any_bits(scope, copy), _any_bits(scope, net), strict=False):
                if late not in self.nets.drivers:
                    self._drive(late, Driver(Function((early,), ("$0",)), wire=True), scope.module.place)

    def _drive(self, net: str, driver: AnyDriver, place: SourcePlace) -> None:
        if net in self.nets.drivers:
            raise NotUnderstood(f"its model at {place} drives the net {net} twice")
        self.added += 1
        if self.added > _MOST_DRIVERS:
            raise NotUnderstood(f"its model has more than {_MOST_DRIVERS} gates")
        self.nets.drivers[net] = driver

    def _one_bit(self, scope: _Scope, tokens: Tokens, place: SourcePlace) -> Function:
        """Return the value of an input of a gate, of which the last bit counts."""
        return read_expression(tokens, scope.value, place)[0]

    def _gate(self, scope: _Scope, gate: Gate) -> None:
        """Enter a gate primitive: outputs first, then inputs."""
        if gate.kind in _PULLS:
            (net, *_) = scope.targets(gate.terminals[0] if gate.terminals else [])
            self._drive(net, Driver(_PULLS[gate.kind]), gate.place)
            return
        outputs = len(gate.terminals) - 1 if gate.kind in ("buf", "not") else 1
        inputs = [self._one_bit(scope, tokens, gate.place) for tokens in gate.terminals[outputs:]]
        try:
            pin = primitive_cell(gate.kind, len(inputs)).pins["out"]
        except KeyError:
            raise NotUnderstood(f"the gate {gate.kind} with {len(inputs)} inputs at {gate.place} is not read") from None
        actual = {f"in{k}": function for k, function in enumerate(inputs)}
        function = rewrite(pin.function, actual) if pin.function else ZERO
        off = rewrite(pin.three_state, actual) if pin.three_state else None
        for tokens in gate.terminals[:outputs]:
            self._drive(scope.targets(tokens)[0], Driver(function, off), gate.place)

    def _assign(self, scope: _Scope, assign: Assign) -> None:
        nets = scope.targets(assign.left)
        try:
            value = read_expression(assign.right, scope.value, assign.place)
        except NotUnderstood as reason:
            for net in nets:
                self._drive(net, UnreadDriver(str(reason)), assign.place)
            return
        for k, net in enumerate(nets):
            self._drive(net, Driver(value[k] if k < len(value) else ZERO), assign.place)

    def _part(self, scope: _Scope, part: Part) -> None:
        """Enter a primitive, or open a module and connect its ports."""
        model = self.models.get(part.cell)
        if model is None:
            raise NotUnderstood(f"its model holds {part.cell} at {part.place}, which no model file defines")
        if part.cell in scope.path or len(scope.path) > _DEEPEST:
            way = " holds ".join([*scope.path[:5], part.cell])
            raise NotUnderstood(f"its model holds itself at {part.place}: {way}")
        if isinstance(model, Primitive):
            self._table(scope, part, model)
            return
        inner = self.opened(model, f"{scope.prefix}{part.name}.", (*scope.path, part.cell))
        for port, tokens in _by_port(part, inner.module.ports):
            if tokens:
                self._connect(scope, inner, port, tokens, part)

    def _connect(self, scope: _Scope, inner: _Scope, port: str, tokens: Tokens, part: Part) -> None:
        """Let the outside drive an input, and an output drive the outside."""
        nets = inner.bits(port)
        if inner.module.directions.get(port) == "output":
            pairs = list(zip(scope.targets(tokens), nets, strict=False))
        else:
            pairs = []
            for net, function in zip(nets, read_expression(tokens, scope.value, part.place), strict=False):
                self._drive(net, Driver(function, wire=True), part.place)
        for outside, net in pairs:
            self._drive(outside, Driver(Function((net,), ("$0",)), wire=True), part.place)

    def _table(self, scope: _Scope, part: Part, primitive: Primitive) -> None:
        ports = [primitive.output, *primitive.inputs]
        connected = dict(_by_port(part, ports))
        output = connected.get(primitive.output)
        if not output:
            return
        net = scope.targets(output)[0]
        inputs: list[str | None] = []
        for k, name in enumerate(primitive.inputs):
            tokens = connected.get(name)
            inputs.append(f"{net}.input{k}" if tokens else None)
            if tokens:
                driver = Driver(self._one_bit(scope, tokens, part.place), wire=True)
                self._drive(f"{net}.input{k}", driver, part.place)
        self._drive(net, TableDriver(primitive, tuple(inputs)), part.place)


def _by_port(part: Part, ports: Sequence[str]) -> Iterator[tuple[str, Tokens]]:
    """Yield each connected port with its expression."""
    if len(part.connections) > len(ports):
        raise NotUnderstood(f"{part.cell} at {part.place} has {len(part.connections)} connections, {len(ports)} ports")
    for k, (pin, tokens) in enumerate(part.connections):
        if pin is not None and pin not in ports:
            raise NotUnderstood(f"{part.cell} at {part.place} has no port {pin}")
        yield pin if pin is not None else ports[k], tokens


def _any_bits(scope: _Scope, written: str) -> list[str]:
    """Return the nets of a name as a timing check writes it."""
    name, _, rest = written.partition("[")
    bit = rest.rstrip("]")
    return scope.bits(name, (int(bit), int(bit)) if bit.isdecimal() else None)
