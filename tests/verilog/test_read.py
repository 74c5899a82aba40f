"""Files to modules: the two lanes agree, and what each trouble says."""

import subprocess
import sys
from pathlib import Path
from typing import Literal

import pytest
from hypothesis import HealthCheck, given, settings

from auditor.errors import InputError
from auditor.notation import SourcePlace
from auditor.verilog.read import read_verilog
from auditor.verilog.statements import Assign, Connection, Declaration, HeaderPort, Module, Range, Reading, Select
from tests.support.structural_texts import structural_texts

_HEAD = "module m(input a, input [3:0] v, output y);\n"


def _read(tmp_path: Path, text: str) -> Module:
    """Return the only module of a text, read alike by both lanes."""
    (tmp_path / "n.v").write_text(text)
    both = read_verilog([tmp_path / "n.v"])
    grammar = read_verilog([tmp_path / "n.v"], lane="grammar")
    assert both == grammar
    (module,) = both.values()
    return module


def _messages(tmp_path: Path, text: str) -> list[str]:
    (tmp_path / "n.v").write_text(text)
    with pytest.raises(InputError) as caught:
        read_verilog([tmp_path / "n.v"])
    return [str(trouble).replace(str(tmp_path / "n.v"), "n.v") for trouble in caught.value.troubles]


@settings(deadline=None, max_examples=40, suppress_health_check=[HealthCheck.function_scoped_fixture])
@given(text=structural_texts())
def test_both_lanes_agree(tmp_path: Path, text: str) -> None:
    """The same text gives the same modules, lines included, whichever lane reads it."""
    (tmp_path / "n.v").write_text(text)
    assert read_verilog([tmp_path / "n.v"]) == read_verilog([tmp_path / "n.v"], "grammar")


_ROOT = Path(__file__).parents[2]
_SAMPLES = sorted([*_ROOT.glob("sample_netlists/*.v"), *_ROOT.glob("tests/mapped/*.v")])


@pytest.mark.parametrize("path", _SAMPLES, ids=lambda path: path.stem)
def test_both_lanes_agree_on_every_sample(path: Path) -> None:
    """Netlists as they come read alike by both lanes."""
    assert read_verilog([path]) == read_verilog([path], "grammar")


def test_headers_and_declarations_of_both_styles(tmp_path: Path) -> None:
    """ANSI and older headers, ranges of any order, and nets beside ports give one kind of module."""
    ansi = _read(tmp_path, "module m(input a, b, output reg [-1:2] q, inout \\z[0] );\nendmodule")
    inner = " input a, b;\n output [-1:2] q;\n reg [-1:2] q;\n inout \\z[0] ;\n"
    older = _read(tmp_path, f"module m(a, b, q, \\z[0] );\n{inner}endmodule")
    assert ansi.ports == older.ports == tuple(HeaderPort(name, name) for name in ("a", "b", "q", "z[0]"))
    assert ansi.directions == older.directions == {"a": "input", "b": "input", "q": "output", "z[0]": "inout"}
    assert ansi.nets["q"] == Declaration("reg", Range(-1, 2), 1)
    assert older.nets["q"] == Declaration("reg", Range(-1, 2), 3)


def test_ports_may_have_another_inside(tmp_path: Path) -> None:
    """``.p(q)`` and a select in a header name what the port is connected to within."""
    module = _read(tmp_path, "module m(.p(q), .s(v[1:0]));\n input q;\n output [1:0] v;\nendmodule")
    assert module.ports == (HeaderPort("p", "q"), HeaderPort("s", Select("v", 1, 0)))


def test_items_of_a_statement_have_their_own_lines(tmp_path: Path) -> None:
    """Instances, assigns and names of one statement stand on the lines on which they are written."""
    gates = "nand #(1,2)\n g(y, a, v[0]),\n h(y, a,\n v[1]);\n"
    text = _HEAD + gates + "assign #1 y = a,\n v[2] = ~a;\nwire\n b = a,\n c; wire\n d;\nendmodule"
    module = _read(tmp_path, text)
    assert [(instance.name, instance.line) for instance in module.instances] == [("g", 2), ("h", 4)]
    assert [assign.line for assign in module.assigns] == [6, 7, 9]
    assert module.assigns[2] == Assign("b", "a", 9)
    assert [module.nets[name].line for name in "bcd"] == [9, 10, 11]


def test_unnamed_gates_get_names_that_nobody_has(tmp_path: Path) -> None:
    """They are numbered by gate in the order of the text, around names that are taken."""
    text = _HEAD + "wire nand$2;\nnand (y,a,a);\nnand (y,a,v[0]&a);\nor (y,a,a);\nX nand$1(.A(a));\nendmodule"
    assert [instance.name for instance in _read(tmp_path, text).instances] == ["nand$1$", "nand$2$", "or$1", "nand$1"]


def test_parameters_hold_for_what_follows(tmp_path: Path) -> None:
    """Parameters of header and body are numbers in ranges, selects and values."""
    text = (
        "module m #(parameter W = 2*2, X=1) (input [W-1:0] d, output y);\nlocalparam [1:0] L = W/2;\n"
        "wire [W:X] t;\nC u(.A(d[W-X]), .B(L), .D(t[W:X]), .E({X{d[0]}}));\nendmodule"
    )
    module = _read(tmp_path, text)
    assert (module.nets["d"].range, module.nets["t"].range) == (Range(3, 0), Range(4, 1))
    values = [value for _, value in module.instances[0].connections]
    assert values == [Select("d", 3, 3), ("10", True), Select("t", 4, 1), ((Select("d", 0, 0),),)]


def test_legal_text_that_pyverilog_refuses_is_read(tmp_path: Path) -> None:
    """Blanks in literals, empty positions, ``^~``, a label, a stray ``;`` and specify blocks are no errors."""
    text = _HEAD + "L u(a & y, , 1 'b 0, );;\nassign y = ^~ v;\nspecify (a => y) = 1; endspecify\nendmodule : m"
    module = _read(tmp_path, text)
    assert [value is None for _, value in module.instances[0].connections] == [False, True, False, True]
    assert repr(module.assigns[0].right).count("operator='~'") == 1


def test_named_pins_keep_their_order_and_may_be_open(tmp_path: Path) -> None:
    """Escaped names with brackets are no selects, and an empty pin is open."""
    module = _read(tmp_path, _HEAD + "INV \\u[1] (.\\A[0] (\\v[3] [2]), .Y());\nendmodule")
    (instance,) = module.instances
    assert instance.name == "u[1]"
    assert instance.connections == (Connection("A[0]", Select("v[3]", 2, 2)), Connection("Y", None))


def test_modules_come_from_all_files_with_paths_as_given(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    """Several files in any order make one set of modules; places show the paths as given; a file named twice is one."""
    (tmp_path / "a.v").write_text("\nmodule a(input x); b u(.x(x)); endmodule\n")
    (tmp_path / "b.v").write_text("module b(input x); endmodule // c")
    monkeypatch.chdir(tmp_path)
    modules = read_verilog([Path("a.v"), Path("b.v"), Path("a.v")])
    assert [str(module.place) for module in modules.values()] == ["a.v:2", "b.v:1"]


def test_two_definitions_are_named_with_both_places(tmp_path: Path) -> None:
    """A module defined twice is a trouble at the second place that names the first."""
    assert _messages(tmp_path, "module a; endmodule\nmodule a; endmodule") == [
        "n.v:2: module a is defined again, first at n.v:1; leave one of the definitions out"
    ]


def test_troubles_of_all_files_are_collected(tmp_path: Path) -> None:
    """One error holds the troubles of every file."""
    (tmp_path / "a.v").write_text("module a(input x); always @* x; endmodule")
    with pytest.raises(InputError) as caught:
        read_verilog([tmp_path / "a.v", tmp_path / "none.v"])
    assert [trouble.place for trouble in caught.value.troubles] == [
        SourcePlace(str(tmp_path / "a.v"), 1),
        SourcePlace(str(tmp_path / "none.v")),
    ]


_PLAIN = "mend the text, or give it as plain structural Verilog"


@pytest.mark.parametrize(
    ("text", "messages"),
    [
        ("// c", ["no module in n.v; give a netlist with at least one module"]),
        (_HEAD, ["n.v:1: the file ends inside module m; end it with endmodule"]),
        (
            _HEAD + "module b; endmodule",
            ["n.v:2: a module begins inside module m, which begins on line 1; end that module with endmodule first"],
        ),
        ("endmodule", ["n.v:1: endmodule without a module; leave it out or mend what stands before it"]),
        ("wire x;", ["n.v:1: wire stands outside a module; put it into a module or leave it out"]),
        (_HEAD + "assign y = a\nendmodule", [
            "n.v:2: the statement that begins with assign is not ended; end it with ;"]),
        (_HEAD + "initial x;\nendmodule", [
            "n.v:2: module m is not structural: found initial; give a netlist mapped to gates"]),
        (_HEAD + "trireg w;\nendmodule", ["n.v:2: trireg nets store charge; store the bit in a cell"]),
        (_HEAD + "pullup (y);\nendmodule", [
            "n.v:2: a pullup is a second driver of its net; tie the net, or leave it out"]),
        (_HEAD + "\nassign y =\n a b;\nendmodule", [f"n.v:4: syntax error at b; {_PLAIN}"]),
        (_HEAD + "X u(.A(a);\nX w(.A(a)) b;\nendmodule", [
            f"n.v:2: syntax error: the instance ends too early; {_PLAIN}", f"n.v:3: syntax error at b; {_PLAIN}"]),
        (_HEAD + "wire a b;\nendmodule", [f"n.v:2: syntax error at b; {_PLAIN}"]),
        (_HEAD + "wire wire b;\nwire c [3:0];\nendmodule", [
            f"n.v:2: found wire where an item of a netlist should stand; {_PLAIN}",
            f"n.v:3: found wire where an item of a netlist should stand; {_PLAIN}"]),
        (_HEAD + "3;\nendmodule", ["n.v:2: found 3 where a statement should begin; mend the text"]),
        (_HEAD + "assign y = a + a;\nendmodule", [
            "n.v:2: found +, which is not structural; write it with ~ & | ^ ?: or as gates"]),
        (_HEAD + "assign y = v[a];\nendmodule", [
            "n.v:2: found a where a constant number should stand; write a number there"]),
        (_HEAD + "assign y = 4'sb1;\nendmodule", [
            "n.v:2: 4'sb1 is a signed literal; write it as an unsigned vector of bits"]),
        (_HEAD + "assign y = 1'b2;\nendmodule", [f"n.v:2: syntax error: illegal character '; {_PLAIN}"]),
        (_HEAD + 'X u(.A("an empty position"));\nendmodule', [
            f"n.v:2: found X where an item of a netlist should stand; {_PLAIN}"]),
        (_HEAD + "X (.A(a));\nendmodule", ["n.v:2: an instance of X has no name; name it"]),
        (_HEAD + "wire w;\nwire w;\nendmodule", [
            "n.v:3: w is declared again, first on line 2; leave one of the declarations out"]),
        (_HEAD + "wire [2:0] v;\nendmodule", [
            "n.v:2: v is declared with another range than on line 1; give both one range"]),
        ("module m(a,,b); endmodule", ["n.v:1: found nothing in a list of ports; mend the header"]),
        ("module m(input a) X u(.A(a)); endmodule", ["n.v:1: found X in the header of module m; mend the header"]),
        ("module wire; endmodule", ["n.v:1: module without a name; name it"]),
        (_HEAD + f"assign y =\n{'(' * 100000}a{')' * 100000};\nendmodule", [
            "n.v:3: brackets are nested deeper than 256; break the expression into nets of its own"]),
    ],
)  # fmt: skip
def test_bad_text_is_one_clear_trouble(tmp_path: Path, text: str, messages: list[str]) -> None:
    """Each kind of bad text has its place, what was found, and what to do."""
    assert _messages(tmp_path, text) == messages


def test_good_statements_beside_bad_ones_are_not_blamed(tmp_path: Path) -> None:
    """An error in a piece of many items is found among them, and only it is noted."""
    lines = [f"assign v[{k % 4}] = ~a;" for k in range(400)]
    lines[350] = "assign y = ~;"
    (message,) = _messages(tmp_path, _HEAD + "\n".join(lines) + "\nendmodule")
    assert message == f"n.v:352: syntax error: the assign ends too early; {_PLAIN}"


def test_the_grammar_lane_leaves_no_files_and_no_noise(tmp_path: Path) -> None:
    """Parser tables go to the user's cache directory, never to the working directory, and nothing is printed."""
    (tmp_path / "n.v").write_text(_HEAD + "assign y = ~a;\nendmodule")
    code = "from pathlib import Path; from auditor.verilog.read import read_verilog; read_verilog([Path('n.v')])"
    root = Path(__file__).parents[2]
    environment = {"PYTHONPATH": str(root), "XDG_CACHE_HOME": str(tmp_path / "cache"), "PYTHONDONTWRITEBYTECODE": "1"}
    for _ in range(2):  # the second run loads what the first has kept
        done = subprocess.run(
            [sys.executable, "-c", code], cwd=tmp_path, env=environment, capture_output=True, check=True, text=True
        )
        assert done.stdout + done.stderr == ""
    kept = [path.name for path in (tmp_path / "cache").rglob("*") if path.is_file()]
    assert kept == ["parsetab.py"]
    assert sorted(path.name for path in tmp_path.iterdir()) == ["cache", "n.v"]


@pytest.mark.parametrize("lane", ["both", "grammar"])
def test_of_a_described_cell_only_the_ports_are_read(tmp_path: Path, lane: Literal["both", "grammar"]) -> None:
    """A model beside the netlist may hold what is no netlist, if a library says what the cell does."""
    model = (
        "module DFF(D, CK, Q);\ninput D, CK; output [1:0] Q; reg [1:0] Q;\nparameter T = 1.5;\nwire n = D + CK;\n"
        "INV u(.A(D));\nspecify (CK => Q) = 1; endspecify\nalways @(posedge CK) Q <= {2{D}};\nendmodule\n"
    )
    (tmp_path / "n.v").write_text(model + _HEAD + "DFF u(a, v[0], {y, w});\nendmodule")
    reading = Reading()
    modules = read_verilog([tmp_path / "n.v"], lane, cells={"DFF"}, reading=reading)
    cell = modules["DFF"]
    assert [port.name for port in cell.ports] == ["D", "CK", "Q"]
    assert cell.directions == {"D": "input", "CK": "input", "Q": "output"}
    assert cell.nets["Q"].range == Range(1, 0)
    assert not cell.instances
    assert not cell.assigns
    assert reading.notes == [
        f"{tmp_path}/n.v:6: specify blocks from here on are passed over: timing has no part in the audit",
        f"{tmp_path}/n.v:1: module DFF is described by --cells as well: the cell counts",
    ]
    with pytest.raises(InputError, match="module DFF is not structural: found always"):
        read_verilog([tmp_path / "n.v"], lane)


@pytest.mark.parametrize(
    ("body", "told"),
    [
        ("xor (Y, A);", True),
        ("assign Y = A;", True),
        ("INV u(.A(A), .Y(Y));", True),
        ("always @* Y = A;", True),
        ("", False),
        ("wire n;", False),
        ("specify (A => Y) = 1; endspecify", False),
    ],
)
def test_a_module_that_a_library_describes_too_is_told(tmp_path: Path, body: str, told: bool) -> None:
    """Where both say what a cell does the reader learns that the library counts; a frame of ports says nothing."""
    (tmp_path / "n.v").write_text(f"module BUF(input A, output Y);\n{body}\nendmodule\n{_HEAD}BUF u(a, y);\nendmodule")
    reading = Reading()
    read_verilog([tmp_path / "n.v"], cells={"BUF"}, reading=reading)
    assert (
        any(note.endswith("module BUF is described by --cells as well: the cell counts") for note in reading.notes)
        == told
    )
