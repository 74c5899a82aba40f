"""Short netlists over the sample library, read up to the cone or the machine."""

from collections.abc import Mapping, Sequence
from functools import cache
from pathlib import Path

import pytest

from auditor.cells.library import CellLibrary
from auditor.cells.read import read_cells
from auditor.cone.cone import Cone
from auditor.cone.extract import extract_cone
from auditor.errors import InputError
from auditor.machine.machine import Extraction, LinearMachine
from auditor.machine.prove import prove_machine
from auditor.netlist.flatten import flatten
from auditor.verilog.read import read_verilog

SAMPLES = Path(__file__).parents[2] / "sample_netlists"


@cache
def library() -> CellLibrary:
    """Return the cells of the samples."""
    return read_cells((SAMPLES / "kelp90.lib",))


def cone_of(
    folder: Path,
    body: str,
    ports: str = "input clk, output y",
    mode: Mapping[str, int] | None = None,
    channels: Sequence[str] = (),
    cells: CellLibrary | None = None,
) -> Cone:
    """Return the cone of a module ``t`` with the given body, which starts on line 2 of ``t.v``."""
    path = folder / "t.v"
    path.write_text(f"module t ({ports});\n{body}\nendmodule\n")
    known = cells or library()
    return extract_cone(flatten(read_verilog((path,)), None, known.cells), known, mode or {}, channels)


def troubles_of(folder: Path, body: str, **stated: object) -> list[str]:
    """Return the troubles of a cone that cannot be closed, the folder cut out of their places."""
    with pytest.raises(InputError) as caught:
        cone_of(folder, body, **stated)  # type: ignore[arg-type]
    return [str(trouble).replace(f"{folder}/", "") for trouble in caught.value.troubles]


def extraction_of(folder: Path, body: str, **stated: object) -> Extraction:
    """Return what the proof makes of a cone."""
    return prove_machine(cone_of(folder, body, **stated))  # type: ignore[arg-type]


def machine_of(folder: Path, body: str, **stated: object) -> LinearMachine:
    """Return the proved machine of a cone."""
    machine = extraction_of(folder, body, **stated).machine
    assert machine is not None
    return machine
