"""Prints a sheet as Verilog text: flat, or the register and the phase shifter as modules of their own."""

from collections.abc import Iterator, Mapping
from types import MappingProxyType

from tests.support.sheet import Formula, Gate, Part, Sheet


def verilog(sheet: Sheet, top: str) -> str:
    """Return the text of all modules, in any order where the sheet is shuffled."""
    if not sheet.hierarchy:
        return _module(sheet, top, sheet.statements, sheet.inputs, sheet.outputs)
    parts: dict[Part, list[Gate | Formula]] = {"top": [], "register": [], "shifter": []}
    for statement in sheet.statements:
        parts[statement.part].append(statement)
    modules: list[str] = []
    instances: dict[str, list[str]] = {}
    for part in ("register", "shifter"):
        own = parts[part]
        if not own:
            continue
        elsewhere = [s for other, statements in parts.items() if other != part for s in statements]
        outside = {_group(sheet, n) for s in elsewhere for n, _ in _nets(sheet, s)} | {*sheet.outputs}
        driven = _groups(sheet, own, driven=True)
        inputs = [g for g in _groups(sheet, own, driven=False) if g not in driven]
        outputs = [g for g in driven if g in outside]
        modules.append(_module(sheet, f"{top}_{part}", own, inputs, outputs))
        ports = inputs + outputs
        if sheet.rng.random() < 0.5:
            pins = ", ".join(ports)
        else:
            pins = ", ".join(f".{g}({g})" for g in sheet.rng.sample(ports, len(ports)))
        instances[f"  {top}_{part} {sheet.instances[part]} ({pins});"] = ports
    modules.append(_module(sheet, top, parts["top"], sheet.inputs, sheet.outputs, instances))
    if sheet.shuffled:
        sheet.rng.shuffle(modules)
    return "\n".join(modules)


def _nets(sheet: Sheet, statement: Gate | Formula) -> Iterator[tuple[str, bool]]:
    """Yield the nets of a statement, and whether it drives them."""
    if isinstance(statement, Formula):
        yield _same(sheet, statement.left), True
        pairs = [(net, False) for net in statement.nets]
    else:
        pairs = [(net, drives) for _, net, drives in statement.pins]
    for net, drives in pairs:
        if net and not net.startswith("1'b"):
            yield _same(sheet, net), drives


def _same(sheet: Sheet, net: str) -> str:
    """Return the net that stands for this one."""
    return sheet.same.get(net, net)


def _group(sheet: Sheet, net: str) -> str:
    """Return the name that is declared for a net: its vector's or its own."""
    return next((name for name, (_, _, keys) in sheet.vectors.items() if net in keys), net)


def _groups(sheet: Sheet, statements: list[Gate | Formula], driven: bool) -> list[str]:
    """Return the declared names that the statements drive (or read), each once, in order."""
    pairs = (pair for statement in statements for pair in _nets(sheet, statement))
    return list(dict.fromkeys(_group(sheet, net) for net, drives in pairs if drives == driven))


def _range(sheet: Sheet, group: str) -> str:
    left, right, _ = sheet.vectors.get(group, (0, 0, None))
    return f"[{left}:{right}] " if group in sheet.vectors else ""


def _module(
    sheet: Sheet,
    name: str,
    own: list[Gate | Formula],
    inputs: list[str],
    outputs: list[str],
    instances: Mapping[str, list[str]] = MappingProxyType({}),
) -> str:
    """Return one module; the header is in either style of the standard; ``instances`` are lines and their ports."""
    ports = [("input", g) for g in inputs] + [("output", g) for g in outputs]
    directions = [f"{direction} {_range(sheet, group)}{group}" for direction, group in ports]
    if sheet.rng.random() < 0.5:
        head = f"module {name} (\n  " + ",\n  ".join(directions) + "\n);\n"
    else:
        head = f"module {name} (" + ", ".join(g for _, g in ports) + ");\n"
        head += "".join(f"  {line};\n" for line in directions)
    groups = _groups(sheet, own, driven=True) + _groups(sheet, own, driven=False)
    groups += [group for ports in instances.values() for group in ports]
    wires = [g for g in dict.fromkeys(groups) if g not in inputs and g not in outputs]
    lines = [_statement(sheet, s) for s in own] + list(instances)
    if sheet.shuffled:
        sheet.rng.shuffle(lines)
    declared = "".join(f"  wire {_range(sheet, group)}{group};\n" for group in wires)
    return head + declared + "".join(f"{line}\n" for line in lines) + "endmodule\n"


def _statement(sheet: Sheet, statement: Gate | Formula) -> str:
    """Return one statement."""

    def text(net: str) -> str:
        return sheet.printed.get(_same(sheet, net), net)

    if isinstance(statement, Formula):
        right = statement.template.format(*map(text, statement.nets))
        return f"  assign {text(statement.left)} = {right};"
    if statement.primitive:
        return f"  {statement.cell} {statement.name} ({', '.join(text(net) for _, net, _ in statement.pins)});"
    pins = ", ".join(f".{pin}({text(net)})" for pin, net, _ in statement.pins)
    return f"  {statement.cell} {statement.name} ({pins});"
