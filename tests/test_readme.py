"""What README shows and promises is what the tool does."""

import io
import re
from contextlib import chdir
from pathlib import Path

from rich.console import Console

from auditor.audit import audit_modes
from auditor.cells.read import read_cells
from auditor.compare import compare_plans
from auditor.plan import Plan
from auditor.plan_file import read_plan
from auditor.report.comparison_terminal import print_comparisons
from auditor.report.terminal import print_audits

ROOT = Path(__file__).parents[1]
README = (ROOT / "README.md").read_text(encoding="utf-8")


def blocks(language: str) -> list[str]:
    """Return the code blocks of a language, their margin cut off."""
    found = re.findall(rf"^( *)```{language}\n(.*?)^ *```$", README, re.MULTILINE | re.DOTALL)
    return [re.sub(rf"^{margin}", "", body, flags=re.MULTILINE) for margin, body in found]


def test_the_screen_is_a_real_one() -> None:
    """Every line of the screen in README is a line of the report on that sample, in the same order."""
    screen = io.StringIO()
    with chdir(ROOT):
        audits = audit_modes(read_plan(Path("sample_netlists/enabled_blocks.toml")))
    console = Console(file=screen, width=118, force_terminal=True, color_system=None, highlight=False)
    print_audits(audits, console)
    real = iter([line.rstrip() for line in screen.getvalue().splitlines()])
    shown = next(block for block in blocks("text") if block.startswith("Verdict"))
    for line in shown.splitlines():
        assert line == "  …" or line in real, f"not in the report, or not in this order: {line}"


def test_the_comparison_is_a_real_one() -> None:
    """The comparison in README is, line by line, the one that the tool prints on those two samples."""
    screen = io.StringIO()
    with chdir(ROOT):
        plans = [
            Plan(netlists=(Path(f"sample_netlists/{name}.v"),), cells=(Path("sample_netlists/kelp90.lib"),))
            for name in ("phase_shifter", "revisions/moved_tap")
        ]
        found = compare_plans(*plans)
    console = Console(file=screen, width=118, force_terminal=True, color_system=None, highlight=False)
    print_comparisons(found, console)
    shown = next(block for block in blocks("text") if block.startswith("Outcome"))
    assert [line.rstrip() for line in screen.getvalue().splitlines()] == shown.splitlines()


def test_the_plan_is_read(tmp_path: Path) -> None:
    """The plan in README is one that the reader takes, every key of it."""
    (text,) = [block for block in blocks("toml") if block.startswith("[netlist]")]
    path = tmp_path / "plan.toml"
    path.write_text(text, encoding="utf-8")
    plan = read_plan(path)
    assert plan.chain_length == 200
    assert plan.patterns is not None
    assert plan.patterns.clocks_per_pattern == 200
    assert [waiver.slug for waiver in plan.waivers] == ["single-tap-channel"]


def test_the_named_modes_are_read(tmp_path: Path) -> None:
    """The modes in README are those of a plan that names several."""
    (text,) = [block for block in blocks("toml") if block.startswith("[mode.")]
    path = tmp_path / "plan.toml"
    path.write_text(text, encoding="utf-8")
    assert read_plan(path).modes == {"calm": {"storm": 0}, "storm": {"storm": 1}}


def test_the_cell_table_is_read(tmp_path: Path) -> None:
    """The cell table in README gives a gate and a flip-flop."""
    (text,) = [block for block in blocks("toml") if "[cell.odd_ff]" in block]
    path = tmp_path / "cells.toml"
    path.write_text(text, encoding="utf-8")
    cells = read_cells((path,)).cells
    assert set(cells) == {"odd_nand", "odd_ff"}
    assert cells["odd_ff"].storage[0].kind == "flip-flop"
