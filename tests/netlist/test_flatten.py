"""The flat netlist: connectivity against an outside front end, names, and what is refused."""

from pathlib import Path

from hypothesis import HealthCheck, given, settings

from auditor.netlist.flatten import flatten
from auditor.netlist.netlist import Netlist
from auditor.verilog.read import read_verilog
from tests.support.slang_connectivity import our_partition, slang_partition
from tests.support.structural_texts import structural_texts

_SETTINGS = settings(deadline=None, max_examples=60, suppress_health_check=[HealthCheck.function_scoped_fixture])


def _flat(tmp_path: Path, text: str, top: str | None = None, cells: tuple[str, ...] = ()) -> Netlist:
    (tmp_path / "n.v").write_text(text)
    return flatten(read_verilog([tmp_path / "n.v"]), top, cells)


@_SETTINGS
@given(text=structural_texts())
def test_connectivity_agrees_with_slang(tmp_path: Path, text: str) -> None:
    """The same terminals are connected as pyslang's elaboration says."""
    assert our_partition(_flat(tmp_path, text, "top")) == slang_partition(text)
