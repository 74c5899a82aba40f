"""The command line: exit statuses, where text goes, and the words of wrong use. The audit itself is a stand-in here."""

import json
import os
import subprocess
import sys
from collections.abc import Callable
from dataclasses import replace
from pathlib import Path
from types import SimpleNamespace

import pytest

from auditor import cli
from auditor.errors import InputError, InternalError, Trouble
from auditor.notation import SourcePlace
from auditor.plan import Limits, Plan
from auditor.report.facts import AuditFacts
from auditor.risks.finding import Finding, Level
from auditor.risks.verdict import verdict
from tests.support.facts import small_facts

Audit = Callable[..., AuditFacts]


@pytest.fixture
def use(monkeypatch: pytest.MonkeyPatch) -> Callable[[Audit], None]:
    """Return a function that puts a stand-in in place of the audit."""

    def put(audit: Audit) -> None:
        monkeypatch.setitem(
            sys.modules,
            "auditor.audit",
            SimpleNamespace(audit_modes=lambda plan, progress, _tables: {"": audit(plan, progress)}),
        )

    return put


def facts_with(*levels: Level, undecided: bool = False, waived: str | None = None) -> AuditFacts:
    """Return a small audit with one finding of each level given."""
    findings = tuple(Finding("free-input", level, ("a",), "It is open.", waived=waived) for level in levels)
    return replace(small_facts(), findings=findings, undecided=("Open.",) if undecided else ())


def raises(error: BaseException) -> Audit:
    """Return an audit that ends with this error."""

    def audit(plan: Plan, progress: object) -> AuditFacts:
        del plan, progress
        raise error

    return audit


def gives(facts: AuditFacts, seen: list[Plan] | None = None) -> Audit:
    """Return an audit that gives these facts and notes its plan in ``seen``."""

    def audit(plan: Plan, progress: object) -> AuditFacts:
        del progress
        if seen is not None:
            seen.append(plan)
        return replace(facts, verdict=verdict(facts.findings, facts.undecided, plan.fail_at))

    return audit


def errors_of(words: list[str], capsys: pytest.CaptureFixture[str]) -> str:
    """Return what a call of wrong use prints; it must end with status 2 and print nothing else."""
    assert cli.run(words) == 2
    out, err = capsys.readouterr()
    assert out == ""
    assert "Traceback" not in err
    return err


@pytest.mark.parametrize(
    ("facts", "fail_at", "status"),
    [
        (facts_with(), "note", 0),
        (facts_with("note", "warning"), "error", 0),
        (facts_with("note", "warning"), "warning", 1),
        (facts_with("note"), "note", 1),
        (facts_with("error"), "error", 1),
        (facts_with("error", undecided=True), "error", 1),
        (facts_with("warning", undecided=True), "error", 3),
        (facts_with(undecided=True), "error", 3),
        (facts_with("error", waived="known"), "note", 0),
        (facts_with("error", waived="known", undecided=True), "note", 3),
    ],
)
def test_exit_status_takes_the_first_that_applies(facts: AuditFacts, fail_at: str, status: int) -> None:
    """A finding that counts gives 1 before an open question gives 3; a waived finding counts never."""
    assert cli.STATUS[verdict(facts.findings, facts.undecided, fail_at)] == status


def test_an_audit_prints_the_screen_and_returns_its_status(
    use: Callable[[Audit], None], capsys: pytest.CaptureFixture[str]
) -> None:
    """The report goes to standard output and the option --fail-at reaches the status."""
    use(gives(facts_with("warning")))
    assert cli.run(["audit", "a.v"]) == 0
    out, err = capsys.readouterr()
    assert "free-input" in out
    assert err == ""
    assert cli.run(["audit", "a.v", "--fail-at", "warning"]) == 1


def test_the_plan_and_the_options_reach_the_audit(use: Callable[[Audit], None], tmp_path: Path) -> None:
    """Every option arrives in the plan that the audit is given, over what the plan file says."""
    seen: list[Plan] = []
    use(gives(facts_with(), seen))
    (tmp_path / "p.toml").write_text(
        '[netlist]\nfiles = ["a.v"]\ntop = "t"\n[mode]\nb = 0\nc = 1\n[limits]\ntaps = 4\n'
    )
    words = "--cells x.lib --cells y.lib --mode b=1 --mode u1.n[3]=0 --channels so --channels z* --reference so[0]"
    more = "--chain-length 100 --limit depth=3 --limit fan_out=9 --work-limit 5000 --quiet --top old --top new"
    assert cli.run(["audit", "--plan", str(tmp_path / "p.toml"), *words.split(), *more.split()]) == 0
    assert seen == [
        Plan(
            netlists=(tmp_path / "a.v",),
            cells=(Path("x.lib"), Path("y.lib")),
            top="new",
            mode={"b": 1, "c": 1, "u1.n[3]": 0},
            channels=("so", "z*"),
            reference="so[0]",
            chain_length=100,
            limits=Limits(fan_out=9, taps=4, depth=3),
            work_limit=5000,
            file=tmp_path / "p.toml",
        )
    ]


def test_netlists_may_stand_between_options(use: Callable[[Audit], None]) -> None:
    """Netlists are taken wherever they stand; after -- a name may begin with a dash."""
    seen: list[Plan] = []
    use(gives(facts_with(), seen))
    cli.run(["audit", "a.v", "--quiet", "b.v", "--top", "t", "--", "-c.v"])
    assert seen[0].netlists == (Path("a.v"), Path("b.v"), Path("-c.v"))


def test_quiet_prints_nothing(use: Callable[[Audit], None], capsys: pytest.CaptureFixture[str]) -> None:
    """With --quiet the exit status is all that is said."""
    use(gives(facts_with("error")))
    assert cli.run(["audit", "a.v", "--quiet"]) == 1
    assert capsys.readouterr() == ("", "")


def test_json_on_standard_output_moves_the_screen(
    use: Callable[[Audit], None], capsys: pytest.CaptureFixture[str]
) -> None:
    """With --json - standard output holds the JSON and nothing else."""
    use(gives(facts_with("error")))
    assert cli.run(["audit", "a.v", "--json", "-"]) == 1
    out, err = capsys.readouterr()
    assert json.loads(out)["findings"][0]["slug"] == "free-input"
    assert "free-input" in err


def test_json_is_written_to_its_file(use: Callable[[Audit], None], tmp_path: Path) -> None:
    """The report is written beside the screen, in place of an older one."""
    target = tmp_path / "report.json"
    target.write_text("old")
    use(gives(facts_with()))
    assert cli.run(["audit", "a.v", "--json", str(target)]) == 0
    assert json.loads(target.read_text())["findings"] == []


@pytest.mark.parametrize("error", [InputError([Trouble("a", "b")]), InternalError("x"), KeyboardInterrupt()])
def test_a_run_that_ends_early_leaves_the_old_report(
    error: BaseException, use: Callable[[Audit], None], tmp_path: Path
) -> None:
    """Without a verdict the report's file is not touched and nothing lies beside it."""
    target = tmp_path / "report.json"
    target.write_text("old")
    use(raises(error))
    assert cli.run(["audit", "a.v", "--json", str(target)]) in (2, 4, 130)
    assert target.read_text() == "old"
    assert os.listdir(tmp_path) == ["report.json"]


def test_a_report_that_cannot_be_written_stops_before_the_work(
    use: Callable[[Audit], None], tmp_path: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    """A directory, a missing directory and a source of the audit are refused before the audit starts."""
    use(raises(AssertionError("the audit must not start")))
    source = tmp_path / "a.v"
    source.write_text("module a; endmodule")
    for target, message in (
        (tmp_path, f"{tmp_path}: the report cannot be written: it is a directory\n  remedy: give --json another file"),
        (
            tmp_path / "no" / "r.json",
            f"{tmp_path}/no/r.json: the report cannot be written: there is no directory {tmp_path}/no\n"
            "  remedy: make it first",
        ),
        (
            source,
            f"{source}: the report would overwrite a file that the audit reads\n  remedy: give --json another file",
        ),
    ):
        assert errors_of(["audit", str(source), "--json", str(target)], capsys) == f"error: {message}\n"
    assert source.read_text() == "module a; endmodule"


def test_troubles_are_printed_one_block_each(use: Callable[[Audit], None], capsys: pytest.CaptureFixture[str]) -> None:
    """Each trouble says place, what was found and the remedy; several are counted."""
    place = SourcePlace("a.v", 3)
    use(raises(InputError([Trouble("net n has two drivers: u1.Y, u2.Y", "remove one", place), Trouble("b", "c")])))
    assert errors_of(["audit", "a.v"], capsys) == (
        "error: b\n  remedy: c\n"
        "error: a.v:3: net n has two drivers: u1.Y, u2.Y\n  remedy: remove one\n"
        "2 errors, no verdict\n"
    )


def test_control_codes_and_markup_of_names_are_harmless(
    use: Callable[[Audit], None], capsys: pytest.CaptureFixture[str]
) -> None:
    """An escape code in a name does not reach the terminal, markup is shown as it stands, a stub keeps its lines."""
    use(raises(InputError([Trouble("net [bold]\x1b[2Jx[/]\x9b is driverless", 'add\n[cells.A]\npin = "Y"')])))
    assert errors_of(["audit", "a.v"], capsys) == (
        'error: net [bold]?[2Jx[/]? is driverless\n  remedy: add\n  [cells.A]\n  pin = "Y"\n'
    )


NUMBER = "give a whole number from 1 to 999999999999999999"
ONE_OR_THE_OTHER = "write --mode NET=0 or --mode NET=1"
NO_OPTION = "is no option of auditor audit"


@pytest.mark.parametrize(
    ("words", "found", "remedy"),
    [
        ([], "no command is given", "write auditor audit NETLIST..., or see --help"),
        (["audti"], "audti is no command of auditor", "did you mean audit?"),
        (["a.v"], "a.v is no command of auditor", "write auditor audit NETLIST..., or see --help"),
        (["audit"], "no netlist is given", "name a Verilog file, or give --plan F"),
        (["audit", "a.v", "--chanels", "x"], f"--chanels {NO_OPTION}",
         "did you mean --channels or --chains or --cones?"),
        (["audit", "a.v", "--html=x"], f"--html=x {NO_OPTION}", "see auditor audit --help"),
        (["audit", "a.v", "--top"], "--top has no value", "give it one, or leave it out"),
        (["audit", "a.v", "--top", ""], "--top is empty", "give it a value, or leave it out"),
        (["audit", ""], "the name of a netlist is empty", "give it a value, or leave it out"),
        (["audit", "a.v", "--mode", "x=2"], "--mode x=2 does not hold a net at 0 or 1", ONE_OR_THE_OTHER),
        (["audit", "a.v", "--capture", "x"], "--capture x does not hold a net at 0 or 1",
         "write --capture NET=0 or --capture NET=1"),
        (["audit", "a.v", "--mode", "x=0", "--mode", "x=1"], "--mode holds x at 0 and at 1", "keep one of the two"),
        (["audit", "a.v", "--limit", "fanout=2"], "--limit fanout=2 names no limit", "did you mean fan_out?"),
        (["audit", "a.v", "--limit", "q"], "--limit q names no limit",
         "use one of separation, fan_out, taps, depth, as in --limit fan_out=16"),
        (["audit", "a.v", "--limit", "taps=x"], "--limit taps is x", NUMBER),
        (["audit", "a.v", "--chain-length", "0"], "--chain-length is 0", "give a whole number from 1 to 10000000"),
        (["audit", "a.v", "--work-limit", "1e3"], "--work-limit is 1e3", NUMBER),
        (["audit", "a.v", "--fail-at", "erorr"], "--fail-at erorr is no level", "did you mean error?"),
    ],
)  # fmt: skip
def test_wrong_use_is_explained(words: list[str], found: str, remedy: str, capsys: pytest.CaptureFixture[str]) -> None:
    """Wrong use ends with status 2 and one message that says what to write instead."""
    assert errors_of(words, capsys) == f"error: command line: {found}\n  remedy: {remedy}\n"


def test_all_wrong_words_are_reported_together(capsys: pytest.CaptureFixture[str]) -> None:
    """The troubles of one command line come in one go."""
    message = errors_of(["audit", "--mode", "x", "--limit", "y", "--fail-at", "z", "--nonsense"], capsys)
    assert message.count("error: command line:") == 4
    assert message.endswith("4 errors, no verdict\n")


def test_a_waiver_of_an_unknown_finding_is_refused(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    """A waiver with a mistyped slug would silence nothing, so it is an error with a near miss."""
    plan = tmp_path / "p.toml"
    plan.write_text('[netlist]\nfiles = ["a.v"]\n[[waivers]]\nslug = "free-inputs"\nwhere = ["a"]\nreason = "r"\n')
    assert errors_of(["audit", "--plan", str(plan)], capsys) == (
        f"error: {plan}: a waiver names the finding free-inputs, which does not exist\n"
        "  remedy: did you mean free-input?\n"
    )


def test_a_plan_without_netlist_is_refused(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    """A plan that names no netlist says so with the plan's name."""
    plan = tmp_path / "p.toml"
    plan.write_text("[chains]\nlength = 3\n")
    assert errors_of(["audit", "--plan", str(plan)], capsys) == (
        f"error: {plan}: the plan names no netlist\n  remedy: state [netlist] files\n"
    )


def test_a_defect_of_our_own_is_told_as_such(
    use: Callable[[Audit], None], capsys: pytest.CaptureFixture[str], monkeypatch: pytest.MonkeyPatch
) -> None:
    """An internal error gives status 4, no verdict, what to send, and a traceback only where asked for."""
    monkeypatch.delenv("AUDITOR_TRACEBACK", raising=False)
    use(raises(InternalError("the replay differs in q[3]")))
    assert cli.run(["audit", "a.v"]) == 4
    out, err = capsys.readouterr()
    assert out == ""
    assert err.startswith(
        "internal error: the auditor contradicts itself, no verdict: InternalError: the replay differs"
    )
    assert "This is a defect of auditor, not of your files. Please send this message" in err
    assert "Traceback" not in err
    use(raises(ZeroDivisionError("x")))
    monkeypatch.setenv("AUDITOR_TRACEBACK", "1")
    assert cli.run(["audit", "a.v"]) == 4
    err = capsys.readouterr().err
    assert err.startswith("Traceback")
    assert "internal error: the auditor broke, no verdict: ZeroDivisionError: x" in err
    monkeypatch.delenv("AUDITOR_TRACEBACK")
    use(raises(ValueError("y" * 10_000)))
    assert cli.run(["audit", "a.v"]) == 4
    assert len(capsys.readouterr().err) < 1000


def test_an_interrupt_takes_one_line(use: Callable[[Audit], None], capsys: pytest.CaptureFixture[str]) -> None:
    """Ctrl-C ends with 130 and one line."""
    use(raises(KeyboardInterrupt()))
    assert cli.run(["audit", "a.v"]) == 130
    assert capsys.readouterr() == ("", "interrupted, no verdict\n")


def test_help_and_version(capsys: pytest.CaptureFixture[str]) -> None:
    """Help names every option that there is and none that there is not; the version is one line."""
    assert cli.run(["--version"]) == 0
    assert capsys.readouterr().out.startswith("auditor ")
    assert cli.run(["--help"]) == 0
    assert "auditor audit" in capsys.readouterr().out
    assert cli.run(["audit", "--help"]) == 0
    out = capsys.readouterr().out
    for option in ("--plan", "--cells", "--top", "--mode", "--channels", "--reference", "--chain-length", "--limit",
                   "--fail-at", "--work-limit", "--json", "--quiet", "--capture"):  # fmt: skip
        assert option in out
    for later in ("--html", "--sarif", "--old"):
        assert later not in out


def test_errors_come_without_the_heavy_libraries() -> None:
    """The version and the errors of the command line load neither numpy nor rich nor networkx."""
    code = (
        "import sys; from auditor import cli; cli.run(['--version']); cli.run(['audit', '--top']);"
        "print({'numpy', 'rich', 'networkx', 'dd', 'pyverilog'} & set(sys.modules))"
    )
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True, env=_environment())
    assert done.stdout.splitlines()[-1] == "set()"


def test_a_closed_pipe_is_no_trouble() -> None:
    """A reader that leaves early gets the status of the verdict and no message."""
    code = (
        "import sys, types; from tests.support.facts import small_facts; from auditor import cli;"
        "sys.modules['auditor.audit'] = types.SimpleNamespace(audit_modes=lambda *_: {'': small_facts()});"
        "sys.stdin.readline(); sys.exit(cli.run(['audit', 'a.v']))"
    )
    reading, writing = os.pipe()
    process = subprocess.Popen(
        [sys.executable, "-c", code], stdin=subprocess.PIPE, stdout=writing, stderr=subprocess.PIPE, env=_environment()
    )
    os.close(writing)
    os.close(reading)
    assert process.communicate(b"go\n")[1] == b""
    assert process.returncode == 1


@pytest.mark.skipif(not Path("/dev/full").exists(), reason="there is no device that is always full")
def test_a_full_disk_behind_the_screen_is_told() -> None:
    """Output that cannot be written is no defect of ours: status 2 and one message."""
    code = (
        "import sys, types; from tests.support.facts import small_facts; from auditor import cli;"
        "sys.modules['auditor.audit'] = types.SimpleNamespace(audit_modes=lambda *_: {'': small_facts()});"
        "sys.exit(cli.run(['audit', 'a.v']))"
    )
    with open("/dev/full", "w") as full:
        done = subprocess.run(
            [sys.executable, "-c", code],
            stdout=full,
            stderr=subprocess.PIPE,
            text=True,
            check=False,
            env=_environment(),
        )
    assert done.returncode == 2
    assert done.stderr == (
        "error: the output cannot be written: No space left on device\n  remedy: make room for it, or give --quiet\n"
    )


@pytest.mark.parametrize(
    ("plan", "words", "status", "verdict"),
    [
        ("phase_shifter.toml", [], 0, "pass"),
        ("phase_shifter.toml", ["--limit", "taps=2", "--fail-at", "warning"], 1, "fail"),
        ("plain_register.toml", [], 1, "fail"),
        ("completed_cycle.toml", [], 1, "fail"),
    ],
)
def test_real_audits_end_with_the_status_of_their_verdict(
    plan: str, words: list[str], status: int, verdict: str, capsys: pytest.CaptureFixture[str]
) -> None:
    """From a sample's plan to the exit status, with all stages: the JSON on standard output says the same."""
    path = Path(__file__).parents[1] / "sample_netlists" / plan
    assert cli.run(["audit", "--plan", str(path), "--json", "-", "--quiet", *words]) == status
    out, err = capsys.readouterr()
    assert json.loads(out)["verdict"] == verdict
    assert err == ""


def test_the_package_runs_as_a_module() -> None:
    """``python -m auditor`` is the command."""
    done = subprocess.run(
        [sys.executable, "-m", "auditor", "audit"], capture_output=True, text=True, check=False, env=_environment()
    )
    assert (done.returncode, done.stdout) == (2, "")
    assert done.stderr.startswith("error: command line: no netlist is given")


def _environment() -> dict[str, str]:
    """Return an environment in which a new process finds the package and the tests of this clone."""
    return {**os.environ, "PYTHONPATH": str(Path(__file__).parents[1])}
