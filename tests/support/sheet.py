"""Gate-level Verilog under construction: statements as data, names chosen late, printed flat or in three modules."""

import random
from collections.abc import Iterable
from dataclasses import dataclass, field
from typing import Literal

Part = Literal["top", "register", "shifter"]
Style = Literal["cells", "primitives", "assigns"]

FORMULAS = {
    "inv": ("~{0}",),
    "buf": ("{0}",),
    "nand": ("~({0} & {1})", "~{0} | ~{1}"),
    "nor": ("~({0} | {1})", "~{0} & ~{1}"),
    "and": ("{0} & {1}",),
    "or": ("{0} | {1}", "~(~{0} & ~{1})"),
    "xor": ("{0} ^ {1}", "({0} & ~{1}) | (~{0} & {1})", "{1} ? ~{0} : {0}", "^{{{0}, {1}}}"),
    "xnor": ("~({0} ^ {1})", "{0} ~^ {1}", "{0} ? {1} : ~{1}"),
}
PRIMITIVES = {"inv": "not"}
CELLS = {"buf": "buffer"}  # the cells of gates.lib are named by kind and width
WORDS = "abcdefghkmnprstuvwxyzABCDEFGH_"


@dataclass(frozen=True)
class Gate:
    """An instance; ``pins`` are (pin, net, is output); a primitive's pins stand in the order of the standard."""

    cell: str
    name: str
    pins: tuple[tuple[str, str, bool], ...]
    part: Part
    primitive: bool = False


@dataclass(frozen=True)
class Formula:
    """A continuous assignment of a template over ``nets``."""

    left: str
    template: str
    nets: tuple[str, ...]
    part: Part


@dataclass
class Sheet:
    """A block being drawn. Nets are keys; ``printed`` gives each its text, ``vectors`` name → (left, right, keys)."""

    rng: random.Random
    names: Literal["plain", "random", "escaped"] = "plain"
    styles: tuple[Style, ...] = ("cells",)
    hierarchy: bool = False
    shuffled: bool = False
    statements: list[Gate | Formula] = field(default_factory=list)
    inputs: list[str] = field(default_factory=list)
    outputs: list[str] = field(default_factory=list)
    printed: dict[str, str] = field(default_factory=dict)
    vectors: dict[str, tuple[int, int, list[str]]] = field(default_factory=dict)
    same: dict[str, str] = field(default_factory=dict)
    taken: set[str] = field(default_factory=set)
    instances: dict[Part, str] = field(default_factory=dict)

    def __post_init__(self) -> None:
        for part in ("register", "shifter"):
            self.instances[part] = self.identifier(f"u_{part}")

    def identifier(self, hint: str) -> str:
        """Return a new name, as written in Verilog."""
        while True:
            if self.names == "plain":
                name = f"{hint}_{len(self.taken)}" if hint in self.taken else hint
            else:
                name = "".join(self.rng.choices(WORDS, k=self.rng.randint(3, 8))) + str(self.rng.randrange(10))
            if self.names == "escaped" and self.rng.random() < 0.5:
                name = f"\\{name}{self.rng.choice(('[3]', '/q', '.x', '-1', '$', '(a)', '[0][1]', ';//'))} "
            if name not in self.taken:
                self.taken.add(name)
                return name

    def net(self, hint: str = "n") -> str:
        """Return a new scalar net."""
        name = self.identifier(f"{hint}{len(self.printed)}" if hint == "n" else hint)
        self.printed[name] = name
        return name

    def vector(self, hint: str, width: int) -> list[str]:
        """Return the nets of a new vector by ascending index; its range is of any offset and direction."""
        name, low = self.identifier(hint), self.rng.choice((0, 0, 1, 3))
        indices = range(low, low + width)
        keys = [f"{name}[{index}]" for index in indices]
        self.printed |= dict(zip(keys, keys, strict=True))
        ends = (low + width - 1, low) if self.rng.random() < 0.7 else (low, low + width - 1)
        self.vectors[name] = (*ends, keys)
        return keys

    def cell(self, name: str, part: Part, output_pins: Iterable[str] = ("Y",), hint: str = "g", **pins: str) -> Gate:
        """Place a library cell and return it."""
        outputs = set(output_pins)
        order = list(pins)
        self.rng.shuffle(order)
        connections = tuple((pin, pins[pin], pin in outputs) for pin in order)
        gate = Gate(name, self.identifier(f"{hint}{len(self.statements)}"), connections, part)
        self.statements.append(gate)
        return gate

    def gate(self, kind: str, part: Part, *nets: str) -> str:
        """Place a simple gate as a cell, a primitive or an assignment, and return its output net."""
        output = self.net()
        style = self.rng.choice(self.styles)
        if style == "assigns" and len(nets) <= 2:
            self.statements.append(Formula(output, self.rng.choice(FORMULAS[kind]), nets, part))
        elif style == "primitives" or (len(nets) > 2 and kind != "nand"):
            name = self.identifier(f"p{len(self.statements)}") if self.rng.random() < 0.7 else ""
            pins = (("", output, True), *(("", net, False) for net in nets))
            self.statements.append(Gate(PRIMITIVES.get(kind, kind), name, pins, part, primitive=True))
        else:
            width = "" if len(nets) == 1 else str(len(nets))
            cell = CELLS.get(kind, f"{kind}{width}")
            self.cell(cell, part, **dict(zip("ABCD", nets, strict=False)), Y=output)
        return output

    def path(self, gate: Gate) -> str:
        """Return the hierarchical name of an instance as a report spells it."""
        inside = self.hierarchy and gate.part != "top"
        return ".".join(map(clean, [self.instances[gate.part], gate.name] if inside else [gate.name]))


def clean(name: str) -> str:
    """Return a name without the backslash and the blank of an escaped identifier."""
    return name[1:-1] if name.startswith("\\") else name
