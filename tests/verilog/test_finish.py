"""Connections by name alone: `.a` and `.*` are written out."""

from pathlib import Path

import pytest

from auditor.verilog.statements import Connection
from tests.support.verilog_text import messages_of, modules_of

_CELL = "module s(input a, input [3:0] v, output y); endmodule\n"
_HEAD = "module m(input a, input [3:0] v, output y);\n"


@pytest.mark.parametrize(
    ("written", "pins"),
    [
        (".*", "a=a v=v y=y"),
        (".a(v[0]), .*", "a=v[0] v=v y=y"),
        (".*, .y()", "y= a=a v=v"),
        (".v(v), . * , .a", "v=v a=a y=y"),
        (".y, .\\a , .v", "y=y a=a v=v"),
        (".a (a),\n.v\n,.y(y)", "a=a v=v y=y"),
    ],
)
def test_connections_by_name_alone_are_written_out(tmp_path: Path, written: str, pins: str) -> None:
    """What is connected otherwise, or left open, stays; the rest goes to the nets of the ports' names."""
    (_, module) = modules_of(tmp_path, f"{_CELL}{_HEAD}s u({written});\nendmodule").values()

    def shown(connection: Connection) -> str:
        pin, value = connection
        return f"{pin}={value or ''}" if not isinstance(value, tuple) else f"{pin}={value[0]}[{value[1]}]"  # type: ignore[misc]  # only a select is met

    assert " ".join(map(shown, module.instances[0].connections)) == pins


def test_a_port_may_be_called_like_the_sign(tmp_path: Path) -> None:
    """An escaped name that looks like `.*` is a name."""
    (module,) = modules_of(tmp_path, _HEAD + "X u(.\\.* (a), .\\* (y));\nendmodule").values()
    assert module.instances[0].connections == ((".*", "a"), ("*", "y"))


def test_what_cannot_be_written_out_is_named(tmp_path: Path) -> None:
    """The ports of a cell must be known here, and the nets declared."""
    text = _CELL + "module k(input a);\nwire y;\ns u(.*);\nX w(.*);\nendmodule"
    assert messages_of(tmp_path, text) == [
        "n.v:4: u connects .*, and there is no net v for that port of s; declare the net, or write the connection out",
        "n.v:5: w connects .*, and no module here says which ports X has; write its connections out",
    ]
