"""Rewrites of a mapped netlist that keep its function, and the small proof of each gate form."""

import random
from collections.abc import Callable
from typing import TypeAlias

from tests.support.mapped import OUTPUTS, PORTS, Instance, Mapped

Rewrite: TypeAlias = Callable[[Mapped, random.Random], None]


def other_xor(netlist: Mapped, rng: random.Random) -> None:
    """Put XOR and XNOR gates into other cells: NANDs, the other gate and an inverter, AND-OR, multiplexer."""
    for gate in [i for i in netlist.instances if i.cell in ("km_xor2", "km_xnor2")]:
        if rng.random() < 0.5:
            a, b, output = gate.pins["A"], gate.pins["B"], gate.pins["Y"]
            netlist.instances.remove(gate)
            draw_xor(netlist, rng.choice(XOR_FORMS), a, b, output, gate.cell == "km_xnor2")


XOR_FORMS = ("nand", "other", "aoi", "mux", "swapped")


def draw_xor(netlist: Mapped, form: str, a: str, b: str, output: str, inverted: bool) -> None:
    """Draw a XOR b, or its complement, in one of the forms."""
    cells = ("km_xor2", "km_xnor2")
    if form == "nand":
        middle = netlist.add("km_nand2", A=a, B=b)
        left, right = netlist.add("km_nand2", A=a, B=middle), netlist.add("km_nand2", A=middle, B=b)
        if inverted:
            netlist.add("km_inv", output, A=netlist.add("km_nand2", A=left, B=right))
        else:
            netlist.add("km_nand2", output, A=left, B=right)
    elif form == "other":
        netlist.add("km_inv", output, A=netlist.add(cells[not inverted], A=a, B=b))
    elif form == "aoi":
        other = netlist.add("km_inv", A=b) if inverted else b
        neither = netlist.add("km_nor2", A=a, B=other)
        netlist.add("km_aoi21", output, A1=a, A2=other, B=neither)
    elif form == "mux":
        not_b = netlist.add("km_inv", A=b)
        low, high = (not_b, b) if inverted else (b, not_b)
        netlist.add("km_mux2", output, D0=low, D1=high, S=a)
    else:
        netlist.add(cells[inverted], output, A=b, B=a)


def buffers(netlist: Mapped, rng: random.Random) -> None:
    """Put a buffer, or two inverters, in front of some pins."""
    for instance in list(netlist.instances):
        for pin in instance.inputs():
            if rng.random() < 0.15 and not instance.pins[pin].startswith("1'b"):
                net = instance.pins[pin]
                if rng.random() < 0.5:
                    instance.pins[pin] = netlist.add("km_buf", A=net)
                else:
                    instance.pins[pin] = netlist.add("km_inv", A=netlist.add("km_inv", A=net))


def de_morgan(netlist: Mapped, rng: random.Random) -> None:
    """Turn NAND into an inverted NOR of inverted inputs, and the other way round."""
    other = {"km_nand2": "km_nor2", "km_nor2": "km_nand2"}
    for gate in [i for i in netlist.instances if i.cell in other]:
        if rng.random() < 0.3:
            a, b = (netlist.add("km_inv", A=gate.pins[pin]) for pin in "AB")
            netlist.instances.remove(gate)
            netlist.add("km_inv", gate.pins["Y"], A=netlist.add(other[gate.cell], A=a, B=b))


def inverted_storage(netlist: Mapped, rng: random.Random) -> None:
    """Let some flip-flops store the complement: inverted data, the other reset, the other output."""
    for ff in [i for i in netlist.instances if i.cell in ("km_dffc", "km_dffs")]:
        if rng.random() < 0.4 and "Q" in ff.pins and "QN" not in ff.pins:
            ff.pins["D"] = netlist.add("km_inv", A=ff.pins["D"])
            ff.pins["QN"] = ff.pins.pop("Q")
            old, new = ("RN", "SN") if ff.cell == "km_dffc" else ("SN", "RN")
            ff.pins[new] = ff.pins.pop(old)
            ff.cell = "km_dffs" if ff.cell == "km_dffc" else "km_dffc"


def renamed(netlist: Mapped, rng: random.Random) -> None:
    """Give every net and instance a new name."""
    pool = rng.sample(range(10**6), 4 * len(netlist.instances) + 50)
    names: dict[str, str] = {}
    for instance in netlist.instances:
        instance.name = f"g{pool.pop()}"
        for pin, net in instance.pins.items():
            if net not in PORTS and not net.startswith(("so[", "1'b")):
                instance.pins[pin] = names.setdefault(net, f"w{pool.pop()}") if net not in names else names[net]


def retimed(netlist: Mapped, rng: random.Random) -> None:
    """Move flip-flops behind an XOR gate in front of it: one for each input, reset so that the XOR shows the same."""
    for ff in [i for i in netlist.instances if i.cell in ("km_dffc", "km_dffs") and "QN" not in i.pins]:
        data = ff.pins["D"]
        gates = [i for i in netlist.instances if i.cell in ("km_xor2", "km_xnor2") and i.pins["Y"] == data]
        if (
            not gates
            or len(netlist.readers(data)) != 1
            or rng.random() < 0.5
            or not ff.pins["Q"].startswith(("p_", "so["))
        ):
            continue
        gate = gates[0]
        first = int(ff.cell == "km_dffs") ^ (gate.cell == "km_xnor2")
        gate.pins["Y"] = ff.pins["Q"]
        netlist.instances.remove(ff)
        for pin, reset in (("A", first), ("B", 0)):
            moved = netlist.fresh("r")
            cell, asynchronous = ("km_dffs", "SN") if reset else ("km_dffc", "RN")
            pins = {"CK": "ck", asynchronous: "rn", "D": gate.pins[pin], "Q": moved}
            netlist.instances.append(Instance(cell, netlist.fresh("ff_r"), pins))
            gate.pins[pin] = moved


def pipelined(netlist: Mapped, rng: random.Random) -> None:
    """Put a pipeline flip-flop behind every channel; this is part of making a generator, not a rewrite of one."""
    for i in range(netlist.channels):
        driver = netlist.driver(f"so[{i}]")
        pin = next(pin for pin in OUTPUTS if driver.pins.get(pin) == f"so[{i}]")
        net = driver.pins[pin] = netlist.fresh("p_d")
        cell, asynchronous = ("km_dffs", "SN") if rng.random() < 0.5 else ("km_dffc", "RN")
        pins = {"CK": "ck", asynchronous: "rn", "D": net, "Q": f"so[{i}]"}
        netlist.instances.append(Instance(cell, f"ff_p{i}", pins))


REWRITES: dict[str, Rewrite] = {
    "other cells": other_xor,
    "buffers": buffers,
    "De Morgan": de_morgan,
    "inverted storage": inverted_storage,
    "renamed": renamed,
    "retimed pipeline": retimed,
}
