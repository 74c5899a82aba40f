"""The gate primitives of Verilog (IEEE 1364-2005, section 7) as cells.

Pins are ``out`` and ``in0``, ``in1`` ... in the order of the standard. ``mux`` is ours: it stands for the ``?:`` of
a continuous assignment.
"""

from functools import cache

from auditor.cells.library import Cell, CellLibrary, Function, Pin

# operator between the inputs, and whether the output is inverted
_SYMMETRIC = {
    "and": ("&", False),
    "nand": ("&", True),
    "or": ("|", False),
    "nor": ("|", True),
    "xor": ("^", False),
    "xnor": ("^", True),
}
# whether the output is inverted, and the value of the control input at which it is Z
_THREE_STATE = {"bufif0": (False, 1), "bufif1": (False, 0), "notif0": (True, 1), "notif1": (True, 0)}


@cache
def primitive_cell(name: str, inputs: int) -> Cell:
    """Return the primitive ``name`` with ``inputs`` inputs; ``mux`` is ``in0 ? in1 : in2``.

    Raises ``KeyError`` where the name, or the name with so many inputs, is no such primitive.
    """
    pins = tuple(f"in{k}" for k in range(inputs))
    three_state = None
    if name in _SYMMETRIC and inputs >= 1:
        operator, inverted = _SYMMETRIC[name]
        chain = [word for k in range(1, inputs) for word in (f"${k}", operator)]
        function = Function(pins, ("$0", *chain, *("!" * inverted)))
    elif name in ("buf", "not") and inputs == 1:
        function = Function(pins, ("$0", "!") if name == "not" else ("$0",))
    elif name == "mux" and inputs == 3:
        function = Function(pins, ("$0", "$1", "&", "$0", "!", "$2", "&", "|"))
    elif name in _THREE_STATE and inputs == 2:
        inverted, off = _THREE_STATE[name]
        function = Function(pins[:1], ("$0", "!") if inverted else ("$0",))
        three_state = Function(pins[1:], ("$0",) if off else ("$0", "!"))
    else:
        raise KeyError(f"{name} with {inputs} inputs")
    output = Pin("out", "output", function, three_state)
    return Cell(name, {"out": output, **{pin: Pin(pin, "input") for pin in pins}})


def find_cell(library: CellLibrary, name: str, primitive_inputs: int) -> Cell | None:
    """Return the cell of an instance: a primitive where it has ``primitive_inputs``, else what the library has."""
    return primitive_cell(name, primitive_inputs) if primitive_inputs else library.cells.get(name)
