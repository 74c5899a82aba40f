"""The nets of one module under local numbers: names, selects and constants → bits.

Lists of bits run from the most significant to the least. Local nets 0 and 1 are the constants.
"""

from collections.abc import Iterable
from dataclasses import dataclass, field
from itertools import islice

from auditor.errors import TroubleList, near_misses
from auditor.netlist.netlist import CONSTANT_0, CONSTANT_1, OPEN
from auditor.verilog.statements import Concatenation, Constant, Expression, Module, Range, Select

MAX_OBJECTS = 20_000_000
MAX_WIDTH = 1 << 24


class WideError(Exception):
    """The value is not one plain bit."""


@dataclass(frozen=True, slots=True)
class PortBits:
    """A port of a module: its direction or None, the nets inside and the names of the bits, leftmost first."""

    name: str
    direction: str | None
    nets: list[int]
    bits: list[str]
    descending: bool


@dataclass(slots=True)
class Scope:
    """The nets of a module; ``line`` is that of the statement at hand, for troubles and implicit nets.

    ``names``, ``lines``   by local number        ``generated``  nets that stand in no text
    ``ties``   (net, net, line): the two are one   ``undefined``  nets that an x or z literal drives
    """

    module: Module
    troubles: TroubleList
    line: int = 0
    names: list[str] = field(default_factory=lambda: ["1'b0", "1'b1"])
    lines: list[int] = field(default_factory=lambda: [0, 0])
    generated: set[int] = field(default_factory=set)
    undefined: list[int] = field(default_factory=list)
    ties: list[tuple[int, int, int]] = field(default_factory=list)
    declared: dict[str, tuple[int, Range | None]] = field(default_factory=dict)
    taken: set[str] | None = None
    generated_count: dict[str, int] = field(default_factory=dict)

    def __post_init__(self) -> None:
        """Give numbers to the declared nets, vectors first: of two nets of one printed name the bit keeps it."""
        for name, declaration in sorted(self.module.nets.items(), key=lambda entry: entry[1].range is None):
            self.line = declaration.line
            first = len(self.names)
            bounds = declaration.range
            if bounds is None:
                self.names.append(name)
                self.lines.append(declaration.line)
            else:
                indices = indices_of(bounds)
                if len(indices) + first > MAX_OBJECTS:
                    self.trouble(f"{name} has {len(indices)} bits", f"keep below {MAX_OBJECTS} bits in a module")
                    continue
                self.names.extend(f"{name}[{index}]" for index in indices)
                self.lines.extend([declaration.line] * len(indices))
            self.declared[name] = first, bounds
            if declaration.kind in ("supply0", "supply1"):
                constant = CONSTANT_1 if declaration.kind == "supply1" else CONSTANT_0
                self.ties.extend((net, constant, declaration.line) for net in range(first, len(self.names)))

    def trouble(self, found: str, remedy: str) -> None:
        """Note a trouble at the statement at hand."""
        self.troubles.add(found, remedy, self.module.place_of(self.line))

    def width_of(self, value: Expression | None) -> int:
        """Return the width of a leaf; an undeclared net is one bit wide."""
        if isinstance(value, str):
            _, bounds = self.declared.get(value, (0, None))
            return 1 if bounds is None else len(indices_of(bounds))
        if isinstance(value, Select):
            return abs(value.left - value.right) + 1
        return len(value.bits) if isinstance(value, Constant) else 1

    def bits_of(self, value: Expression | None, implicit: bool) -> list[int]:
        """Return the bits of a leaf; ``implicit`` allows a net that is declared nowhere (IEEE 1364-2005, 4.5)."""
        if isinstance(value, str):
            return self._net_bits(value, implicit and self.module.implicit_nets)
        if isinstance(value, Select):
            return self._select_bits(value)
        if isinstance(value, Constant):
            return [int(bit) if bit in "01" else self._undefined_net() for bit in value.bits]
        return [OPEN]

    def _net_bits(self, name: str, implicit: bool) -> list[int]:
        if name not in self.declared:
            if not implicit:
                self.trouble(f"net {name} is not declared", self._or_near(name, "declare the net or mend its name"))
            self.declared[name] = len(self.names), None
            self.names.append(name)
            self.lines.append(self.line)
        first, bounds = self.declared[name]
        return [first] if bounds is None else list(range(first, first + len(indices_of(bounds))))

    def _select_bits(self, select: Select) -> list[int]:
        net, left, right = select
        first, bounds = self.declared.get(net, (0, None))
        width = abs(left - right) + 1
        written = f"{net}[{left}]" if left == right else f"{net}[{left}:{right}]"
        if net not in self.declared:
            self.trouble(f"net {net} is not declared", self._or_near(net, "declare the net or mend its name"))
        elif bounds is None:
            self.trouble(f"{written} selects from {net}, which is no vector", "declare the range of the net")
        else:
            low, high = sorted(bounds)
            if not (low <= left <= high and low <= right <= high):
                has = f"{net}[{bounds.left}:{bounds.right}]"
                self.trouble(f"{written} is outside the declared {has}", "mend the select or the declaration")
            elif (left > right) != (bounds.left > bounds.right) and left != right:
                self.trouble(f"{written} runs against the declared order of {net}", "swap the bounds of the select")
            else:
                start = first + abs(left - bounds.left)
                return list(range(start, start + width))
        return self._stand_ins(min(width, MAX_WIDTH))

    def bit_of(self, select: Select) -> int:
        """Return the net of a select of one bit. Raises WideError for a wider one."""
        net, left, right = select
        if left != right:
            raise WideError
        first, bounds = self.declared.get(net, (0, None))
        if bounds is not None and (bounds[0] >= left >= bounds[1] or bounds[0] <= left <= bounds[1]):
            return first + abs(left - bounds[0])
        return self._select_bits(select)[0]

    def _stand_ins(self, width: int) -> list[int]:
        """Return nets that let the reading go on after a trouble."""
        return [self.generate_net("missing") for _ in range(width)]

    def generate_net(self, stem: str, name: str | None = None) -> int:
        """Return a new net that no text names."""
        net = len(self.names)
        self.names.append(name or self.generate_name(stem))
        self.lines.append(self.line)
        self.generated.add(net)
        return net

    def generate_name(self, stem: str) -> str:
        """Return a name, the same in every run, that no net and no instance of the module has."""
        if self.taken is None:
            self.taken = self.module.nets.keys() | {instance.name for instance in self.module.instances}
            self.taken |= self.declared.keys()
        count = self.generated_count[stem] = self.generated_count.get(stem, 0) + 1
        name = f"{stem}${count}"
        while name in self.taken or name in self.declared:
            name += "$"
        self.taken.add(name)
        return name

    def _undefined_net(self) -> int:
        net = self.generate_net("undefined")
        self.undefined.append(net)
        return net

    def _or_near(self, name: str, remedy: str) -> str:
        """Return the remedy, with near misses where there are some."""
        hint = near(name, self.declared) if len(self.troubles.troubles) < 20 else ""
        return f"{remedy}: {hint}" if hint else remedy

    def ports(self) -> dict[str, PortBits]:
        """Return the ports in header order; bits are indexed as the net inside, else from 0 up."""
        found: dict[str, PortBits] = {}
        for name, inside in self.module.ports:
            self.line = self.module.place.line
            parts = inside.parts if isinstance(inside, Concatenation) else (inside,)
            nets = [net for part in parts for net in self.bits_of(part, implicit=True)]
            first = parts[0].net if isinstance(parts[0], Select) else parts[0]
            direction = self.module.directions.get(first) if isinstance(first, str) else None
            _, bounds = self.declared.get(inside, (0, None)) if isinstance(inside, str) else (0, None)
            indices = indices_of(bounds or Range(len(nets) - 1, 0))
            scalar = bounds is None and len(nets) == 1
            bits = [name] if scalar else [f"{name}[{index}]" for index in indices]
            found[name] = PortBits(name, direction, nets, bits, indices.step < 0)
        return found


class SingleBits(dict[Expression | None, int]):
    """One-bit values of connections → net, each worked out once; raises WideError for all other values."""

    def __init__(self, scope: Scope) -> None:
        super().__init__({None: OPEN})
        self.scope = scope

    def __missing__(self, value: Expression | None) -> int:
        if isinstance(value, Select):
            net = self.scope.bit_of(value)
        elif isinstance(value, str) and self.scope.width_of(value) == 1:
            (net,) = self.scope.bits_of(value, implicit=True)
        elif isinstance(value, Constant) and value.bits[-1] in "01" and (len(value.bits) == 1 or not value.sized):
            net = int(value.bits[-1])
        else:
            raise WideError
        self[value] = net
        return net


def indices_of(bounds: Range) -> range:
    """Return the indices of a vector from left to right."""
    left, right = bounds
    return range(left, right - 1, -1) if left >= right else range(left, right + 1)


def near(name: str, known: Iterable[str]) -> str:
    """Suggest near misses among names that may be a million: only those of like length and the same first letter."""
    like = (other for other in known if other[:1] == name[:1] and abs(len(other) - len(name)) <= 2)
    return near_misses(name, islice(like, 2000))
