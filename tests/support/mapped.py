"""A generator mapped to the cells of the samples, as data that can be rewritten and damaged, and printed as Verilog.

The only ports are ``ck``, ``rn``, ``en`` (held at 1) and the vector ``so`` of the channels.
"""

import random
from collections.abc import Sequence
from dataclasses import dataclass, field

from tests.support.machines import Machine, bits_of

OUTPUTS = ("Y", "Q", "QN")
PORTS = ("ck", "rn", "en")
FLIP_FLOPS = ("km_dff", "km_dffc", "km_dffs", "km_dffec")


@dataclass
class Instance:
    """One cell: pin → net."""

    cell: str
    name: str
    pins: dict[str, str]

    @property
    def stores(self) -> bool:
        """Whether it is a flip-flop."""
        return self.cell in FLIP_FLOPS

    def inputs(self) -> list[str]:
        """Return the pins that read a net, clock and asynchronous pins left out."""
        return [pin for pin in self.pins if pin not in (*OUTPUTS, "CK", "RN", "SN", "EN")]

    def output(self) -> str:
        """Return the net of the first output pin."""
        return next(self.pins[pin] for pin in OUTPUTS if pin in self.pins)


@dataclass
class Mapped:
    """A netlist of ``channels`` channels; names given by ``net`` and ``name`` are new."""

    channels: int
    instances: list[Instance] = field(default_factory=list)
    counter: int = 0

    def copy(self) -> "Mapped":
        """Return a netlist of its own."""
        own = [Instance(i.cell, i.name, dict(i.pins)) for i in self.instances]
        return Mapped(self.channels, own, self.counter)

    def fresh(self, hint: str) -> str:
        """Return a name that is not taken."""
        self.counter += 1
        return f"{hint}{self.counter}"

    def add(self, cell: str, output: str = "", name: str = "", **pins: str) -> str:
        """Add a gate and return its output net."""
        output = output or self.fresh("n")
        self.instances.append(Instance(cell, name or self.fresh("u"), {**pins, "Y": output}))
        return output

    def readers(self, net: str) -> list[tuple[Instance, str]]:
        """Return the instances and pins that read a net."""
        return [(i, pin) for i in self.instances for pin, at in i.pins.items() if at == net and pin not in OUTPUTS]

    def driver(self, net: str) -> Instance:
        """Return the instance that drives a net."""
        return next(i for i in self.instances for pin in OUTPUTS if i.pins.get(pin) == net)

    def text(self, rng: random.Random | None = None) -> str:
        """Return the Verilog; with ``rng`` instances and pins stand in any order."""
        order = list(self.instances)
        if rng:
            rng.shuffle(order)
        nets = dict.fromkeys(net for i in order for net in i.pins.values())
        wires = [net for net in nets if net not in PORTS and not net.startswith(("so[", "1'b"))]
        inputs = ", ".join(f"input {port}" for port in PORTS)
        lines = ["module generator (", f"  {inputs},", f"  output [{self.channels - 1}:0] so", ");"]
        lines += [f"  wire {net};" for net in wires]
        for instance in order:
            pins = list(instance.pins.items())
            if rng:
                rng.shuffle(pins)
            lines.append(f"  {instance.cell} {instance.name} ({', '.join(f'.{pin}({net})' for pin, net in pins)});")
        return "\n".join([*lines, "endmodule", ""])


def mapped(machine: Machine, reset: int, rng: random.Random, enabled: bool = False) -> Mapped:
    """Return the machine in XOR gates; its flip-flops ``ff_0`` ... start in ``reset``; some may have an enable."""
    netlist = Mapped(len(machine.channels))
    stage = [f"s_{k}" for k in range(machine.size)]
    for k, row in enumerate(machine.rows):
        data = _sum(netlist, rng, [stage[j] for j in bits_of(row)], machine.offset >> k & 1, "")
        pins = {"CK": "ck", "D": data, "Q": stage[k]}
        cell = "km_dffs" if reset >> k & 1 else "km_dffec" if enabled and rng.random() < 0.5 else "km_dffc"
        pins |= {"SN": "rn"} if cell == "km_dffs" else {"RN": "rn"}
        pins |= {"EN": "en"} if cell == "km_dffec" else {}
        netlist.instances.append(Instance(cell, f"ff_{k}", pins))
    for i, row in enumerate(machine.channels):
        _sum(netlist, rng, [stage[j] for j in bits_of(row)], machine.constants >> i & 1, f"so[{i}]")
    return netlist


def _sum(netlist: Mapped, rng: random.Random, nets: Sequence[str], constant: int, output: str) -> str:
    """Draw the sum of nets as a chain of XOR gates in any order; ``output`` is empty where any net will do."""
    nets = list(nets)
    rng.shuffle(nets)
    if not nets:
        nets = [f"1'b{constant}"]
        constant = 0
    total = nets[0]
    for place, net in enumerate(nets[1:], start=2):
        last = place == len(nets)
        cell = "km_xnor2" if last and constant else "km_xor2"
        total = netlist.add(cell, output if last else "", A=total, B=net)
    if len(nets) > 1:
        return total
    if constant:
        return netlist.add("km_inv", output, A=total)
    return netlist.add("km_buf", output, A=total) if output else total
