"""A generator as it lies in a chip: scan path, seed load, chains, logic, response compactor, counter, reset tree."""

import random
from dataclasses import dataclass

from tests.support.machines import Machine, fibonacci, row_of


@dataclass(frozen=True)
class Buried:
    """A chip's text and its truth: the register's machine with a channel for each chain, and the nets of those."""

    text: str
    machine: Machine
    channels: tuple[str, ...]


def bury(seed: int, chains: int = 6, length: int = 12, logic: int = 150, ring: bool = False) -> Buried:
    """Draw the chip over ``gates.lib``; with ``ring`` the scan path through the register starts at a chain's end."""
    rng, lines = random.Random(seed), list[str]()
    register = fibonacci((16, 15, 13, 4), 16)

    def gate(cell: str, **pins: str) -> str:
        net = f"n{len(lines)}"
        joined = ", ".join(f".{pin}({wire})" for pin, wire in pins.items())
        lines.append(f"  wire {net}; {cell} u{len(lines)} ({joined}, .Y({net}));")
        return net

    def flip_flop(net: str, data: str, **scan: str) -> None:
        cell, pins = (
            ("ff_scan_clear", ", ".join(f".{p}({w})" for p, w in scan.items()) + ", ") if scan else ("ff_clear", "")
        )
        lines.append(f"  wire {net}; {cell} {net}_ff (.CK(clk), .RN(clean_n), {pins}.D({data}), .Q({net}));")

    lines.append("  wire first, clean_n;")
    lines.append("  ff_clear r0_ff (.CK(clk), .RN(rst_n), .D(1'b1), .Q(first));")
    lines.append("  ff_clear r1_ff (.CK(clk), .RN(rst_n), .D(first), .Q(clean_n));")
    stages = [f"g{k}" for k in range(16)]
    before = f"s{chains - 1}_{length - 1}" if ring else "scan_in"
    sums = gate("xor2", A="g15", B="g14"), gate("xor2", A="g12", B="g3")
    data = [gate("xor2", A=sums[0], B=sums[1]), *stages[:-1]]
    for k, stage in enumerate(stages):
        loaded = gate("mux2", A=data[k], B=f"seed{k}", S="load")
        flip_flop(stage, loaded, SE="scan_en", SI=before)
        flip_flop(f"seed{k}", f"seed{k - 1}" if k else "seed_in")
        before = stage
    cells = [[f"s{c}_{k}" for k in range(length)] for c in range(chains)]
    pool = [cell for chain in cells for cell in chain]
    for _ in range(logic):
        a, b = rng.sample(pool[-300:], 2)
        pool.append(gate(rng.choice(("nand2", "nor2", "xor2")), A=a, B=b))
    taps, channels = [sorted(rng.sample(range(16), 3)) for _ in cells], []
    for chain, (a, b, c) in zip(cells, taps, strict=True):
        shift = gate("xor2", A=gate("xor2", A=stages[a], B=stages[b]), B=stages[c])
        channels.append(shift)
        for cell in chain:
            flip_flop(cell, rng.choice(pool), SE="scan_en", SI=shift)
            shift = cell
    for k in range(8):
        mixed = gate("xor2", A=f"m{(k - 1) % 8}", B=cells[k % chains][-1])
        flip_flop(f"m{k}", gate("xor2", A=mixed, B="m7") if k in (2, 3, 4) else mixed)
    carry = "run"
    for k in range(5):
        flip_flop(f"count{k}", gate("xor2", A=f"count{k}", B=carry))
        carry = gate("and2", A=carry, B=f"count{k}")
    flip_flop("load", carry)
    ports = "input clk, input rst_n, input run, input scan_en, input scan_in, input seed_in, output signature"
    # Declarations first: a net may be read above the line that drives it.
    wires = sorted({word for line in lines for word in _declared(line)})
    body = [line.split("; ", 1)[1] if line.startswith("  wire ") and "(" in line else line for line in lines]
    declared = "".join(f"  wire {wire};\n" for wire in wires)
    body = [f"  {line.strip()}" for line in body if "(" in line]
    text = f"module chip ({ports});\n{declared}" + "\n".join(body) + "\n  assign signature = m7;\nendmodule\n"
    return Buried(text, Machine(register.rows, tuple(map(row_of, taps))), tuple(channels))


def _declared(line: str) -> list[str]:
    """Return the names that a line declares."""
    return line.strip().removeprefix("wire ").split(";")[0].split(", ") if line.startswith("  wire ") else []
