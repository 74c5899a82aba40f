"""Reads the words of the command line into options; all that is wrong with them is reported together."""

import argparse
import re
from collections.abc import Sequence
from dataclasses import dataclass
from pathlib import Path
from typing import NoReturn

from auditor.errors import TroubleList, fail, near_misses
from auditor.notation import SourcePlace
from auditor.plan import BEYOND, LEAST_LIMIT, LONGEST_CHAIN, MACRO, Options

COMMAND_LINE = SourcePlace("command line")
FAIL_AT = ("note", "warning", "error")

_NO_VALUE = re.compile(r"argument (--[\w-]+): expected one argument")


@dataclass(frozen=True, slots=True)
class Request:
    """One call of ``auditor audit``: what to audit and where the text goes; ``json`` may be ``-``.

    ``cache``  whether tables may be kept in the user's cache directory
    """

    options: Options
    plan: Path | None
    json: str | None
    quiet: bool
    use_draft: bool
    cache: bool


class _Parser(argparse.ArgumentParser):
    """An argument parser that reports wrong use as every other trouble."""

    def error(self, message: str) -> NoReturn:
        if without := _NO_VALUE.match(message):
            raise fail(f"{without[1]} has no value", "give it one, or leave it out", COMMAND_LINE)
        raise fail(message, f"see {self.prog} --help", COMMAND_LINE)


def audit_parser() -> argparse.ArgumentParser:
    """Return the parser of ``auditor audit``."""
    parser = _Parser(
        prog="auditor audit",
        description="Audit a pattern generator from its gate-level netlist.",
        epilog="An option overrides the plan. Exit status: 0 pass, 1 a finding at or above --fail-at, 2 wrong use or "
        "unusable input, 3 a question is undecided, 4 internal error.",
        allow_abbrev=False,
    )
    add = parser.add_argument
    add("netlists", nargs="*", metavar="NETLIST", help="Verilog file, plain or gz")
    add("--plan", metavar="F", help="the reviewer's plan, a TOML file")
    add("--cells", action="append", default=[], metavar="F", help="cell library or cell table; may be repeated")
    add("--top", metavar="M", help="top module")
    _add_macros(parser)
    add(
        "--mode",
        action="append",
        default=[],
        metavar="NET=0|1",
        help="hold a port or net in every mode; may be repeated",
    )
    add(
        "--channels",
        action="append",
        default=[],
        metavar="NAME",
        help="channel: a net, vector or pattern; may be repeated (default: all output ports of the top)",
    )
    add("--reference", metavar="NAME", help="channel against which leads are counted")
    add("--chain-length", metavar="N", help="scan cells of every chain")
    add("--chains", metavar="F", help="the chains: a CSV file of channel,length or channel,cell,delay,inverted")
    add(
        "--scan-outputs",
        action="append",
        default=[],
        metavar="NAME",
        help="trace the chains back from these nets; may be repeated",
    )
    add("--trace", metavar="forward", help="trace the chains from the channels on")
    add(
        "--capture",
        action="append",
        default=[],
        metavar="NET=0|1",
        help="hold a port or net in capture, and look at the circuit under test; may be repeated",
    )
    add("--relations", metavar="3|4", help="search sets of up to so many scan cells whose sum never changes")
    add("--cones", metavar="F", help="cones to be ranked: a CSV file of net,cell, one line for each scan cell")
    names = ", ".join(LEAST_LIMIT)
    add("--limit", action="append", default=[], metavar="NAME=N", help=f"bound on {names}; may be repeated")
    add("--fail-at", metavar="LEVEL", help="note, warning or error (default error): findings that fail the audit")
    work = "bound on the nodes of one proof, and on the tests for the leads of one field; what takes more is undecided"
    add("--work-limit", metavar="N", help=work)
    add("--time-limit", metavar="S", help="leads not begun after so many seconds are undecided (default: no limit)")
    add("--no-cache", action="store_true", help="neither read nor keep tables in the user's cache directory")
    add("--json", metavar="F", help="write the report as JSON; - is standard output, the screen then goes to stderr")
    add("--use-draft", action="store_true", help="guess the mode and channels left open; the verdict is then undecided")
    add("--quiet", action="store_true", help="show neither the report nor progress on the screen")
    return parser


def _add_macros(parser: argparse.ArgumentParser) -> None:
    """Add the options that the directives of a netlist ask for."""
    macro, folder = "macro of the netlist and of cell models", "folder in which included files are looked for"
    parser.add_argument("--define", action="append", default=[], metavar="NAME=VALUE", help=f"{macro}; may be repeated")
    parser.add_argument("--include", action="append", default=[], metavar="DIR", help=f"{folder}; may be repeated")


def read_arguments(words: Sequence[str]) -> Request:
    """Return what the words after ``auditor audit`` ask for. Raises ``InputError``."""
    troubles = TroubleList()
    given = _parse(audit_parser(), words, troubles)
    told = [_option(name) for name in ("chain_length", "chains", "scan_outputs", "trace") if getattr(given, name)]
    if len(told) > 1:
        troubles.add(f"the chains are told by {' and by '.join(told)}", "keep one of them", COMMAND_LINE)
    if given.trace and given.trace != "forward":
        remedy = "write --trace forward, or name the nets at which the chains end by --scan-outputs"
        troubles.add(f"--trace {given.trace} is no way to trace the chains", remedy, COMMAND_LINE)
    if given.fail_at and given.fail_at not in FAIL_AT:
        remedy = near_misses(given.fail_at, FAIL_AT) or "write note, warning or error"
        troubles.add(f"--fail-at {given.fail_at} is no level", remedy, COMMAND_LINE)
    request = Request(
        options=Options(
            netlists=tuple(map(Path, given.netlists)),
            cells=tuple(map(Path, given.cells)),
            top=given.top,
            mode=_read_mode("--mode", given.mode, troubles),
            capture=_read_mode("--capture", given.capture, troubles) if given.capture else None,
            channels=tuple(given.channels),
            reference=given.reference,
            chain_length=_read_number("--chain-length", given.chain_length, 1, troubles, LONGEST_CHAIN),
            chain_file=Path(given.chains) if given.chains else None,
            scan_outputs=tuple(given.scan_outputs),
            trace_forward=bool(given.trace),
            relations=_read_number("--relations", given.relations, 3, troubles, 4),
            cone_file=Path(given.cones) if given.cones else None,
            limits=_read_limits(given.limit, troubles),
            fail_at=given.fail_at,
            work_limit=_read_number("--work-limit", given.work_limit, 1, troubles),
            time_limit=_read_number("--time-limit", given.time_limit, 1, troubles),
            defines=_read_defines(given.define, troubles),
            include=tuple(map(Path, given.include)),
        ),
        plan=None if given.plan is None else Path(given.plan),
        json=given.json,
        quiet=given.quiet,
        use_draft=given.use_draft,
        cache=not given.no_cache,
    )
    troubles.raise_any()
    return request


def draft_parser() -> argparse.ArgumentParser:
    """Return the parser of ``auditor draft``."""
    parser = _Parser(
        prog="auditor draft",
        description="Write a starter plan, found in the netlist, to standard output.",
        epilog="Exit status: 0 a plan is proposed, 2 wrong use or unusable input, 3 none is clear, 4 internal error.",
        allow_abbrev=False,
    )
    add = parser.add_argument
    add("netlists", nargs="*", metavar="NETLIST", help="Verilog file, plain or gz")
    add("--cells", action="append", default=[], metavar="F", help="cell library or cell table; may be repeated")
    add("--top", metavar="M", help="top module")
    _add_macros(parser)
    add("--mode", action="append", default=[], metavar="NET=0|1", help="a constant that is certain; may be repeated")
    add("--work-limit", metavar="N", help="bound on the nodes of one proof")
    return parser


def read_draft_arguments(words: Sequence[str]) -> Options:
    """Return what the words after ``auditor draft`` state. Raises ``InputError``."""
    troubles = TroubleList()
    given = _parse(draft_parser(), words, troubles)
    options = Options(
        netlists=tuple(map(Path, given.netlists)),
        cells=tuple(map(Path, given.cells)),
        top=given.top,
        mode=_read_mode("--mode", given.mode, troubles),
        work_limit=_read_number("--work-limit", given.work_limit, 1, troubles),
        defines=_read_defines(given.define, troubles),
        include=tuple(map(Path, given.include)),
    )
    if not given.netlists:
        troubles.add("no netlist is given", "name a Verilog file", COMMAND_LINE)
    troubles.raise_any()
    return options


def _parse(parser: argparse.ArgumentParser, words: Sequence[str], troubles: TroubleList) -> argparse.Namespace:
    """Return what the words give; unknown options and empty values go to ``troubles``."""
    given, unknown = parser.parse_known_intermixed_args(list(words))
    options = [_option(name) for name in vars(given) if name != "netlists"]
    for word in [word for word in unknown if word.startswith("-")] or unknown:
        remedy = near_misses(word.split("=")[0], options) or f"see {parser.prog} --help"
        troubles.add(f"{word} is no option of {parser.prog}", remedy, COMMAND_LINE)
    _refuse_empty(vars(given), troubles)
    return given


def _option(name: str) -> str:
    """Return the option whose value argparse keeps under ``name``."""
    return "--" + name.replace("_", "-")


def _refuse_empty(given: dict[str, object], troubles: TroubleList) -> None:
    """Note every option, and any netlist, whose value is the empty text."""
    for name, value in given.items():
        if value == "" or (isinstance(value, list) and "" in value):
            what = "the name of a netlist" if name == "netlists" else _option(name)
            troubles.add(f"{what} is empty", "give it a value, or leave it out", COMMAND_LINE)


def _read_mode(option: str, entries: list[str], troubles: TroubleList) -> dict[str, int]:
    """Return NET=0|1 entries as a mapping; a net with both values is a contradiction."""
    mode: dict[str, int] = {}
    for entry in filter(None, entries):
        net, equals, value = entry.rpartition("=")
        if not equals or not net or value not in ("0", "1"):
            remedy = f"write {option} NET=0 or {option} NET=1"
            troubles.add(f"{option} {entry} does not hold a net at 0 or 1", remedy, COMMAND_LINE)
        elif mode.setdefault(net, int(value)) != int(value):
            troubles.add(f"{option} holds {net} at 0 and at 1", "keep one of the two", COMMAND_LINE)
    return mode


def _read_defines(entries: list[str], troubles: TroubleList) -> dict[str, str]:
    """Return NAME=VALUE or NAME entries as a mapping; the last one of a name wins."""
    defines: dict[str, str] = {}
    for entry in filter(None, entries):
        name, _, text = entry.partition("=")
        if MACRO.fullmatch(name):
            defines[name] = text
        else:
            troubles.add(f"--define {entry} names no macro", "write --define NAME=VALUE", COMMAND_LINE)
    return defines


def _read_limits(entries: list[str], troubles: TroubleList) -> dict[str, int]:
    """Return NAME=N entries as a mapping; the last one of a name wins."""
    limits: dict[str, int] = {}
    for entry in filter(None, entries):
        name, equals, value = entry.partition("=")
        if name not in LEAST_LIMIT:
            remedy = near_misses(name, LEAST_LIMIT) or f"use one of {', '.join(LEAST_LIMIT)}, as in --limit fan_out=16"
            troubles.add(f"--limit {entry} names no limit", remedy, COMMAND_LINE)
        else:
            number = _read_number(f"--limit {name}", value if equals else "nothing", LEAST_LIMIT[name], troubles)
            limits[name] = number if number is not None else LEAST_LIMIT[name]
    return limits


def _read_number(
    option: str, value: str | None, least: int, troubles: TroubleList, most: int = BEYOND - 1
) -> int | None:
    """Return a whole number from ``least`` to ``most``, or None where not given or wrong."""
    if not value:
        return None
    if re.fullmatch(r"[0-9]{1,20}", value) and least <= int(value) <= most:
        return int(value)
    troubles.add(f"{option} is {value}", f"give a whole number from {least} to {most}", COMMAND_LINE)
    return None
