"""Turns a module of cell models into a ``Cell``: functions by putting gates into each other, storage from tables.

A pin that a table wants at one level to say anything at all is a supply, and taken to be at that level; so is an
``inout`` pin that nothing drives or reads. What cannot be taken from the model ends up in words in ``not_understood``.
"""

from collections.abc import Iterable, Mapping
from dataclasses import replace
from typing import Literal

from auditor.cells.compose import NotUnderstood, put_into_each_other
from auditor.cells.library import Cell, Function, Pin
from auditor.cells.model import Models, Primitive
from auditor.cells.model_expression import ONE, ZERO
from auditor.cells.model_nets import Driver, Nets, TableDriver, UnreadDriver, lay_out
from auditor.cells.model_table import STATE, primitive_function, primitive_storage, wanted_level
from auditor.cells.storage import Described, rewrite, settle
from auditor.cells.truth import first_one

_CONSTANTS = {"0": ZERO, "1": ONE}
_LEVELS = {ZERO: "0", ONE: "1"}
_ITSELF = ("$0",)


def model_cell(name: str, models: Models) -> Cell:
    """Return the cell that a module or primitive describes; raises nothing, see ``Cell.not_understood``."""
    place = models[name].place
    nets = Nets()
    try:
        lay_out(name, models, nets)
        if "output" in nets.ports.values() and not nets.drivers:
            raise NotUnderstood(f"its model at {place} gives no function")
        return replace(_Evaluation(nets).cell(name), place=place)
    except NotUnderstood as reason:
        pins = {port: Pin(port, direction) for port, direction in nets.ports.items()}
        return Cell(name, pins, place=place, not_understood=str(reason))


class _Evaluation:
    """Works back from the outputs of a module laid out.

    ``functions`` holds each net met, over other nets; ``bits`` the stored bits, whose variables are nets; ``supplies``
    the pins found to be such, with their levels; ``read`` the ports that something inside reads; ``unknown``
    where a table gives no output.
    """

    def __init__(self, nets: Nets) -> None:
        self.nets = nets
        self.functions: dict[str, Function] = {}
        self.bits: dict[str, Described] = {}
        self.supplies: dict[str, str] = {}
        self.read: set[str] = set()
        self.unknown: dict[str, tuple[Function, Primitive]] = {}

    def cell(self, name: str) -> Cell:
        """Return the cell, without its place. Raises ``NotUnderstood``."""
        shown, off = self._outputs()
        self._collect(used for function in (*shown.values(), *off.values()) for used in function.inputs)
        # No name in Verilog holds a blank, so these cannot meet the nets.
        outputs = {f"output {port}": function for port, function in shown.items()}
        outputs |= {f"off {port}": function for port, function in off.items()}
        self.functions |= {port: _CONSTANTS[level] for port, level in self.supplies.items()}
        outputs |= {key: function for key, (function, _) in self.unknown.items()}
        whole = put_into_each_other({**self.functions, **outputs}, self.bits)
        self._refuse_unknown(whole)
        inner = {net: whole[net] for net in self.functions}
        bits = [_put_into(self.bits[net], inner) for net in self.nets.drivers if net in self.bits]  # as in the text
        storage, meaning = settle(bits, self.nets.ports)
        pins = {}
        for port in self.nets.ports:
            function, three_state = whole.get(f"output {port}"), whole.get(f"off {port}")
            pins[port] = Pin(
                port,
                self._direction(port),
                rewrite(function, meaning) if function else None,
                rewrite(three_state, meaning) if three_state else None,
            )
        return Cell(name, pins, storage)

    def _refuse_unknown(self, whole: Mapping[str, Function]) -> None:
        """Raise ``NotUnderstood`` where a table gives no output for inputs that can reach it."""
        for key, (_, primitive) in self.unknown.items():
            function = whole[key]
            place = first_one(function)
            if place is not None:
                case = ", ".join(f"{name} = {bit}" for name, bit in place.items())
                raise NotUnderstood(
                    f"the table of {primitive.name} at {primitive.place} gives no output for {case or 'its inputs'}"
                )

    def _direction(self, port: str) -> Literal["input", "output", "inout", "power"]:
        direction = self.nets.ports[port]
        unused = direction == "inout" and port not in self.nets.drivers and port not in self.read
        return "power" if unused or port in self.supplies else direction

    def _outputs(self) -> tuple[dict[str, Function], dict[str, Function]]:
        """Return for each driven port its function, and where it is Z if it ever is, over the nets."""
        shown, off = {}, {}
        for port, direction in self.nets.ports.items():
            if direction == "input" or (direction == "inout" and port not in self.nets.drivers):
                continue
            net = self._behind_wires(port)
            driver = self.nets.drivers.get(net)
            shown[port] = Function((net,), _ITSELF)
            if isinstance(driver, Driver) and driver.off:
                shown[port], off[port] = driver.function, driver.off
        return shown, off

    def _behind_wires(self, net: str) -> str:
        """Return the net at the other end of mere connections."""
        passed: set[str] = set()
        driver = self.nets.drivers.get(net)
        while isinstance(driver, Driver) and driver.wire and driver.function.program == _ITSELF and net not in passed:
            passed.add(net)
            (net,) = driver.function.inputs
            driver = self.nets.drivers.get(net)
        return net

    def _collect(self, starts: Iterable[str]) -> None:
        """Enter into ``functions`` and ``bits`` all that these nets depend on."""
        waiting = list(starts)
        while waiting:
            net = waiting.pop()
            if net in self.functions or net in self.bits or net in self.read:
                continue
            driver = self.nets.drivers.get(net)
            if driver is None or self.nets.ports.get(net) in ("input", "inout"):
                if net not in self.nets.ports or self.nets.ports[net] == "output":
                    raise NotUnderstood(f"nothing drives {net} in its model")
                self.read.add(net)
                continue
            if isinstance(driver, UnreadDriver):
                raise NotUnderstood(driver.reason)
            entered = self._table(driver, net) if isinstance(driver, TableDriver) else driver
            if isinstance(entered, Described):
                self.bits[net] = entered
                waiting += [used for function in _functions_of(entered) for used in function.inputs if used != net]
            elif entered.off:
                raise NotUnderstood(f"its model uses {net} inside, which can be Z")
            else:
                self.functions[net] = entered.function
                waiting += entered.function.inputs
                if f"unknown {net}" in self.unknown:
                    waiting += self.unknown[f"unknown {net}"][0].inputs

    def _table(self, driver: TableDriver, net: str) -> Driver | Described:
        """Return what an instance of a primitive does over the nets at its inputs."""
        primitive = driver.primitive
        levels: dict[str, str] = {}
        for j, (name, source) in enumerate(zip(primitive.inputs, driver.nets, strict=True)):
            root = self._root(source)
            if root in ("0", "1", "x"):
                levels[name] = root
            elif self.nets.ports.get(root) in ("input", "inout") and (wanted := wanted_level(primitive, j)):
                levels[name] = wanted
                if self.supplies.setdefault(root, wanted) != wanted:
                    raise NotUnderstood(f"its model wants its pin {root} at 0 and at 1")
        actual = {
            name: Function((source,), _ITSELF)
            for name, source in zip(primitive.inputs, driver.nets, strict=True)
            if source
        }
        if not primitive.stores:
            function, unknown = primitive_function(primitive, levels)
            if unknown != ZERO:
                self.unknown[f"unknown {net}"] = rewrite(unknown, actual), primitive
            return Driver(rewrite(function, actual))
        bit = primitive_storage(primitive, levels)
        return replace(_put_into(bit, actual | {STATE: Function((net,), _ITSELF)}), first=net)

    def _root(self, net: str | None) -> str:
        """Return the net behind wires and buffers, or 0, 1 or x where it stays at that level."""
        passed: set[str] = set()
        while net is not None and net not in passed:
            passed.add(net)
            driver = self.nets.drivers.get(net)
            if net in self.nets.ports and (driver is None or self.nets.ports[net] == "input"):
                return net
            if driver is None:
                break
            if not isinstance(driver, Driver) or driver.off:
                return net
            if driver.function in _LEVELS:
                return _LEVELS[driver.function]
            if driver.function.program != _ITSELF:
                return net
            (net,) = driver.function.inputs
        return "x"


def _functions_of(bit: Described) -> list[Function]:
    return [function for function in (bit.clock, bit.data, bit.clear, bit.preset) if function]


def _put_into(bit: Described, meaning: Mapping[str, Function]) -> Described:
    """Return the bit with each name replaced by its meaning."""
    clear = rewrite(bit.clear, meaning) if bit.clear else None
    preset = rewrite(bit.preset, meaning) if bit.preset else None
    return replace(bit, clock=rewrite(bit.clock, meaning), data=rewrite(bit.data, meaning), clear=clear, preset=preset)
