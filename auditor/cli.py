"""The command line: what is asked, where text goes, and the exit status."""

import contextlib
import os
import shlex
import sys
import textwrap
import traceback
from collections.abc import Callable, Iterator, Sequence
from dataclasses import replace
from pathlib import Path
from typing import TYPE_CHECKING, TextIO, TypeVar

from auditor import __version__
from auditor.arguments import COMMAND_LINE, Request, read_arguments, read_draft_arguments
from auditor.errors import InputError, InternalError, TroubleList, fail, near_misses
from auditor.notation import SourcePlace
from auditor.plan import Options, Plan, merge
from auditor.plan_file import read_plan
from auditor.risks.waivers import check_waivers

if TYPE_CHECKING:
    from rich.console import Console

    from auditor.report.facts import AuditFacts

Result = TypeVar("Result")
WRONG_USE = 2
INTERNAL = 4
INTERRUPTED = 130
STATUS = {"pass": 0, "fail": 1, "undecided": 3}

HELP = """\
usage: auditor audit [NETLIST...] [options]
       auditor compare OLD NEW [options]
       auditor draft NETLIST... --cells F [--top M]
       auditor --version | --help

Audits an existing BIST pattern generator from its gate-level Verilog netlist: its register, every channel's
taps and phase, the separations, and the load of every flip-flop.

  auditor audit generator.v --cells library.lib --mode scan_en=0
  auditor audit --plan plan.toml --json report.json
  auditor compare old.v new.v --cells library.lib
  auditor draft generator.v --cells library.lib

auditor compare tells whether two revisions do the same, and which gates did it if not. auditor draft writes a
starter plan out of the netlist. auditor audit --help lists the options.
"""


def run(words: Sequence[str] | None = None) -> int:
    """Run the command line (default: that of the process) and return the exit status."""
    words = sys.argv[1:] if words is None else words
    _prepare_output()
    try:
        return _command(words)
    except InputError as error:
        _say(_trouble_text(error))
        return WRONG_USE
    except KeyboardInterrupt:
        _say("interrupted, no verdict\n")
        return INTERRUPTED
    except BrokenPipeError:
        _drop_output()
        return WRONG_USE
    except SystemExit as leaving:  # argparse has printed its help
        return leaving.code if isinstance(leaving.code, int) else WRONG_USE
    except Exception as error:  # whatever gets here is our own defect
        _say(_internal_text(error))
        return INTERNAL


def _command(words: Sequence[str]) -> int:
    """Carry out what the words ask for."""
    command = words[0] if words else ""
    if command == "audit":
        return _audit(read_arguments(words[1:]))
    if command == "compare":
        return _compare(words[1:])
    if command == "draft":
        return _draft(read_draft_arguments(words[1:]))
    if command == "--version":
        print(f"auditor {__version__}")
        return 0
    if command in ("--help", "-h", "help"):
        print(HELP, end="")
        return 0
    remedy = (
        near_misses(command, ["audit", "compare", "draft", "--version", "--help"])
        or "write auditor audit NETLIST..., or see --help"
    )
    raise fail(f"{command} is no command of auditor" if command else "no command is given", remedy, COMMAND_LINE)


def _audit(request: Request) -> int:
    """Audit, write the report, then show it; return the exit status."""
    plan = merge(read_plan(request.plan) if request.plan else None, request.options)
    _check(plan, request.json)
    if request.use_draft:
        from auditor.draft import with_draft  # noqa: PLC0415 - only here

        plan = with_draft(plan)
    from rich.console import Console  # noqa: PLC0415 - an error above is told without loading it

    from auditor.audit import audit_modes  # noqa: PLC0415
    from auditor.cache import cache_folder, kept_tables  # noqa: PLC0415
    from auditor.report.facts import worst  # noqa: PLC0415
    from auditor.report.json_report import json_text  # noqa: PLC0415
    from auditor.report.progress import stages  # noqa: PLC0415
    from auditor.report.terminal import print_audits  # noqa: PLC0415

    with stages(Console(stderr=True), not request.quiet and sys.stderr.isatty()) as progress:
        tables = kept_tables(cache_folder() if request.cache else None)
        audits = _or_draft(plan, lambda: audit_modes(plan, progress, tables))
        text = json_text(audits) if request.json else ""
    _put(request.json, text, request.quiet, lambda console: print_audits(audits, console))
    if not request.quiet and any(_left_open(facts) for facts in audits.values()):
        _say(f"The mode leaves the register open: {draft_command(plan)} proposes constants.\n")
    return STATUS[worst(audits)]


def _compare(words: Sequence[str]) -> int:
    """Compare two revisions, write the comparison, then show it; return the exit status."""
    from auditor.compare_arguments import HELP as COMPARE_HELP  # noqa: PLC0415 - of this command alone
    from auditor.compare_arguments import read_compare_arguments  # noqa: PLC0415

    if {"--help", "-h"} & set(words):
        print(COMPARE_HELP, end="")
        return 0
    request = read_compare_arguments(words)
    plans = [merge(read_plan(side.plan) if side.plan else None, side.options) for side in (request.old, request.new)]
    for plan in plans:
        _check(plan, request.json)
    from rich.console import Console  # noqa: PLC0415 - an error above is told without loading it

    from auditor.cache import cache_folder, kept_tables  # noqa: PLC0415
    from auditor.compare import compare_plans  # noqa: PLC0415
    from auditor.report.comparison_json import comparison_text  # noqa: PLC0415
    from auditor.report.comparison_terminal import print_comparisons  # noqa: PLC0415
    from auditor.report.progress import stages  # noqa: PLC0415

    with stages(Console(stderr=True), not request.quiet and sys.stderr.isatty()) as progress:
        tables = kept_tables(cache_folder() if request.old.cache and request.new.cache else None)
        found = compare_plans(plans[0], plans[1], progress, tables)
        text = comparison_text(found) if request.json else ""
    _put(request.json, text, request.quiet, lambda console: print_comparisons(found, console))
    return {"same": 0, "differs": 1, "undecided": 3}[found.outcome]


def _put(json: str | None, text: str, quiet: bool, show: Callable[["Console"], None]) -> None:
    """Write the JSON text where it is to go, then the screen where it is wanted."""
    from rich.console import Console  # noqa: PLC0415 - an error is told without loading it

    from auditor.report.write import write_whole  # noqa: PLC0415

    with _closed_pipe_allowed():
        if json and json != "-":
            write_whole(Path(json), text)
        elif json:
            sys.stdout.write(text)
            sys.stdout.flush()
        if not quiet:
            screen = sys.stderr if json == "-" else sys.stdout
            show(Console(file=screen, highlight=False))
            screen.flush()


def _or_draft(plan: Plan, carry_out: Callable[[], Result]) -> Result:
    """Carry the audit out; where constants of the mode would mend a trouble, its remedy names the draft command."""
    try:
        return carry_out()
    except InputError as error:
        hint = f"; {draft_command(plan)} proposes some"
        raise InputError(
            replace(trouble, remedy=trouble.remedy + hint * ("--mode" in trouble.remedy)) for trouble in error.troubles
        ) from None


def _left_open(facts: "AuditFacts") -> bool:
    """Tell whether the machine is refused and a constant of the mode would help."""
    return facts.extraction.machine is None and any(refusal.cure for refusal in facts.extraction.refusals)


def draft_command(plan: Plan) -> str:
    """Return the command that drafts a plan for the same netlist."""
    words = ["auditor", "draft", *map(str, plan.netlists)]
    words += [word for path in plan.cells for word in ("--cells", str(path))]
    words += [word for name, text in plan.defines.items() for word in ("--define", f"{name}={text}")]
    words += [word for path in plan.include for word in ("--include", str(path))]
    return shlex.join([*words, *(["--top", plan.top] if plan.top else [])])


def _draft(options: Options) -> int:
    """Write a starter plan to standard output; return the exit status."""
    from auditor.draft import draft  # noqa: PLC0415 - an error of use is told without loading it
    from auditor.drafting.text import plan_text  # noqa: PLC0415

    plan = merge(None, options)
    found = draft(plan)
    with _closed_pipe_allowed():
        sys.stdout.write(plan_text(found, [str(path) for path in plan.netlists], [str(path) for path in plan.cells]))
        sys.stdout.flush()
    return STATUS["pass" if found.proposal else "undecided"]


def _check(plan: Plan, json: str | None) -> None:
    """Refuse what can be seen to fail before the long work starts. Raises ``InputError``."""
    if not plan.netlists:
        if plan.file:
            raise fail("the plan names no netlist", "state [netlist] files", SourcePlace(str(plan.file)))
        raise fail("no netlist is given", "name a Verilog file, or give --plan F", COMMAND_LINE)
    check_waivers(plan)
    if json and json != "-":
        others = [path for path in (plan.file, plan.chain_file) if path]
        _check_target(Path(json), (*plan.netlists, *plan.cells, *others))


def _check_target(target: Path, sources: Sequence[Path]) -> None:
    """Refuse a report file that cannot be written or that would overwrite a source of the audit."""
    troubles = TroubleList()
    place = SourcePlace(str(target))
    remedy = "give --json another file"
    if target.is_dir():
        troubles.add("the report cannot be written: it is a directory", remedy, place)
    elif not target.parent.is_dir():
        troubles.add(f"the report cannot be written: there is no directory {target.parent}", "make it first", place)
    elif target.exists() and any(source.exists() and target.samefile(source) for source in sources):
        troubles.add("the report would overwrite a file that the audit reads", remedy, place)
    elif not os.access(target if target.exists() else target.parent, os.W_OK):
        troubles.add("the report cannot be written: writing there is not permitted", remedy, place)
    troubles.raise_any()


@contextlib.contextmanager
def _closed_pipe_allowed() -> Iterator[None]:
    """Let the reader of a pipe leave early, as ``| head`` does: what is left to print is dropped.

    Raises ``InputError`` where the output cannot be written for another reason, as on a full disk.
    """
    try:
        yield
    except BrokenPipeError:
        _drop_output()
    except OSError as error:
        _drop_output(sys.stdout)
        found = f"the output cannot be written: {error.strerror or error}"
        raise fail(found, "make room for it, or give --quiet") from None


def _prepare_output() -> None:
    """Make printing safe: a closed stream swallows what it gets, and what a terminal cannot show is escaped."""
    for name in ("stdout", "stderr"):
        stream = getattr(sys, name)
        if stream is None:
            setattr(sys, name, open(os.devnull, "w"))  # noqa: SIM115 - it lives as long as the process
        elif hasattr(stream, "reconfigure"):
            stream.reconfigure(errors="backslashreplace")


def _drop_output(*streams: TextIO) -> None:
    """Point streams (default: both) at nothing, so that the flush at the end of the process cannot fail again."""
    nothing = os.open(os.devnull, os.O_WRONLY)
    for stream in streams or (sys.stdout, sys.stderr):
        with contextlib.suppress(OSError, ValueError):  # a stream of a test has no descriptor
            os.dup2(nothing, stream.fileno())
    os.close(nothing)


def _say(text: str) -> None:
    """Print a message to standard error; there is nobody left to tell if that fails."""
    try:
        sys.stderr.write(text)
        sys.stderr.flush()
    except BrokenPipeError:
        _drop_output()


def _trouble_text(error: InputError) -> str:
    """Return one block a trouble (place and what was found, then the remedy), and their number if several."""
    blocks = []
    for trouble in error.troubles:
        place = f"{trouble.place}: " if trouble.place else ""
        blocks.append(f"error: {_plain(place + trouble.found)}\n  remedy: {_plain(trouble.remedy)}\n")
    if len(blocks) > 1:
        blocks.append(f"{len(blocks)} errors, no verdict\n")
    return "".join(blocks)


def _internal_text(error: Exception) -> str:
    """Return the message on a defect of our own; with AUDITOR_TRACEBACK=1 it carries the traceback."""
    what = textwrap.shorten(_plain(f"{type(error).__name__}: {error}"), 500)
    frames = traceback.extract_tb(error.__traceback__)
    where = f" ({Path(frames[-1].filename).name}:{frames[-1].lineno})" if frames else ""
    trace = "".join(traceback.format_exception(error)) if os.environ.get("AUDITOR_TRACEBACK") == "1" else ""
    contradiction = "the auditor contradicts itself" if isinstance(error, InternalError) else "the auditor broke"
    return (
        f"{trace}internal error: {contradiction}, no verdict: {what}{where}\n"
        "  This is a defect of auditor, not of your files. Please send this message, the command line,\n"
        f"  version {__version__}, and what AUDITOR_TRACEBACK=1 adds to the message.\n"
    )


def _plain(text: str) -> str:
    """Return the text without control codes, which a hostile name could carry; further lines are indented."""
    lines = ("".join(char if char.isprintable() else "?" for char in line) for line in text.split("\n"))
    return "\n".join(line and "  " * (number > 0) + line for number, line in enumerate(lines)).rstrip()
