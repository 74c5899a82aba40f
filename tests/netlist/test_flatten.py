"""The flat netlist: connectivity against an outside front end, names, and what is refused."""

import random
import re
from pathlib import Path

import pytest
from hypothesis import HealthCheck, given, settings

from auditor.errors import InputError
from auditor.netlist.flatten import flatten, unique
from auditor.netlist.netlist import OPEN, CellType, Netlist
from auditor.notation import SourcePlace
from auditor.verilog.read import read_verilog
from tests.support.slang_connectivity import our_partition, slang_partition
from tests.support.structural_texts import structural_texts

_SETTINGS = settings(deadline=None, max_examples=60, suppress_health_check=[HealthCheck.function_scoped_fixture])
_HEAD = "module m(input a, input [3:0] v, output y, output [1:0] q);\n"
_HAND_WRITTEN = [
    # Ascending and negative ranges through a hierarchy of two levels, positional and named.
    """module C(input A, output Y); endmodule
    module inner(input [-1:1] i, output [2:0] o);
    C a(i[-1], o[2]); C b(.A(i[1]), .Y(o[0])); assign o[1] = i[0]; endmodule
    module middle(input [5:3] p, output [0:2] r); inner z(.i(p), .o(r)); endmodule
    module top(input [2:0] d, output [0:2] up); middle k(d, up); middle l(.p({d[0], d[2:1]}), .r()); endmodule""",
    # A concatenation in the header, a port with another inside, supplies, assigns of unequal width.
    """module C(input [3:0] A, output Y); endmodule
    module part(.lo(w[1:0]), .hi({w[3], w[2]}), y); input [3:0] w; output y; C c(.A(w), .Y(y)); endmodule
    module top(input [3:0] d, output y); supply0 g; supply1 [1:0] p; wire [3:0] n; wire [1:0] s;
    assign n = d[1:0]; assign s = d; part u(.lo(n[3:2]), .hi(p), .y(y)); C w(.A({g, s, n[0]}), .Y()); endmodule""",
    # Arrays of instances share and distribute, in both directions of the array.
    """module C(input A, input [1:0] B, output Y); endmodule
    module top(input [7:0] d, input s, output [3:0] y, output [3:0] z);
    C f[3:0] (.A(s), .B(d), .Y(y)); C b[0:3] (.A(d[3:0]), .B(d[5:4]), .Y(z)); endmodule""",
]


def _flat(tmp_path: Path, text: str, top: str | None = None, cells: tuple[str, ...] = ()) -> Netlist:
    (tmp_path / "n.v").write_text(text)
    return flatten(read_verilog([tmp_path / "n.v"]), top, cells)


def _messages(tmp_path: Path, text: str, top: str | None = None) -> list[str]:
    with pytest.raises(InputError) as caught:
        _flat(tmp_path, text, top)
    return [str(trouble).replace(str(tmp_path / "n.v"), "n.v") for trouble in caught.value.troubles]


def _pins(netlist: Netlist, name: str) -> dict[str, str]:
    """Return the names of the nets at the pins of an instance; an open pin has an empty one."""
    pins = netlist.pins_of(list(netlist.instance_names).index(name))
    return {pin: "" if net == OPEN else netlist.net_names[net] for pin, net in pins}


@_SETTINGS
@given(text=structural_texts())
def test_connectivity_agrees_with_slang(tmp_path: Path, text: str) -> None:
    """The same terminals are connected as pyslang's elaboration says."""
    assert our_partition(_flat(tmp_path, text, "top")) == slang_partition(text)


@pytest.mark.parametrize("text", _HAND_WRITTEN)
def test_hand_written_hierarchies_agree_with_slang(tmp_path: Path, text: str) -> None:
    """So they are in texts that exercise ranges, headers, supplies and arrays on purpose."""
    assert our_partition(_flat(tmp_path, text, "top")) == slang_partition(text)


def test_every_object_says_where_it_stands(tmp_path: Path) -> None:
    """Instances, nets and the gates of an assign know their file and line, also below the top."""
    text = "module b(input i,\n output o);\n wire n;\n INV g(.A(i), .Y(n));\n assign o = ~n;\nendmodule\n"
    netlist = _flat(tmp_path, text + "module t(input x, output z);\n b u(.i(x), .o(z));\nendmodule")
    places = {name: netlist.instance_place(k).line for k, name in enumerate(netlist.instance_names)}
    assert places == {"u.g": 4, "u.assign$1": 5}
    assert netlist.net_place(netlist.net_of_name["u.n"]) == SourcePlace(str(tmp_path / "n.v"), 3)
    assert netlist.net_place(netlist.net_of_name["u.o"]).line == 7


def test_names_of_merged_nets(tmp_path: Path) -> None:
    """Every alias leads to the net; it is named by the shortest path, then natural order, never by a generated name."""
    text = _HEAD + "wire n10, n9;\nassign n10 = n9;\nassign y = ~a;\nsub u(.i(n10));\nendmodule\n"
    netlist = _flat(tmp_path, text + "module sub(input i); wire a1; assign a1 = i; C c(.A(a1)); endmodule")
    net = netlist.net_of_name["n10"]
    assert {name for name, other in netlist.net_of_name.items() if other == net} == {"n10", "n9", "u.i", "u.a1"}
    assert netlist.net_names[net] == "n9"
    assert netlist.net_names[netlist.net_of_name["y"]] == "y"


def test_an_escaped_name_and_a_bit_that_print_alike_stay_apart(tmp_path: Path) -> None:
    """Bit 3 of ``v`` keeps the name, the escaped scalar gets a backslash; so with an instance path."""
    text = _HEAD + "wire \\v[3] , \\u.n ;\n"
    text += "C c(.A(\\v[3] ), .B(v[3]), .D(\\u.n ));\nsub u(.i(a));\nC \\u.c (.A(a));\nendmodule\n"
    netlist = _flat(tmp_path, text + "module sub(input i); wire n; C c(.A(n), .B(i)); endmodule")
    assert _pins(netlist, "c") == {"A": "\\v[3]", "B": "v[3]", "D": "u.n"}
    assert _pins(netlist, "\\u.c") == {"A": "\\u.n", "B": "a"}
    assert len(set(netlist.net_names)) == len(netlist.net_names)
    assert unique(["a", "a", "\\a"]) == ["a", "\\a", "\\\\a"]


def test_ports_of_the_top_run_by_ascending_index(tmp_path: Path) -> None:
    """Bits are named by the declared index, whatever the order of the range; a renamed port is known by its name."""
    text = "module m(d, e, .p(q)); input [3:2] d; input [-1:0] e; output [1:0] q; C c(.A(d[2]), .Y(q[1])); endmodule"
    netlist = _flat(tmp_path, text)
    assert [port.bits for port in netlist.ports] == [("d[2]", "d[3]"), ("e[-1]", "e[0]"), ("p[0]", "p[1]")]
    assert [port.direction for port in netlist.ports] == ["input", "input", "output"]
    assert netlist.ports[0].nets[0] == netlist.net_of_name["d[2]"]
    assert netlist.net_of_name["p[1]"] == netlist.net_of_name["q[1]"]


def test_constants_and_undefined_literals(tmp_path: Path) -> None:
    """Literals and supplies are nets 0 and 1; an x or z drives a net that is listed as undefined."""
    text = _HEAD + "supply1 s;\nC c(.A(1'b0), .B(s), .D(1), .E(1'bx), .F(1'bz), .G());\nassign q = 2'b1x;\nendmodule"
    netlist = _flat(tmp_path, text)
    (pins,) = (dict(netlist.pins_of(k)) for k in range(len(netlist.instance_names)))
    assert (pins["A"], pins["B"], pins["D"], pins["G"]) == (0, 1, 1, OPEN)
    assert netlist.undefined == {pins["E"], pins["F"], netlist.net_of_name["q[0]"]}
    assert len(netlist.undefined) == 3
    assert netlist.net_of_name["q[1]"] == 1


def test_gates_and_library_cells_have_their_types(tmp_path: Path) -> None:
    """Primitives carry their number of inputs; wide pins of a cell that no module describes get an index a bit."""
    text = _HEAD + "nand g(y, a, v[0], v[1]);\nbuf b(q[0], q[1], a);\nM c(.A(v[2:1]));\nendmodule"
    netlist = _flat(tmp_path, text)
    types = [netlist.cell_of(k) for k in range(4)]
    assert types == [CellType("nand", 3), CellType("buf", 1), CellType("buf", 1), CellType("M")]
    assert _pins(netlist, "g") == {"out": "y", "in0": "a", "in1": "v[0]", "in2": "v[1]"}
    assert _pins(netlist, "c") == {"A[1]": "v[2]", "A[0]": "v[1]"}
    assert list(netlist.instance_names) == ["g", "b", "b$1", "c"]


def test_library_cells_are_not_expanded(tmp_path: Path) -> None:
    """A module named as library cell, or without content, stays an instance, gives its pin order and is no top."""
    text = "module C(A, Y); input A; output Y; not n(Y, A); endmodule\nmodule B(input P, output Q); endmodule\n"
    text += _HEAD + "C c(a, y);\nB b(a, q[0]);\nendmodule"
    netlist = _flat(tmp_path, text, None, ("C",))
    assert list(netlist.instance_names) == ["c", "b"]
    assert _pins(netlist, "c") == {"A": "a", "Y": "y"}
    assert _flat(tmp_path, text).cell_of(0) == CellType("B")
    assert list(_flat(tmp_path, text).instance_names) == ["b", "c.n"]


def test_implicit_nets_are_those_of_the_standard(tmp_path: Path) -> None:
    """A name in a connection or on the left of an assign declares a net (IEEE 1364-2005, 4.5)."""
    netlist = _flat(tmp_path, _HEAD + "C c(.A(n), .B({o, a}));\nassign p = n;\nendmodule")
    assert netlist.net_of_name["p"] == netlist.net_of_name["n"]
    assert netlist.net_place(netlist.net_of_name["o"]).line == 2


def _tower(levels: int, calls: int = 1, instance: str = "u") -> str:
    """Return modules m0, m1 ... each of which instantiates the next, the last a cell."""
    modules = [
        f"module m{k}(input i); {' '.join(f'm{k + 1} {instance}{n or str()}(.i(i));' for n in range(calls))} endmodule"
        for k in range(levels)
    ]
    return "\n".join([*modules, f"module m{levels}(input i); C c(.A(i)); endmodule"])


def test_a_deep_hierarchy_is_no_recursion(tmp_path: Path) -> None:
    """Five thousand levels are laid down, and the net through them is one."""
    netlist = _flat(tmp_path, _tower(5000))
    assert _pins(netlist, ".".join(["u"] * 5000 + ["c"])) == {"A": "i"}
    assert len(netlist.net_names) == 3


def test_a_hierarchy_that_memory_cannot_hold_is_refused(tmp_path: Path) -> None:
    """2^40 copies of a module are counted and not made, and so are the characters of their names."""
    (many,) = _messages(tmp_path, _tower(40, calls=2))
    assert re.fullmatch(r"n\.v:1: module m0 unfolds into (\d+) nets and instances; keep below 20000000, .*", many)
    assert int(many.split()[5]) >= 2**40
    (long,) = _messages(tmp_path, _tower(3000, instance="u" * 1000))
    assert long.startswith("n.v:1: the names below module m0 have about ")
    assert long.endswith(" characters in all; keep below 4000000000: nest modules less deeply or shorten names")


def test_a_long_circle_of_modules_is_told_by_its_ends(tmp_path: Path) -> None:
    """Five thousand modules in a circle are found without recursion and told in one readable line."""
    (message,) = _messages(tmp_path, _tower(5000).replace("C c(.A(i))", "m0 c(.i(i))"))
    assert message.startswith("n.v:5001: modules instantiate each other: m0 > m1 > m2 > ")
    assert message.endswith(" > m4999 > m5000 > m0; break the circle")
    assert len(message) < 400


def test_a_long_chain_of_aliases_is_one_net(tmp_path: Path) -> None:
    """A port keeps its name among twenty thousand nets that are one with it, tied in any order."""
    count = 20_000
    ties = [f"assign n{k + 1} = n{k};" for k in range(count)]
    random.Random(7).shuffle(ties)
    wires = ", ".join(f"n{k}" for k in range(count + 1))
    text = f"module t(input a);\nwire {wires};\nassign n0 = a;\n{' '.join(ties)}\nC c(.A(n{count}));\nendmodule"
    netlist = _flat(tmp_path, text)
    assert _pins(netlist, "c") == {"A": "a"}
    assert len(netlist.net_names) == 3
    assert len(netlist.net_of_name) == count + 2


def test_every_character_of_an_escaped_name_is_kept(tmp_path: Path) -> None:
    """Module, net, instance and pin may be named by any printable ASCII characters (IEEE 1364-2005, 3.7.1)."""
    legal = "".join(map(chr, range(33, 127)))
    names = [legal, *legal, *(f"x{sign}y" for sign in legal)]
    lines = [f"wire \\{name} ; C \\{name} (.\\{name} (\\{name} ));" for name in names]
    netlist = _flat(tmp_path, f"module \\{legal} (input \\in/0 );\n" + "\n".join(lines) + "\nendmodule")
    assert netlist.top == legal
    assert list(netlist.instance_names) == names
    assert all(_pins(netlist, name) == {name: name} for name in names)


def test_a_name_of_many_digits_is_a_name(tmp_path: Path) -> None:
    """Digits beyond what Python takes for a number stand in a name, and in the order of names."""
    digits = "1" * 6000
    netlist = _flat(
        tmp_path, f"module t(input n{digits}2);\nwire n{digits}1; assign n{digits}1 = n{digits}2;\nendmodule"
    )
    assert netlist.net_names[2] == f"n{digits}1"


_SUB = "module sub(input [1:0] i, output o); C c(.A(i), .Y(o)); endmodule\n"


@pytest.mark.parametrize(
    ("text", "messages"),
    [
        ("module a(input x); C c(.A(x)); endmodule module b(input x); C c(.A(x)); endmodule", [
            "several modules could be the top: a, b; give the top with --top"]),
        ("module a(input x); b u(.x(x)); endmodule\nmodule b(input x);\na u(.x(x)); endmodule", [
            "n.v:3: modules instantiate each other: a > b > a; break the circle"]),
        (_SUB + _HEAD + "sub u(.i(v[2:0]), .o(y));\nsub w(.i(a));\nendmodule", [
            "n.v:3: port i of u is 2 bits wide and its connection 3; give the connection the width of the port",
            "n.v:4: port i of w is 2 bits wide and its connection 1; give the connection the width of the port"]),
        ("module C(input [1:0] A, output Y); endmodule\n" + _HEAD
         + "C u(.A(v), .Y(y));\nC w(.A(q), .Y(q));\nendmodule", [
            "n.v:3: port A of u is 2 bits wide and its connection 4; give the connection the width of the port",
            "n.v:4: port Y of w is 1 bit wide and its connection 2; give the connection the width of the port"]),
        (_SUB + _HEAD + "sub u(.i(q), .oo(y));\nendmodule", [
            "n.v:3: sub has no port oo; mend the name: did you mean o?"]),
        (_SUB + _HEAD + "sub u(.i(q), .z(y));\nendmodule", [
            "n.v:3: sub has no port z; mend the name: its ports are i, o"]),
        (_SUB + _HEAD + "sub u(q, y, a);\nendmodule", [
            "n.v:3: 3 connections by position to sub, which has 2 ports; leave some out"]),
        (_SUB + _HEAD + "sub u(.i(q), .i(q));\nendmodule", [
            "n.v:3: pin i of sub is connected twice; leave one of the connections out"]),
        (_HEAD + "C u(.A(a), .A(y));\nendmodule", [
            "n.v:2: pin A of C is connected twice; leave one of the connections out"]),
        (_HEAD + "C u(a, y);\nendmodule", [
            "n.v:2: cell C is connected by position and no module says the order of its pins; name its pins"]),
        (_SUB + _HEAD + "sub u(.i(q), .o(1'b0));\nsub w(.i(q), .o(~a));\nendmodule", [
            "n.v:3: output port o of u is tied to a constant; connect it to a net",
            "n.v:4: output port o of w is tied to an expression; connect it to a net"]),
        (_HEAD + "wire net1;\nassign y = a & nett1;\nendmodule", [
            "n.v:3: net nett1 is not declared; declare the net or mend its name: did you mean net1?"]),
        (_HEAD + "C u(.A(w[0]));\nendmodule", ["n.v:2: net w is not declared; declare the net or mend its name"]),
        (_HEAD + "C u(.A(v[4]), .B(v[0:1]), .D(a[0]));\nendmodule", [
            "n.v:2: a[0] selects from a, which is no vector; declare the range of the net",
            "n.v:2: v[0:1] runs against the declared order of v; swap the bounds of the select",
            "n.v:2: v[4] is outside the declared v[3:0]; mend the select or the declaration"]),
        (_HEAD + "assign y = a;\nassign y = v[0];\nendmodule", [
            "n.v:3: net y is assigned again, first on line 2; leave one of the assigns out"]),
        (_HEAD + "assign {y, 1'b0} = v;\nendmodule", [
            "n.v:2: the left side of an assign is no net; assign to a net, a select or a concatenation of these"]),
        (_HEAD + "supply0 s;\nwire n;\nassign n = s;\nassign q[0] = n;\nassign y = 1'b1;\nassign q[1] = y;\n"
         "thru u(.i(q[0]), .o(q[1]));\nendmodule\nmodule thru(input i, output o); assign o = i; endmodule", [
            "n.v:6: net y is tied to 1 here and to 0 at n.v:2; leave one of the two out"]),
        (_HEAD + "nand g(.A(a));\nnot n(y);\nbufif0 b(y, a);\nand x(y, v, a);\nor o(1'b0, a);\nendmodule", [
            "n.v:2: gate nand has named pins; connect gates by position",
            "n.v:3: gate n has 1 terminals; give not its output and its inputs",
            "n.v:4: gate b has 2 terminals; give bufif0 its output and its inputs",
            "n.v:5: a terminal of gate x is 4 bits wide; connect one bit to each terminal",
            "n.v:6: gate o drives a constant; connect its output to a net"]),
        (_HEAD + "C u(.A(a));\nC u(.A(y));\nendmodule", [
            "n.v:3: instance u of module m is there again, first on line 2; give one of them another name"]),
        ("module m(a, b);\ninput a;\ninput c;\nC u(.A(a));\nendmodule", [
            "n.v:1: port b of module m has no direction; declare it input, output or inout",
            "n.v:3: c is declared as a port and is not in the header; add it to the header"]),
        (_HEAD + "wire [60000000:0] w;\nC u(.A(a));\nendmodule", [
            "n.v:2: w has 60000001 bits; keep below 20000000 bits in a module"]),
        (_HEAD + "C u[60000000:0] (.A(a));\nendmodule", [
            "n.v:2: u is an array of 60000001 instances; keep below 20000000"]),
        (_HEAD + "C u(.A({1000000{{1000000{a}}}}));\nendmodule", [
            "n.v:2: an expression is 1000000000000 bits wide; keep below 16777216 bits"]),
        ("\n".join(f"module m{k}(input i); {' '.join(f'm{k + 1} u{n}(.i(i));' for n in range(9))} endmodule"
                   for k in range(9)) + "\nmodule m9(input i); C c(.A(i)); endmodule", [
            "n.v:1: module m0 unfolds into 871696100 nets and instances; "
            "keep below 20000000, or name repeated modules as cells"]),
    ],
)  # fmt: skip
def test_bad_structure_is_one_clear_trouble(tmp_path: Path, text: str, messages: list[str]) -> None:
    """Each kind of bad structure has its place, what was found, and what to do."""
    assert _messages(tmp_path, text) == messages


def test_an_unknown_top_lists_the_candidates(tmp_path: Path) -> None:
    """The message suggests near misses, else it lists what could be the top."""
    text = "module chip(input x); C c(.A(x)); endmodule module leaf(input x); endmodule"
    (near,) = _messages(tmp_path, text, "chap")
    assert near == "there is no module chap; mend the name of the top: did you mean chip?"
    (listed,) = _messages(tmp_path, text, "xyz")
    assert listed == "there is no module xyz; mend the name of the top: candidates are chip"


def test_nothing_but_library_cells_has_no_top(tmp_path: Path) -> None:
    """A file that holds only cells asks for the netlist."""
    (tmp_path / "n.v").write_text("module C(input A); endmodule")
    with pytest.raises(InputError, match="every module is a library cell; give the netlist that instantiates them"):
        flatten(read_verilog([tmp_path / "n.v"]), None, {"C"})
