"""Drawn chips read up to the circuit under test."""

from collections.abc import Mapping
from pathlib import Path
from typing import NamedTuple

from auditor.array.capture import circuit_under_test
from auditor.array.circuit import Circuit, LoadedCell
from auditor.array.loading import Loading, find_loading
from auditor.cone.cone import Cone
from auditor.cone.extract import extract_cone
from auditor.cone.wiring import connect
from auditor.machine.machine import LinearMachine
from auditor.machine.prove import prove_machine
from auditor.netlist.flatten import flatten
from auditor.netlist.netlist import Netlist
from auditor.verilog.read import read_verilog
from tests.support.cones import library


class UnderTest(NamedTuple):
    cone: Cone
    machine: LinearMachine
    cells: list[LoadedCell]
    circuit: Circuit
    loading: Loading


def flat(folder: Path, text: str) -> Netlist:
    """Return the netlist of a text."""
    path = folder / "chip.v"
    path.write_text(text)
    return flatten(read_verilog((path,)), None, library().cells)


def under_test(
    folder: Path, text: str, channels: int, length: int, capture: Mapping[str, int] | None = None
) -> UnderTest:
    """Return the circuit of a chip drawn by ``mapped_circuit.chip``, with all its scan cells in order."""
    netlist = flat(folder, text)
    cone = extract_cone(netlist, library(), {"scan_en": 1}, ["si"])
    machine = prove_machine(cone, None).machine
    assert machine is not None
    cells = [LoadedCell(f"c{i}_{j}", i, j, False) for i in range(channels) for j in range(1, length + 1)]
    constants = {"scan_en": 0} if capture is None else capture
    generator = {name: k for k, name in enumerate(machine.storage)}
    circuit = circuit_under_test(connect(netlist, library()), constants, [cell.name for cell in cells], generator)
    return UnderTest(cone, machine, cells, circuit, find_loading(machine, cells, list(circuit.generator.values())))
