"""Tables that are kept: found again, and never believed when they are wrong."""

import json
import os
import stat
from dataclasses import replace
from pathlib import Path
from typing import Any

import pytest

from auditor.cache import cache_folder, kept_tables
from auditor.cli import run
from auditor.gf2.calculus.factor_base import FactorBase
from auditor.gf2.calculus.table import make_factor_base
from auditor.gf2.calculus.work import Work
from auditor.gf2.effort import Effort
from auditor.gf2.logarithm import logarithms
from auditor.gf2.polynomial import power_modulo
from tests.benchmarks.audit_speed import LIBRARIES, generator

N, MODULUS = 49, 4432676798593  # 2^49 - 1 = 127 x 4432676798593
NAME = f"factor-base-{N}"


class Maker:
    """Makes tables and counts them."""

    def __init__(self) -> None:
        self.made = 0

    def __call__(self, n: int, modulus: int, work: Work) -> FactorBase:
        self.made += 1
        return make_factor_base(n, modulus, work)


@pytest.fixture(scope="module")
def right() -> FactorBase:
    """Return the table of degree 49."""
    return make_factor_base(N, MODULUS, Work())


def ask(folder: Path | None, made: int) -> FactorBase:
    """Return the table from a new source, which must have made so many."""
    maker = Maker()
    base = kept_tables(folder, maker)(N, MODULUS, Work())
    assert maker.made == made
    return base


def test_a_table_is_made_once(tmp_path: Path, right: FactorBase) -> None:
    """The second source reads what the first wrote, for this user alone, and leaves nothing else behind."""
    folder = tmp_path / "deep" / "auditor"
    assert ask(folder, made=1) == right
    assert ask(folder, made=0) == right
    assert [path.name for path in folder.iterdir()] == [NAME]
    assert stat.S_IMODE((folder / NAME).stat().st_mode) == 0o600
    assert stat.S_IMODE(folder.stat().st_mode) == 0o700


def test_one_source_remembers(right: FactorBase) -> None:
    """Without a folder a table is kept in memory."""
    maker = Maker()
    tables = kept_tables(None, maker)
    assert tables(N, MODULUS, Work()) is tables(N, MODULUS, Work())
    assert tables(N, MODULUS, Work()) == right
    assert maker.made == 1


def _damaged(data: bytes) -> dict[str, bytes]:
    middle = len(data) // 2
    return {
        "empty": b"",
        "truncated": data[:-1],
        "longer": data + b"\0",
        "flipped": data[:middle] + bytes([data[middle] ^ 1]) + data[middle + 1 :],
        "zeros": bytes(len(data)),
        "other version": data.replace(b"version 1", b"version 2"),
        "other degree": data.replace(b"degree 49", b"degree 48"),
    }


@pytest.mark.parametrize("damage", _damaged(b"." * 99))
def test_a_damaged_file_is_remade(tmp_path: Path, right: FactorBase, damage: str) -> None:
    """Whatever happened to the file, the table is right and the file is whole again."""
    ask(tmp_path, made=1)
    path = tmp_path / NAME
    whole = path.read_bytes()
    path.write_bytes(_damaged(whole)[damage])
    assert path.read_bytes() != whole
    assert ask(tmp_path, made=1) == right
    assert path.read_bytes() == whole


@pytest.mark.parametrize("place", [0, 5, -1])
def test_a_well_formed_file_with_a_wrong_logarithm_is_remade(tmp_path: Path, right: FactorBase, place: int) -> None:
    """A source that kept a wrong table, digest and all, is found out by the next one's check by exponentiation."""
    logs = list(right.logs)
    place = [k for k, log in enumerate(logs) if log is not None][place]
    logs[place] = ((logs[place] or 0) + 1) % MODULUS
    wrong = replace(right, logs=tuple(logs))
    assert kept_tables(tmp_path, lambda *_: wrong)(N, MODULUS, Work()) == wrong
    assert ask(tmp_path, made=1) == right
    assert ask(tmp_path, made=0) == right


def test_a_folder_of_no_use_is_no_trouble(tmp_path: Path, right: FactorBase) -> None:
    """A file in place of the folder, a folder in place of the file, a name with a null, a pipe."""
    (tmp_path / "file").write_text("", encoding="ascii")
    (tmp_path / "taken" / NAME).mkdir(parents=True)
    (tmp_path / "pipe").mkdir()
    os.mkfifo(tmp_path / "pipe" / NAME)
    for folder in ("file/below", "taken", "a\0b"):
        assert ask(tmp_path / folder, made=1) == right
    assert ask(tmp_path / "pipe", made=1) == right
    assert [path.name for path in (tmp_path / "taken").iterdir()] == [NAME]


def test_a_limit_on_work_knows_no_kept_tables(tmp_path: Path) -> None:
    """What a limit leaves undecided is the same with and without a kept table."""
    f = 1 << N | 1 << 9 | 1  # primitive (Zierler and Brillhart 1968)
    values = [power_modulo(2, 12345, f)]
    maker = Maker()
    tables = kept_tables(tmp_path, maker)
    for _ in range(2):
        assert logarithms(values, f, effort=Effort(work_limit=1000, tables=tables)).modulus == 127
        assert logarithms(values, f, effort=Effort(tables=tables)).values == (12345,)
    assert maker.made == 3


def test_where_the_folder_is(monkeypatch: pytest.MonkeyPatch, tmp_path: Path) -> None:
    """XDG_CACHE_HOME where it is absolute, else the home, else none."""
    monkeypatch.setenv("HOME", str(tmp_path))
    monkeypatch.setenv("XDG_CACHE_HOME", str(tmp_path / "x"))
    assert cache_folder() == tmp_path / "x" / "auditor"
    for relative in ("", "x/y"):
        monkeypatch.setenv("XDG_CACHE_HOME", relative)
        assert cache_folder() == tmp_path / ".cache" / "auditor"

    def homeless() -> Path:
        raise RuntimeError("no home")

    monkeypatch.setattr(Path, "home", homeless)
    assert cache_folder() is None


def test_the_command_line_keeps_tables_unless_told_not_to(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str]
) -> None:
    """A register of 65 stages: the same report cold, with a kept table, without a cache; a limit leaves leads out."""
    netlist = tmp_path / "g.v"
    netlist.write_text(generator(LIBRARIES[-1], (65, 47), 5), encoding="ascii")
    monkeypatch.setenv("XDG_CACHE_HOME", str(tmp_path / "cache"))

    def report(*options: str) -> dict[str, Any]:
        run(["audit", str(netlist), "--cells", str(LIBRARIES[-1].path), "--quiet", "--json", "-", *options])
        found: dict[str, Any] = json.loads(capsys.readouterr().out)
        return found

    bare = report("--no-cache")
    assert not (tmp_path / "cache").exists()
    assert {channel["lead_kind"] for channel in bare["channels"]} == {"exact"}
    assert report() == bare
    assert [path.name for path in (tmp_path / "cache" / "auditor").iterdir()] == ["factor-base-65"]
    assert report() == bare
    limited = report("--work-limit", "5000")
    assert [channel["lead_kind"] for channel in limited["channels"]] == ["exact", *["undecided"] * 4]
    assert limited["channels"][1]["no_lead_because"] == "the limit on work is reached"
    assert (limited["asked"]["work_limit"], report("--time-limit", "60")["asked"]["time_limit"]) == ("5000", 60)
