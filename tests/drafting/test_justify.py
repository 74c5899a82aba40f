"""Constants that give a net a value: at ports where gates lead there, else at the net itself."""

import itertools
import random
from pathlib import Path

import pytest

from auditor.cone.constants import spread
from auditor.drafting.justify import Constants, justify_net, root_of
from auditor.drafting.part import Part, cut_out, input_ports
from tests.support.drafts import names_of, wired

TEXT = """\
module t (input clk, input a, input b, input c, output q);
  wire n1, n2, n3, d, held;
  and2 g1 (.A(a), .B(b), .Y(n1));
  inv g2 (.A(n1), .Y(n2));
  nor2 g3 (.A(n2), .B(c), .Y(n3));
  ff_plain other_ff (.CK(clk), .D(d), .Q(held));
  xor2 g4 (.A(n3), .B(q), .Y(d));
  mux2 g5 (.A(d), .B(q), .S(held), .Y(e)); wire e;
  ff_plain q_ff (.CK(clk), .D(e), .Q(q));
endmodule
"""


@pytest.fixture
def part(tmp_path: Path) -> Part:
    wiring, library = wired(tmp_path, TEXT.replace("wire n1", "wire e, n1").replace(" wire e;", ""))
    (element,) = (k for k, name in enumerate(wiring.netlist.instance_names) if name == "q_ff")
    found = cut_out(wiring, library, input_ports(wiring.netlist), (element,), {})
    assert found is not None
    return found


def test_a_part_is_cut_at_other_storage(part: Part) -> None:
    """The part holds the element and the gates behind it; what other storage stores is an input of its own."""
    names = part.netlist.net_names
    assert sorted(part.netlist.instance_names) == ["g1", "g2", "g3", "g4", "g5", "q_ff"]
    assert {names[net] for net in part.cut} == {"held"}
    assert {names[net] for net in part.ports} == {"a", "b", "c", "clk"}


def test_a_value_is_walked_back_to_ports(part: Part) -> None:
    """n3 = 1 needs a, b and c; n3 = 0 needs c alone."""
    net = part.netlist.net_of_name["n3"]
    constants = Constants(part)
    assert names_of(part.wiring, justify_net(constants, net, 1) or {}) == {"a": 1, "b": 1, "c": 0}
    assert names_of(part.wiring, justify_net(constants, net, 0) or {}) == {"c": 1}


def test_no_element_of_the_register_is_held(part: Part) -> None:
    """Where only a bit of the register would give the value, the net itself is held."""
    names = part.netlist.net_of_name
    constants = Constants(part, {names["c"]: 1})
    assert names_of(part.wiring, justify_net(constants, names["d"], 1) or {}) == {"d": 1}


def test_what_is_decided_otherwise_is_not_justified(part: Part) -> None:
    """A net that the constants hold at a value has no constants for the other."""
    names = part.netlist.net_of_name
    constants = Constants(part, {names["c"]: 1})
    assert justify_net(constants, names["n3"], 1) is None


def test_lines_of_buffers_lead_to_their_root(part: Part) -> None:
    """Behind an inverter stands its input, inverted; a gate of two inputs is a root."""
    names = part.netlist.net_of_name
    assert root_of(part.wiring, names["n2"], {}) == (names["n1"], True)
    assert root_of(part.wiring, names["n1"], {}) == (names["n1"], False)


@pytest.mark.parametrize("seed", range(30))
def test_what_is_justified_follows(seed: int, tmp_path: Path) -> None:
    """In random gates, constants that are found at ports give the value, by simulation of all settings they leave."""
    rng = random.Random(seed)
    nets, lines = ["a", "b", "c", "d"], []
    for k in range(12):
        x, y = rng.sample(nets[-6:], 2)
        lines.append(f"  {rng.choice(('and2', 'nand2', 'or2', 'nor2', 'xor2'))} g{k} (.A({x}), .B({y}), .Y(n{k}));")
        nets.append(f"n{k}")
    wires = ", ".join(nets[4:])
    text = "module t (input clk, input a, b, c, d, output q);\n  wire " + wires + ";\n" + "\n".join(lines)
    wiring, library = wired(tmp_path, text + f"\n  ff_plain f (.CK(clk), .D({nets[-1]}), .Q(q));\nendmodule\n")
    part = cut_out(wiring, library, input_ports(wiring.netlist), (12,), {})
    assert part is not None
    name = part.netlist.net_of_name
    for value in (0, 1):
        found = justify_net(Constants(part), name[nets[-1]], value)
        if not found or not found.keys() <= part.ports:
            continue
        open_ports = [name[p] for p in "abcd" if p in name and name[p] not in found]
        for bits in itertools.product((0, 1), repeat=len(open_ports)):
            known = {0: 0, 1: 1, **found, **dict(zip(open_ports, bits, strict=True))}
            spread(part.wiring, known, list(known))
            assert known[name[nets[-1]]] == value
