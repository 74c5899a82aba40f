"""Where the chains end, found from the channels on under the mode: forward over what reads each net.

A net passes through every gate, and into every storage, that depends on it alone under the mode. Storage and gates of
one input have one way back, so the ways forward branch but never meet. A gate of several nets ends a chain.
"""

from collections.abc import Iterator
from dataclasses import dataclass, field
from typing import NamedTuple

from auditor.cells.library import Cell
from auditor.cone.cone import Cone
from auditor.cone.fold import fold
from auditor.cone.wiring import INPUT, Wiring
from auditor.errors import TroubleList, fail

_FIRST_STORED = -2  # the wires of an instance's stored bits count down from here; -1 marks an open pin


class _Cell(NamedTuple):
    """A stored bit that the walk reached."""

    instance: int
    bit: int


def chain_ends(wiring: Wiring, cone: Cone) -> tuple[str, ...]:
    """Return a net of the last storage of every chain that the channels of the cone feed, channel by channel.

    ``wiring`` is that of the cone's netlist. Raises ``InputError`` for chains that branch, and where there is none.
    """
    walk = _Walk(wiring, cone)
    ends = [end for channel in cone.channels if channel.constant is None for end in walk.ends(channel.wire)]
    walk.troubles.raise_any()
    if not ends:
        remedy = "give --mode the constants of the scan shift, or --channels the nets that feed the scan chains"
        raise fail("no channel leads into a scan cell", remedy)
    return tuple(dict.fromkeys(wiring.netlist.net_names[net] for net in ends))


@dataclass(slots=True)
class _Walk:
    """The walk forward; it enters neither storage of the generator nor another channel."""

    wiring: Wiring
    cone: Cone
    generator: frozenset[_Cell] = field(init=False)
    channels: frozenset[int] = field(init=False)
    troubles: TroubleList = field(default_factory=TroubleList)

    def __post_init__(self) -> None:
        self.generator = frozenset(_Cell(element.instance, element.bit) for element in self.cone.elements)
        self.channels = frozenset(channel.wire for channel in self.cone.channels)

    def ends(self, channel: int) -> Iterator[int]:
        """Yield a net of the last storage of every chain that one channel feeds."""
        waiting = list(reversed(self._next([channel])))
        while waiting:
            cell = waiting.pop()
            outputs = self._outputs(cell)
            following = self._next(outputs)
            if len(following) == 1:
                waiting += following
            elif following:
                self._branch(cell, following)
            elif outputs:
                yield outputs[0]
            else:
                self._refuse(cell, "has no connected output", "leave this channel out")

    def _next(self, nets: list[int]) -> list[_Cell]:
        """Return the storage that takes one of the nets alone, through gates of one input."""
        found: dict[_Cell, None] = {}
        waiting, seen = list(reversed(nets)), set(nets)
        while waiting:
            net = waiting.pop()
            for instance in dict.fromkeys(self.wiring.pin_of(pin)[0] for pin in self.wiring.pins_on(net, INPUT)):
                cell = self.wiring.cell(instance)
                if cell is None or cell.not_understood:
                    continue
                wire_of = self._wires_of(instance, cell)
                for bit, storage in enumerate(cell.storage):
                    if fold(storage.data, wire_of, self.cone.constants).wires == (net,):
                        found[_Cell(instance, bit)] = None
                fresh = [one for one in self._driven(cell, wire_of, net) if one not in seen | self.channels]
                seen.update(fresh)
                waiting += reversed(fresh)
        return [cell for cell in found if cell not in self.generator]

    def _outputs(self, stored: _Cell) -> list[int]:
        """Return the nets that carry a stored bit or its complement."""
        cell = self.wiring.cell(stored.instance)
        if cell is None:
            return []
        driven = self._driven(cell, self._wires_of(stored.instance, cell), _FIRST_STORED - stored.bit)
        return [net for net in driven if net not in self.channels]

    def _driven(self, cell: Cell, wire_of: dict[str, int], wire: int) -> list[int]:
        """Return the nets that an instance drives as a function of one wire alone."""
        return [
            wire_of[pin.name]
            for pin in cell.pins.values()
            if pin.function is not None
            and pin.name in wire_of
            and wire_of[pin.name] not in self.cone.constants
            and pin.three_state is None
            and fold(pin.function, wire_of, self.cone.constants).wires == (wire,)
        ]

    def _wires_of(self, instance: int, cell: Cell) -> dict[str, int]:
        """Return the wire of every pin and stored bit of an instance."""
        stored = {storage.variable: _FIRST_STORED - bit for bit, storage in enumerate(cell.storage)}
        return {**self.wiring.nets_of(instance), **stored}

    def _branch(self, cell: _Cell, following: list[_Cell]) -> None:
        names = [self._name(one) for one in following[:4]]
        more = f" and {len(following) - 4} more" if len(following) > 4 else ""
        remedy = "give --mode the constants of the scan shift, or name the --scan-outputs in place of --trace"
        self._refuse(cell, f"has several next cells: {', '.join(names)}{more}", remedy)

    def _refuse(self, cell: _Cell, because: str, remedy: str) -> None:
        place = self.wiring.netlist.instance_place(cell.instance)
        self.troubles.add(f"scan cell {self._name(cell)} {because}", remedy, place)

    def _name(self, stored: _Cell) -> str:
        cell = self.wiring.cell(stored.instance)
        bit = f"[{stored.bit}]" if cell and len(cell.storage) > 1 else ""
        return self.wiring.netlist.instance_names[stored.instance] + bit
