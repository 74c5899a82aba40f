"""Drafts → modules, each module once for every set of values that its parameters are given."""

import re
from collections.abc import Iterable, Iterator, Mapping, Sequence

from auditor.errors import near_misses
from auditor.verilog.checks import check
from auditor.verilog.draft import EVERY_PORT, Draft
from auditor.verilog.plain import NAME, RefusedError, plain_name
from auditor.verilog.statements import Connection, Constant, Instance, Module

MOST_VARIANTS = 10_000
_PARAMETER = re.compile(rf"parameter\b[^=\\]*?({NAME})\s*=")

# The values given to an instance, by name or in order.
Values = Sequence[tuple[str | None, Constant]]


class Variants:
    """Modules by name and by what their parameters are given; those that are asked for are read in turn."""

    def __init__(self, drafts: Mapping[str, Draft], primitives: Iterable[str]) -> None:
        self.drafts, self.primitives = drafts, frozenset(primitives)
        # Reading empties a draft, and any module with parameters may be wanted once more.
        self.originals = {name: draft.variant(name, {}) for name, draft in drafts.items() if _parameters(draft)}
        self.asked: dict[str, Draft] = {}
        self.families: dict[str, str] = {}

    def pending(self) -> Iterator[Draft]:
        """Yield every draft, also those that are asked for meanwhile."""
        yield from self.drafts.values()
        done = 0
        while done < len(self.asked):
            yield list(self.asked.values())[done]
            done += 1

    def name_of(self, cell: str, values: Values) -> str:
        """Return the name of a module under values for its parameters. Raises RefusedError.

        A cell that no module describes is another cell under each set of values: what it does may depend on them.
        """
        original = self.originals.get(cell)
        names = _parameters(original) if original else []
        if cell in self.drafts and len(values) > len(names):
            raise RefusedError(f"{cell} is given {len(values)} parameters and has {len(names)}", "leave some out")
        given: dict[str, Constant] = {}
        for number, (name, value) in enumerate(values):
            own = names[number] if name is None and names else str(number) if name is None else name
            if cell in self.drafts and own not in names:
                remedy = near_misses(own, names) or f"use one of {', '.join(names)}"
                raise RefusedError(f"{cell} has no parameter {own}", remedy)
            given[own] = value
        if not given:
            return cell
        variant = f"{cell} #({', '.join(f'{name}={_written(given[name])}' for name in sorted(given))})"
        if original and variant not in self.asked:
            if len(self.asked) >= MOST_VARIANTS:
                raise RefusedError(f"{cell} is given more than {MOST_VARIANTS} sets of values", "give them fewer")
            self.asked[variant] = original.variant(variant, given)
            self.families[variant] = cell
        return variant


def modules_of(drafts: Mapping[str, Draft], primitives: Iterable[str]) -> dict[str, Module]:
    """Return the modules of all drafts, in the order of the text; troubles are noted with the drafts."""
    variants = Variants(drafts, primitives)
    modules: dict[str, Module] = {}
    everywhere: list[Draft] = []
    for draft in variants.pending():
        if draft.waiting:
            from auditor.verilog.grammar import read_waiting  # noqa: PLC0415  (many netlists never need this lane)

            read_waiting(draft, variants)
        check(draft)
        modules[draft.name] = draft.finish()
        if draft.every_port:
            everywhere.append(draft)
    for draft in everywhere:
        _connect_every_port(draft, modules)
    _drop_unused(modules, variants.families)
    return modules


def _parameters(draft: Draft) -> list[str]:
    """Return the names of a module's parameters in order."""
    found = (_PARAMETER.match(wait.item.text) for wait in draft.waiting if wait.kind == "parameter")
    return [plain_name(match[1]) for match in found if match]


def _written(value: Constant) -> str:
    if not value.sized and set(value.bits) <= {"0", "1"}:
        return str(int(value.bits, 2))
    return f"{len(value.bits)}'b{value.bits}"


def _drop_unused(modules: dict[str, Module], families: Mapping[str, str]) -> None:
    """Leave out what stands in no netlist: a module under its own values where all instances give others."""
    suspects = {*families, *families.values()}
    while suspects:
        used = {instance.cell for module in modules.values() for instance in module.instances}
        unused = [name for name in modules if name in suspects and name not in used]
        if not unused:
            return
        for name in unused:
            del modules[name]


def _connect_every_port(draft: Draft, modules: Mapping[str, Module]) -> None:
    """Write out `.*`: each port that is not connected otherwise goes to the net of its name."""
    for number, instance in enumerate(draft.instances):
        if not any(connection is EVERY_PORT for connection in instance.connections):
            continue
        own = [connection for connection in instance.connections if connection is not EVERY_PORT]
        module = modules.get(instance.cell)
        if module is None:
            found = f"{instance.name} connects .*, and no module here says which ports {instance.cell} has"
            draft.trouble(found, "write its connections out", instance.line)
            continue
        named = {connection.pin for connection in own}
        own += [Connection(port.name, port.name) for port in module.ports if port.name not in named]
        for pin, value in own[len(named) :]:
            if value not in draft.nets:
                found = f"{instance.name} connects .*, and there is no net {pin} for that port of {instance.cell}"
                draft.trouble(found, "declare the net, or write the connection out", instance.line)
        draft.instances[number] = _connected(instance, own)


def _connected(instance: Instance, connections: Sequence[Connection]) -> Instance:
    return instance._replace(connections=tuple(connections))
