"""How long an audit takes, stage by stage, and how it compares with general-purpose peers in the same run.

    python -m tests.benchmarks.audit_speed

Draws a register of 127 flip-flops with 300 three-tap channels on a published cell library where one is found beside
the repository, else on the library of the samples; then a register of 71 flip-flops.
Times are CPU seconds. Exit status 1 if the first audit takes more than ``BUDGET`` besides the leads.
"""

import random
import resource
import sys
import tempfile
import time
from dataclasses import dataclass
from itertools import pairwise
from pathlib import Path

from auditor.audit import audit
from auditor.plan import Plan
from auditor.report.facts import AuditFacts
from tests.support.machines import bits_of

BUDGET = 5.0
ROOT = Path(__file__).parents[2]


@dataclass(frozen=True)
class Library:
    """A cell library and how its flip-flop and its XOR are connected."""

    path: Path
    flip_flop: str
    xor: str


LIBRARIES = (
    Library(
        ROOT.parent / "shared" / "cells" / "sky130hd_tt.lib.gz",
        "sky130_fd_sc_hd__dfrtp_1 {name} (.CLK(ck), .RESET_B(rn), .D({d}), .Q({q}));",
        "sky130_fd_sc_hd__xor2_1 {name} (.A({a}), .B({b}), .X({y}));",
    ),
    Library(
        ROOT / "sample_netlists" / "kelp90.lib",
        "km_dffc {name} (.CK(ck), .RN(rn), .D({d}), .Q({q}));",
        "km_xor2 {name} (.A({a}), .B({b}), .Y({y}));",
    ),
)


def generator(library: Library, stages: tuple[int, ...], channels: int) -> str:
    """Return the netlist of a register that adds two ``stages``, with ``channels`` channels of three taps."""
    size, rng = stages[0], random.Random(127)
    lines = [f"module generator (input ck, input rn, output [{channels - 1}:0] so);"]
    lines += [f"  wire [{size - 1}:0] q;", "  wire feedback;", f"  wire [{channels - 1}:0] half;"]
    for k in range(size):
        data = f"q[{k - 1}]" if k else "feedback"
        lines.append("  " + library.flip_flop.format(name=f"ff_{k}", d=data, q=f"q[{k}]"))
    first, second = (f"q[{stage - 1}]" for stage in stages)
    lines.append("  " + library.xor.format(name="x_feedback", a=first, b=second, y="feedback"))
    for i in range(channels):
        a, b, c = (f"q[{k}]" for k in rng.sample(range(size), 3))
        lines.append("  " + library.xor.format(name=f"x_{i}_0", a=a, b=b, y=f"half[{i}]"))
        lines.append("  " + library.xor.format(name=f"x_{i}_1", a=f"half[{i}]", b=c, y=f"so[{i}]"))
    return "\n".join([*lines, "endmodule", ""])


def timed_audit(plan: Plan) -> tuple[AuditFacts, dict[str, float]]:
    """Audit and return the CPU seconds of each stage, in order."""
    marks: list[tuple[str, float]] = []
    facts = audit(plan, lambda name: marks.append((name, time.process_time())))
    marks.append(("end", time.process_time()))
    seconds: dict[str, float] = {}
    for (name, start), (_, end) in pairwise(marks):
        stage = name.partition(":")[0]
        seconds[stage] = seconds.get(stage, 0.0) + end - start
    return facts, seconds


def print_stages(title: str, seconds: dict[str, float]) -> None:
    total = sum(seconds.values())
    print(f"\n{title}: {total:.2f} s of CPU")
    for name, spent in seconds.items():
        print(f"  {name:<24} {spent:8.3f} s {100 * spent / total:5.1f} %")


def peer_parse(text: str) -> float | None:
    """Return the CPU seconds in which a general Verilog front end reads the text, or None without it."""
    try:
        from pyslang.syntax import SyntaxTree
    except ImportError:
        return None
    start = time.process_time()
    SyntaxTree.fromText(text)
    return time.process_time() - start


def peer_logarithm(polynomial: int, power: int) -> float | None:
    """Return the CPU seconds of one logarithm in GF(2)[x]/(polynomial) by a computer-algebra system, or None."""
    try:
        from cypari import pari
    except ImportError:
        return None
    field = "+".join(f"x^{k}" for k in bits_of(polynomial))
    pari(f"g = ffgen(Mod(1,2)*({field}), 'x)")
    pari(f"h = g^{power}")
    start = time.process_time()
    found = int(pari("fflog(h, g)"))
    spent = time.process_time() - start
    if found != power:
        raise ValueError(f"the peer found {found} for {power}")
    return spent


def ratio(label: str, peer: float | None, ours: float) -> None:
    if peer is None:
        print(f"  {label}: the peer is not installed")
    elif ours > 0 and peer > 0:
        print(f"  {label}: peer {peer:.4f} s, ours {ours:.4f} s, ratio {peer / ours:.2f}")


def main() -> int:
    """Run both blocks and return the exit status."""
    library = next(one for one in LIBRARIES if one.path.exists())
    print(f"library {library.path.name}")
    with tempfile.TemporaryDirectory() as folder:
        netlist = Path(folder) / "generator.v"
        text = generator(library, (127, 126), 300)
        netlist.write_text(text)
        plan = Plan(netlists=(netlist,), cells=(library.path,), chain_length=500)
        _, seconds = timed_audit(plan)
        print_stages("127 flip-flops, 300 channels", seconds)
        peak = resource.getrusage(resource.RUSAGE_SELF).ru_maxrss / 1024
        print(f"  peak memory {peak:.0f} MiB")
        ratio("reading the netlist", peer_parse(text), seconds["netlist"])
        besides = sum(spent for name, spent in seconds.items() if "lead" not in name)

        netlist.write_text(generator(library, (71, 65), 300))
        facts, exact = timed_audit(plan)
        print_stages("71 flip-flops, 300 channels", exact)
        assert facts.phases is not None
        leads = [phase.lead for phase in facts.phases.phases]
        assert None not in leads
        polynomial = facts.phases.registers[0].characteristic_polynomial
        solving = sum(spent for name, spent in exact.items() if name == "phases" or "lead" in name)
        ratio("one logarithm", peer_logarithm(polynomial, leads[-1] or 1), solving / len(leads))
    kept = besides <= BUDGET
    print(f"\n{besides:.2f} s besides the leads; the budget of {BUDGET:.0f} s is {'kept' if kept else 'missed'}")
    return 0 if kept else 1


if __name__ == "__main__":
    sys.exit(main())
