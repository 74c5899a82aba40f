"""Operators of continuous assigns become gates that compute what the standard says."""

from pathlib import Path

from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st
from pyslang.ast import ScriptSession

from auditor.netlist.flatten import flatten
from auditor.netlist.netlist import Netlist
from auditor.verilog.read import read_verilog

_WIDTHS = {"a": 1, "b": 4, "c": 3}
_LEAVES = st.sampled_from(["a", "b", "c", "b[2]", "b[3:2]", "c[0]", "2'b10", "4'hA", "1'b1", "5'd9", "{a,b}", "{2{c}}"])


def _larger(inner: st.SearchStrategy[str]) -> st.SearchStrategy[str]:
    unary = st.sampled_from(["~", "!", "&", "|", "^", "~&", "~|", "~^", "^~"])
    binary = st.sampled_from(["&", "|", "^", "~^", "^~", "&&", "||", "==", "!="])
    return st.one_of(
        st.builds("{}({})".format, unary, inner),
        st.builds("{} {} {}".format, inner, binary, inner),
        st.builds("({} {} {})".format, inner, binary, inner),
        st.builds("({} ? {} : {})".format, inner, inner, inner),
        st.builds("{{{}, {}}}".format, inner, inner),
        st.builds("{} ? {} : {}".format, inner, inner, inner),
    )


def _simulate(netlist: Netlist, values: dict[str, int]) -> int:
    """Return port y for the values of the other ports; the gates of the netlist may stand in any order."""
    nets: dict[int, int] = {0: 0, 1: 1}
    for port in netlist.ports:
        if port.name != "y":
            nets |= {net: values[port.name] >> bit & 1 for bit, net in enumerate(port.nets)}
    waiting = list(range(len(netlist.instance_names)))
    while waiting:
        gate = next(g for g in waiting if all(net in nets for pin, net in netlist.pins_of(g) if pin != "out"))
        waiting.remove(gate)
        (_, out), *inputs = netlist.pins_of(gate)
        bits = [nets[net] for _, net in inputs]
        nets[out] = {
            "and": min,
            "or": max,
            "xor": lambda bits: sum(bits) % 2,
            "not": lambda bits: 1 - bits[0],
            "mux": lambda bits: bits[1] if bits[0] else bits[2],
        }[netlist.cell_of(gate).name](bits)
    output = next(port for port in netlist.ports if port.name == "y")
    return sum(nets[net] << bit for bit, net in enumerate(output.nets))


@settings(deadline=None, max_examples=150, suppress_health_check=[HealthCheck.function_scoped_fixture])
@given(
    expression=st.recursive(_LEAVES, _larger, max_leaves=6),
    width=st.integers(1, 7),
    values=st.fixed_dictionaries({name: st.integers(0, 2**bits - 1) for name, bits in _WIDTHS.items()}),
)
def test_gates_compute_what_slang_evaluates(
    tmp_path: Path, expression: str, width: int, values: dict[str, int]
) -> None:
    """The gates of an assign give the value that pyslang's evaluation of the expression gives (widths included)."""
    text = f"module m(input a, input [3:0] b, input [2:0] c, output [{width - 1}:0] y); assign y = {expression};"
    (tmp_path / "m.v").write_text(text + " endmodule\n")
    netlist = flatten(read_verilog([tmp_path / "m.v"]), None)
    session = ScriptSession()
    for name, bits in _WIDTHS.items():
        session.eval(f"logic [{bits - 1}:0] {name} = {bits}'d{values[name]};")
    session.eval(f"logic [{width - 1}:0] y = {expression};")
    assert _simulate(netlist, values) == int(session.eval("y").value)


def test_a_chain_of_thousands_of_operators_is_no_recursion(tmp_path: Path) -> None:
    """Depth without parentheses is read, in an assign and in a connection, and gives one gate an operator."""
    chain = " ^ ".join(["a"] * 3000)
    text = f"module m(input a, output y); assign y = {chain}; CELL u(.A({'~' * 3000}a)); endmodule\n"
    (tmp_path / "m.v").write_text(text)
    netlist = flatten(read_verilog([tmp_path / "m.v"]), None)
    assert len(netlist.instance_names) == 1 + 2999 + 3000
