"""A drawn circuit under test simulated by brute force: every state of a small register, every setting of scan cells.

It shares no code with the auditor: the instances are read from the drawing's plain text, the cells are written out
here, and the chains are filled by shifting. A value is an int with a bit a case.
"""

import re
from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass, field

_INSTANCE = re.compile(r"^\s*(km_\w+) (\w+) \((.*)\);$")
_PIN = re.compile(r"\.(\w+)\(([^)]*)\)")
_ASSIGN = re.compile(r"^\s*assign (\S+) = (\S+);$")

Values = Mapping[str, int]

CELLS: dict[str, Callable[[Values, int], int]] = {
    "km_inv": lambda p, m: m ^ p["A"],
    "km_buf": lambda p, _: p["A"],
    "km_nand2": lambda p, m: m ^ (p["A"] & p["B"]),
    "km_nand3": lambda p, m: m ^ (p["A"] & p["B"] & p["C"]),
    "km_nor2": lambda p, m: m ^ (p["A"] | p["B"]),
    "km_xor2": lambda p, _: p["A"] ^ p["B"],
    "km_xnor2": lambda p, m: m ^ p["A"] ^ p["B"],
    "km_aoi21": lambda p, m: m ^ ((p["A1"] & p["A2"]) | p["B"]),
    "km_oai21": lambda p, m: m ^ ((p["A1"] | p["A2"]) & p["B"]),
    "km_aoi22": lambda p, m: m ^ ((p["A1"] & p["A2"]) | (p["B1"] & p["B2"])),
    "km_mux2": lambda p, m: (p["D0"] & (m ^ p["S"])) | (p["D1"] & p["S"]),
}


@dataclass
class Chip:
    """A drawn chip: gates as (cell, pins), scan cells, stages of the register, names that are one net."""

    gates: dict[str, tuple[str, dict[str, str]]] = field(default_factory=dict)
    scan: dict[str, dict[str, str]] = field(default_factory=dict)
    stages: dict[str, dict[str, str]] = field(default_factory=dict)
    same: dict[str, str] = field(default_factory=dict)

    def values(self, sources: Values, nets: Sequence[str], mask: int) -> dict[str, int]:
        """Return the values of nets from those of the sources."""
        known, stack = dict(sources), list(nets)
        while stack:
            net = stack[-1]
            if net in known:
                stack.pop()
            elif net in self.same:
                if self.same[net] in known:
                    known[net] = known[self.same[net]]
                else:
                    stack.append(self.same[net])
            else:
                cell, pins = self.gates[net]
                if missing := [other for pin, other in pins.items() if pin != "Y" and other not in known]:
                    stack += missing
                else:
                    known[net] = CELLS[cell]({pin: known[o] for pin, o in pins.items() if pin != "Y"}, mask)
        return {net: known[net] for net in nets}


def read(text: str) -> Chip:
    """Return the chip of a drawing."""
    chip = Chip()
    for line in text.splitlines():
        if found := _ASSIGN.match(line):
            chip.same[found[1]] = found[2]
        elif found := _INSTANCE.match(line):
            cell, name, pins = found[1], found[2], dict(_PIN.findall(found[3]))
            if cell == "km_sdffc":
                chip.scan[name] = pins
            elif "dff" in cell:
                chip.stages[name] = pins
            else:
                chip.gates[pins["Y"]] = cell, pins
    return chip


def loads(chip: Chip, shifts: int, size: int) -> dict[str, int]:
    """Return the value on every scan cell's output after shifting, bit s from the state s of the register.

    Bit k of a state is the k-th stage in the order drawn. All of 2^size states are there, the lock-up among them.
    """
    mask = (1 << (1 << size)) - 1
    values = {pins["Q"]: sum((state >> k & 1) << state for state in range(1 << size)) for k, pins in
              enumerate(chip.stages.values())}  # fmt: skip
    values |= {pins["Q"]: 0 for pins in chip.scan.values()}
    for _ in range(shifts):
        taken = [(pins["Q"], pins["D"]) for pins in chip.stages.values()]
        taken += [(pins["Q"], pins["SI"]) for pins in chip.scan.values()]
        data = chip.values(values, [net for _, net in taken], mask)
        values = {q: data[net] for q, net in taken}
    return {pins["Q"]: values[pins["Q"]] for pins in chip.scan.values()}


def column(k: int, count: int) -> int:
    """Return the value whose bit s is bit k of s, for s below 2^count."""
    return sum(1 << s for s in range(1 << count) if s >> k & 1)


def spread(value: int, cases: int, times: int) -> int:
    """Return a value of so many cases, repeated."""
    return sum(value << cases * k for k in range(times))
