"""Cones far deeper than the recursion limit."""

from pathlib import Path

import pytest

from auditor.machine.prove import prove_machine
from auditor.phases.find import find_phases
from auditor.replay.replay import replay
from tests.support.cones import cone_of, library, troubles_of


@pytest.mark.parametrize("kind", ["cells", "gates", "nands", "expression", "buffers of the clock"])
def test_a_chain_longer_than_the_recursion_limit_is_audited(tmp_path: Path, kind: str) -> None:
    """Thousands of gates in a row pass the cone, the proof, the replay and the phases, and mean what they mean."""
    count = 3000
    read = [f"r[{k % 3}]" for k in range(count)]
    chain = {
        "cells": [f"km_xor2 x{k} (.A(w[{k}]), .B({r}), .Y(w[{k + 1}]));" for k, r in enumerate(read)],
        "gates": [f"xor x{k} (w[{k + 1}], w[{k}], {r});" for k, r in enumerate(read)],
        "nands": [
            f"wire a{k}, b{k}, c{k}; nand (a{k}, w[{k}], {r}), (b{k}, w[{k}], a{k}), (c{k}, {r}, a{k}), "
            f"(w[{k + 1}], b{k}, c{k});"
            for k, r in enumerate(read)
        ],
        "expression": [f"assign w[{count}] = w[0] ^ {' ^ '.join(read)};"],
        "buffers of the clock": [f"buf (w[{k + 1}], w[{k}]);" for k in range(count)],
    }[kind]
    clocked = kind == "buffers of the clock"
    clock, last = (f"w[{count}]", "r[2]") if clocked else ("clk", f"w[{count}]")
    ring = [f"km_dff f{k} (.CK({clock}), .D({f'r[{k - 1}]' if k else 'fb'}), .Q(r[{k}]));" for k in range(3)]
    head = [f"wire [2:0] r; wire fb; wire [{count}:0] w; assign w[0] = {'clk' if clocked else 'r[2]'};"]
    ends = [f"xor (fb, {last}, r[1]); buf (y, r[0]);"]
    cone = cone_of(tmp_path, "\n".join([*head, *ring, *chain, *ends]))
    machine = prove_machine(cone).machine
    assert machine is not None
    assert machine.transition == (0b110, 0b001, 0b010)  # each state is read a thousand times, which cancels
    assert replay(cone, library(), machine, cycles=2).cycles == 2
    assert find_phases(machine).registers[0].period == 7


def test_a_loop_of_thousands_of_gates_is_told_by_its_ends(tmp_path: Path) -> None:
    """A loop without storage through five thousand inverters is found, and told in a readable line."""
    count = 5000
    ring = [f"not n{k} (w[{(k + 1) % count}], w[{k}]);" for k in range(count)]
    body = f"wire [{count - 1}:0] w;\n" + " ".join(ring) + "\nkm_dff f (.CK(clk), .D(w[0]), .Q(y));"
    (trouble,) = troubles_of(tmp_path, body)
    assert trouble.startswith("t.v:3: loop without storage: n")
    assert " → ... → " in trouble
    assert len(trouble) < 1200
