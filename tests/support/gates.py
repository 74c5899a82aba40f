"""From an abstract machine to gates by a random recipe, together with the truth that an audit must give back.

The maker shares no code with the auditor. It draws a machine as Verilog over the cells of ``gates.lib`` and knows,
from the drawing alone, what is stored at every Q.
"""

import random
from collections.abc import Container
from dataclasses import dataclass
from pathlib import Path
from typing import Literal

from tests.support.machines import Machine, bits_of, stored
from tests.support.printer import verilog
from tests.support.sheet import Formula, Gate, Part, Sheet, Style, clean
from tests.support.xors import FORMS, Signal, Sum, add, compound, true_net

CELLS = Path(__file__).with_name("gates.lib")

# Storage cells by what their asynchronous pins do: name → output pins.
STORAGE: dict[str, dict[str, tuple[str, ...]]] = {
    "": {
        "ff_plain": ("Q", "QN"),
        "ff_only_qn": ("QN",),
        "ff_inverted_inside": ("Q", "QN"),
        "ff_falling": ("Q", "QN"),
        "ff_enable": ("Q", "QN"),
        "ff_enable_inverted": ("Q",),
        "ff_scan": ("Q", "QN"),
    },
    "clear": {
        "ff_clear": ("Q", "QN"),
        "ff_clear_high": ("Q",),
        "ff_clear_and_set": ("Q", "QN"),
        "ff_scan_clear": ("Q", "QN"),
    },
    "set": {"ff_set": ("Q", "QN"), "ff_clear_and_set": ("Q", "QN")},
}


@dataclass(frozen=True)
class Recipe:
    """How to draw: which XOR forms and statement styles, which storage, and what stands around it."""

    forms: tuple[str, ...] = ("xor_gate",)
    styles: tuple[Style, ...] = ("cells",)
    all_storage: bool = False
    complemented: bool = False
    enable: Literal["", "multiplexer", "gates"] = ""
    scan_multiplexer: bool = False
    buffers: bool = False
    clock: Literal["direct", "buffered", "gated", "inverted"] = "direct"
    reset: Literal["none", "some", "all"] = "none"
    reset_high: bool = False
    names: Literal["plain", "random", "escaped"] = "plain"
    vectors: bool = False
    hierarchy: bool = False
    shuffled: bool = False
    half_cycles: bool = False


ANYTHING = Recipe(
    forms=FORMS,
    styles=("cells", "primitives", "assigns"),
    all_storage=True,
    complemented=True,
    enable="gates",
    scan_multiplexer=True,
    buffers=True,
    clock="buffered",
    reset="some",
    names="escaped",
    vectors=True,
    hierarchy=True,
    shuffled=True,
)


@dataclass(frozen=True)
class Block:
    """A drawn block and its truth.

    ``machine``   as the flip-flops store it; element k is the flip-flop ``names[k]``
    ``resets``    by element: what the reset stores, None where there is none
    ``xor_inputs``, ``xor_depth``   by channel, of the tree between it and the storage
    ``half_cycle``  storage behind a channel that passes its data on inside the cycle -> that channel; in order
    ``spoilers``  spoiled element or channel -> the AND gate that spoils it
    """

    text: str
    top: str
    mode: dict[str, int]
    channels: tuple[str, ...]
    names: tuple[str, ...]
    machine: Machine
    resets: tuple[int | None, ...]
    xor_inputs: tuple[int, ...]
    xor_depth: tuple[int, ...]
    half_cycle: dict[str, int]
    spoilers: dict[str, str]


@dataclass
class _Element:
    """A flip-flop being drawn: its cell and nets; ``complemented`` where it keeps the abstract bit's complement."""

    cell: str
    complemented: bool
    reset: int | None
    outputs: dict[str, str]

    def signals(self) -> list[Signal]:
        """Return the nets that carry the abstract bit or its complement."""
        return [Signal(net, self.complemented ^ (pin == "QN")) for pin, net in self.outputs.items()]


class _Drawing:
    """One block under the pencil."""

    def __init__(self, machine: Machine, recipe: Recipe, rng: random.Random) -> None:
        self.machine, self.recipe, self.rng = machine, recipe, rng
        self.sheet = Sheet(rng, recipe.names, recipe.styles, recipe.hierarchy, recipe.shuffled)
        self.mode: dict[str, int] = {}
        self.spoilers: dict[int, Gate] = {}
        self.half_cycle: list[tuple[Gate, int]] = []
        self.clock = self._port("ck")
        self.ports: dict[str, str] = {}
        self.elements = self._elements()

    def _port(self, hint: str) -> str:
        name = self.sheet.net(hint)
        self.sheet.inputs.append(name)
        return name

    def port(self, hint: str, value: int | None = None) -> str:
        """Return the input port for a purpose, made when first asked for; ``value`` goes to the mode."""
        if hint not in self.ports:
            self.ports[hint] = self._port(hint)
            if value is not None:
                self.mode[clean(self.ports[hint])] = value
        return self.ports[hint]

    def _elements(self) -> list[_Element]:
        """Choose every element's cell, encoding and reset, and name its output nets."""
        rng, size = self.rng, self.machine.size
        in_vector = self.sheet.vector("state", size) if self.recipe.vectors else None
        elements = []
        for k in range(size):
            with_reset = self.recipe.reset == "all" or (self.recipe.reset == "some" and rng.random() < 0.5)
            reset = rng.getrandbits(1) if with_reset else None
            cells = STORAGE["" if reset is None else "set" if reset else "clear"]
            usable = {c: pins for c, pins in cells.items() if c != "ff_falling" or self.recipe.clock == "inverted"}
            cell = rng.choice(list(usable)) if self.recipe.all_storage else next(iter(usable))
            pins = [pin for pin in usable[cell] if rng.random() < 0.6] or [usable[cell][0]]
            outputs = {pin: self.sheet.net(f"{pin.lower()}{k}") for pin in pins}
            if in_vector:
                outputs[pins[0]] = in_vector[k]
            elements.append(_Element(cell, self.recipe.complemented and rng.random() < 0.5, reset, outputs))
        return elements

    def read(self, k: int, part: Part) -> Signal:
        """Return a net of a part that carries element k, from any of its outputs, buffered or not."""
        signal = self.rng.choice(self.elements[k].signals())
        if self.recipe.buffers and self.rng.random() < 0.3:
            signal = Signal(self.sheet.gate("buf", part, signal.net), signal.inverted)
        if self.recipe.buffers and self.rng.random() < 0.2:
            signal = Signal(self.sheet.gate("inv", part, signal.net), not signal.inverted)
        return signal

    def add_row(self, row: int, part: Part) -> Sum:
        """Draw the sum of the elements of a row."""
        return add(self.sheet, part, self.recipe.forms, [self.read(k, part) for k in bits_of(row)])

    def spoil(self, signal: Signal, row: int, part: Part, key: int) -> Signal:
        """Draw an AND of a sum with an element that is not the sum itself: no affine function."""
        other = self.read(next(k for k in range(self.machine.size) if row != 1 << k), part)
        output = self.sheet.net()
        self.spoilers[key] = self.sheet.cell("and2", part, A=signal.net, B=other.net, Y=output)
        return Signal(output, signal.inverted)

    def next_state(self, k: int, spoiled: bool) -> str:
        """Draw what element k takes: the row, the encoding, the enable and the scan multiplexer; return the net."""
        sheet, element, row = self.sheet, self.elements[k], self.machine.rows[k]
        total = self.add_row(row, "register").signal
        if spoiled:
            total = self.spoil(total, row, "register", k)
        inverted = bool(self.machine.offset >> k & 1) ^ element.complemented
        net = true_net(sheet, "register", total, inverted)
        if self.recipe.enable and self.rng.random() < 0.7:
            pin, hold = next(iter(element.outputs.items()))
            hold = sheet.gate("inv", "register", hold) if pin == "QN" else hold
            net = self._with_enable(net, hold)
        if self.recipe.scan_multiplexer and self.rng.random() < 0.5:
            select, other = self.port("scan_enable", 0), self.port("scan_in")
            net = compound("mux2", sheet, "register", A=net, B=other, S=select)
        return net

    def _with_enable(self, net: str, hold: str) -> str:
        """Draw a multiplexer that holds the state while the enable is off."""
        sheet = self.sheet
        if self.recipe.enable == "multiplexer":
            return compound("mux2", sheet, "register", A=hold, B=net, S=self.port("enable", 1))
        off = self.port("hold", 0)
        on = sheet.gate("inv", "register", off)
        terms = sheet.gate("nand", "register", net, on), sheet.gate("nand", "register", hold, off)
        return sheet.gate("nand", "register", *terms)

    def clock_net(self, cell: str) -> str:
        """Return the clock for a cell; inverted where the recipe says so, buffered or gated at random."""
        sheet, net = self.sheet, self.clock
        if self.recipe.clock == "buffered" and self.rng.random() < 0.5:
            return sheet.gate("buf", "register", net)
        if self.recipe.clock == "gated" and self.rng.random() < 0.5:
            return sheet.gate("and", "register", net, self.port("clock_on", 1))
        if self.recipe.clock == "inverted" and cell != "ff_falling":
            return sheet.gate("inv", "register", net)
        return net

    def reset_net(self, active: int) -> str:
        """Return the reset in the polarity that a pin wants."""
        high = self.recipe.reset_high
        port = self.port("reset" if high else "reset_n")
        return port if active == high else self.sheet.gate("inv", "register", port)

    def flip_flop(self, k: int, spoiled: bool = False) -> Gate:
        """Draw element k and return its instance."""
        element = self.elements[k]
        pins = {"CK": self.clock_net(element.cell), "D": self.next_state(k, spoiled)} | element.outputs
        if "enable" in element.cell:
            pins["EN"] = self.port("enable", 1)
        if "scan" in element.cell:
            pins |= {"SE": self.port("scan_enable", 0), "SI": self.port("scan_in")}
        if element.cell == "ff_clear_high":
            pins["R"] = self.reset_net(1)
        elif element.cell in ("ff_clear", "ff_scan_clear") or (element.reset == 0 and "clear" in element.cell):
            pins["RN"] = self.reset_net(0)
        elif element.reset == 1:
            pins["SN"] = self.reset_net(0)
        if element.cell == "ff_clear_and_set":
            pins |= {pin: "1'b1" for pin in ("RN", "SN") if pin not in pins}
        return self.sheet.cell(element.cell, "register", ("Q", "QN"), f"ff{k}_", **pins)

    def through_half_cycles(self, net: str, i: int) -> str:
        """Draw storage that opens in order inside one cycle, so that the channel shows what it showed without."""
        turned = self.recipe.clock == "inverted"  # the register then works at the falling edge
        first, second = ("latch_low", "latch_high") if turned else ("latch_high", "latch_low")
        for cell in (first, "ff_plain" if turned else "ff_falling", second):
            if self.recipe.half_cycles and self.rng.random() < 0.4:
                output = self.sheet.net()
                clock_pin = "CK" if cell.startswith("ff") else "G"
                pins = {clock_pin: self.clock, "D": net, "Q": output}
                self.half_cycle.append((self.sheet.cell(cell, "shifter", ("Q",), "half", **pins), i))
                net = output
        return net

    def channel(self, i: int, port: str, spoiled: bool = False) -> Sum:
        """Draw channel i up to its port."""
        sheet, total = self.sheet, self.add_row(self.machine.channels[i], "shifter")
        if spoiled:
            spoiled_signal = self.spoil(total.signal, self.machine.channels[i], "shifter", self.machine.size + i)
            total = total._replace(signal=spoiled_signal)
        inverted = bool(self.machine.constants >> i & 1)
        drawn = {net for element in self.elements for net in element.outputs.values()}
        net = self.through_half_cycles(true_net(sheet, "shifter", total.signal, inverted), i)
        own = net not in drawn and net not in sheet.inputs
        if own and port in sheet.outputs and self.rng.random() < 0.5:
            sheet.same[net] = port
        elif self.recipe.buffers and self.rng.random() < 0.5:
            sheet.cell("buffer", "top", A=net, Y=port)
        else:
            sheet.statements.append(Formula(port, "{0}", (net,), "top"))
        return total


def draw(
    machine: Machine,
    recipe: Recipe,
    rng: random.Random,
    spoiled_elements: Container[int] = (),
    spoiled_channels: Container[int] = (),
) -> Block:
    """Draw the machine by the recipe, all elements of it; spoiled ones are given a next state that is not affine."""
    drawing, top = _Drawing(machine, recipe, rng), "block"
    sheet, count = drawing.sheet, len(machine.channels)
    gates = [drawing.flip_flop(k, k in spoiled_elements) for k in range(machine.size)]
    if recipe.vectors:
        ports = sheet.vector("so", count)
        sheet.outputs.append(next(name for name, (_, _, keys) in sheet.vectors.items() if keys == ports))
    else:
        ports = [sheet.net(f"so{i}") for i in range(count)]
        sheet.outputs += ports
    sums = [drawing.channel(i, port, i in spoiled_channels) for i, port in enumerate(ports)]
    complemented = sum(1 << k for k, element in enumerate(drawing.elements) if element.complemented)
    names = [sheet.path(gate) for gate in gates]
    channels = [_channel_name(port) for port in ports]
    return Block(
        text=verilog(sheet, top),
        top=top,
        mode=drawing.mode,
        channels=tuple(channels),
        names=tuple(names),
        machine=stored(machine, complemented),
        resets=tuple(element.reset for element in drawing.elements),
        xor_inputs=tuple(total.leaves for total in sums),
        xor_depth=tuple(total.depth for total in sums),
        half_cycle={sheet.path(gate): i for gate, i in drawing.half_cycle},
        spoilers={[*names, *channels][key]: sheet.path(gate) for key, gate in drawing.spoilers.items()},
    )


def _channel_name(port: str) -> str:
    """Return a port bit as a report spells it; a vector may have an escaped name."""
    name, blank, index = port.rpartition(" ")
    return clean(f"{name} ") + index if blank else clean(port)
