"""Remakes ``reports/`` from the plans of ``sample_netlists/``: ``python -m tests.remake_reports``.

Each sample gives a JSON report and the screen as a pipe gets it.
"""

import io
from collections.abc import Iterator
from contextlib import chdir
from pathlib import Path

from rich.console import Console

from auditor.audit import audit_modes
from auditor.plan_file import read_plan
from auditor.report.json_report import json_text
from auditor.report.terminal import print_audits

ROOT = Path(__file__).parents[1]
SAMPLES = Path("sample_netlists")


def reports() -> Iterator[tuple[str, str]]:
    """Yield (file name, text) of every report; paths in them are relative to the clone."""
    with chdir(ROOT):
        for plan in sorted(SAMPLES.glob("*.toml")):
            audits = audit_modes(read_plan(plan))
            screen = io.StringIO()
            print_audits(audits, Console(file=screen))
            yield f"{plan.stem}.json", json_text(audits)
            yield f"{plan.stem}.txt", screen.getvalue()


if __name__ == "__main__":
    for name, text in reports():
        (ROOT / "reports" / name).write_text(text, encoding="utf-8", newline="\n")
        print(f"reports/{name}")
