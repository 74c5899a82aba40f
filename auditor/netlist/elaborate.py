"""Module → Template: its instances and assigns under local net numbers, checked against the ports they meet.

Each module is worked out once, its children before it; ``flatten`` then lays the columns down once an instance.
"""

from collections.abc import Mapping, Sequence

from auditor.errors import TroubleList
from auditor.netlist.expressions import bits_of
from auditor.netlist.netlist import CONSTANT_1, OPEN, CellType
from auditor.netlist.scope import MAX_OBJECTS, PortBits, Scope, SingleBits, WideError, indices_of, near
from auditor.netlist.template import Child, Registry, Template
from auditor.verilog.statements import Assign, Concatenation, Constant, Expression, Instance, Module, Select

_ONE_INPUT = frozenset({"buf", "not"})
_TWO_INPUTS = frozenset({"bufif0", "bufif1", "notif0", "notif1"})
_LEAVES = frozenset({str, Select, Constant, type(None)})
Pins = Sequence[tuple[str | None, list[int], int]]  # pin, bits, own width; the bits are [OPEN] where open


def compile_module(module: Module, registry: Registry, troubles: TroubleList) -> Template:
    """Return the template of a module whose children have theirs in the registry."""
    return _Compiler(module, registry, troubles).run()


class _Compiler:
    """The template in the making. ``shapes`` remembers, for a cell and its pins as written, what is laid down."""

    def __init__(self, module: Module, registry: Registry, troubles: TroubleList) -> None:
        self.module, self.registry = module, registry
        self.scope = Scope(module, troubles)
        self.template = Template(self.scope, self.scope.ports())
        self.shapes: dict[tuple[str, tuple[str | None, ...], bool], tuple[int, list[int]] | None] = {}

    def run(self) -> Template:
        """Lay down the instances, then the assigns: a net that an instance implies may be read by an assign."""
        self._instances()
        assigned: dict[int, int] = {}
        for assign in self.module.assigns:
            self._assign(assign, assigned)
        self._check_ports()
        self._check_names()
        return self.template

    def _instances(self) -> None:
        """Lay down every instance; the plain ones, one bit a pin, without a call of our own."""
        template, scope, shapes = self.template, self.scope, self.shapes
        net_of = SingleBits(scope).__getitem__
        add_name, add_type, add_line = template.names.append, template.types.append, template.lines.append
        add_count, add_pins, add_nets = template.pin_count.append, template.pin_name.extend, template.pin_net.extend
        for instance in self.module.instances:
            cell, name, connections, scope.line, primitive, array = instance
            pins, values = zip(*connections, strict=True) if connections else ((), ())
            key = (cell, pins, primitive)
            if key not in shapes:
                shapes[key] = self._shape(cell, pins, primitive)
            shape = shapes[key]
            # An operation may be too deep to be hashed as a key of SingleBits.
            if shape is None or array is not None or not _LEAVES.issuperset(map(type, values)):
                self._by_hand(instance)
                continue
            try:
                nets = list(map(net_of, values))
            except WideError:
                nets = []
            if len(nets) != len(pins) or (primitive and (OPEN in nets or nets[0] <= CONSTANT_1)):
                self._by_hand(instance)
                continue
            add_name(name)
            add_type(shape[0])
            add_line(scope.line)
            add_count(len(nets))
            add_pins(shape[1])
            add_nets(nets)

    def _shape(self, cell: str, pins: tuple[str | None, ...], primitive: bool) -> tuple[int, list[int]] | None:
        """Return the type and the pin numbers of a cell so connected, None where it must be done by hand."""
        if primitive:
            inputs = len(pins) - 1
            if any(pins) or inputs < 1 or (inputs != 1 and cell in _ONE_INPUT) or (inputs != 2 and cell in _TWO_INPUTS):
                return None
            named, cell_type = _gate_pins(inputs), CellType(cell, inputs)
        else:
            if cell in self.registry.expanded:
                return None
            interface = self.registry.interface(cell)
            found = self._pin_names(cell, pins, interface)
            if found is None or (interface and any(len(interface[pin].nets) != 1 for pin in found)):
                return None
            named, cell_type = found, CellType(cell)
        return self.registry.type_number(cell_type), [self.registry.pin_number(pin) for pin in named]

    def _pin_names(
        self, cell: str, pins: Sequence[str | None], interface: Mapping[str, PortBits] | None
    ) -> list[str] | None:
        """Return the names of the pins, by position where they are written so, or None after noting troubles."""
        trouble = self.scope.trouble
        if None in pins and interface is None:
            trouble(f"cell {cell} is connected by position and no module says the order of its pins", "name its pins")
            return None
        if None in pins and len(pins) > len(interface or ()):
            trouble(
                f"{len(pins)} connections by position to {cell}, which has {len(interface or ())} ports",
                "leave some out",
            )
            return None
        named = [pin or order for pin, order in zip(pins, [*(interface or ()), *[""] * len(pins)], strict=False)]
        good = True
        for pin in dict.fromkeys(named):
            if named.count(pin) > 1:
                trouble(f"pin {pin} of {cell} is connected twice", "leave one of the connections out")
                good = False
            if interface is not None and pin not in interface:
                hint = near(pin, interface) or f"its ports are {', '.join(interface) or 'none'}"
                trouble(f"{cell} has no port {pin}", f"mend the name: {hint}")
                good = False
        return named if good else None

    def _by_hand(self, instance: Instance) -> None:
        """Lay down an instance of any kind."""
        cell, name, connections, _, primitive, array = instance
        interface = None if primitive else self.registry.interface(cell)
        pins: list[tuple[str | None, list[int], int]] = []
        if primitive:
            if any(pin is not None for pin, _ in connections):
                self.scope.trouble(f"gate {cell} has named pins", "connect gates by position")
                return
            named: Sequence[str | None] | None = [None] * len(connections)
        else:
            named = self._pin_names(cell, [pin for pin, _ in connections], interface)
        if named is None:
            return
        for pin, (_, value) in zip(named, connections, strict=True):
            width = 1 if interface is None or pin is None else len(interface[pin].nets)
            if isinstance(value, Constant) and not value.sized:
                bits = [0] * (width - 32) + self.scope.bits_of(value, implicit=True)[-width:]
            else:
                bits = bits_of(value, self.scope, self._place_gate, implicit=True)
            if value is None:
                bits = [OPEN] * width
            pins.append((pin, bits, width))
        if array is None:
            self._one(instance, name, pins)
            return
        indices = indices_of(array)
        if len(indices) > MAX_OBJECTS:
            self.scope.trouble(f"{name} is an array of {len(indices)} instances", f"keep below {MAX_OBJECTS}")
            return
        for place, index in enumerate(indices):
            part = [(pin, _share(bits, width, place, len(indices)), width) for pin, bits, width in pins]
            self._one(instance, f"{name}[{index}]", part)

    def _one(self, instance: Instance, name: str, pins: Pins) -> None:
        """Lay down one instance with its bits known."""
        cell, line = instance.cell, instance.line
        if instance.primitive:
            self._primitive(cell, name, line, [bits for _, bits, _ in pins])
        elif cell in self.registry.expanded:
            self._child(cell, name, line, pins)
        else:
            self._cell(cell, name, line, pins)

    def _cell(self, cell: str, name: str, line: int, pins: Pins) -> None:
        """Lay down a library cell; the bits of a wide pin get an index each."""
        interface = self.registry.interface(cell)
        bit_names: list[str] = []
        nets: list[int] = []
        for pin, bits, _ in pins:
            assert pin is not None  # _pin_names has named them
            if interface is not None:
                labels = interface[pin].bits
                if not self._fits(name, pin, bits, len(labels)):
                    continue
            else:
                labels = [pin] if len(bits) == 1 else [f"{pin}[{k}]" for k in range(len(bits) - 1, -1, -1)]
            bit_names += labels
            nets += bits
        self._lay(name, CellType(cell), line, bit_names, nets)

    def _primitive(self, gate: str, name: str, line: int, terminals: list[list[int]]) -> None:
        """Lay down a gate primitive; a ``buf`` or ``not`` with several outputs becomes several."""
        for bits in terminals:
            if len(bits) != 1 or bits[0] == OPEN:
                width = "open" if bits == [OPEN] else f"{len(bits)} bits wide"
                self.scope.trouble(f"a terminal of gate {name} is {width}", "connect one bit to each terminal")
                return
        nets = [bits[0] for bits in terminals]
        least, most = (3, 3) if gate in _TWO_INPUTS else (2, len(nets))
        if not least <= len(nets) <= most:
            self.scope.trouble(f"gate {name} has {len(nets)} terminals", f"give {gate} its output and its inputs")
            return
        outputs = nets[:-1] if gate in _ONE_INPUT else nets[:1]
        inputs = nets[len(outputs) :]
        pin_names = _gate_pins(len(inputs))
        for number, output in enumerate(outputs):
            if output <= CONSTANT_1:
                self.scope.trouble(f"gate {name} drives a constant", "connect its output to a net")
            own = name if number == 0 else self.scope.generate_name(name)
            self._lay(own, CellType(gate, len(inputs)), line, pin_names, [output, *inputs])

    def _place_gate(self, gate: str, inputs: Sequence[int]) -> int:
        """Lay down a gate that stands for an operator and return its output, named as the gate."""
        name = self.scope.generate_name("assign")
        net = self.scope.generate_net("assign", name)
        pin_names = _gate_pins(len(inputs))
        self._lay(name, CellType(gate, len(inputs)), self.scope.line, pin_names, [net, *inputs])
        return net

    def _lay(self, name: str, cell: CellType, line: int, pin_names: list[str], nets: list[int]) -> None:
        template, registry = self.template, self.registry
        template.names.append(name)
        template.types.append(registry.type_number(cell))
        template.lines.append(line)
        template.pin_count.append(len(nets))
        template.pin_name.extend(registry.pin_number(pin) for pin in pin_names)
        template.pin_net.extend(nets)

    def _child(self, cell: str, name: str, line: int, pins: Pins) -> None:
        """Connect an instance of an expanded module: each port bit and the net outside are one."""
        ports = self.registry.templates[cell].ports
        pairs: list[tuple[int, int]] = []
        for pin, bits, _ in pins:
            port = ports[pin or ""]
            if OPEN in bits or not self._fits(name, port.name, bits, len(port.nets)):
                continue
            constant = any(bit <= CONSTANT_1 for bit in bits)
            if port.direction != "input" and (constant or not self.scope.generated.isdisjoint(bits)):
                tied = "a constant" if constant else "an expression"
                self.scope.trouble(
                    f"{port.direction} port {port.name} of {name} is tied to {tied}", "connect it to a net"
                )
                continue
            pairs.extend(zip(port.nets, bits, strict=True))
        self.template.children.append(Child(cell, name, line, pairs))

    def _fits(self, name: str, port: str, bits: list[int], width: int) -> bool:
        if len(bits) != width:
            self.scope.trouble(
                f"port {port} of {name} is {width} {_bits(width)} wide and its connection {len(bits)}",
                "give the connection the width of the port",
            )
        return len(bits) == width

    def _assign(self, assign: Assign, assigned: dict[int, int]) -> None:
        """Make target and source one; a narrow source is filled with 0, of a wide one the left bits are dropped."""
        scope = self.scope
        scope.line = assign.line
        left = self._targets(assign.left)
        if left is None:
            scope.trouble(
                "the left side of an assign is no net", "assign to a net, a select or a concatenation of these"
            )
            return
        right = bits_of(assign.right, scope, self._place_gate, context=len(left))
        for target, source in zip(left, right[len(right) - len(left) :], strict=True):
            if target in assigned:
                found = f"net {scope.names[target]} is assigned again, first on line {assigned[target]}"
                scope.trouble(found, "leave one of the assigns out")
            assigned.setdefault(target, assign.line)
            scope.ties.append((target, source, assign.line))

    def _targets(self, left: Expression) -> list[int] | None:
        """Return the bits that an assign drives, None where its left side is more than nets."""
        bits: list[int] = []
        stack = [left]
        while stack:
            part = stack.pop()
            if isinstance(part, Concatenation):
                stack.extend(reversed(part.parts))
            elif isinstance(part, str | Select):
                bits += self.scope.bits_of(part, implicit=True)
            else:
                return None
        return bits

    def _check_ports(self) -> None:
        """See that every port has a direction and every declared direction a port in the header."""
        self.scope.line = self.module.place.line
        for port in self.template.ports.values():
            if port.direction is None:
                self.scope.trouble(
                    f"port {port.name} of module {self.module.name} has no direction",
                    "declare it input, output or inout",
                )
        inside = {net for port in self.template.ports.values() for net in port.nets}
        for name in self.module.directions:
            self.scope.line = self.module.nets[name].line
            if self.scope.declared[name][0] not in inside:
                self.scope.trouble(f"{name} is declared as a port and is not in the header", "add it to the header")

    def _check_names(self) -> None:
        """See that no two instances of the module share a name."""
        names = self.template.names
        if len(set(names)) == len(names) and not self.template.children:
            return
        first: dict[str, int] = {}
        every = [*zip(names, self.template.lines, strict=True), *((c.name, c.line) for c in self.template.children)]
        for name, self.scope.line in sorted(every, key=lambda entry: entry[1]):
            if name in first:
                found = f"instance {name} of module {self.module.name} is there again, first on line {first[name]}"
                self.scope.trouble(found, "give one of them another name")
            first.setdefault(name, self.scope.line)


def _gate_pins(inputs: int) -> list[str]:
    return ["out", *(f"in{k}" for k in range(inputs))]


def _share(bits: list[int], width: int, place: int, count: int) -> list[int]:
    """Return what one instance of an array gets: all, where that fits its port, else its share from the left."""
    if len(bits) == width or len(bits) % count:
        return bits
    share = len(bits) // count
    return bits[place * share : (place + 1) * share]


def _bits(width: int) -> str:
    return "bit" if width == 1 else "bits"
