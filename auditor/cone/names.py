"""From the names a reviewer gives to nets: mode pins and channels."""

import re
from collections.abc import Collection, Sequence
from itertools import islice

from auditor.errors import TroubleList, near_misses
from auditor.netlist.netlist import Netlist
from auditor.notation import natural_order

MOST_COMPARED = 2000  # names that one misspelt name is compared with
MOST_HINTS = 20  # troubles with suggestions in one run
_BIT = re.compile(r"(.*)\[(-?\d+)\]$", re.DOTALL)


def find_net(netlist: Netlist, name: str, what: str, troubles: TroubleList) -> int | None:
    """Return the net of a name; a name that does not exist, or names a whole vector, goes to ``troubles``."""
    net = netlist.net_of_name.get(name)
    if net is not None:
        return net
    if bits := _vectors(netlist, {name}).get(name):
        troubles.add(f"{what} {name} is a vector", f"name its bits one by one, such as {bits[0]}")
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
    vectors = _vectors(netlist, {name for name in names if name not in netlist.net_of_name})
    for name in names:
        if name in netlist.net_of_name:
            matches = [name]
        elif not (matches := vectors.get(name, [])) and ("*" in name or "?" in name):
            matches = _matching(netlist, name)
        if not matches:
            _unknown(netlist, name, "channel", troubles)
        found.update((match, netlist.net_of_name[match]) for match in matches)
    return list(found.items())


def _vectors(netlist: Netlist, names: Collection[str]) -> dict[str, list[str]]:
    """Return the bits, by ascending index, of those names that are vectors; one pass over the netlist for all."""
    if not names:
        return {}
    found = {port.name: list(port.bits) for port in netlist.ports if port.name in names}
    inner: dict[str, list[str]] = {}
    for bit in netlist.net_of_name:
        if bit[-1:] == "]" and (vector := bit[: bit.rfind("[")]) in names and vector not in found and _BIT.match(bit):
            inner.setdefault(vector, []).append(bit)
    return found | {vector: sorted(bits, key=_index) for vector, bits in inner.items()}


def _index(bit: str) -> int:
    match = _BIT.match(bit)
    return int(match[2]) if match else 0


def _matching(netlist: Netlist, pattern: str) -> list[str]:
    shape = _shape(pattern)
    ports = [bit for port in netlist.ports for bit in port.bits if shape.fullmatch(bit)]
    return sorted(ports or filter(shape.fullmatch, netlist.net_of_name), key=natural_order)


def _shape(pattern: str) -> re.Pattern[str]:
    """Return a pattern as a regular expression. What stands between stars is found at its first place, for good.

    So no pattern makes the matching go back and forth over a long name.
    """
    first, *others = (re.escape(part).replace(r"\?", ".") for part in pattern.split("*"))
    if not others:
        return re.compile(first, re.DOTALL)
    *middle, last = others
    return re.compile(first + "".join(f"(?>.*?{part})" for part in middle) + f".*{last}", re.DOTALL)


def _unknown(netlist: Netlist, name: str, what: str, troubles: TroubleList) -> None:
    ports = [bit for port in netlist.ports for bit in (port.name, *port.bits)]
    close = ""
    if len(troubles.troubles) < MOST_HINTS:
        close = near_misses(name, islice(ports, MOST_COMPARED)) or _near_net(netlist, name)
    troubles.add(
        f"{what} {name} does not exist in {netlist.top}",
        close or f"name a port or a net of {netlist.top}",
    )


def _near_net(netlist: Netlist, name: str) -> str:
    """Suggest near misses among nets that may be millions: those of like length that begin alike."""
    for begin in (name[: len(name) // 2], name[:1]):
        like = (net for net in netlist.net_of_name if net.startswith(begin) and abs(len(net) - len(name)) <= 2)
        if close := near_misses(name, islice(like, MOST_COMPARED)):
            return close
    return ""
