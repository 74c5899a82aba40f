"""Names of channels and mode pins in netlists that are large or badly named."""

from pathlib import Path

import pytest

from auditor.cone.names import find_channels, find_net
from auditor.errors import TroubleList
from auditor.netlist.flatten import flatten
from auditor.netlist.netlist import Netlist
from auditor.verilog.read import read_verilog


def _netlist(folder: Path, text: str) -> Netlist:
    (folder / "n.v").write_text(text)
    return flatten(read_verilog([folder / "n.v"]), None)


@pytest.fixture
def chip(tmp_path: Path) -> Netlist:
    """Return a netlist with vectors at three places, one of them escaped."""
    return _netlist(
        tmp_path,
        "module t(input [1:0] a, output y);\nwire [0:10] w; wire \\w[3][7] , \\w[3][x] ;\n"
        "part p(.i(a));\nC c(.A(w[0]), .B(\\w[3][7] ), .D(\\w[3][x] ), .Y(y));\nendmodule\n"
        "module part(input [1:0] i); wire [2:0] q; C d(.A(i[0]), .B(q[2])); endmodule",
    )


@pytest.mark.parametrize(
    ("wanted", "found"),
    [
        (["w"], [f"w[{k}]" for k in range(11)]),
        (["p.q", "a", "w[3]"], ["p.q[0]", "p.q[1]", "p.q[2]", "a[0]", "a[1]", "w[3]"]),
        (["p.?[*]"], ["p.i[0]", "p.i[1]", "p.q[0]", "p.q[1]", "p.q[2]"]),
        (["*1*0*"], ["w[10]"]),
        (["*]*7*]"], ["w[3][7]"]),
        (["w[1?"], ["w[1]"]),
        (["w*x*y"], []),
    ],
)
def test_vectors_and_patterns(chip: Netlist, wanted: list[str], found: list[str]) -> None:
    """A vector is its own bits alone; each part of a pattern stands once, in its order."""
    troubles = TroubleList()
    assert [name for name, _ in find_channels(chip, wanted, troubles)] == found
    assert bool(troubles.troubles) == (not found)


def test_a_vector_is_no_mode_pin(chip: Netlist) -> None:
    """A vector inside the chip is told to be one, with its first bit."""
    troubles = TroubleList()
    assert find_net(chip, "p.q", "mode pin", troubles) is None
    (trouble,) = troubles.troubles
    assert str(trouble) == "mode pin p.q is a vector; name its bits one by one, such as p.q[0]"


def test_a_pattern_of_many_stars_is_quick(tmp_path: Path) -> None:
    """A pattern that backtracking would try in C(400, 20) ways is answered at once."""
    name = "a" * 400
    netlist = _netlist(tmp_path, f"module t(output y); wire {name}; C c(.A({name}), .Y(y)); endmodule")
    assert find_channels(netlist, ["*a" * 20 + "*b"], TroubleList()) == []


def test_many_misspelt_names_are_told_with_bounded_search(tmp_path: Path) -> None:
    """Among twenty thousand nets each misspelt name is a trouble of its own; the first ones have suggestions."""
    nets = ", ".join(f"block{k % 7}_net_{k}" for k in range(20_000))
    netlist = _netlist(tmp_path, f"module t(output y); wire {nets}; C c(.Y(y)); endmodule")
    troubles = TroubleList()
    find_channels(netlist, [f"blokc{k % 7}_net_{k}" for k in range(19_000, 19_300)], troubles)
    assert len(troubles.troubles) == 300
    assert all(trouble.remedy.startswith("did you mean block") for trouble in troubles.troubles[:20])
    assert troubles.troubles[-1].remedy == "name a port or a net of t"
