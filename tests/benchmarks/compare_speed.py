"""How long a comparison takes beside the two audits that it needs.

    python -m tests.benchmarks.compare_speed

Two revisions of a register of 127 flip-flops with 1,000 channels, one tap of one channel moved. Times are CPU seconds.
Exit status 1 if both audits and the comparison take more than ``BUDGET`` times the audits.
"""

import sys
import tempfile
import time
from pathlib import Path

from auditor.audit import audit
from auditor.compare import compare
from auditor.plan import Plan
from tests.benchmarks.audit_speed import LIBRARIES, generator

BUDGET = 1.2
CHANNELS = 1000


def moved(text: str) -> str:
    """Return the netlist with the last tap of the middle channel read from another stage."""
    start = text.index(f" x_{CHANNELS // 2}_1 ")
    end = text.index(";", start)
    statement = text[start:end]
    stage = statement[statement.index("q[") :].split("]")[0] + "]"
    other = "q[3]" if stage != "q[3]" else "q[5]"
    return text[:start] + statement.replace(stage, other) + text[end:]


def main() -> int:
    """Measure and return the exit status."""
    library = next(one for one in LIBRARIES if one.path.exists())
    text = generator(library, (127, 126), CHANNELS)
    with tempfile.TemporaryDirectory() as folder:
        sides, spent = [], 0.0
        for name, netlist in (("old", text), ("new", moved(text))):
            path = Path(folder) / f"{name}.v"
            path.write_text(netlist)
            start = time.process_time()
            sides.append(audit(Plan(netlists=(path,), cells=(library.path,))))
            spent += time.process_time() - start
        start = time.process_time()
        found = compare(*sides)
        comparing = time.process_time() - start
        start = time.process_time()
        same = compare(sides[0], sides[0])
        comparing_same = time.process_time() - start
    changed = [change.new for change in found.channels if change.status != "same"]
    print(f"library {library.path.name}, 127 flip-flops, {CHANNELS} channels")
    print(f"  both audits            {spent:8.2f} s")
    print(f"  comparison, one tap    {comparing:8.2f} s, {found.name}: {', '.join(map(str, changed))}")
    print(f"  comparison, no change  {comparing_same:8.2f} s, {same.name}")
    ratio = (spent + comparing) / spent
    print(f"\n{ratio:.3f} times the audits; the budget of {BUDGET} is {'kept' if ratio <= BUDGET else 'missed'}")
    return 0 if ratio <= BUDGET else 1


if __name__ == "__main__":
    sys.exit(main())
