"""Generated circuits under test, mapped to the cells of the samples, behind a generator with scan chains.

A circuit is made of blocks that read scan cells and feed the next states of others: ripple adders, comparators, word
multiplexers, decoders, incrementers, parity trees and layers of random gates. Sizes and choices come from one seed.
"""

import random
from collections.abc import Callable, Sequence

TWO_INPUTS = ("km_nand2", "km_nor2", "km_xor2", "km_xnor2")


class Drawing:
    """Instances as text; nets are numbered as they are made."""

    def __init__(self, rng: random.Random) -> None:
        self.rng = rng
        self.lines: list[str] = []
        self.nets = 0

    def gate(self, cell: str, **pins: str) -> str:
        """Draw an instance and return the net on its output."""
        net = f"n{self.nets}"
        self.nets += 1
        connections = ", ".join(f".{pin}({other})" for pin, other in pins.items())
        self.lines.append(f"  {cell} u{self.nets} ({connections}, .Y({net}));")
        return net

    def two(self, cell: str, a: str, b: str) -> str:
        return self.gate(cell, A=a, B=b)

    def inverse(self, a: str) -> str:
        return self.gate("km_inv", A=a)

    def conjunction(self, nets: Sequence[str]) -> str:
        """Return AND of nets, as a tree of NAND and NOR."""
        level, inverted = list(nets), False
        while len(level) > 1:
            cell = "km_nor2" if inverted else "km_nand2"
            pairs = [self.two(cell, a, b) for a, b in zip(level[::2], level[1::2], strict=False)]
            level = pairs + ([self.inverse(level[-1])] if len(level) % 2 else [])
            inverted = not inverted
        return self.inverse(level[0]) if inverted else level[0]


def adder(d: Drawing, a: Sequence[str], b: Sequence[str]) -> list[str]:
    """Return the sum with its carry: a ripple adder of NAND cells."""
    sums, carry = [], d.two("km_nor2", a[0], d.inverse(a[0]))
    for x, y in zip(a, b, strict=True):
        half = d.two("km_xor2", x, y)
        sums.append(d.two("km_xor2", half, carry))
        carry = d.two("km_nand2", d.two("km_nand2", x, y), d.two("km_nand2", half, carry))
    return [*sums, carry]


def comparator(d: Drawing, a: Sequence[str], b: Sequence[str]) -> list[str]:
    """Return whether the words are equal, and what that lets through of them."""
    equal = d.conjunction([d.two("km_xnor2", x, y) for x, y in zip(a, b, strict=True)])
    return [equal, *(d.gate("km_mux2", D0=x, D1=y, S=equal) for x, y in zip(a, b, strict=True))]


def incrementer(d: Drawing, a: Sequence[str], _: Sequence[str]) -> list[str]:
    """Return the word plus one."""
    bits, carry = [d.inverse(a[0])], a[0]
    for x in a[1:]:
        bits.append(d.two("km_xor2", x, carry))
        carry = d.inverse(d.two("km_nand2", x, carry))
    return [*bits, carry]


def decoder(d: Drawing, a: Sequence[str], b: Sequence[str]) -> list[str]:
    """Return some lines of a decoder of the first word, each of which gates a bit of the second."""
    lines = []
    for bit in b:
        code = [x if d.rng.random() < 0.5 else d.inverse(x) for x in a]
        lines.append(d.gate("km_aoi21", A1=d.conjunction(code), A2=bit, B=d.rng.choice(b)))
    return lines


def parity(d: Drawing, a: Sequence[str], b: Sequence[str]) -> list[str]:
    """Return parities of growing parts of both words."""
    total, sums = a[0], []
    for x in (*a[1:], *b):
        total = d.two("km_xor2", total, x)
        sums.append(total)
    return sums[:: max(1, len(sums) // len(a))]


def random_gates(d: Drawing, a: Sequence[str], b: Sequence[str]) -> list[str]:
    """Return the last of some layers of random gates over both words."""
    layer = [*a, *b]
    for _ in range(d.rng.randint(3, 8)):
        layer = [_random_gate(d, layer) for _ in layer]
    return layer


def _random_gate(d: Drawing, nets: Sequence[str]) -> str:
    a, b, c, e = (d.rng.choice(nets) for _ in range(4))
    kind = d.rng.randrange(9)
    if kind == 0:
        return d.gate("km_mux2", D0=a, D1=b, S=c)
    if kind == 1:
        return d.gate("km_aoi21", A1=a, A2=b, B=c)
    if kind == 2:
        return d.gate("km_oai21", A1=a, A2=b, B=c)
    if kind == 3:
        return d.gate("km_aoi22", A1=a, A2=b, B1=c, B2=e)
    if kind == 4:
        return d.gate("km_nand3", A=a, B=b, C=c)
    return d.two(d.rng.choice(TWO_INPUTS), a, b)


BLOCKS: tuple[Callable[[Drawing, Sequence[str], Sequence[str]], list[str]], ...] = (
    adder, comparator, incrementer, decoder, parity, random_gates, random_gates,
)  # fmt: skip


def generator(stages: Sequence[int], channels: Sequence[Sequence[int]]) -> list[str]:
    """Return the lines of a register, which sums ``stages`` (from 1 on) into stage 1, and of its XOR network."""
    lines, size = [], max(stages)
    total = f"x[{stages[0] - 1}]"
    for number, stage in enumerate(stages[1:]):
        lines.append(f"  km_xor2 uf{number} (.A({total}), .B(x[{stage - 1}]), .Y(f{number}));")
        total = f"f{number}"
    for k in range(size):
        cell, pin = ("km_dffs", "SN") if k == 0 else ("km_dffc", "RN")
        lines.append(
            f"  {cell} stage_{k + 1} (.CK(clk), .{pin}(rst_n), .D({f'x[{k - 1}]' if k else total}), .Q(x[{k}]));"
        )
    for number, taps in enumerate(channels):
        total = f"x[{taps[0]}]"
        for place, tap in enumerate(taps[1:]):
            lines.append(f"  km_xor2 us{number}_{place} (.A({total}), .B(x[{tap}]), .Y(s{number}_{place}));")
            total = f"s{number}_{place}"
        lines.append(f"  assign si[{number}] = {total};")
    return lines


def chip(
    stages: Sequence[int],
    channels: Sequence[Sequence[int]],
    length: int,
    gates: int,
    seed: int,
    inputs: int = 0,
    outputs: int = 0,
    widths: tuple[int, int] = (4, 16),
) -> str:
    """Return a module ``chip``: generator, a chain of ``length`` scan cells a channel, a circuit of about ``gates``.

    Chain i has the cells ``c<i>_<j>``, j from 1 at the scan input; ``si[i]`` feeds it while ``scan_en`` is 1. The
    circuit has input ports ``in`` and output ports ``po``; blocks read words of ``widths`` bits.
    """
    rng = random.Random(seed)
    drawing = Drawing(rng)
    cells = [(i, j) for i in range(len(channels)) for j in range(1, length + 1)]
    sources = [f"q{i}_{j}" for i, j in cells] + [f"in[{k}]" for k in range(inputs)]
    results: list[str] = []
    while len(drawing.lines) < gates:
        width = rng.randint(*widths)
        words = [_word(rng, sources, width) for _ in range(2)]
        results += rng.choice(BLOCKS)(drawing, *words)
    rng.shuffle(results)
    ports = ["input clk", "input rst_n", "input scan_en", f"output [{len(channels) - 1}:0] so"]
    ports += [f"input [{inputs - 1}:0] in"] if inputs else []
    ports += [f"output [{outputs - 1}:0] po"] if outputs else []
    lines = [f"module chip ({', '.join(ports)});"]
    lines += [f"  wire [{max(stages) - 1}:0] x;", f"  wire [{len(channels) - 1}:0] si;"]
    lines += generator(stages, channels)
    for number, (i, j) in enumerate(cells):
        before = f"q{i}_{j - 1}" if j > 1 else f"si[{i}]"
        lines.append(
            f"  km_sdffc c{i}_{j} (.CK(clk), .RN(rst_n), .D({results[number % len(results)]}), .SI({before}), "
            f".SE(scan_en), .Q(q{i}_{j}));"
        )
    lines += drawing.lines
    lines += [f"  assign so[{i}] = q{i}_{length};" for i in range(len(channels))]
    lines += [f"  assign po[{k}] = {results[(len(cells) + k) % len(results)]};" for k in range(outputs)]
    return "\n".join([*lines, "endmodule", ""])


def _word(rng: random.Random, sources: Sequence[str], width: int) -> list[str]:
    """Return some neighbours in a chain, as a register of the circuit is scanned, or scattered cells."""
    if rng.random() < 0.7:
        start = rng.randrange(len(sources) - width)
        return list(sources[start : start + width])
    return rng.sample(sources, width)
