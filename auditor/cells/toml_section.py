"""Typed access to a TOML text in which every trouble is noted with its line and the reading goes on."""

import re
import tomllib
from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass
from typing import Any

from auditor.errors import TroubleList, fail, near_misses
from auditor.notation import SourcePlace

_ERROR = re.compile(r"(.*) \(at line (\d+), column \d+\)")


@dataclass(frozen=True, slots=True)
class TomlText:
    """A TOML text, the name of its file in messages, and where troubles go."""

    text: str
    file: str
    troubles: TroubleList

    def parse(self) -> "Section":
        """Return the whole as a section. Raises ``InputError`` where it is no TOML."""
        try:
            return Section(self, (), tomllib.loads(self.text))
        except tomllib.TOMLDecodeError as error:
            found = _ERROR.fullmatch(str(error))
            what, line = (found[1], int(found[2])) if found else (str(error), self.text.count("\n") + 1)
            raise fail(f"this is not valid TOML: {what}", "mend it", SourcePlace(self.file, line)) from None

    def place(self, path: Sequence[str]) -> SourcePlace:
        """Return the line of the deepest header or key on ``path`` that can be found by search, or the whole file.

        TOML's own reader keeps no lines; a spelling that the search does not know gives the line of what holds it.
        """
        position, line = 0, 0
        for depth, name in enumerate(path, start=1):
            spelled = [rf'["\']?{re.escape(part)}["\']?' for part in path[:depth]]
            header = r"^[ \t]*\[[ \t]*" + r"[ \t]*[.][ \t]*".join(spelled) + r"[ \t]*[].]"
            key = rf'(?:^|[\s{{,.])["\']?{re.escape(name)}["\']?[ \t]*[=.]'
            found = re.compile(f"{header}|{key}", re.MULTILINE).search(self.text, position)
            if found:
                position = found.start() if found[0].lstrip().startswith("[") else found.end() - 1
                line = 1 + self.text.count("\n", 0, found.end() - 1)
        return SourcePlace(self.file, line)


@dataclass(frozen=True, slots=True)
class Section:
    """A table of the text at ``path``."""

    source: TomlText
    path: tuple[str, ...]
    values: Mapping[str, Any]

    def name(self, key: str) -> str:
        """Return the full name of a key."""
        return ".".join((*self.path, key))

    def note(self, found: str, remedy: str, key: str = "") -> None:
        """Note a trouble at a key, or at the table itself."""
        self.source.troubles.add(found, remedy, self.source.place((*self.path, key) if key else self.path))

    def check_keys(self, known: Iterable[str], what: str = "key") -> None:
        """Note every key that is not known, with near misses."""
        known = list(known)
        for key in self.values:
            if key not in known:
                remedy = near_misses(key, known) or f"use {', '.join(known) or 'none here'}"
                self.note(f"unknown {what} {self.name(key)}", remedy, key)

    def section(self, key: str) -> "Section":
        """Return the table under ``key``, an empty one where there is none."""
        value = self.values.get(key, {})
        if not isinstance(value, dict):
            self.wrong(key, "a table")
            value = {}
        return Section(self.source, (*self.path, key), value)

    def names(self, key: str) -> list[str]:
        """Return the list of names under ``key``, empty where there is none."""
        value = self.values.get(key, [])
        if isinstance(value, list) and all(isinstance(name, str) and name for name in value):
            return value
        self.wrong(key, "a list of names in quotes")
        return []

    def number(self, key: str) -> float | None:
        """Return the number from 0 on under ``key``, None where there is none."""
        value = self.values.get(key)
        if value is None:
            return None
        if isinstance(value, int | float) and not isinstance(value, bool) and 0 <= value < float("inf"):
            return float(value)
        self.wrong(key, "a number from 0 on")
        return None

    def text(self, key: str) -> str | None:
        """Return the text under ``key``, None where there is none."""
        value = self.values.get(key)
        if value is None or isinstance(value, str):
            return value
        self.wrong(key, "a text in quotes")
        return None

    def wrong(self, key: str, what: str) -> None:
        """Note that ``key`` holds something else than it must."""
        self.note(f"{self.name(key)} is not {what}", f"make it {what}", key)
