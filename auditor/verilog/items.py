"""One statement → its items, each entered in the draft if it is plain and left waiting if it is not."""

import re
from collections.abc import Iterator
from functools import partial

from auditor.verilog.draft import EVERY_PORT, Declared, Draft
from auditor.verilog.plain import (
    GATES,
    NAME,
    RESERVED,
    SPACE,
    WIRED,
    Item,
    NotPlainError,
    PlainNames,
    PlainValues,
    closing,
    plain_name,
    split_list,
)
from auditor.verilog.statements import Assign, Connection, Direction, Expression, HeaderPort, Instance, Range

# No group stands inside a possessive repeat: some versions of Python answer that with a SystemError.
S = SPACE
_VALUE = r"(?>[^()\\;]++|\\\S++\s)*+"
_PIN_ONLY = rf"\.{S}{NAME}{S}\({_VALUE}\)"
NAMED_BODY = rf"{S}{_PIN_ONLY}{S}(?:,{S}{_PIN_ONLY}{S})*+"
PINS = re.compile(rf"\.{S}({NAME}){S}\(({_VALUE})\)")
BOUNDS = rf"\[{S}(-?\d{{1,9}}){S}:{S}(-?\d{{1,9}}){S}\]"
_NAMED_BODY = re.compile(NAMED_BODY)
_ONE_INSTANCE = re.compile(rf"({NAME}){S}({NAME}|){S}\((.*)\){S}", re.DOTALL)
_LEVEL = r"(?:supply|strong|pull|weak|highz)[01]"
_STRENGTH = rf"\({S}{_LEVEL}{S}(?:,{S}{_LEVEL}{S})?\)"
_DELAY = r"#\s*(?:[\d.]\w*(?:\.\w+)?|\((?:[^()]|\([^()]*\))*\)|[A-Za-z_]\w*)"
_DRIVE = rf"(?:({_STRENGTH}){S})?(?:{_DELAY}{S})?"
_CELL_HEAD = re.compile(rf"({NAME}){S}")
_DRIVE_HEAD = re.compile(_DRIVE)
_VALUES_HEAD = re.compile(rf"#{S}(?:([\w.']+)|(?=\())")
_ASSIGN_HEAD = re.compile(rf"assign\b{S}{_DRIVE}")
_DEFPARAM = re.compile(rf"({NAME}){S}\.{S}({NAME}){S}=(.*)", re.DOTALL)
NET_KINDS = ("wire", "tri", "uwire", "logic", "reg", "supply0", "supply1", "tri0", "tri1", *sorted(WIRED))
DECLARED = re.compile(
    rf"(?:(input|output|inout)\b{S})?(?:({'|'.join(NET_KINDS)})\b{S})?(?:({_STRENGTH}){S})?(?:(?:vectored|scalared)\b{S})?"
    rf"(signed\b{S})?(\[[^\]\\]*+\]{S})?(?:{_DELAY}{S})?({NAME}){S}(?:=(.*))?",
    re.DOTALL,
)
# Connections that say less than they mean: `.a` for `.a(a)`, and `.*`, alone, in front of others or behind them.
_SHORT = re.compile(
    rf"\\\S++|(,{S}\.{S}\*(?={S}[,)]))|(\({S}\.{S}\*{S}(?:,|(?=\))))|(?<=[(,])({S})\.{S}({NAME}){S}(?=[,)])"
)
_KNOWN_KINDS = frozenset({"wire", "tri", "reg", "supply0", "supply1"})  # to pyverilog
_RANGE = re.compile(rf"{BOUNDS}{S}")
_DIRECTIONS: dict[str, Direction] = {"input": "input", "output": "output", "inout": "inout"}

# The constructors of the large loops, without the call of Python code that a named tuple's own one makes.
connect = partial(tuple.__new__, Connection)
instantiate = partial(tuple.__new__, Instance)


class Items:
    """Reads the items of statements; names and values are worked out once for the whole file."""

    def __init__(self, names: PlainNames, values: PlainValues) -> None:
        self.names, self.values = names, values

    def header(self, draft: Draft, statement: str, position: int, line: int) -> None:
        """Read the parameters and the ports of a module's header."""
        for kind, sign in (("parameter", "#"), ("port", "(")):
            if not statement.startswith(sign, position):
                continue
            start = statement.find("(", position)
            end = closing(statement, start, line) if start >= 0 else -1
            if end < 0:
                break
            items = split_list(statement[start + 1 : end - 1], line + statement.count("\n", 0, start + 1))
            if kind == "parameter":
                for item in items:
                    text = item.text if item.text.startswith("parameter") else f"parameter {item.text}"
                    self._wait_parameter(draft, Item(text, item.line))
            elif statement[start + 1 : end - 1].strip():
                self._ports(draft, items)
            position = end + len(statement[end:]) - len(statement[end:].lstrip())
        rest = statement[position:].strip()
        if rest:
            draft.trouble(f"found {rest.split()[0]} in the header of module {draft.name}", "mend the header", line)

    def _ports(self, draft: Draft, items: Iterator[Item]) -> None:
        """Read the ports of a header: names, declarations, or names with what they are connected to within."""
        prefix: tuple[str, ...] | None = None
        for text, line in items:
            pin = _NAMED_BODY.fullmatch(text) and PINS.match(text)
            declared = DECLARED.fullmatch(text)
            if pin or declared is None:
                name = plain_name(pin[1]) if pin else text.strip()
                try:
                    inside = self.values[pin[2] if pin else text]
                except NotPlainError:
                    inside = None
                if inside is None:
                    draft.trouble(f"found {text.strip() or 'nothing'} in a list of ports", "mend the header", line)
                else:
                    draft.ports.append(HeaderPort(inside if isinstance(inside, str) and not pin else name, inside))
            else:
                *head, name, _ = declared.groups(default="")
                if any(head[:2]):
                    prefix = tuple(head)
                draft.ports.append(HeaderPort(plain_name(name), plain_name(name)))
                if prefix:
                    self._declare(draft, (*prefix[:4], head[4] or prefix[4], name), line)

    def declaration(self, draft: Draft, statement: str, line: int) -> None:
        """Read a declaration that is no plain list of names."""
        prefix: list[str] | None = None
        for item in split_list(statement, line):
            match = DECLARED.fullmatch(item.text)
            if not match:
                draft.wait("declaration", item)
                continue
            *head, name, value = match.groups(default="")
            if prefix is None:
                prefix = head
            own_line = item.line + item.text.count("\n", 0, match.start(6))
            self._declare(draft, (*prefix, name), own_line)
            if value:
                self._drive(draft, prefix[2], own_line)
                self._assign_item(draft, Item(f"assign {name} = {value}", own_line))

    def _declare(self, draft: Draft, parts: tuple[str, ...], line: int) -> None:
        """Enter one declared name given as direction, kind, strength, ``signed``, range and name, each as written."""
        word, kind, _, signed, bounds, name = parts
        plain_range = _RANGE.fullmatch(bounds)
        if signed:
            draft.signed.add(plain_name(name))
        if draft.plain and name not in RESERVED and (plain_range or not bounds):
            direction, kind_or_none = direction_and_kind(word or kind, kind if word else None)
            range_or_none = Range(int(plain_range[1]), int(plain_range[2])) if plain_range else None
            draft.declare(Declared(plain_name(name), direction, kind_or_none, range_or_none, line))
        else:
            known = kind if kind in _KNOWN_KINDS or not kind else "wire"
            draft.wait("declaration", Item(f"{word} {known} {bounds} {name}", line), kind)

    def _drive(self, draft: Draft, strength: str, line: int) -> None:
        """Note a drive that is not strong: alone on its net it reads as any other."""
        if "highz" in strength:
            draft.trouble("this drive is open at one of its values", "give it as a gate with an enable", line)
        elif "pull" in strength or "weak" in strength:
            draft.note("a pull or weak drive is read as a strong one; with a second driver its net is refused", line)

    def parameter(self, draft: Draft, statement: str, line: int) -> None:
        """Leave each parameter to the grammar lane, and with it all that follows in the module."""
        keyword = statement.split(maxsplit=1)[0]
        for item in split_list(statement, line):
            text = item.text if item.text.startswith(keyword) else f"{keyword} {item.text}"
            self._wait_parameter(draft, Item(text, item.line))

    def _wait_parameter(self, draft: Draft, item: Item) -> None:
        draft.plain = False
        draft.wait("parameter", item)

    def assign(self, draft: Draft, statement: str, line: int) -> None:
        """Read a continuous assignment of one net or several, without its delay."""
        head = _ASSIGN_HEAD.match(statement)
        start = head.end() if head else 0
        self._drive(draft, (head[1] if head else "") or "", line)
        for item in split_list(statement[start:], line + statement.count("\n", 0, start)):
            self._assign_item(draft, Item(f"assign {item.text}", item.line))

    def _assign_item(self, draft: Draft, item: Item) -> None:
        if draft.described:
            return
        left, _, right = item.text.removeprefix("assign ").partition("=")
        if draft.plain:
            try:
                target, source = self.values[left], self.values[right]
                if target is not None and source is not None:
                    draft.assigns.append(Assign(target, source, item.line))
                    return
            except NotPlainError:
                pass
        draft.wait("assign", item)

    def defparam(self, draft: Draft, statement: str, line: int) -> None:
        """Leave each value for a parameter of an instance to the grammar lane."""
        start = len("defparam")
        for item in split_list(statement[start:], line):
            match = _DEFPARAM.fullmatch(item.text)
            if match:
                value = Item(f"localparam {match[2]} ={match[3]}", item.line)
                draft.wait("defparam", value, plain_name(match[1]))
            else:
                found = f"defparam {item.text.split('=')[0].strip()} names no parameter of an instance of this module"
                draft.trouble(found, "set it where the instance stands", item.line)

    def instances(self, draft: Draft, statement: str, line: int) -> None:
        """Read a statement of one instance or more, each with its own line."""
        head = _CELL_HEAD.match(statement)
        if not head:
            draft.trouble(f"found {statement.strip()} alone", "mend the text", line)
            return
        start, values = head.end(), ""
        if head[1] in GATES:
            drive = _DRIVE_HEAD.match(statement, start)
            self._drive(draft, (drive[1] if drive else "") or "", line)
            start = drive.end() if drive else start
        elif begun := _VALUES_HEAD.match(statement, start):
            start = begun.end() if begun[1] else max(begun.end(), closing(statement, begun.end(), line))
            values = f"#({begun[1]})" if begun[1] else "#" + " ".join(statement[begun.end() : start].split())
        for number, item in enumerate(split_list(statement[start:], line + statement.count("\n", 0, start))):
            # The first instance stands where its statement begins, a further one where its name stands.
            above = item.line - line if number == 0 else 0
            text, every = _explicit(item.text)
            draft.every_port |= bool(every)
            whole = Item(f"{head[1]}{values}" + "\n" * above + " " + text, item.line - above)
            instance = self._plain_item(whole) if draft.plain else None
            if instance is None:
                draft.wait("instance", whole, every)
            elif every:
                draft.instances.append(instance._replace(connections=(*instance.connections, EVERY_PORT)))
            else:
                draft.instances.append(instance)

    def _plain_item(self, item: Item) -> Instance | None:
        """Return the instance if it is plain."""
        match = _ONE_INSTANCE.fullmatch(item.text)
        if not match:
            return None
        cell, name, body = match.groups(default="")
        primitive = cell in GATES
        if name in RESERVED or (cell in RESERVED and not primitive):
            return None
        try:
            if _NAMED_BODY.fullmatch(body):
                pairs: list[tuple[str | None, Expression | None]] = [
                    (self.names[pin], self.values[value]) for pin, value in PINS.findall(body)
                ]
            elif body.strip():
                pairs = [(None, self.values[part.text]) for part in split_list(body, item.line)]
            else:
                pairs = []
        except NotPlainError:
            return None
        return Instance(plain_name(cell), plain_name(name), tuple(map(connect, pairs)), item.line, primitive)


def _explicit(text: str) -> tuple[str, str]:
    """Return an instance with ``.a`` written as ``.a(a)`` and without ``.*``, and ``.*`` where it had one."""
    every = ""

    def replace(match: re.Match[str]) -> str:
        nonlocal every
        after, first, blanks, name = match.groups()
        if name:
            return f"{blanks}.{name}({name})"
        if after or first:
            every = ".*"
            return ("(" if first else "") + "\n" * match[0].count("\n")
        return match[0]

    return (_SHORT.sub(replace, text) if "." in text else text), every


def direction_of(word: str) -> Direction | None:
    """Return the direction that a word says, if it says one."""
    return _DIRECTIONS.get(word)


def direction_and_kind(word: str, kind: str | None) -> tuple[Direction | None, str | None]:
    """Return what the one or two words before a declared name say."""
    direction = direction_of(word)
    return direction, net_kind((kind if direction else word) or "") or None


def net_kind(word: str) -> str:
    """Return the kind of a net that a word says; ``tri``, ``uwire`` and ``logic`` are wires."""
    return "wire" if word in ("tri", "uwire", "logic") else word
