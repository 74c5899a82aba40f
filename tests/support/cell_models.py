"""Cells from Verilog model texts, and a plain way to run a cell with one stored bit."""

from pathlib import Path

from auditor.cells.function import BitAlgebra
from auditor.cells.models import ModelFiles

ONE_BIT = BitAlgebra(1)


def models(text, defines=(), only=None):
    """Return all cells of a text by name, or the only one of that name, made at once."""
    found = list(ModelFiles(dict(defines), ()).read(Path("m.v"), text))
    return {name: make() for name, _, make in found if only in (None, name)}


def understood(text, name=None, defines=()):
    """Return the cell of this name, or the last one of the text, which must be understood."""
    cells = models(text, defines)
    cell = cells[name or list(cells)[-1]]
    assert cell.not_understood == ""
    return cell


def value(function, values):
    """Return a function of the bits in ``values``."""
    return function.evaluate([values[name] for name in function.inputs], ONE_BIT)


def step(cell, before, now, state):
    """Return the stored bit after the pins change from ``before`` to ``now``."""
    (bit,) = cell.storage
    held, settled = {**before, bit.variable: state}, {**now, bit.variable: state}
    clear = value(bit.clear, settled) if bit.clear else 0
    preset = value(bit.preset, settled) if bit.preset else 0
    if clear and preset:
        return int(bit.both)
    if clear or preset:
        return preset
    opened = value(bit.clock, settled)
    if bit.kind == "flip-flop":
        opened = opened and not value(bit.clock, held)
    return value(bit.data, settled) if opened else state


def outputs(cell, pins, state=0):
    """Return what the output pins show."""
    values = {**pins, **{bit.variable: state for bit in cell.storage}}
    return {name: value(pin.function, values) for name, pin in cell.pins.items() if pin.function}
