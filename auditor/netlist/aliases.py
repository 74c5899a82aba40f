"""Classes of nets that are one: union-find over ties, and the constants that classes are tied to."""

from collections.abc import Iterable
from typing import NamedTuple

import numpy as np
import numpy.typing as npt

from auditor.errors import TroubleList
from auditor.netlist.netlist import CONSTANT_1
from auditor.notation import SourcePlace


class Tie(NamedTuple):
    """Two nets that are one, and where the text says so."""

    first: int
    second: int
    place: SourcePlace


def classes_of(count: int, ties: Iterable[Tie], names: list[str], troubles: TroubleList) -> npt.NDArray[np.int32]:
    """Return (count,) for each net the lowest net of its class; nets 0 and 1 are the constants.

    Ties to constants come last, so that a class tied to both is noted with the two places that say so.
    """
    parent = list(range(count))

    def root(net: int) -> int:
        while parent[net] != net:
            parent[net] = net = parent[parent[net]]
        return net

    to_constants: list[Tie] = []
    for tie in ties:
        first, second = sorted(tie[:2])
        if first <= CONSTANT_1:
            to_constants.append(tie)
            continue
        first, second = sorted((root(first), root(second)))
        parent[second] = first
    said: dict[int, tuple[int, Tie]] = {}
    for tie in to_constants:
        constant, net = sorted(tie[:2])
        owner = root(net) if net > CONSTANT_1 else net
        value, before = said.setdefault(owner, (constant, tie))
        if value != constant or (net <= CONSTANT_1 and net != constant):
            troubles.add(
                f"net {names[net]} is tied to {constant} here and to {1 - constant} at {before.place}",
                "leave one of the two out",
                tie.place,
            )
    for owner, (constant, _) in said.items():
        parent[owner] = constant
    found = np.array(parent, dtype=np.int32)
    while not np.array_equal(found, higher := found[found]):
        found = higher
    return found
