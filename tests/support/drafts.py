"""Drafts over text that a test made, and the parts of the netlist that drafting works on."""

from pathlib import Path
from typing import Any

from auditor.cells.library import CellLibrary
from auditor.cells.read import read_cells
from auditor.cone.wiring import Wiring, connect
from auditor.draft import draft
from auditor.drafting.proposal import Draft, Proposal
from auditor.netlist.flatten import flatten
from auditor.plan import Plan
from auditor.verilog.read import read_verilog
from tests.support.gates import CELLS


def drafted(folder: Path, text: str, cells: Path = CELLS, **stated: Any) -> Draft:
    """Write the text to a file of the folder and draft a plan for it; ``stated`` are fields of the plan."""
    netlist = folder / "netlist.v"
    netlist.write_text(text)
    return draft(Plan(netlists=(netlist,), cells=(cells,), **stated))


def proposed(found: Draft) -> Proposal:
    """Return the proposal of a draft that must have one."""
    assert found.proposal is not None, found.because
    return found.proposal


def mode_of(found: Draft) -> dict[str, int]:
    """Return the mode that is proposed."""
    return {constant.name: constant.value for constant in proposed(found).constants}


def wired(folder: Path, text: str, cells: Path = CELLS) -> tuple[Wiring, CellLibrary]:
    """Return the netlist of a text with directions, and its cells."""
    netlist = folder / "netlist.v"
    netlist.write_text(text)
    library = read_cells((cells,))
    return connect(flatten(read_verilog((netlist,)), None, library.cells), library), library


def names_of(wiring: Wiring, constants: dict[int, int]) -> dict[str, int]:
    """Return constants by the names of their nets."""
    return {wiring.netlist.net_names[net]: bit for net, bit in constants.items()}
