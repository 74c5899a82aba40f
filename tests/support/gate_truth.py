"""An independent simulator of the mapped netlists that tests make: from the printed text, with a cell table of its own.

It shares no code with auditor and none with the makers: what it reads is the Verilog, one statement at a time.
"""

import re
from dataclasses import dataclass

_STATEMENT = re.compile(r"(km_\w+)\s+(\w+)\s*\(([^;]*)\);")
_PIN = re.compile(r"\.(\w+)\(([^)]*)\)")
_WIDTH = re.compile(r"output \[(\d+):0\] so")

GATES = {
    "km_inv": lambda p: 1 - p["A"],
    "km_buf": lambda p: p["A"],
    "km_nand2": lambda p: 1 - (p["A"] & p["B"]),
    "km_nand3": lambda p: 1 - (p["A"] & p["B"] & p["C"]),
    "km_nor2": lambda p: 1 - (p["A"] | p["B"]),
    "km_aoi21": lambda p: 1 - (p["A1"] & p["A2"] | p["B"]),
    "km_aoi22": lambda p: 1 - (p["A1"] & p["A2"] | p["B1"] & p["B2"]),
    "km_oai21": lambda p: 1 - ((p["A1"] | p["A2"]) & p["B"]),
    "km_xor2": lambda p: p["A"] ^ p["B"],
    "km_xnor2": lambda p: 1 - (p["A"] ^ p["B"]),
    "km_mux2": lambda p: p["D1"] if p["S"] else p["D0"],
}
RESETS = {"km_dffc": 0, "km_dffec": 0, "km_dffs": 1}


@dataclass
class _Cell:
    kind: str
    name: str
    pins: dict[str, str]


def streams(text: str, cycles: int) -> list[tuple[int, ...]]:
    """Return what the channels show in every cycle from reset, ``en`` at 1."""
    cells = [_Cell(kind, name, dict(_PIN.findall(pins))) for kind, name, pins in _STATEMENT.findall(text)]
    channels = int(_WIDTH.findall(text)[0]) + 1
    order = _in_order([cell for cell in cells if cell.kind in GATES])
    stored = [cell for cell in cells if cell.kind not in GATES]
    state = {cell.name: RESETS[cell.kind] for cell in stored}
    late = {cell.name for cell in stored if _inverted_clock(cell.pins["CK"], order)}
    shown = []
    for _ in range(cycles):
        values = _settle(order, stored, state)
        shown.append(tuple(values[f"so[{i}]"] for i in range(channels)))
        for half in (False, True):
            if half:
                values = _settle(order, stored, state)
            state = state | {
                cell.name: _taken(cell, values, state[cell.name]) for cell in stored if (cell.name in late) == half
            }
    return shown


def _in_order(gates: list[_Cell]) -> list[_Cell]:
    drivers = {gate.pins["Y"]: gate for gate in gates}
    order: list[_Cell] = []
    done: set[str] = set()
    for gate in gates:
        stack = [gate]
        while stack:
            top = stack[-1]
            waiting = [drivers[n] for p, n in top.pins.items() if p != "Y" and n in drivers and n not in done]
            if waiting:
                stack += waiting
                assert len(stack) <= 10 * len(gates) + 10, "a loop of gates"
                continue
            stack.pop()
            if top.pins["Y"] not in done:
                done.add(top.pins["Y"])
                order.append(top)
    return order


def _inverted_clock(net: str, gates: list[_Cell]) -> bool:
    drivers = {gate.pins["Y"]: gate for gate in gates}
    inverted = False
    while net != "ck":
        assert drivers[net].kind in ("km_inv", "km_buf")
        inverted ^= drivers[net].kind == "km_inv"
        net = drivers[net].pins["A"]
    return inverted


def _settle(order: list[_Cell], stored: list[_Cell], state: dict[str, int]) -> dict[str, int]:
    values = {"ck": 0, "rn": 1, "en": 1, "1'b0": 0, "1'b1": 1}
    for cell in stored:
        for pin in ("Q", "QN"):
            if pin in cell.pins:
                values[cell.pins[pin]] = state[cell.name] ^ (pin == "QN")
    for gate in order:
        values[gate.pins["Y"]] = GATES[gate.kind]({p: values[n] for p, n in gate.pins.items() if p != "Y"})
    return values


def _taken(cell: _Cell, values: dict[str, int], held: int) -> int:
    return values[cell.pins["D"]] if "EN" not in cell.pins or values[cell.pins["EN"]] else held
