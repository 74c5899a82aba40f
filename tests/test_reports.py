"""The reports in ``reports/`` are those that the samples give today."""

import json
from typing import Any

from tests.remake_reports import ROOT, SAMPLES, reports


def without_environment(text: str) -> Any:
    """Return a JSON report without the versions it was made with, which comparisons ignore."""
    report = json.loads(text)
    del report["environment"], report["tool"]
    return report


def test_reports_are_those_of_today() -> None:
    """Every report, remade from its sample, is the one that stands in the folder, and there are no others."""
    made = dict(reports())
    for name, text in made.items():
        kept = (ROOT / "reports" / name).read_text(encoding="utf-8")
        if name.endswith(".json"):
            assert without_environment(kept) == without_environment(text), name
        else:
            assert kept == text, name
    samples = {path.stem for path in (ROOT / SAMPLES).glob("*.toml")}
    assert set(made) == {f"{name}.{suffix}" for name in samples for suffix in ("json", "txt")}
