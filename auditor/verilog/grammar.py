"""The grammar lane: what is not plain goes to pyverilog, item by item, in pieces of a few hundred.

pyverilog's grammar appends to tuples and takes time quadratic in the length of a list, hence pieces. Each item is
one element (one instance, one assigned net, one declared name) and gives one element of the syntax tree, so that
the line of an item is known here and not asked of pyverilog. This is the only file that imports it.
"""

import contextlib
import io
import os
import re
import sys
import tempfile
import warnings
from collections.abc import Iterator, Sequence
from functools import cache
from importlib.metadata import version
from pathlib import Path
from typing import Any, NamedTuple

from auditor.errors import InternalError, near_misses
from auditor.verilog.draft import EVERY_PORT, Declared, Draft, Waiting
from auditor.verilog.items import DECLARED, direction_of, net_kind
from auditor.verilog.plain import GATES, NAME, RefusedError, closing, plain_name
from auditor.verilog.statements import Assign, Connection, Constant, Direction, Instance, Range
from auditor.verilog.tree import Parameters, expression_of, integer_of, parameter_of, value_of
from auditor.verilog.variants import Variants

PIECE = 300

# pyverilog takes `^~a` for `^(~a)`, wants literals without blanks, and knows no empty position in a list of
# connections: a string, which no connection may be, holds its place.
_NORMALISED = re.compile(
    r"""\\\S++\s|"(?:[^"\\\n]|\\.)*+"|\^~|(\d?)\s*'\s*([sS]?[bBoOdDhH])\s*([\w?])|([(,])\s*(?=,)|(,)\s*(?=\))"""
)
_EMPTY = '"an empty position"'
_HEAD = re.compile(rf"{NAME}\s*+")
_COORDINATE = re.compile(r'line:(\d+)(?: column:\d+)?: (?:before: "(.*)"|(.*))', re.DOTALL)
_REMEDY = "mend the text, or give it as plain structural Verilog"


class Given(NamedTuple):
    """A value that a defparam gives to a parameter of an instance."""

    instance: str
    parameter: str
    value: Constant
    line: int


def read_waiting(draft: Draft, variants: Variants) -> None:
    """Read all that waits in a draft into it; troubles are noted with the line of the item.

    Parameters are evaluated in the order of the text and hold for what follows them.
    """
    parameters: Parameters = {}
    given: list[Given] = []
    results: list[tuple[Waiting, Instance | Assign]] = []
    waiting = draft.waiting
    for start in range(0, len(waiting), PIECE):
        for wait, node in _parsed(draft, waiting[start : start + PIECE]):
            try:
                result = _element(wait, node, parameters, draft.given, variants)
            except RefusedError as refused:
                draft.trouble(refused.found, refused.remedy, wait.item.line)
                continue
            if isinstance(result, Declared):
                draft.declare(result)
            elif isinstance(result, Given):
                given.append(result)
            elif result is not None:
                results.append((wait, result))
    draft.waiting = []
    draft.merge(results)
    _give(draft, given, variants)


def _give(draft: Draft, given: Sequence[Given], variants: Variants) -> None:
    """Let instances be of the modules with the values that defparams give them."""
    if not given:
        return
    place = {instance.name: number for number, instance in enumerate(draft.instances)}
    values: dict[str, dict[str, Given]] = {}
    for one in given:
        values.setdefault(one.instance, {})[one.parameter] = one
    for name, by_parameter in values.items():
        line = min(one.line for one in by_parameter.values())
        if name not in place:
            remedy = near_misses(name, place) or "mend the name of the instance"
            draft.trouble(f"defparam names {name}, which is no instance of module {draft.name}", remedy, line)
            continue
        instance = draft.instances[place[name]]
        if instance.cell in variants.families:
            found = f"{name} is given parameters where it stands and by defparam"
            draft.trouble(found, "give all where it stands", line)
            continue
        try:
            cell = variants.name_of(instance.cell, [(one.parameter, one.value) for one in by_parameter.values()])
        except RefusedError as refused:
            draft.trouble(refused.found, refused.remedy, line)
        else:
            draft.instances[place[name]] = instance._replace(cell=cell)


def _parsed(draft: Draft, piece: Sequence[Waiting]) -> Iterator[tuple[Waiting, Any]]:
    """Yield each item with its syntax tree; where the piece has an error, its items are parsed one by one."""
    try:
        yield from zip(piece, _parse(piece), strict=True)
        return
    except _syntax_error():
        pass
    for wait in piece:
        try:
            (node,) = _parse([wait])
        except _syntax_error() as error:
            found, line = _explain(wait, str(error))
            draft.trouble(found, _REMEDY, line)
        else:
            yield wait, node


def _parse(piece: Sequence[Waiting]) -> Sequence[Any]:
    """Return the syntax trees of the items, one each; raises pyverilog's ParseError."""
    texts = [_NORMALISED.sub(_normal, wait.item.text) for wait in piece]
    parser = _parser()
    parser.lexer.reset_lineno()
    with contextlib.redirect_stdout(io.StringIO()), contextlib.redirect_stderr(io.StringIO()):
        tree = parser.parse("module m;\n" + "".join(f"{text};\n" for text in texts) + "endmodule\n")
    items: Sequence[Any] = tree.description.definitions[0].items
    if len(items) != len(piece):
        raise InternalError(f"pyverilog made {len(items)} of {len(piece)} items")
    return items


def _normal(match: re.Match[str]) -> str:
    size, base, digit, sign, last = match.groups()
    if base:
        return f"{size}'{base}{digit}"
    if sign or last:
        return match[0] + _EMPTY
    return "~^" if match[0] == "^~" else match[0]


def _explain(wait: Waiting, message: str) -> tuple[str, int]:
    """Return what a ParseError says in words, and the line in the user's file."""
    match = _COORDINATE.search(message)
    if not match:
        words = wait.item.text.split()
        return f"syntax error in the {wait.kind} that begins with {' '.join(words[:3])}", wait.item.line
    # The item begins on the second line of what pyverilog was given.
    line = wait.item.line + min(int(match[1]) - 2, wait.item.text.count("\n"))
    token = match[2] if match[2] is not None else match[3]
    if token.startswith("Illegal character"):
        return f"syntax error: illegal character {token.split()[-1][1:-1]}", line
    if token in (";", "endmodule"):
        return f"syntax error: the {wait.kind} ends too early", line
    return f"syntax error at {token}", line


def _element(
    wait: Waiting, node: Any, parameters: Parameters, given: Parameters, variants: Variants
) -> Declared | Given | Instance | Assign | None:
    """Return what an item says, or None for a parameter, which is entered. Raises RefusedError."""
    kind = type(node).__name__
    if kind == "InstanceList" and wait.kind == "instance" and _EMPTY not in wait.item.text:
        return _instance(node, wait, parameters, variants)
    if kind == "Assign" and wait.kind == "assign":
        left = expression_of(node.left.var, parameters)
        return Assign(left, expression_of(node.right.var, parameters), wait.item.line)
    # pyverilog takes more for a declaration than the language does, and arrays of nets.
    if kind == "Decl" and wait.kind == "declaration" and DECLARED.fullmatch(wait.item.text.lstrip()):
        return _declared(node.list, wait, parameters)
    if kind == "Decl" and wait.kind in ("parameter", "defparam"):
        name, value = parameter_of(node.list[0], parameters, given)
        if wait.kind == "defparam":
            return Given(wait.extra, name, value, wait.item.line)
        parameters[name] = value
        return None
    raise RefusedError(f"found {wait.item.text.split()[0]} where an item of a netlist should stand", _REMEDY)


def _instance(node: Any, wait: Waiting, parameters: Parameters, variants: Variants) -> Instance:
    (one,) = node.instances
    connections = tuple(
        Connection(
            plain_name(port.portname) if port.portname else None,
            None if _is_open(port.argname) else expression_of(port.argname, parameters),
        )
        for port in one.portlist
    )
    if wait.extra:
        connections = (*connections, EVERY_PORT)
    array = _range(one.array, parameters) if one.array else None
    cell, primitive = plain_name(node.module), node.module in GATES
    if node.parameterlist and cell not in variants.drafts:
        # What a primitive is given is a delay. A cell that is described elsewhere is another one under each text.
        cell += "" if cell in variants.primitives else f" {_values_as_written(wait.item.text)}"
    elif node.parameterlist:
        values = [
            (p.paramname and plain_name(p.paramname), value_of(p.argname, parameters)) for p in node.parameterlist
        ]
        cell = variants.name_of(cell, values)
    return Instance(cell, plain_name(one.name), connections, wait.item.line, primitive, array)


def _values_as_written(text: str) -> str:
    """Return `#(...)` of an instance."""
    head = _HEAD.match(text)
    start = head.end() if head else 0
    return text[start : closing(text, text.find("(", start), 0)]


def _is_open(value: Any) -> bool:
    return value is None or getattr(value, "value", None) == _EMPTY.strip('"')


def _declared(nodes: Sequence[Any], wait: Waiting, parameters: Parameters) -> Declared:
    """Return one declared name; a port that is a net as well comes as two nodes."""
    direction: Direction | None = None
    kind: str | None = None
    for node in nodes:
        word = type(node).__name__.lower()
        if direction_of(word):
            direction = direction_of(word)
        elif word == "supply":
            kind = f"supply{node.value.value}"
        else:
            kind = net_kind(wait.extra or word)
    width = nodes[0].width
    bounds = _range(width, parameters) if width is not None else None
    return Declared(plain_name(nodes[0].name), direction, kind, bounds, wait.item.line)


def _range(width: Any, parameters: Parameters) -> Range:
    return Range(integer_of(width.msb, parameters), integer_of(width.lsb, parameters))


def _syntax_error() -> type[Exception]:
    """Return pyverilog's own error, imported when the lane is first used."""
    from pyverilog.vparser.parser import ParseError  # noqa: PLC0415  (a cold start without this lane saves 20 ms)

    error: type[Exception] = ParseError
    return error


@cache
def _parser() -> Any:
    """Return pyverilog's parser, with its tables from a private directory of the user, made at the first use.

    Building the tables takes a second, loading them a tenth. A table file is an importable module, so it must not
    lie where somebody else could have put it: not in the working directory, not under a known name in a shared one.
    """
    with warnings.catch_warnings(), contextlib.redirect_stderr(io.StringIO()):
        warnings.simplefilter("ignore")
        from pyverilog.vparser.parser import VerilogParser  # noqa: PLC0415  (see _syntax_error)

        store = _table_directory()
        if (store / "parsetab.py").exists():
            return _with_tables_in(VerilogParser, store)
        with tempfile.TemporaryDirectory() as scratch:
            parser = _with_tables_in(VerilogParser, Path(scratch))
            with contextlib.suppress(OSError):
                store.mkdir(parents=True, exist_ok=True, mode=0o700)
                draft = store / f"parsetab.{os.getpid()}"
                draft.write_bytes((Path(scratch) / "parsetab.py").read_bytes())
                draft.replace(store / "parsetab.py")
        return parser


def _table_directory() -> Path:
    base = os.environ.get("XDG_CACHE_HOME") or Path.home() / ".cache"
    python = f"{sys.version_info.major}.{sys.version_info.minor}"
    return Path(base) / "auditor" / f"pyverilog-{version('pyverilog')}-python-{python}"


def _with_tables_in(parser_class: Any, directory: Path) -> Any:
    """Build the parser while ``directory`` is the first place that modules are looked for."""
    sys.path.insert(0, str(directory))
    sys.modules.pop("parsetab", None)
    try:
        return parser_class(outputdir=str(directory), debug=False)
    finally:
        sys.path.remove(str(directory))
        sys.modules.pop("parsetab", None)
