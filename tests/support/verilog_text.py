"""Reads Verilog texts in tests by both lanes, which must agree."""

from pathlib import Path

import pytest

from auditor.errors import InputError
from auditor.verilog.read import read_verilog
from auditor.verilog.statements import Module, Reading


def modules_of(folder: Path, text: str, reading: Reading | None = None) -> dict[str, Module]:
    """Return the modules of a text, read alike by both lanes."""
    (folder / "n.v").write_text(text)
    both = read_verilog([folder / "n.v"], reading=reading)
    assert both == read_verilog([folder / "n.v"], lane="grammar")
    return both


def messages_of(folder: Path, text: str) -> list[str]:
    """Return the troubles of a text, told alike by both lanes."""
    (folder / "n.v").write_text(text)
    told = []
    for lane in ("both", "grammar"):
        with pytest.raises(InputError) as caught:
            read_verilog([folder / "n.v"], "both" if lane == "both" else "grammar")
        told.append([str(trouble).replace(f"{folder}/", "") for trouble in caught.value.troubles])
    assert told[0] == told[1]
    return told[0]
