"""A flat, bit-blasted netlist in columns: the noun of this room.

A netlist may hold a million instances, so it is kept as columns and indices; objects and their source lines
are made on demand. Nets 0 and 1 are the constants. What a cell does is not known here.
"""

from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass
from typing import NamedTuple

import numpy as np
import numpy.typing as npt

from auditor.notation import SourcePlace

Column = npt.NDArray[np.int32]

CONSTANT_0 = 0
CONSTANT_1 = 1
OPEN = -1  # in pin_net: the pin is not connected


class CellType(NamedTuple):
    """What an instance instantiates: a library cell, or a gate primitive of the language with ``inputs`` inputs.

    A primitive's pins are named ``out`` and ``in0``, ``in1`` ... in the order of the standard; primitives are
    ``and nand or nor xor xnor buf not bufif0 bufif1 notif0 notif1`` and ``mux`` (``in0 ? in1 : in2``), which
    stands for ``?:`` of a continuous assignment.
    """

    name: str
    primitive_inputs: int = 0  # 0: a library cell


class Port(NamedTuple):
    """A port of the top module; ``nets`` and ``bits`` by ascending index, ``bits`` named ``p`` or ``p[k]``."""

    name: str
    direction: str
    nets: tuple[int, ...]
    bits: tuple[str, ...]


@dataclass(frozen=True, slots=True)
class Netlist:
    """A flat netlist. Shapes: I instances, P pins in all, N nets.

    ``net_names``        (N,) one name a net, chosen among its aliases: the shortest path, then natural order
    ``net_of_name``      every hierarchical name of every net, aliases included → net
    ``instance_type``    (I,) index into ``cell_types``
    ``instance_file``, ``instance_line``   (I,) where the instance stands; ``net_file``, ``net_line`` likewise (N,)
    ``first_pin``        (I+1,) the pins of instance i are first_pin[i] .. first_pin[i+1]-1
    ``pin_name``         (P,) index into ``pin_names``
    ``pin_net``          (P,) net, or OPEN
    ``undefined``        nets that an x or z literal drives: they count as driverless
    """

    top: str
    files: tuple[str, ...]
    cell_types: tuple[CellType, ...]
    pin_names: tuple[str, ...]
    ports: tuple[Port, ...]
    net_names: Sequence[str]
    net_of_name: Mapping[str, int]
    net_file: Column
    net_line: Column
    instance_names: Sequence[str]
    instance_type: Column
    instance_file: Column
    instance_line: Column
    first_pin: Column
    pin_name: Column
    pin_net: Column
    undefined: frozenset[int] = frozenset()

    def cell_of(self, instance: int) -> CellType:
        """Return what the instance instantiates."""
        return self.cell_types[int(self.instance_type[instance])]

    def pins_of(self, instance: int) -> Iterator[tuple[str, int]]:
        """Yield the pins of an instance as (pin name, net or OPEN), in the order written."""
        first, last = self.first_pin[instance], self.first_pin[instance + 1]
        for pin in range(first, last):
            yield self.pin_names[self.pin_name[pin]], int(self.pin_net[pin])

    def instance_place(self, instance: int) -> SourcePlace:
        """Return the file and line at which the instance stands."""
        return SourcePlace(self.files[self.instance_file[instance]], int(self.instance_line[instance]))

    def net_place(self, net: int) -> SourcePlace:
        """Return the file and line at which the net is declared, or first used where it is implicit."""
        return SourcePlace(self.files[self.net_file[net]], int(self.net_line[net]))
