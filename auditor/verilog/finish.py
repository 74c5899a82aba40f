"""Drafts → modules: what waits is read, parameters get their values, and `.*` is written out."""

from collections.abc import Iterable, Mapping

from auditor.verilog.checks import check
from auditor.verilog.draft import EVERY_PORT, Draft
from auditor.verilog.statements import Connection, Module
from auditor.verilog.variants import Variants


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
        modules[draft.name] = draft.finish(variants.primitives)
        if draft.every_port:
            everywhere.append(draft)
    for draft in everywhere:
        _connect_every_port(draft, modules)
    _drop_unused(modules, variants.families)
    return modules


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
        draft.instances[number] = instance._replace(connections=tuple(own))
