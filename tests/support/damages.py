"""Damages of a mapped netlist, one place each, with what they touch."""

import random
from collections.abc import Callable, Collection
from dataclasses import dataclass
from typing import TypeAlias

from tests.support.mapped import OUTPUTS, Instance, Mapped


@dataclass(frozen=True)
class Damage:
    """What was damaged: the instances, of which one must be found, and the channels where they stand for them.

    ``reached`` are the channels, and the flip-flops by their data, that gates carry the damage to in the same cycle.
    """

    instances: tuple[str, ...]
    channels: tuple[str, ...] = ()
    reached: frozenset[str] = frozenset()


Maker: TypeAlias = Callable[[Mapped, random.Random], Damage | None]


def _stages(netlist: Mapped) -> list[str]:
    return [i.pins[pin] for i in netlist.instances if i.stores for pin in ("Q", "QN") if pin in i.pins]


def _feeds_state(netlist: Mapped, net: str) -> bool:
    """Whether a net reaches a flip-flop through gates."""
    pending, seen = [net], {net}
    while pending:
        for reader, pin in netlist.readers(pending.pop()):
            if reader.stores and pin == "D":
                return True
            output = reader.output()
            if not reader.stores and output not in seen:
                seen.add(output)
                pending.append(output)
    return False


def _rewire(netlist: Mapped, rng: random.Random, feedback: bool) -> Damage | None:
    stages = _stages(netlist)
    places = [
        (gate, pin)
        for gate in netlist.instances
        if not gate.stores and gate.cell in ("km_xor2", "km_xnor2") and _feeds_state(netlist, gate.output()) == feedback
        for pin in gate.inputs()
        if gate.pins[pin] in stages
    ]
    if not places:
        return None
    gate, pin = rng.choice(places)
    gate.pins[pin] = rng.choice([net for net in stages if net not in gate.pins.values()])
    return Damage((gate.name,))


def one_tap(netlist: Mapped, rng: random.Random) -> Damage | None:
    """Rewire one tap of a channel to another stage."""
    return _rewire(netlist, rng, feedback=False)


def feedback_tap(netlist: Mapped, rng: random.Random) -> Damage | None:
    """Rewire one tap of the feedback."""
    return _rewire(netlist, rng, feedback=True)


def swapped_channels(netlist: Mapped, rng: random.Random) -> Damage | None:
    """Exchange the nets of two channels."""
    names = [f"so[{i}]" for i in rng.sample(range(netlist.channels), 2)]
    drivers = [netlist.driver(name) for name in names]
    if drivers[0] is drivers[1]:
        return None
    for instance in netlist.instances:
        for pin, net in instance.pins.items():
            if net in names:
                instance.pins[pin] = names[1 - names.index(net)]
    return Damage(tuple(driver.name for driver in drivers), tuple(names))


def other_polarity(netlist: Mapped, rng: random.Random) -> Damage | None:
    """Make an XNOR of an XOR, or the other way round."""
    gate = rng.choice([i for i in netlist.instances if i.cell in ("km_xor2", "km_xnor2")])
    gate.cell = {"km_xor2": "km_xnor2", "km_xnor2": "km_xor2"}[gate.cell]
    return Damage((gate.name,))


def dropped_inverter(netlist: Mapped, rng: random.Random) -> Damage | None:
    """Take an inverter out and join its nets; its readers are what changed."""
    inverters = [i for i in netlist.instances if i.cell == "km_inv" and not i.pins["Y"].startswith("so[")]
    if not inverters:
        return None
    inverter = rng.choice(inverters)
    readers = netlist.readers(inverter.pins["Y"])
    netlist.instances.remove(inverter)
    for reader, pin in readers:
        reader.pins[pin] = inverter.pins["A"]
    return Damage(tuple(reader.name for reader, _ in readers))


def tied_enable(netlist: Mapped, rng: random.Random) -> Damage | None:
    """Tie the enable of a flip-flop to 0."""
    return _on_flip_flop(netlist, rng, lambda ff: ff.cell == "km_dffec", lambda ff: ff.pins.update(EN="1'b0"))


def other_output(netlist: Mapped, rng: random.Random) -> Damage | None:
    """Take the other output of a flip-flop."""

    def swap(ff: Instance) -> None:
        pin, other = ("Q", "QN") if "Q" in ff.pins else ("QN", "Q")
        ff.pins[other] = ff.pins.pop(pin)

    return _on_flip_flop(netlist, rng, lambda ff: ("Q" in ff.pins) != ("QN" in ff.pins), swap)


def other_edge(netlist: Mapped, rng: random.Random) -> Damage | None:
    """Clock a flip-flop at the other edge."""

    def invert(ff: Instance) -> None:
        ff.pins["CK"] = netlist.add("km_inv", A="ck")

    return _on_flip_flop(netlist, rng, lambda _: True, invert)


def _on_flip_flop(
    netlist: Mapped, rng: random.Random, fits: Callable[[Instance], bool], damage: Callable[[Instance], None]
) -> Damage | None:
    candidates = [i for i in netlist.instances if i.stores and fits(i)]
    if not candidates:
        return None
    ff = rng.choice(candidates)
    damage(ff)
    return Damage((ff.name,))


def reached_from(netlist: Mapped, names: Collection[str]) -> frozenset[str]:
    """Return the channels and the flip-flops that the outputs of the named instances reach through gates."""
    pending = [i.pins[pin] for i in netlist.instances if i.name in names for pin in OUTPUTS if pin in i.pins]
    found, seen = {net for net in pending if net.startswith("so[")}, set(pending)
    for net in pending:
        for reader, _ in netlist.readers(net):
            if reader.stores:
                found.add(reader.name)
            elif reader.output() not in seen:
                seen.add(reader.output())
                pending.append(reader.output())
                found |= {reader.output()} if reader.output().startswith("so[") else set()
    return frozenset(found)


DAMAGES: dict[str, Maker] = {
    "one tap rewired": one_tap,
    "two channels swapped": swapped_channels,
    "XOR to XNOR": other_polarity,
    "inverter dropped": dropped_inverter,
    "feedback tap moved": feedback_tap,
    "enable tied": tied_enable,
    "flip-flop output swapped": other_output,
    "other clock edge": other_edge,
}
