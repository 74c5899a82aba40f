"""What would read as something else than it means: signs that fill, wired logic, drives that are open."""

from pathlib import Path

import pytest

from auditor.verilog.statements import Reading
from tests.support.verilog_text import messages_of, modules_of

_HEAD = "module m(input a, input [3:0] v, output y);\nwire signed [1:0] s; wire signed [3:0] t; wire [3:0] w;\n"
_FILLS = "is signed, and its sign would fill the wider net; write the sign bits out, or declare it without signed"


@pytest.mark.parametrize("assign", ["w = s", "w = ~s", "t = s & t", "w = a ? s : s", "{a, t} = t", "w[2:0] = s"])
def test_a_value_that_its_sign_fills_is_refused(tmp_path: Path, assign: str) -> None:
    """All operands are signed and one is narrower than where it goes (IEEE 1364-2005, 5.5)."""
    (message,) = messages_of(tmp_path, f"{_HEAD}assign {assign};\nendmodule")
    assert message.startswith("n.v:3: ")
    assert message.endswith(_FILLS)


@pytest.mark.parametrize("assign", ["t = w", "w[1:0] = s", "w = s[1:0]", "w = {s}", "w = s & w", "w = &s", "t = ~t"])
def test_other_signed_values_read_as_any(tmp_path: Path, assign: str) -> None:
    """Parts, concatenations and expressions with an unsigned operand are unsigned."""
    (module,) = modules_of(tmp_path, f"{_HEAD}assign {assign};\nendmodule").values()
    assert module.nets["s"].range == (1, 0)
    assert len(module.assigns) == 1


@pytest.mark.parametrize(
    ("statement", "net"),
    [
        ("wand n; assign n = a, n = v[0];", "wand net n"),
        ("wor [1:0] n; assign n[1] = a; assign n = v[1:0];", "wor net n"),
        ("triand n = 1'b0;", "triand net n"),
        ("wand [1:0] n = {a, {1'b1}};", "wand net n"),
        ("trior [3:0] n; assign {n[1], n[0]} = v[1:0]; assign n[1:1] = a;", "trior net n"),
    ],
)
def test_wired_logic_in_assigns_is_refused(tmp_path: Path, statement: str, net: str) -> None:
    """Two assigns, or a constant beside drivers that cannot be seen here, would be taken for one net."""
    assert messages_of(tmp_path, f"{_HEAD}{statement}\nendmodule") == [
        f"n.v:3: {net} is wired logic here; drive the net by one gate"
    ]


def test_a_wired_net_with_one_driver_is_a_net(tmp_path: Path) -> None:
    """Its kind is kept, and bits that are assigned once each are no wired logic."""
    text = (
        f"{_HEAD}wand [1:0] n; assign n[0] = a; assign n[1] = y; wor o = a; tri0 p; tri1 [1:0] q; uwire r;\nendmodule"
    )
    (module,) = modules_of(tmp_path, text).values()
    assert [module.nets[net].kind for net in "nopqr"] == ["wand", "wor", "tri0", "tri1", "wire"]


def test_drives_are_strong_or_noted_or_refused(tmp_path: Path) -> None:
    """A pull or weak drive is noted with its line, one that is open at a value refused; strong ones are plain."""
    reading = Reading()
    text = (
        "assign (strong0, supply1) #3 y = a;\nand (pull1, strong0) #(1,2) g(w[0], a, a),\nh(w[1], a, a);\n"
        "wire (weak0, weak1) #1 q = a;\nendmodule"
    )
    (module,) = modules_of(tmp_path, _HEAD + text, reading).values()
    assert [instance.name for instance in module.instances] == ["g", "h"]
    assert [assign.left for assign in module.assigns] == ["y", "q"]
    weak = "a pull or weak drive is read as a strong one; with a second driver its net is refused"
    assert reading.notes == [f"{tmp_path}/n.v:{line}: {weak}" for line in (4, 6)]
    assert messages_of(tmp_path, f"{_HEAD}or (highz0, strong1) g(y, a, a);\nendmodule") == [
        "n.v:3: this drive is open at one of its values; give it as a gate with an enable"
    ]
