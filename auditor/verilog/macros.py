"""Macros: what a `` `define `` says, and the text that a use of it stands for (IEEE 1364-2005, 19.3; 1800-2017, 22.5).

A text of a macro has no line ends: whatever it expands to stands on the line of its use.
"""

import re
from collections.abc import Sequence
from typing import NamedTuple

from auditor.notation import SourcePlace

IDENTIFIER = r"[A-Za-z_][\w$]*+"
STRING = r'"(?:[^"\\\n]|\\.)*+"'
_COMMENT = r"//[^\n]*?(?=\\?\n|\Z)|/\*(?s:.*?)(?:\*/|\Z)"

# A definition ends at a line end without a backslash before it; a comment at its end is no part of it.
BODY = re.compile(rf'(?:[^\\\n"/]++|\\\n|\\\S++|{STRING}|{_COMMENT}|[\\"/])*+')
_DROPPED = re.compile(rf"(\\\n|{_COMMENT}|\n)|{STRING}|\\\S++")
_ESCAPED_LAST = re.compile(r"\\\S*\Z")
_SUBSTITUTED = re.compile(rf'``|`"|{STRING}|\\\S++|(?<![\w$\'])`?{IDENTIFIER}')
_ARGUMENT_TOKEN = re.compile(rf"{STRING}|\\\S++|{_COMMENT}|[(\[{{]|[)\]}}]|,")
_PARAMETER = re.compile(rf"\s*+({IDENTIFIER})\s*+(?:=(.*))?", re.DOTALL)


class MacroError(Exception):
    """A macro is defined or used wrongly; ``found`` and ``remedy`` as in a Trouble."""

    def __init__(self, found: str, remedy: str) -> None:
        super().__init__(found)
        self.found, self.remedy = found, remedy


class Macro(NamedTuple):
    """A macro; ``parameters`` None where it takes none, each with its default or None; ``place`` None: given."""

    name: str
    parameters: tuple[tuple[str, str | None], ...] | None
    body: str
    place: SourcePlace | None = None

    def expanded(self, arguments: Sequence[str]) -> str:
        """Return the text of a use, in which macros are still to be expanded. Raises MacroError."""
        parameters = self.parameters or ()
        if not parameters and arguments in ([], [""]):
            return _pasted(self.body, {}) if "``" in self.body or '`"' in self.body else self.body
        missing = [name for name, default in parameters[len(arguments) :] if default is None]
        if len(arguments) > len(parameters) or missing:
            counted = f"{len(arguments)} argument{'s' if len(arguments) > 1 else ''}"
            takes = ", ".join(name for name, _ in parameters) or "none"
            raise MacroError(f"macro `{self.name} is given {counted}", f"give it what it takes: {takes}")
        values = {}
        for number, (name, default) in enumerate(parameters):
            given = arguments[number] if number < len(arguments) else ""
            values[name] = given or default or ""
        return _pasted(self.body, values)


def _pasted(body: str, values: dict[str, str]) -> str:
    """Return a body with values for its parameters; ``` `` ``` joins what stands on both sides."""

    def replace(match: re.Match[str]) -> str:
        token = match[0]
        if token == "``":
            return ""
        return '"' if token == '`"' else values.get(token, token)

    return _SUBSTITUTED.sub(replace, body)


def flat(text: str) -> str:
    """Return a text without comments, continued lines and line ends, each a blank; an escaped name keeps its blank."""
    kept = _DROPPED.sub(lambda match: " " if match[1] else match[0], text).strip()
    return kept + " " if _ESCAPED_LAST.search(kept) else kept


def defined(name: str, text: str, start: int, place: SourcePlace) -> tuple[Macro, int]:
    """Return the macro whose parameters or body begin at ``start``, and where it ends. Raises MacroError."""
    parameters = None
    if text.startswith("(", start):
        found = arguments_of(text, start)
        if found is None:
            raise MacroError(f"the parameters of macro `{name} are not ended", "end them with )")
        words, start = found
        parameters = tuple(_parameter(name, word) for word in words) if words != [""] else ()
    end = BODY.match(text, start)
    stop = end.end() if end else start
    return Macro(name, parameters, flat(text[start:stop]), place), stop


def _parameter(macro: str, word: str) -> tuple[str, str | None]:
    match = _PARAMETER.fullmatch(word)
    if not match:
        raise MacroError(f"found {word or 'nothing'} among the parameters of macro `{macro}", "write names there")
    return match[1], None if match[2] is None else match[2].strip()


def arguments_of(text: str, start: int) -> tuple[list[str], int] | None:
    """Return the list in the brackets that open at ``start``, and where it ends, or None where it does not end."""
    depth, words = 0, []
    begun = start + 1
    for match in _ARGUMENT_TOKEN.finditer(text, start):
        sign = match[0]
        if sign in "([{":
            depth += 1
        elif sign in ")]}":
            depth -= 1
        if depth == 0 or (sign == "," and depth == 1):
            words.append(flat(text[begun : match.start()]))
            begun = match.end()
        if depth == 0:
            return words, match.end()
    return None
