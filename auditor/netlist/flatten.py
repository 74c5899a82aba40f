"""Modules → Netlist: the main verb of this room.

Every module is compiled once into a template, children first; then the templates are laid down along the tree of
instances, and the nets that ports and plain assigns make one are merged.
"""

from collections.abc import Collection, Mapping, Sequence
from dataclasses import dataclass, field
from functools import partial
from typing import NamedTuple

import numpy as np
import numpy.typing as npt

from auditor.errors import TroubleList, fail
from auditor.netlist.aliases import Tie, classes_of
from auditor.netlist.elaborate import compile_module
from auditor.netlist.netlist import CONSTANT_1, Netlist, Port
from auditor.netlist.scope import MAX_OBJECTS, PortBits, near
from auditor.netlist.template import Registry, Template
from auditor.notation import SourcePlace, natural_order
from auditor.verilog.statements import Module

MAX_CHARACTERS = 4_000_000_000
MOST_TOLD = 20  # modules of a circle that its trouble names

Column = npt.NDArray[np.int32]


def flatten(modules: Mapping[str, Module], top: str | None, library_cells: Collection[str] = ()) -> Netlist:
    """Return the flat netlist below ``top``, or below the only module that no other instantiates.

    Instances of modules are expanded, unless the module is empty or named in ``library_cells``: those, and cells
    that no module describes, stay library cells. Ports and plain assigns merge nets; assigns of unequal width are
    filled with 0 or cut on the left (IEEE 1364-2005, 6.1); operators become gate primitives. Raises InputError.
    """
    called = {name: _called(module, modules) for name, module in modules.items()}
    chosen = _choose_top(modules, called, top, library_cells)
    expanded = {name for name, module in modules.items() if _has_content(module) and name not in library_cells}
    expanded.add(chosen)
    order = _children_first(modules, called, expanded, chosen)
    troubles = TroubleList()
    registry = Registry(modules, expanded)
    for name in order:
        registry.templates[name] = compile_module(modules[name], registry, troubles)
    troubles.raise_any()
    _check_size(registry.templates, order, modules[chosen])
    return _assemble(_lay_down(registry.templates, chosen), registry, chosen)


def _has_content(module: Module) -> bool:
    return bool(module.instances or module.assigns)


def _called(module: Module, modules: Mapping[str, Module]) -> dict[str, int]:
    """Return the modules that a module instantiates, with the line of the first instance."""
    lines: dict[str, int] = {}
    for instance in module.instances:
        if instance.cell in modules and not instance.primitive:
            lines.setdefault(instance.cell, instance.line)
    return lines


def _choose_top(
    modules: Mapping[str, Module],
    called: Mapping[str, Mapping[str, int]],
    top: str | None,
    library_cells: Collection[str],
) -> str:
    """Return the name of the top module. Raises InputError, which lists the candidates."""
    inner = {name for below in called.values() for name in below}
    candidates = [name for name in modules if name not in inner and name not in library_cells]
    candidates = [name for name in candidates if _has_content(modules[name])] or candidates
    listed = ", ".join(sorted(candidates, key=natural_order)) or "none"
    if top is not None:
        if top in modules:
            return top
        hint = near(top, modules) or f"candidates are {listed}"
        raise fail(f"there is no module {top}", f"mend the name of the top: {hint}")
    if len(candidates) == 1:
        return candidates[0]
    if candidates:
        raise fail(f"several modules could be the top: {listed}", "give the top with --top")
    for name in modules:  # every module is instantiated: either in a circle, or all are library cells
        _children_first(modules, called, modules, name)
    raise fail("every module is a library cell", "give the netlist that instantiates them")


def _children_first(
    modules: Mapping[str, Module], called: Mapping[str, Mapping[str, int]], expanded: Collection[str], top: str
) -> list[str]:
    """Return the modules below ``top`` and itself, each after those it instantiates. Raises InputError on a circle."""
    order: dict[str, None] = {}
    path: dict[str, None] = {}
    stack = [(top, False)]
    while stack:
        name, done = stack.pop()
        if done:
            del path[name]
            order[name] = None
            continue
        if name in order:
            continue
        path[name] = None
        stack.append((name, True))
        for child, line in reversed(list(called[name].items())):
            if child in path:
                circle = [*list(path)[list(path).index(child) :], child]
                if len(circle) > MOST_TOLD:
                    circle[MOST_TOLD // 2 : -MOST_TOLD // 2] = ["..."]
                place = modules[name].place_of(line)
                raise fail(f"modules instantiate each other: {' > '.join(circle)}", "break the circle", place)
            if child in expanded:
                stack.append((child, False))
    return list(order)


def _check_size(templates: Mapping[str, Template], order: Sequence[str], top: Module) -> None:
    """Refuse a hierarchy that would unfold into more than memory holds, before it does. Raises InputError."""
    sizes: dict[str, int] = {}
    characters: dict[str, int] = {}  # of the names below a module, its own instance name left out
    for name in order:
        template = templates[name]
        own, nets = template.names, template.scope.names[CONSTANT_1 + 1 :]
        sizes[name] = max(len(own), len(nets)) + 1
        characters[name] = sum(map(len, own)) + sum(map(len, nets))
        for child in template.children:
            sizes[name] += sizes[child.module]
            characters[name] += characters[child.module] + (len(child.name) + 1) * sizes[child.module]
    if sizes[top.name] > MAX_OBJECTS:
        found = f"module {top.name} unfolds into {sizes[top.name]} nets and instances"
        raise fail(found, f"keep below {MAX_OBJECTS}, or name repeated modules as cells", top.place)
    if characters[top.name] > MAX_CHARACTERS:
        found = f"the names below module {top.name} have about {characters[top.name]} characters in all"
        raise fail(found, f"keep below {MAX_CHARACTERS}: nest modules less deeply or shorten names", top.place)


@dataclass(slots=True)
class _Columns:
    """The columns of the flat netlist while templates are laid down; nets are numbered before they are merged."""

    net_names: list[str] = field(default_factory=lambda: ["1'b0", "1'b1"])
    net_depth: list[Column] = field(default_factory=list)
    net_file: list[Column] = field(default_factory=list)
    net_line: list[Column] = field(default_factory=list)
    instance_names: list[str] = field(default_factory=list)
    instance_type: list[Column] = field(default_factory=list)
    instance_file: list[Column] = field(default_factory=list)
    instance_line: list[Column] = field(default_factory=list)
    pin_count: list[Column] = field(default_factory=list)
    pin_name: list[Column] = field(default_factory=list)
    pin_net: list[Column] = field(default_factory=list)
    ties: list[Tie] = field(default_factory=list)
    undefined: list[int] = field(default_factory=list)
    files: dict[str, int] = field(default_factory=dict)

    def places(self, module: Module, lines: Column) -> tuple[Column, Column]:
        """Return the numbers of the files that lines of a module stand in, and the lines in them."""
        spans = module.spans
        if spans is None:
            return np.full(len(lines), self.files.setdefault(module.place.file, len(self.files)), np.int32), lines
        numbers = np.array([self.files.setdefault(file, len(self.files)) for file in spans.files], np.int32)
        shifts = np.array(spans.firsts, np.int32) - np.array(spans.starts, np.int32)
        span = np.maximum(np.searchsorted(spans.starts, lines, side="right") - 1, 0)
        return numbers[span], lines + shifts[span]


class _Block(NamedTuple):
    """The columns of a template as arrays; depth marks the nets that stand in no text, to be named last."""

    net_depth: Column
    net_line: Column
    types: Column
    lines: Column
    pin_count: Column
    pin_name: Column
    pin_net: Column


_GENERATED = 1 << 30


def _block(template: Template) -> _Block:
    scope = template.scope
    depth = np.zeros(len(scope.names), dtype=np.int32)
    depth[list(scope.generated)] = _GENERATED
    column = partial(np.array, dtype=np.int32)
    return _Block(
        depth[CONSTANT_1 + 1 :],
        column(scope.lines[CONSTANT_1 + 1 :]),
        column(template.types),
        column(template.lines),
        column(template.pin_count),
        column(template.pin_name),
        column(template.pin_net),
    )


class _Visit(NamedTuple):
    """An instance of a template to lay down; ``pairs`` tie its nets to its parent's, which begin at ``base``."""

    module: str
    prefix: str
    depth: int
    pairs: Sequence[tuple[int, int]]
    base: int
    place: SourcePlace


def _lay_down(templates: Mapping[str, Template], top: str) -> _Columns:
    """Lay the templates down along the tree of instances, parents first, children in the order of the text."""
    columns = _Columns()
    blocks: dict[str, _Block] = {}
    stack = [_Visit(top, "", 0, (), 0, SourcePlace(""))]
    while stack:
        visit = stack.pop()
        template = templates[visit.module]
        if visit.module not in blocks:
            blocks[visit.module] = _block(template)
        base = len(columns.net_names) - 2
        _lay_one(columns, template, blocks[visit.module], visit, base)
        for child in reversed(template.children):
            place = template.scope.module.place_of(child.line)
            prefix = f"{visit.prefix}{child.name}."
            stack.append(_Visit(child.module, prefix, visit.depth + 1, child.pairs, base, place))
    return columns


def _lay_one(columns: _Columns, template: Template, block: _Block, visit: _Visit, base: int) -> None:
    """Append one instance of a template; its local net k becomes net k + base, constants stay."""
    scope, prefix = template.scope, visit.prefix
    net_file, net_line = columns.places(scope.module, block.net_line)
    instance_file, instance_line = columns.places(scope.module, block.lines)
    own_nets = scope.names[CONSTANT_1 + 1 :]
    columns.net_names += [prefix + name for name in own_nets] if prefix else own_nets
    columns.net_depth.append(block.net_depth + visit.depth)
    columns.net_file.append(net_file)
    columns.net_line.append(net_line)
    columns.instance_names += [prefix + name for name in template.names] if prefix else template.names
    columns.instance_type.append(block.types)
    columns.instance_file.append(instance_file)
    columns.instance_line.append(instance_line)
    columns.pin_count.append(block.pin_count)
    columns.pin_name.append(block.pin_name)
    columns.pin_net.append(np.where(block.pin_net > CONSTANT_1, block.pin_net + base, block.pin_net))
    columns.undefined += [net + base for net in scope.undefined]
    for first, second, line in scope.ties:
        columns.ties.append(Tie(_moved(first, base), _moved(second, base), scope.module.place_of(line)))
    for inside, outside in visit.pairs:
        columns.ties.append(Tie(_moved(inside, base), _moved(outside, visit.base), visit.place))


def _moved(net: int, base: int) -> int:
    return net + base if net > CONSTANT_1 else net


def _assemble(columns: _Columns, registry: Registry, top: str) -> Netlist:
    """Merge the nets that are one, number the classes in the order of their first net, and name them."""
    troubles = TroubleList()
    names = unique(columns.net_names)
    lowest = classes_of(len(names), columns.ties, names, troubles)
    troubles.raise_any()
    is_lowest = lowest == np.arange(len(names), dtype=np.int32)
    final: Column = (np.cumsum(is_lowest) - 1).astype(np.int32)[lowest]
    depth = _joined([np.zeros(2, dtype=np.int32), *columns.net_depth])
    naming = _naming_nets(names, depth, final, lowest[is_lowest])
    net_of_name = dict(zip(names[2:], final[2:].tolist(), strict=True))
    ports = tuple(_port(port, final) for port in registry.templates[top].ports.values())
    for port in ports:
        for name, net in zip(port.bits, port.nets, strict=True):
            net_of_name.setdefault(name, net)
    pin_net = _joined(columns.pin_net)
    ends = np.cumsum(_joined(columns.pin_count), dtype=np.int32)
    zeros = np.zeros(2, dtype=np.int32)
    return Netlist(
        top=top,
        files=tuple(columns.files),
        cell_types=tuple(registry.types),
        pin_names=tuple(registry.pins),
        ports=ports,
        net_names=[names[net] for net in naming.tolist()],
        net_of_name=net_of_name,
        net_file=_joined([zeros, *columns.net_file])[naming],
        net_line=_joined([zeros, *columns.net_line])[naming],
        instance_names=unique(columns.instance_names),
        instance_type=_joined(columns.instance_type),
        instance_file=_joined(columns.instance_file),
        instance_line=_joined(columns.instance_line),
        first_pin=np.concatenate([zeros[:1], ends]),
        pin_name=_joined(columns.pin_name),
        pin_net=np.where(pin_net >= 0, final[pin_net], pin_net).astype(np.int32),
        undefined=frozenset(final[columns.undefined].tolist()),
    )


def _joined(blocks: Sequence[Column]) -> Column:
    return np.concatenate(blocks).astype(np.int32) if blocks else np.zeros(0, dtype=np.int32)


def unique(names: list[str]) -> list[str]:
    r"""Return the names with a backslash before each that an earlier one has too.

    Such names print alike and are not the same: bit 3 of ``a`` and ``\a[3] ``, or net ``n`` in ``u`` and ``\u.n ``.
    """
    if len(set(names)) == len(names):
        return names
    taken: set[str] = set()
    result = []
    for name in names:
        own = name
        while own in taken:
            own = "\\" + own
        taken.add(own)
        result.append(own)
    return result


def _naming_nets(names: Sequence[str], depth: Column, final: Column, lowest: Column) -> Column:
    """Return for each class the net that names it: shortest path, then natural order; generated nets come last."""
    naming = lowest.copy()
    several = np.flatnonzero(np.bincount(final, minlength=2)[final] > 1)
    best: dict[int, tuple[int, tuple[tuple[int, int | str], ...]]] = {}
    for net in several.tolist():
        group = int(final[net])
        if group <= CONSTANT_1:
            continue
        key = (int(depth[net]), natural_order(names[net]))
        if group not in best or key < best[group]:
            best[group] = key
            naming[group] = net
    return naming


def _port(port: PortBits, final: Column) -> Port:
    """Return a port of the top by ascending index."""
    step = -1 if port.descending else 1
    return Port(port.name, port.direction or "", tuple(final[port.nets[::step]].tolist()), tuple(port.bits[::step]))
