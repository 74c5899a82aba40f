"""From the names a reviewer gives to nets: mode pins and channels."""

import re
from collections.abc import Sequence

from auditor.errors import TroubleList, near_misses
from auditor.netlist.netlist import Netlist
from auditor.notation import natural_order

_BIT = re.compile(r"(.*)\[(-?\d+)\]$", re.DOTALL)


def find_net(netlist: Netlist, name: str, what: str, troubles: TroubleList) -> int | None:
    """Return the net of a name; a name that does not exist, or names a whole vector, goes to ``troubles``."""
    net = netlist.net_of_name.get(name)
    if net is not None:
        return net
    if _bits_of(netlist, name):
        troubles.add(f"{what} {name} is a vector", f"name its bits one by one, such as {_bits_of(netlist, name)[0]}")
    else:
        _unknown(netlist, name, what, troubles)
    return None


def find_channels(netlist: Netlist, names: Sequence[str], troubles: TroubleList) -> list[tuple[str, int]]:
    """Return (name, net) of every channel, in the order asked for; without names all output ports of the top.

    A name is a net, a vector (its bits by ascending index) or a pattern with ``*`` and ``?`` (in natural order, over
    the ports, or over all nets where no port fits).
    """
    if not names:
        return [
            (bit, net)
            for port in netlist.ports
            if port.direction == "output"
            for bit, net in zip(port.bits, port.nets, strict=True)
        ]
    found: dict[str, int] = {}
    for name in names:
        if name in netlist.net_of_name:
            matches = [name]
        elif not (matches := _bits_of(netlist, name)) and ("*" in name or "?" in name):
            matches = _matching(netlist, name)
        if not matches:
            _unknown(netlist, name, "channel", troubles)
        found.update((match, netlist.net_of_name[match]) for match in matches)
    return list(found.items())


def _bits_of(netlist: Netlist, vector: str) -> list[str]:
    """Return the bits of a vector by ascending index."""
    for port in netlist.ports:
        if port.name == vector:
            return list(port.bits)
    prefix = vector + "["
    bits = [name for name in netlist.net_of_name if name.startswith(prefix) and _BIT.match(name)]
    return sorted((name for name in bits if "[" not in name[len(prefix) :]), key=_index)


def _index(bit: str) -> int:
    match = _BIT.match(bit)
    return int(match[2]) if match else 0


def _matching(netlist: Netlist, pattern: str) -> list[str]:
    parts = (".*" if sign == "*" else "." if sign == "?" else re.escape(sign) for sign in pattern)
    shape = re.compile("".join(parts), re.DOTALL)
    ports = [bit for port in netlist.ports for bit in port.bits if shape.fullmatch(bit)]
    return sorted(ports or filter(shape.fullmatch, netlist.net_of_name), key=natural_order)


def _unknown(netlist: Netlist, name: str, what: str, troubles: TroubleList) -> None:
    ports = [bit for port in netlist.ports for bit in (port.name, *port.bits)]
    close = near_misses(name, ports) or near_misses(name, list(netlist.net_of_name)[:100_000])
    troubles.add(
        f"{what} {name} does not exist in {netlist.top}",
        close or f"name a port or a net of {netlist.top}",
    )
