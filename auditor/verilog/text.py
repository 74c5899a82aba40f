"""Files to text: what stands in a Verilog file, and what of it is left once comments and attributes are blanked.

Line numbers never move: whatever is blanked leaves its line ends behind.
"""

import gzip
import re
import zlib
from collections.abc import Callable
from pathlib import Path
from typing import NamedTuple

from auditor.errors import TroubleList
from auditor.notation import SourcePlace
from auditor.verilog.statements import Lines

_GZIP_MAGIC = b"\x1f\x8b"
_CONTROL_CODES = re.compile(rb"[\x00-\x08\x0e-\x1a\x1c-\x1f]")

_STRING = r'"(?:[^"\\\n]|\\.)*+"'
# Each token with the characters without which it cannot occur, so that a text is searched only for what it holds.
# Strings and escaped identifiers are tokens because comment signs inside them are none.
_TOKENS = (
    ("\\", r"\\\S++"),
    ('"', _STRING),
    ("//", r"//[^\n]*+"),
    ("/*", r"/\*(?s:.*?)(?:\*/|\Z)"),
    ("(*", rf"\(\*(?!\s*\))(?:{_STRING}|[^*\"]|\*(?!\)))*+(?:\*\)|\Z)"),
)


class SourceText(NamedTuple):
    """A text without directives, where its lines come from, and the default net types with the lines they hold from."""

    text: str
    spans: Lines
    net_types: tuple[tuple[int, str], ...] = ()


def read_text(path: Path, troubles: TroubleList, may_be_empty: bool = False) -> str | None:
    """Return the text of a plain or gzip file, or None after noting why it has none.

    UTF-8 with or without its mark, else latin-1; every kind of line end becomes a line feed.
    """
    place = SourcePlace(str(path))
    data = _read_bytes(path, place, troubles)
    if data is None:
        return None
    if _CONTROL_CODES.search(data):
        troubles.add("the file is binary, not text", "give a Verilog netlist as text, plain or gzip", place)
        return None
    if not data.strip() and not may_be_empty:
        troubles.add("the file is empty", "give a Verilog netlist", place)
        return None
    try:
        text = data.decode("utf-8-sig")
    except UnicodeDecodeError:
        text = data.decode("latin-1")
    return text.replace("\r\n", "\n").replace("\r", "\n")


def _read_bytes(path: Path, place: SourcePlace, troubles: TroubleList) -> bytes | None:
    """Return the content, unpacked if it is gzip, or None after noting the trouble."""
    try:
        data = path.read_bytes()
    except FileNotFoundError:
        troubles.add("there is no such file", "mend the path", place)
        return None
    except IsADirectoryError:
        troubles.add("this is a directory, not a file", "name the files in it", place)
        return None
    except OSError as error:
        troubles.add(f"the file cannot be read ({error.strerror})", "make it readable", place)
        return None
    if not data.startswith(_GZIP_MAGIC):
        if path.suffix == ".gz" and data:
            troubles.add("the name ends in .gz but the content is not gzip", "pack the file again or rename it", place)
            return None
        return data
    try:
        return gzip.decompress(data)
    except EOFError:
        troubles.add("the gzip data are cut off", "copy or pack the file again", place)
    except (OSError, zlib.error):
        troubles.add("the gzip data are damaged", "copy or pack the file again", place)
    return None


def blank(source: SourceText, troubles: TroubleList) -> SourceText | None:
    """Return a text without comments and attributes, or None if a trouble was noted."""
    if not any(sign in source.text for sign in ("//", "/*", "(*")):
        return source
    tokens = [pattern for sign, pattern in _TOKENS if sign in source.text]
    noted = len(troubles.troubles)
    blanked = re.sub("|".join(tokens), _replacement(source, troubles), source.text)
    return source._replace(text=blanked) if len(troubles.troubles) == noted else None


def _replacement(source: SourceText, troubles: TroubleList) -> Callable[[re.Match[str]], str]:
    """Return the function that gives what replaces a token; it notes troubles as it goes."""

    def note(match: re.Match[str], found: str, remedy: str) -> None:
        troubles.add(found, remedy, source.spans.place(source.text.count("\n", 0, match.start()) + 1))

    def replace(match: re.Match[str]) -> str:
        token = match[0]
        first = token[0]
        if first in '\\"':
            return token
        if token.startswith("/*") and (len(token) < 4 or not token.endswith("*/")):
            note(match, "a comment begins here and never ends", "end it with */")
        elif first == "(" and (len(token) < 4 or not token.endswith("*)")):
            note(match, "an attribute begins here and never ends", "end it with *)")
        return " " + "\n" * token.count("\n")

    return replace
