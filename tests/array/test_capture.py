"""What the walk of the circuit under test stops at, and what it refuses."""

from collections.abc import Mapping, Sequence
from pathlib import Path

import pytest

from auditor.array.capture import circuit_under_test
from auditor.array.circuit import Circuit
from auditor.cone.wiring import connect
from auditor.errors import InputError
from tests.support.circuits import flat
from tests.support.cones import library


def circuit(
    folder: Path,
    body: str,
    cells: Sequence[str] = ("r",),
    capture: Mapping[str, int] | None = None,
    generator: Mapping[str, int] | None = None,
) -> Circuit:
    """Return the circuit of a module with inputs a, b, clk, rst_n, scan_en and the output y."""
    text = f"module t (input a, b, clk, rst_n, scan_en, output y);\n{body}\nendmodule\n"
    return circuit_under_test(connect(flat(folder, text), library()), capture or {}, cells, generator or {})


SCAN = "km_sdffc r (.CK(clk), .RN(rst_n), .D(d), .SI(b), .SE(scan_en), .Q(q)); wire d, q;"


def test_capture_selects_what_a_scan_cell_takes(tmp_path: Path) -> None:
    """With the scan enable at 0 the next state is the net on D; left open it is a function of all three pins."""
    body = SCAN + "km_inv g (.A(a), .Y(d)); assign y = q;"
    held = circuit(tmp_path, body, capture={"scan_en": 0})
    assert [sink.name for sink in held.sinks] == ["d", "y"]
    assert [held.wire_name(net) for net in held.free_inputs] == ["a"]
    free = circuit(tmp_path, body)
    assert [sink.name for sink in free.sinks] == ["next state of r", "y"]
    assert [free.wire_name(net) for net in free.free_inputs] == ["a", "b", "scan_en"]


def test_constants_fold_until_nothing_new_follows(tmp_path: Path) -> None:
    """A gate whose inputs cancel is a constant, and what that decides is no gate of the circuit either."""
    body = SCAN + "wire n; km_xor2 g (.A(q), .B(q), .Y(n)); km_nand2 h (.A(n), .B(a), .Y(d)); assign y = d;"
    made = circuit(tmp_path, body, capture={"scan_en": 0})
    assert not made.gates
    assert not made.sinks


def test_what_cannot_be_seen_through_is_listed(tmp_path: Path) -> None:
    """Cells without description, storage outside the chains, nets without driver or with two are sources outside."""
    body = (
        SCAN
        + """
  wire m, s, u, v;
  memory k (.A(a), .Y(m)); km_dffc f (.CK(clk), .RN(rst_n), .D(a), .Q(s));
  km_inv w1 (.A(a), .Y(v)); km_inv w2 (.A(b), .Y(v));
  km_nand2 g1 (.A(m), .B(s), .Y(d)); km_nand2 g2 (.A(u), .B(v), .Y(y));"""
    )
    made = circuit(tmp_path, body, capture={"scan_en": 0})
    assert {source.name: source.because for source in made.outside} == {
        "f": "storage outside the chains",
        "m": "a net at memory, which no file describes",
        "u": "a net without driver",
        "v": "a net with several drivers",
    }


def test_a_source_outside_can_be_held(tmp_path: Path) -> None:
    """A constant for an internal net in capture takes the place of whatever drives it."""
    body = SCAN + "wire m; memory k (.A(a), .Y(m)); km_nand2 g (.A(m), .B(q), .Y(d)); assign y = q;"
    assert [source.name for source in circuit(tmp_path, body, capture={"scan_en": 0}).outside] == ["m"]
    held = circuit(tmp_path, body, capture={"scan_en": 0, "m": 0})
    assert not held.outside
    assert [sink.name for sink in held.sinks] == ["y"]


def test_a_loop_without_storage_is_cut(tmp_path: Path) -> None:
    """One net of a loop becomes a source; what is behind it stays in the circuit."""
    body = (
        SCAN
        + "wire l, k; km_nand2 g1 (.A(l), .B(q), .Y(k)); km_nand2 g2 (.A(k), .B(a), .Y(l)); assign d = k; assign y = q;"
    )
    made = circuit(tmp_path, body, capture={"scan_en": 0})
    (cut,) = made.outside
    assert cut.because == "a net in a loop without storage"
    assert len(made.gates) >= 1
    order: set[int] = {*made.loaded, *made.free}
    for gate in made.gates:
        assert set(gate.inputs) <= order
        order.add(gate.output)


def test_elements_of_the_generator_are_no_source_outside(tmp_path: Path) -> None:
    """An element that the circuit reads directly carries its number, and is not listed as storage outside."""
    body = (
        SCAN + "wire s; km_dffc f (.CK(clk), .RN(rst_n), .D(a), .Q(s)); km_nand2 g (.A(s), .B(q), .Y(d)); assign y = q;"
    )
    made = circuit(tmp_path, body, capture={"scan_en": 0}, generator={"f": 7})
    assert list(made.generator.values()) == [7]
    assert not made.outside
    assert len(made.loaded) == 2


def test_unknown_names_are_refused_together(tmp_path: Path) -> None:
    """Scan cells that are no storage and constants of nets that do not exist are told in one go."""
    with pytest.raises(InputError) as caught:
        circuit(tmp_path, SCAN + "km_inv g (.A(a), .Y(d));", cells=("r", "g", "nowhere"), capture={"scan_on": 0})
    told = "\n".join(map(str, caught.value.troubles))
    assert "scan cell g is no storage of t" in told
    assert "scan cell nowhere" in told
    assert "capture pin scan_on does not exist" in told
