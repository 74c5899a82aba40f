"""Reads the text of a Liberty file into groups; what they mean is left to ``liberty_cells``.

A library is nearly all timing tables, so only the groups that say what a cell does are read; every other group is
skipped to its closing brace. One compiled pattern reads a statement. All repetitions in the patterns are possessive:
on a syntax error they fail at once instead of trying every way to split the blanks.
"""

import re
from collections.abc import Iterator
from dataclasses import dataclass, field
from pathlib import Path

from auditor.cells.source_text import read_text
from auditor.errors import InputError, fail
from auditor.notation import SourcePlace

# The groups that are read. ``test_cell`` is skipped on purpose: it describes the cell a second time, as without scan.
_STORAGE = ("ff", "latch", "ff_bank", "latch_bank", "statetable")
_READ = frozenset(["library", "type", "cell", "pg_pin", "pin", "bus", "bundle", *_STORAGE])

_STRING = r'"[^"]*+"(?:(?<=[^\\]\\")[^"]*+")*+'  # a quote after a backslash does not end it
_STATEMENT = re.compile(
    rf"""[\s;\\]*+(?:
        (?P<name>[^\s:=;(){{}}",\\]++) [\s\\]*+ (?:
            [:=] [\s\\]*+ (?: (?P<string>{_STRING}) | (?P<bare>[^;{{}}"\n]*+) )
          | \( (?P<arguments>(?:[^"(){{}};]++|{_STRING})*+) \) [\s\\]*+ (?P<open>\{{)?
        )
      | (?P<close>\}})
      | \Z
    )""",
    re.VERBOSE,
)
_FLAT = rf'[^{{}}"]*+(?:{_STRING}[^{{}}"]*+)*+'
_TO_BRACE = re.compile(rf"{_FLAT}(?:\{{{_FLAT}\}}{_FLAT})*+([{{}}])")  # passes over groups that hold no others
_ARGUMENT = re.compile(rf'{_STRING}|[^\s,"\\]++')
_TO_COMMENT = re.compile(rf'(?:[^"/]++|{_STRING}|/(?![*/]))*+')
_COMMENT = re.compile(r"//[^\n]*+|/\*(?:[^*]++|\*(?!/))*+\*/")
_LIBRARY = re.compile(r"(?:\A|[\n};/])[ \t]*library\s*\(")


@dataclass(slots=True)
class Group:
    """``kind (arguments) { ... }`` as written: the groups in it, and its attributes.

    An attribute is ``name : value`` or ``name (value, ...)``: the values without quotes; the last of a name counts.
    """

    kind: str
    arguments: tuple[str, ...]
    line: int
    attributes: dict[str, tuple[str, ...]] = field(default_factory=dict)
    groups: list["Group"] = field(default_factory=list)

    def value(self, name: str, default: str = "") -> str:
        """Return the first value of an attribute, without outer blanks."""
        values = self.attributes.get(name)
        return values[0].strip() if values else default

    def inside(self, *kinds: str) -> Iterator["Group"]:
        """Yield the groups of these kinds that stand directly in this one."""
        return (group for group in self.groups if group.kind in kinds)


def library_start(text: str) -> int:
    """Return where the text opens its first ``library`` group, or -1."""
    found = _LIBRARY.search(text)
    return found.start() if found else -1


def read_liberty(path: Path) -> list[Group]:
    """Return the ``library`` groups of a file, plain or gz; see ``parse_liberty`` and ``read_text``."""
    return parse_liberty(read_text(path), str(path))


def parse_liberty(text: str, file: str) -> list[Group]:
    """Return the ``library`` groups of a Liberty text; ``file`` is its name in messages.

    Raises ``InputError`` with the line on a syntax error, an open comment or string, a file cut off.
    """
    text = _without_comments(text, file)
    top = Group("", (), 1)
    open_groups = [top]
    position, line, counted = 0, 1, 0
    while found := _STATEMENT.match(text, position):
        position = found.end()
        name, string, bare, arguments, brace, close = found.groups()
        if brace and name in _READ:
            line, counted = line + text.count("\n", counted, position), position
            group = Group(name, _arguments(arguments), line)
            open_groups[-1].groups.append(group)
            open_groups.append(group)
        elif brace:
            position = _skip(text, position, file)
        elif name:
            attributes = open_groups[-1].attributes
            if string:
                attributes[name] = (_unquoted(string),)
            else:
                attributes[name] = _arguments(arguments) if bare is None else (bare.rstrip(),)
        elif close and len(open_groups) > 1:
            open_groups.pop()
        else:
            break
    in_last_words = not set("}\n") & set(text[position:].strip())
    if (found is None or close) and not (in_last_words and len(open_groups) > 1):
        raise _syntax_error(text, position - bool(found), file)
    if len(open_groups) > 1:
        raise _cut_off(text, open_groups[-1].line, file)
    libraries = list(top.inside("library"))
    if not libraries:
        raise fail("there is no library group in it", "give a Liberty file", SourcePlace(file))
    return libraries


def _arguments(text: str) -> tuple[str, ...]:
    return tuple(_unquoted(word) for word in _ARGUMENT.findall(text))


def _unquoted(word: str) -> str:
    """Return a string without its quotes, escapes and line continuations; a bare word as it is."""
    if word[0] != '"':
        return word
    word = word[1:-1]
    if "\\" not in word:
        return word
    return re.sub(r"\\[ \t]*\n", "", word).replace('\\"', '"')


def _skip(text: str, position: int, file: str) -> int:
    """Return the offset behind the brace that closes the group opened just before ``position``."""
    start, depth = position, 1
    while depth:
        brace = _TO_BRACE.match(text, position)
        if brace is None:
            raise _cut_off(text, 1 + text.count("\n", 0, start), file)
        depth += 1 if brace[1] == "{" else -1
        position = brace.end()
    return position


def _without_comments(text: str, file: str) -> str:
    """Return the text with blanks for comments; line breaks stay, so that lines can still be counted."""
    last = max(text.rfind("/*"), text.rfind("//"))
    pieces, position = [], 0
    while position <= last:
        outside = _TO_COMMENT.match(text, position)
        start = outside.end() if outside else position
        comment = _COMMENT.match(text, start)
        if comment is None:
            if text.startswith("/*", start):
                raise fail("a comment opens here and is not closed", "close it with */", _place(text, start, file))
            break
        pieces += [text[position:start], " ", "\n" * comment[0].count("\n")]
        position = comment.end()
    return "".join([*pieces, text[position:]]) if pieces else text


def _place(text: str, position: int, file: str) -> SourcePlace:
    return SourcePlace(file, 1 + text.count("\n", 0, position))


def _cut_off(text: str, line: int, file: str) -> InputError:
    """Return the error for a text that ends inside the group whose brace opens at ``line``."""
    return _unclosed_string(text, file) or fail(
        f"the file ends inside the group that opens at line {line}",
        "give the whole file, or add the missing brace",
        _place(text, len(text.rstrip()), file),
    )


def _syntax_error(text: str, position: int, file: str) -> InputError:
    """Return the error for a statement that cannot be read at ``position``."""
    while position < len(text) and text[position] in " \t\f\v\n;\\":
        position += 1
    near = text[position : position + 40].partition("\n")[0]
    return _unclosed_string(text, file) or fail(
        f'no Liberty statement can be read at "{near}"',
        "write it as name : value; or name (values) { ... }, or mend the braces before it",
        _place(text, position, file),
    )


def _unclosed_string(text: str, file: str) -> InputError | None:
    """Return the better error for a broken text, if a string in it runs on without a backslash at its line's end."""
    for string in re.finditer(rf'{_STRING}|"', text):
        if string[0] == '"' or re.search(r"\n", re.sub(r"\\[ \t]*\n", "", string[0])):
            return fail(
                "a string opens here and is not closed on its line",
                "add the closing quote, or a backslash at the end of each line of it",
                _place(text, string.start(), file),
            )
    return None
