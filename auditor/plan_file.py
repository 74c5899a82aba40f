"""Reads a plan from its TOML file; every trouble in it is reported together, with its line where that can be found."""

import re
import tomllib
from collections.abc import Iterable
from dataclasses import dataclass, field
from pathlib import Path
from typing import Any

from auditor.errors import TroubleList, fail, near_misses
from auditor.notation import SourcePlace
from auditor.plan import BEYOND, LEAST_LIMIT, LONGEST_CHAIN, LONGEST_TWIN_WINDOW, MACRO, Limits, Patterns, Plan, Waiver

KEYS: dict[str, tuple[str, ...]] = {
    "netlist": ("files", "top", "cells", "defines"),
    "channels": ("names", "reference"),
    "chains": ("length", "file", "scan_outputs", "trace"),
    "patterns": ("count", "shift_cycles", "capture_cycles", "generator_in_capture", "launch", "twin_window"),
    "array": ("relations", "cones"),
    "limits": tuple(LEAST_LIMIT),
}
SECTIONS = ("netlist", "mode", "capture", "channels", "chains", "patterns", "array", "limits", "seeds", "waivers")
WAIVER_KEYS = ("slug", "where", "reason")
LATER_SECTIONS = ("claims",)

_HEADER = re.compile(r"""\s*\[{1,2}\s*([\w."'-]+)\s*\]{1,2}\s*(?:\#.*)?$""")
_HEXADECIMAL = re.compile(r"[0-9A-Fa-f]{1,100000}")
_MODE_NAME = re.compile(r"[A-Za-z0-9_-]+")
_TOML_PLACE = re.compile(r"\s*\(at (?:line (\d+), column \d+|end of document)\)$")


def read_plan(path: Path) -> Plan:
    """Return the plan in the file ``path``; paths in it are relative to it. Raises ``InputError``."""
    text = _read_text(path)
    reader = _Reader(str(path), text.splitlines(), _parse(text, path), path.parent)
    reader.check_names()
    limits = {name: reader.number("limits", name, least) for name, least in LEAST_LIMIT.items()}
    mode, modes = reader.modes()
    plan = Plan(
        netlists=reader.paths("netlist", "files"),
        cells=reader.paths("netlist", "cells"),
        top=reader.text("netlist", "top"),
        defines=reader.defines(),
        mode=mode,
        modes=modes,
        capture=reader.capture(),
        channels=reader.texts("channels", "names"),
        reference=reader.text("channels", "reference"),
        chain_length=reader.number("chains", "length", 1, LONGEST_CHAIN),
        chain_file=reader.chain_file(),
        scan_outputs=reader.texts("chains", "scan_outputs"),
        trace_forward=reader.trace_forward(),
        relations=reader.number("array", "relations", 3, 4),
        cone_file=reader.path("array", "cones"),
        seeds=reader.seeds(),
        patterns=reader.patterns(),
        limits=Limits(**limits),
        waivers=reader.waivers(),
        file=path,
    )
    reader.troubles.raise_any()
    return plan


def _read_text(path: Path) -> str:
    """Return the text of the file, or raise ``InputError`` with what is wrong with the file as a whole."""
    place = SourcePlace(str(path))
    try:
        data = path.read_bytes()
    except IsADirectoryError:
        raise fail("the plan is a directory", "give the plan's TOML file", place) from None
    except (OSError, ValueError) as error:  # ValueError: a NUL in the name
        reason = getattr(error, "strerror", None) or str(error)
        raise fail(f"the plan cannot be read: {reason}", "mend the path after --plan", place) from None
    if not data.strip():
        raise fail("the plan is empty", "state at least [netlist] files", place)
    try:
        text = data.decode("utf-8-sig")
    except UnicodeDecodeError as error:
        line = data.count(b"\n", 0, error.start) + 1
        found = "the plan is not UTF-8 text"
        raise fail(found, "give a TOML file in UTF-8", SourcePlace(str(path), line)) from None
    if "\0" in text:
        raise fail("the plan is a binary file", "give a TOML file in UTF-8", place)
    return text


def _parse(text: str, path: Path) -> dict[str, Any]:
    """Return the TOML document."""
    try:
        return tomllib.loads(text)
    except RecursionError:
        raise fail("the plan is nested too deeply", "give a plain plan", SourcePlace(str(path))) from None
    except ValueError as error:  # TOMLDecodeError, or a number of thousands of digits
        message = str(error)
        where = _TOML_PLACE.search(message)
        line = text.count("\n") + 1 if where else 0
        if where and where[1]:
            line = int(where[1])
        found = f"the plan is not valid TOML: {_TOML_PLACE.sub('', message)}"
        raise fail(found, "mend this line", SourcePlace(str(path), line)) from None


@dataclass(slots=True)
class _Reader:
    """Takes typed values out of a TOML document and collects what is wrong with them."""

    file: str
    lines: list[str]
    document: dict[str, Any]
    folder: Path
    troubles: TroubleList = field(default_factory=TroubleList)

    def place(self, section: str, key: str | None = None, index: int = 0) -> SourcePlace:
        """Return where a key stands, in the ``index``-th table of that name; line 0 where it cannot be found."""
        name = re.escape(key) if key else ""
        wanted = re.compile(rf"""\s*(?:{name}|"{name}"|'{name}')\s*[.=]""")
        current, tables = "", 1 if section == "" else 0
        for number, line in enumerate(self.lines, 1):
            if header := _HEADER.match(line):
                current = re.sub("[\"']", "", header[1])
                tables += current == section
                if key is None and current == section and tables > index:
                    return SourcePlace(self.file, number)
            elif key and current == section and tables > index and wanted.match(line):
                return SourcePlace(self.file, number)
        return SourcePlace(self.file)

    def wrong(self, section: str, key: str, wants: str, remedy: str, index: int = 0) -> None:
        """Note that a value is not what its key wants."""
        self.troubles.add(f"{key} in [{section}] must be {wants}", remedy, self.place(section, key, index))

    def check_names(self) -> None:
        """Note every section and key that is unknown or comes later."""
        for section, content in self.document.items():
            if section in LATER_SECTIONS:
                self._later(f"[{section}]", "remove it", self.place(section))
            elif section not in SECTIONS:
                place = self.place(section) if isinstance(content, dict | list) else self.place("", section)
                self._unknown(section, "the plan", (*SECTIONS, *LATER_SECTIONS), place)
            elif section != "waivers" and not isinstance(content, dict):
                self.troubles.add(f"{section} must be a section", f"write [{section}]", self.place("", section))
            for key in self._table(section) if section in KEYS else ():
                if key not in KEYS[section]:
                    self._unknown(key, f"[{section}]", KEYS[section], self.place(section, key))

    def _later(self, what: str, remedy: str, place: SourcePlace) -> None:
        self.troubles.add(f"{what} comes with a later version of auditor", remedy, place)

    def _unknown(self, key: str, where: str, known: Iterable[str], place: SourcePlace) -> None:
        remedy = near_misses(key, known) or f"use one of {', '.join(known)}, or remove it"
        self.troubles.add(f"unknown key {key} in {where}", remedy, place)

    def _table(self, section: str) -> dict[str, Any]:
        content = self.document.get(section, {})
        return content if isinstance(content, dict) else {}

    def text(self, section: str, key: str) -> str | None:
        """Return a text that is not empty, or None where not stated."""
        value = self._table(section).get(key)
        if value is None or (isinstance(value, str) and value):
            return value
        self.wrong(section, key, "a text that is not empty", f'write {key} = "..."')
        return None

    def texts(self, section: str, key: str) -> tuple[str, ...]:
        """Return a list of texts that are not empty; an absent key gives an empty one."""
        value = self._table(section).get(key, [])
        if _is_texts(value):
            return tuple(value)
        self.wrong(section, key, "a list of texts", f'write {key} = ["...", "..."]')
        return ()

    def path(self, section: str, key: str) -> Path | None:
        """Return a path, taken relative to the plan, or None where not stated."""
        name = self.text(section, key)
        return None if name is None else self.folder / name

    def paths(self, section: str, key: str) -> tuple[Path, ...]:
        """Return a list of paths, taken relative to the plan."""
        return tuple(self.folder / name for name in self.texts(section, key))

    def defines(self) -> dict[str, str]:
        """Return the macros that [netlist] defines states: name → text."""
        content = self._table("netlist").get("defines", {})
        good = isinstance(content, dict) and all(
            MACRO.fullmatch(name) and isinstance(text, str | int) and not isinstance(text, bool)
            for name, text in content.items()
        )
        if good:
            return {name: str(text) for name, text in content.items()}
        self.wrong("netlist", "defines", "a table of macros and texts", 'write defines = { NAME = "VALUE" }')
        return {}

    def number(self, section: str, key: str, least: int, most: int = BEYOND - 1) -> int | None:
        """Return a whole number from ``least`` to ``most``, or None where not stated."""
        value = self._table(section).get(key)
        if value is None or (isinstance(value, int) and not isinstance(value, bool) and least <= value <= most):
            return value
        self.wrong(section, key, f"a whole number from {least} to {most}", f"write {key} = N")
        return None

    def choice(self, section: str, key: str, known: tuple[str, ...]) -> str:
        """Return one of the known words; the first where not stated."""
        value = self._table(section).get(key, known[0])
        if value in known:
            return str(value)
        words = " or ".join(f'"{word}"' for word in known)
        self.wrong(section, key, words, f"write {key} = {words}")
        return known[0]

    def chain_file(self) -> Path | None:
        """Return the file of the chains; the chains are told in one way only, and what tells them twice is noted."""
        told = [key for key in KEYS["chains"] if key in self._table("chains")]
        if len(told) > 1:
            place = self.place("chains", told[1])
            self.troubles.add(f"[chains] tells the chains by {' and by '.join(told)}", "keep one of them", place)
        return self.path("chains", "file")

    def trace_forward(self) -> bool:
        """Whether the chains are to be traced from the channels on."""
        return "trace" in self._table("chains") and self.choice("chains", "trace", ("forward",)) == "forward"

    def seeds(self) -> dict[str, int]:
        """Return [seeds]: name → state, given in hexadecimal digits."""
        seeds = {}
        for name, value in self._table("seeds").items():
            if isinstance(value, str) and _HEXADECIMAL.fullmatch(value):
                seeds[name] = int(value, 16)
            else:
                self.wrong("seeds", name, "a state in hexadecimal digits", f'write {name} = "1f"')
        return seeds

    def modes(self) -> tuple[dict[str, int], dict[str, dict[str, int]]]:
        """Return the constants of [mode], or those of every [mode.NAME] by its name; a plan has either."""
        table = self._table("mode")
        named = {name: content for name, content in table.items() if isinstance(content, dict)}
        for name in list(named):
            if not self.place(f"mode.{name}").line or not _MODE_NAME.fullmatch(name):
                remedy = (
                    f'quote a net whose name has dots, as in "{name}.enable" = 0; a mode is a section [mode.NAME], its '
                    "name made of letters, digits, _ and -"
                )
                self.troubles.add(f"{name} in [mode] is a table", remedy, self.place("mode", name))
                del named[name]
        plain = {net: value for net, value in table.items() if not isinstance(value, dict)}
        if plain and named:
            found = f"[mode] holds {next(iter(plain))} beside the named mode [mode.{next(iter(named))}]"
            remedy = "state one mode under [mode], or each under a [mode.NAME] with all its constants"
            self.troubles.add(found, remedy, self.place("mode", next(iter(plain))))
        modes = {name: self._constants(f"mode.{name}", content) for name, content in named.items()}
        return self._constants("mode", plain), modes

    def capture(self) -> dict[str, int] | None:
        """Return the constants of [capture], None where the section is absent."""
        return self._constants("capture", self._table("capture")) if "capture" in self.document else None

    def _constants(self, section: str, table: dict[str, Any]) -> dict[str, int]:
        """Return the nets of a mode, or of capture, with their values, 0 or 1."""
        for net, value in table.items():
            if isinstance(value, dict):
                remedy = f'quote a net whose name has dots, as in "{net}.enable" = 0'
                self.troubles.add(f"{net} in [{section}] is a table", remedy, self.place(section, net))
            elif not isinstance(value, int) or isinstance(value, bool) or value not in (0, 1):
                self.wrong(section, net, "0 or 1", "write the constant as 0 or 1, without quotes")
        return table

    def patterns(self) -> Patterns | None:
        """Return [patterns], or None where the section is absent or wrong."""
        table = self._table("patterns")
        if not table:
            return None
        launch = self.choice("patterns", "launch", ("none", "shift"))
        for key in ("count", "shift_cycles"):
            if key not in table:
                self.troubles.add(f"[patterns] has no {key}", f"state {key} = N", self.place("patterns"))
        count, shift = self.number("patterns", "count", 1), self.number("patterns", "shift_cycles", 1)
        capture = self.number("patterns", "capture_cycles", 0) or 0
        stated = "generator_in_capture" in table
        generator = self.choice("patterns", "generator_in_capture", ("holds", "advances")) if stated else None
        window = self.number("patterns", "twin_window", 0, LONGEST_TWIN_WINDOW) or 0
        return Patterns(count, shift, capture, generator, window, launch) if count and shift else None

    def waivers(self) -> tuple[Waiver, ...]:
        """Return [[waivers]]; each needs a slug, objects and a reason."""
        content = self.document.get("waivers", [])
        if not isinstance(content, list) or not all(isinstance(table, dict) for table in content):
            self.troubles.add("waivers must be a list of tables", "write [[waivers]]", self.place("", "waivers"))
            return ()
        waivers = []
        for index, table in enumerate(content):
            for key in table:
                if key not in WAIVER_KEYS:
                    self._unknown(key, "[[waivers]]", WAIVER_KEYS, self.place("waivers", key, index))
            slug, where, reason = (table.get(key) for key in WAIVER_KEYS)
            good = True
            for key, value in (("slug", slug), ("reason", reason)):
                if not isinstance(value, str) or not value.strip():
                    good = self._incomplete(key, "a text that is not empty", f'write {key} = "..."', index)
            if not where or not _is_texts(where):
                good = self._incomplete("where", "a list of names", 'write where = ["...", "..."]', index)
            if good:
                waivers.append(Waiver(slug, tuple(where), reason))
        return tuple(waivers)

    def _incomplete(self, key: str, wants: str, remedy: str, index: int) -> bool:
        """Note that a waiver's key is absent or wrong; return False."""
        place = self.place("waivers", key, index)
        place = place if place.line else self.place("waivers", None, index)
        self.troubles.add(f"{key} in [[waivers]] must be {wants}", remedy, place)
        return False


def _is_texts(value: object) -> bool:
    return isinstance(value, list) and all(isinstance(item, str) and item for item in value)
