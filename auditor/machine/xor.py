"""How much XOR stands between the registers and a channel, whatever gates it is made of.

An XOR node is an affine net whose function over the nearest affine nets behind it has two inputs or more; buffers
and inverters are no nodes. Paths run through pipeline registers and end at feedback registers and inputs.
"""

from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass, field
from typing import NamedTuple


class XorFigures(NamedTuple):
    """``inputs`` = Σ(inputs of a node − 1) + 1 over the nodes of the cone; ``depth`` = nodes on the longest path."""

    inputs: int
    depth: int


@dataclass(slots=True)
class XorNetwork:
    """The affine nets as a graph.

    ``behind``      affine wire → the nearest affine wires behind it
    ``next_state``  wire of a pipeline register's bit → the wire of the data it takes
    """

    behind: Mapping[int, Sequence[int]]
    next_state: Mapping[int, int]
    _depth: dict[int, int] = field(default_factory=dict)

    def node(self, wire: int) -> int:
        """Return the wire at the start of the buffers and inverters before ``wire``."""
        while len(behind := self.behind.get(wire, ())) == 1:
            wire = behind[0]
        return wire

    def figures(self, wire: int) -> XorFigures:
        """Return the figures of one channel."""
        nodes = [found for found in self._cone(wire) if len(self.behind.get(found, ())) > 1]
        return XorFigures(sum(len(self.behind[node]) - 1 for node in nodes) + 1, self._depth_of(wire))

    def fan_out(self, sinks: Iterable[int], stored: Sequence[int]) -> tuple[int, ...]:
        """Return for each stored wire the number of (node, input) pairs it reaches, in the cones of the sinks."""
        count = dict.fromkeys(stored, 0)
        seen: set[int] = set()
        for sink in sinks:
            for node in self._cone(sink, seen):
                inputs = self.behind.get(node, ())
                if len(inputs) > 1:
                    for start in map(self.node, inputs):
                        if start in count:
                            count[start] += 1
        return tuple(count[wire] for wire in stored)

    def two_input(self, sinks: Iterable[int]) -> int:
        """Return the two-input XORs in the cones of the sinks together, each counted once."""
        seen: set[int] = set()
        nodes = (node for sink in sinks for node in self._cone(sink, seen))
        return sum(max(0, len(self.behind.get(node, ())) - 1) for node in nodes)

    def _before(self, node: int) -> list[int]:
        """Return the nodes before a node; a pipeline bit leads on to what it takes."""
        wires = self.behind.get(node) or ((self.next_state[node],) if node in self.next_state else ())
        return [self.node(wire) for wire in wires]

    def _cone(self, wire: int, seen: set[int] | None = None) -> list[int]:
        """Return every node from ``wire`` back to the registers, each once."""
        seen = set() if seen is None else seen
        found, waiting = [], [self.node(wire)]
        while waiting:
            node = waiting.pop()
            if node not in seen:
                seen.add(node)
                found.append(node)
                waiting.extend(self._before(node))
        return found

    def _depth_of(self, wire: int) -> int:
        """Return the nodes on the longest path, counted once and kept."""
        stack = [self.node(wire)]
        while stack:
            node = stack[-1]
            before = self._before(node)
            missing = [other for other in before if other not in self._depth]
            if missing:
                stack.extend(missing)
                continue
            stack.pop()
            own = len(self.behind.get(node, ())) > 1
            self._depth[node] = own + max((self._depth[other] for other in before), default=0)
        return self._depth[self.node(wire)]
