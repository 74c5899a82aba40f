"""Style and types are part of the tests."""

import re
import subprocess
import sys
from pathlib import Path

import pytest

from auditor.risks.levels import KINDS

ROOT = Path(__file__).parents[1]
TOP_LEVEL = {"pyproject.toml", "README.md", "DEVELOPERS.md", "auditor", "tests", "sample_netlists", "reports"}


@pytest.mark.parametrize(
    "command",
    [("ruff", "check", "."), ("ruff", "format", "--check", "."), ("mypy", "--no-incremental")],
    ids=["ruff-check", "ruff-format", "mypy"],
)
def test_tools_find_nothing(command: tuple[str, ...]) -> None:
    """The linter, the formatter and the type checker are content."""
    done = subprocess.run([sys.executable, "-m", *command], cwd=ROOT, capture_output=True, text=True, check=False)
    assert done.returncode == 0, done.stdout + done.stderr


def test_the_top_level_is_as_agreed() -> None:
    """Beside dot-files and what tools leave behind, only the agreed names stand at the top."""
    listed = subprocess.run(["git", "ls-files"], cwd=ROOT, capture_output=True, text=True, check=False).stdout
    names = {line.split("/")[0] for line in listed.splitlines()} or TOP_LEVEL
    assert {name for name in names if not name.startswith(".")} <= TOP_LEVEL


def test_every_finding_is_explained_in_the_readme() -> None:
    """The findings of README and code are the same, with the same default levels."""
    readme = (ROOT / "README.md").read_text(encoding="utf-8")
    listed = dict(re.findall(r"^\| `([a-z-]+)` \| (note|warning|error) \|", readme, re.MULTILINE))
    assert listed == {slug: kind.level for slug, kind in KINDS.items()}


def test_every_test_states_its_claim() -> None:
    """Each test function has a docstring of at least one sentence."""
    import ast

    for path in sorted((ROOT / "tests").rglob("test_*.py")):
        for node in ast.walk(ast.parse(path.read_text(encoding="utf-8"))):
            if isinstance(node, ast.FunctionDef) and node.name.startswith("test_"):
                claim = ast.get_docstring(node)
                assert claim, f"{path.name}: {node.name} claims nothing"
                assert claim.rstrip().endswith("."), f"{path.name}: {node.name}"
