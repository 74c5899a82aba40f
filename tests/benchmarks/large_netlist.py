"""A generator buried in a flat chip: whole audit against a general front end that reads the file, and its memory.

    python -m tests.benchmarks.large_netlist [INSTANCES ...]

For each size (default 10,000, 100,000, 1,000,000) it draws a flat netlist on the library of the samples: a 64-bit
register with 128 three-tap channels and a scan chain through every flip-flop of the chip, the rest random logic around
random flip-flops. Audit and peer run in processes of their own, one after the other, and print wall time, CPU time
and peak memory; the ratio is of wall times. The peer is pyslang: parse, elaborate, and visit every connection.
"""

import random
import resource
import subprocess
import sys
import tempfile
import time
from collections.abc import Iterator
from pathlib import Path

SAMPLES = Path(__file__).parents[2] / "sample_netlists"
SIZES = (10_000, 100_000, 1_000_000)
STAGES = (64, 63, 61, 60)
CHANNELS = 128
FLIP_FLOP_PINS = ("CK", "RN", "D", "SI", "SE")
GATES = (("km_nand2", "AB"), ("km_nor2", "AB"), ("km_nand3", "ABC"), ("km_xor2", "AB"), ("km_inv", "A"))


def generator(rng: random.Random) -> Iterator[str]:
    """Yield the statements of the generator: register, feedback, phase shifter."""
    taps = [f"r[{stage - 1}]" for stage in STAGES]
    yield f"km_xor2 fb0 (.A({taps[0]}), .B({taps[1]}), .Y(fb[0]));"
    yield f"km_xor2 fb1 (.A({taps[2]}), .B({taps[3]}), .Y(fb[1]));"
    yield "km_xor2 fb2 (.A(fb[0]), .B(fb[1]), .Y(fb[2]));"
    for k in range(64):
        data = f"r[{k - 1}]" if k else "fb[2]"
        yield f"km_sdffc r_{k} (.CK(clk), .RN(rst_n), .D({data}), .SI(c[{k}]), .SE(se), .Q(r[{k}]));"
    for i in range(CHANNELS):
        a, b, c = (f"r[{k}]" for k in rng.sample(range(64), 3))
        yield f"km_xor2 p{i}_0 (.A({a}), .B({b}), .Y(half[{i}]));"
        yield f"km_xor2 p{i}_1 (.A(half[{i}]), .B({c}), .Y(so[{i}]));"


def chip(instances: int, rng: random.Random) -> Iterator[str]:
    """Yield the statements of the rest: a fifth flip-flops on one scan chain, four fifths gates over nearby nets."""
    cells = instances - 64 - 3 - 2 * CHANNELS
    scan = "scan_in"
    for k in range(cells):
        near = [f"c[{rng.randrange(max(0, k - 5000), k)}]" if k else "scan_in" for _ in range(3)]
        if k % 5 == 0:
            yield f"km_sdffc u{k} (.CK(clk), .RN(rst_n), .D({near[0]}), .SI({scan}), .SE(se), .Q(c[{k}]));"
            scan = f"c[{k}]"
        else:
            cell, pins = rng.choice(GATES)
            inputs = ", ".join(f".{pin}({net})" for pin, net in zip(pins, near, strict=False))
            yield f"{cell} u{k} ({inputs}, .Y(c[{k}]));"


def netlist(instances: int) -> str:
    """Return the text of a flat netlist, always the same for the same size."""
    rng = random.Random(instances)
    statements = [*generator(rng), *chip(instances, rng)]
    rng.shuffle(statements)
    head = [
        f"module chip (input clk, input rst_n, input se, input scan_in, output [{CHANNELS - 1}:0] so);",
        "wire [63:0] r; wire [2:0] fb;",
        f"wire [{CHANNELS - 1}:0] half; wire [{instances - 1}:0] c;",
    ]
    return "\n".join([*head, *statements, "endmodule", ""])


def audit(path: str) -> None:
    """Audit the netlist, as the command line does."""
    from auditor.cli import run

    words = [
        "audit",
        path,
        "--cells",
        str(SAMPLES / "kelp90.lib"),
        "--mode",
        "se=0",
        "--chain-length",
        "500",
        "--quiet",
    ]
    status = run(words)
    if status not in (0, 1):  # random taps put some channels close together, which is a finding and no failure here
        raise SystemExit(f"the audit ended with status {status}")


# The peer needs to know the ports of the cells.
STUBS = "\n".join(
    f"module {cell} ({', '.join([*(f'input {pin}' for pin in inputs), f'output {output}'])}); endmodule"
    for cell, inputs, output in [*((cell, tuple(pins), "Y") for cell, pins in GATES), ("km_sdffc", FLIP_FLOP_PINS, "Q")]
)


def peer(path: str) -> None:
    """Parse, elaborate and visit every connection with a general front end."""
    from pyslang.ast import Compilation, SymbolKind
    from pyslang.syntax import SyntaxTree

    compilation = Compilation()
    compilation.addSyntaxTree(SyntaxTree.fromFile(path))
    compilation.addSyntaxTree(SyntaxTree.fromText(STUBS))
    visited = 0
    for member in compilation.getRoot().topInstances[0].body:
        if member.kind == SymbolKind.Instance:
            for connection in member.portConnections:
                visited += connection.expression is not None
    if visited == 0:
        raise SystemExit("the peer visited nothing")


def measured(role: str, path: Path) -> tuple[float, float, float]:
    """Run one side in a process of its own; return wall seconds, CPU seconds and peak MiB."""
    before, start = resource.getrusage(resource.RUSAGE_CHILDREN), time.perf_counter()
    code = f"import resource, tests.benchmarks.large_netlist as b; b.{role}({str(path)!r}); "
    code += "print(resource.getrusage(resource.RUSAGE_SELF).ru_maxrss)"
    done = subprocess.run([sys.executable, "-c", code], check=True, capture_output=True, text=True)
    wall, after = time.perf_counter() - start, resource.getrusage(resource.RUSAGE_CHILDREN)
    cpu = after.ru_utime + after.ru_stime - before.ru_utime - before.ru_stime
    return wall, cpu, int(done.stdout.split()[-1]) / 1024


def main(sizes: tuple[int, ...]) -> None:
    """Print one line a size."""
    print("instances    audit wall/s  CPU/s   MiB   us/instance    peer wall/s  CPU/s   MiB   audit/peer")
    with tempfile.TemporaryDirectory() as folder:
        for size in sizes:
            path = Path(folder) / f"chip_{size}.v"
            path.write_text(netlist(size))
            wall, cpu, peak = measured("audit", path)
            peer_wall, peer_cpu, peer_peak = measured("peer", path)
            print(
                f"{size:>9,} {wall:15.2f} {cpu:6.2f} {peak:5.0f} {1e6 * cpu / size:13.2f} "
                f"{peer_wall:14.2f} {peer_cpu:6.2f} {peer_peak:5.0f} {wall / peer_wall:12.2f}",
                flush=True,
            )


if __name__ == "__main__":
    main(tuple(int(word.replace(",", "")) for word in sys.argv[1:]) or SIZES)
