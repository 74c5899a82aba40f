"""Asynchronous clear and preset: inactive by assumption where one port decides them, and the state they give."""

from collections.abc import Mapping
from dataclasses import dataclass, field
from functools import reduce

from auditor.cells.function import TERNARY
from auditor.cells.library import Function
from auditor.cone.walk import Stored
from auditor.cone.wiring import NO_DRIVER, Wiring

TRACE_LIMIT = 10_000  # gates behind one asynchronous pin; beyond, the pin counts as not traced to a port


@dataclass(frozen=True, slots=True)
class Trace:
    """The gates behind a net, sources first, as (net, function, nets of its inputs), and the ports they start from.

    ``opaque`` says that something else decides the net as well: storage, an unknown cell, an open pin.
    """

    gates: tuple[tuple[int, Function, tuple[int, ...]], ...]
    ports: frozenset[int]
    opaque: bool


@dataclass(slots=True)
class Asynchronous:
    """Looks behind asynchronous pins; traces are kept, because thousands of pins share a few nets."""

    wiring: Wiring
    ports: frozenset[int]
    traces: dict[int, Trace] = field(default_factory=dict)

    def inactive(self, stored: Stored, known: Mapping[int, int]) -> tuple[dict[int, int], str, str]:
        """Return what must be assumed for clear and preset to be inactive, or why they are not, and the cure.

        The first is port net → value; it is empty where the mode decides already. The two texts are empty
        unless a pin is active or undecided.
        """
        assumed: dict[int, int] = {}
        for kind, condition in (("clear", stored.storage.clear), ("preset", stored.storage.preset)):
            if condition is None:
                continue
            values = {**known, **assumed}
            active = self._value(condition, stored, values)
            if active == 0:
                continue
            if active == 1:
                return {}, f"its asynchronous {kind} is active under the mode", self._release(condition, stored, values)
            trace = self._trace_all(condition, stored)
            free = sorted(trace.ports - values.keys())
            settings = (
                [v for v in (0, 1) if self._value(condition, stored, {**values, free[0]: v}) == 0] if free else []
            )
            if trace.opaque or len(free) != 1 or not settings:
                names = ", ".join(self.wiring.netlist.net_names[net] for net in free)
                cure = f"give --mode values for {names}" if names else ""
                return {}, f"its asynchronous {kind} is not decided by the mode", cure
            assumed[free[0]] = settings[0]
        return assumed, "", ""

    def reset_value(self, stored: Stored, known: Mapping[int, int]) -> tuple[int | None, list[int]]:
        """Return the bit that activating a single port gives, and the ports that give it.

        The bit is None where no port does, where two of them disagree, or where clear and preset together give none.
        """
        clear, preset = stored.storage.clear, stored.storage.preset
        conditions = [condition for condition in (clear, preset) if condition is not None]
        ports = sorted(frozenset().union(*(self._trace_all(c, stored).ports for c in conditions)) & known.keys())
        outcomes: dict[int, int | None] = {}
        for port in ports:
            flipped = {net: value for net, value in known.items() if net in self.ports}
            flipped[port] = 1 - known[port]
            cleared = clear is not None and self._value(clear, stored, flipped) == 1
            preset_on = preset is not None and self._value(preset, stored, flipped) == 1
            if cleared and preset_on:
                outcomes[port] = int(stored.storage.both) if stored.storage.both else None
            elif cleared or preset_on:
                outcomes[port] = int(preset_on)
        values = set(outcomes.values())
        return (values.pop(), list(outcomes)) if len(values) == 1 and None not in values else (None, [])

    def _release(self, condition: Function, stored: Stored, known: Mapping[int, int]) -> str:
        """Return the constant of a single port that would make an active pin inactive, and the other not active."""
        inputs = {net: value for net, value in known.items() if net in self.ports}
        conditions = [c for c in (stored.storage.clear, stored.storage.preset) if c is not None]
        for port in sorted(self._trace_all(condition, stored).ports):
            value = 1 - known.get(port, 0)
            changed = {**inputs, port: value}
            if self._value(condition, stored, changed) == 0 and all(
                self._value(c, stored, changed) != 1 for c in conditions
            ):
                return f"--mode {self.wiring.netlist.net_names[port]}={value}"
        return ""

    def _value(self, condition: Function, stored: Stored, known: Mapping[int, int]) -> int | None:
        nets = self.wiring.nets_of(stored.instance)
        values = [self._net_value(nets.get(name, -1), known) for name in condition.inputs]
        return condition.evaluate(values, TERNARY)

    def _net_value(self, net: int, known: Mapping[int, int]) -> int | None:
        if net in known or net < 0:
            return known.get(net)
        values: dict[int, int | None] = dict(known)
        for output, function, inputs in self._trace(net).gates:
            if output not in known:
                values[output] = function.evaluate([values.get(wire) for wire in inputs], TERNARY)
        return values.get(net)

    def _trace_all(self, condition: Function, stored: Stored) -> Trace:
        nets = self.wiring.nets_of(stored.instance)
        traces = [self._trace(nets[name]) for name in condition.inputs if name in nets]
        return reduce(
            lambda a, b: Trace((), a.ports | b.ports, a.opaque or b.opaque), traces, Trace((), frozenset(), False)
        )

    def _trace(self, net: int) -> Trace:
        if net not in self.traces:
            self.traces[net] = self._walk(net)
        return self.traces[net]

    def _walk(self, start: int) -> Trace:
        """Walk back depth first, so that a gate is listed after everything behind it."""
        gates: list[tuple[int, Function, tuple[int, ...]]] = []
        ports, opaque, seen = set(), False, set()
        stack: list[tuple[int, tuple[int, Function, tuple[int, ...]] | None]] = [(start, None)]
        while stack:
            net, gate = stack.pop()
            if gate is not None:
                gates.append(gate)
                continue
            if net in seen:
                continue
            seen.add(net)
            behind = self._gate(net)
            if net in self.ports:
                ports.add(net)
            elif behind is None or len(gates) > TRACE_LIMIT:
                opaque = opaque or net > 1  # nets 0 and 1 are constants and hide nothing
            else:
                stack.append((net, behind))
                stack.extend((wire, None) for wire in behind[2])
        return Trace(tuple(gates), frozenset(ports), opaque)

    def _gate(self, net: int) -> tuple[int, Function, tuple[int, ...]] | None:
        """Return the gate that drives a net, None where it is not a plain gate of pins."""
        driver = int(self.wiring.driver[net])
        if driver <= NO_DRIVER:
            return None
        instance, pin_name = self.wiring.pin_of(driver)
        cell = self.wiring.cell(instance)
        nets = self.wiring.nets_of(instance)
        function = cell.pins[pin_name].function if cell else None
        if function is None or any(name not in nets for name in function.inputs):
            return None
        return net, function, tuple(nets[name] for name in function.inputs)
