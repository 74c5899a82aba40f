"""Audits built by hand, for the tests of the writers: small, plausible and consistent in themselves."""

import random
from collections.abc import Mapping, Sequence
from dataclasses import replace
from pathlib import Path

import networkx as nx
import numpy as np

from auditor.cells.library import CellLibrary, Function
from auditor.cone.cone import Channel, Cone, Load, StorageElement
from auditor.machine.machine import AffineRow, Extraction, LinearMachine, ObservedRow, Refusal, Tap
from auditor.netlist.netlist import Netlist
from auditor.notation import SourcePlace
from auditor.phases.table import (
    Closest,
    Factor,
    Neighbour,
    Phase,
    PhaseClass,
    PhaseTable,
    RegisterFacts,
    ResetFacts,
)
from auditor.plan import Limits, Plan
from auditor.report.facts import AuditFacts, InputFile, ReplayFacts
from auditor.risks.finding import Finding

REFUSED = Refusal("chain[4]", "u_gen.U77", "its NAND2 is not affine", "hold test_en at 1", SourcePlace("gen.v", 77))


def small_facts() -> AuditFacts:
    """Return the audit of an 8-bit register, x^8 + x^4 + x^3 + x^2 + 1, with a pipeline flip-flop and six channels.

    Element 0 is the pipeline flip-flop, 1 to 8 the register. chain[0] to chain[2] are one class, chain[3] is a
    constant, chain[4] is refused and cut back to net n42, chain[5] adds an external input.
    """
    storage = ("pipe", *(f"q[{k}]" for k in range(8)))
    transition = (1 << 3 ^ 1 << 7, 1 << 4 ^ 1 << 5 ^ 1 << 6 ^ 1 << 8, *(1 << k for k in range(1, 8)))
    seen = [
        _observed("chain[0]", 1 << 8),
        _observed("chain[1]", 1 << 1 ^ 1 << 4 ^ 1 << 6),
        ObservedRow("chain[2]", AffineRow(1, 0, 1), None, (Tap(3, 1), Tap(7, 1)), 2, 1),
        ObservedRow("chain[3]", AffineRow(0, 0, 1), None, (), 0, 0),
        ObservedRow("chain[4]", None, REFUSED, (), 0, 0),
        replace(_observed("chain[5]", 1 << 2), row=AffineRow(1 << 2, 1, 0), xor_inputs=2, xor_depth=1),
        replace(_observed("n42", 1 << 5), cut_from="chain[4]"),
    ]
    machine = LinearMachine(
        storage=storage, free_inputs=("extra_in",), transition=transition, input_matrix=(0,) * 9, offset=0,
        observed=tuple(seen), registers=(tuple(range(1, 9)),), half_cycle=frozenset(), reset_known=0x1FE,
        reset_state=2, transient=1, cycling_degree=8, xor_fan_out=(0, *(k % 3 + 1 for k in range(8))),
    )  # fmt: skip
    leads = {k: _stepped_lead(machine, seen[k], seen[0], 255) for k in (0, 1, 2, 6)}
    register = RegisterFacts(
        elements=tuple(range(1, 9)), cycling_degree=8, characteristic_polynomial=0x11D,
        connection_polynomial=0x171, factors=(Factor(0x11D, 1, True),), period=255, maximum_period=255,
        primitive=True, lock_up_count=1, lock_up_states=(0,), reset=ResetFacts(1, (), False, 255),
    )  # fmt: skip
    table = phase_table(len(seen), leads, {2}, 255, (register,), valid_from=1, cut=(6,))
    return _facts(machine, table, (REFUSED,))


def large_facts(degree: int = 127, channels: int = 300, modulus: int = 2**127 - 1) -> AuditFacts:
    """Return an audit of a register with three taps a channel; its leads are drawn by chance, not computed."""
    draw = random.Random(5)
    storage = tuple(f"u_gen.state_reg[{k}]" for k in range(degree))
    seen = [
        _observed(f"chain_in[{k}]", sum(1 << tap for tap in draw.sample(range(degree), 3))) for k in range(channels)
    ]
    machine = LinearMachine(
        storage=storage, free_inputs=(), transition=(1 | 1 << degree - 1, *(1 << k for k in range(degree - 1))),
        input_matrix=(0,) * degree, offset=0, observed=tuple(seen), registers=(tuple(range(degree)),),
        half_cycle=frozenset(), reset_known=0, reset_state=0, transient=0, cycling_degree=degree,
        xor_fan_out=tuple(draw.randrange(9) for _ in storage),
    )  # fmt: skip
    register = RegisterFacts(
        elements=tuple(range(degree)), cycling_degree=degree, characteristic_polynomial=1 << degree | 3,
        connection_polynomial=1 << degree | 1 << degree - 1 | 1, factors=(Factor(1 << degree | 3, 1, True),),
        period=modulus, maximum_period=modulus, primitive=True, lock_up_count=1, lock_up_states=(0,), reset=None,
    )  # fmt: skip
    leads = {k: draw.randrange(modulus) if k else 0 for k in range(channels)}
    inverted = {k for k in range(1, channels) if draw.random() < 0.2}
    return _facts(machine, phase_table(channels, leads, inverted, modulus, (register,), valid_from=0), ())


def refused_facts() -> AuditFacts:
    """Return the small audit with its machine refused: a NOR completes the cycle."""
    facts = small_facts()
    because = Refusal("q[0]", "u_gen.U3", "the NOR4 in its next state is not affine", "", SourcePlace("gen.v", 31))
    extraction = Extraction(None, (because, REFUSED))
    return replace(facts, extraction=extraction, phases=None, replay=None, undecided=("No machine was formed.",))


def phase_table(
    count: int,
    leads: Mapping[int, int],
    inverted: set[int],
    modulus: int,
    registers: tuple[RegisterFacts, ...],
    valid_from: int,
    cut: Sequence[int] = (),
) -> PhaseTable:
    """Return the table for one class of channels with known leads; the other channels have none.

    ``cut`` are nets behind a spoiled channel: nobody's nearest.
    """
    phases = [Phase(None, None, "none", None, None, 0, "it is constant or not affine")] * count
    pairs = []
    for i, lead in leads.items():
        near = min((_apart(lead, leads[j], modulus), j) for j in leads if j != i and j not in cut)
        nearest = Neighbour(near[1], near[0], (i in inverted) != (near[1] in inverted))
        kind = "from" if valid_from else "exact"
        phases[i] = Phase(0, lead, kind, modulus, i in inverted, valid_from, nearest=nearest)
        if i not in cut:
            pairs.append((near[0], min(i, near[1]), max(i, near[1]), nearest.complement))
    cycles, first, second, complement = min(pairs)
    group = PhaseClass(min(leads), modulus, tuple(sorted(leads)), Closest((first, second), cycles, complement))
    return PhaseTable(registers, (group,), tuple(phases), None)


def _apart(a: int, b: int, modulus: int) -> int:
    return min((a - b) % modulus, (b - a) % modulus)


def _observed(name: str, state: int) -> ObservedRow:
    taps = tuple(Tap(k, 0) for k in range(state.bit_length()) if state >> k & 1)
    return ObservedRow(name, AffineRow(state, 0, 0), None, taps, len(taps), (len(taps) - 1).bit_length())


def _stepped_lead(machine: LinearMachine, channel: ObservedRow, reference: ObservedRow, period: int) -> int:
    """Return s with c A^T = c_ref A^(T+s), found by stepping."""
    assert channel.row
    assert reference.row
    steady, row = _times(channel.row.state, machine), _times(reference.row.state, machine)
    for lead in range(period):
        if row == steady:
            return lead
        row = _times(row, machine)
    raise AssertionError(f"{channel.name} does not follow the reference")


def _times(row: int, machine: LinearMachine) -> int:
    """Return the row vector times A."""
    product = 0
    for k, line in enumerate(machine.transition):
        product ^= line if row >> k & 1 else 0
    return product


def _facts(machine: LinearMachine, table: PhaseTable, refusals: tuple[Refusal, ...]) -> AuditFacts:
    return AuditFacts(
        plan=Plan((Path("gen.v"),), (Path("cells.lib"),), chain_length=64, limits=Limits(separation=100, fan_out=4)),
        inputs=(InputFile("gen.v", "netlist", "ab" * 32), InputFile("cells.lib", "cells", "cd" * 32)),
        mode={"test_en": 1, "scan_en": 0},
        library=CellLibrary({}),
        cone=_cone(machine),
        extraction=Extraction(machine, refusals),
        phases=table,
        replay=ReplayFacts(64, 256, 0),
        findings=FINDINGS,
        assumed=("The reset pin rst_n of the top is taken as inactive (1).",),
        undecided=(),
        verdict="fail",
        environment={"python": "3.11"},
    )


def _cone(machine: LinearMachine) -> Cone:
    nets = ("1'b0", "1'b1", "clk", *(row.name for row in machine.observed))
    base = len(nets)
    hold = Function(("D",), ("$0",))
    elements = tuple(
        StorageElement(
            name=name, cell="DFFRX1", instance=k, bit=0, wire=base + k, data=hold, inputs=(base + k,), step=0,
            clock=Function(("C",), ("$0",)), clock_inputs=(2,), reset=0, outputs=(),
        )
        for k, name in enumerate(machine.storage)
    )  # fmt: skip
    loads = tuple(
        Load(k, ("Q", "QN"), (2 + k % 3, 1), (4 + k % 3, 1), (1.2345 * (k + 1), 2.5), (60.0, 12.0 if k == 2 else None))
        for k in range(machine.size)
    )
    channels = tuple(Channel(row.name, 3 + k) for k, row in enumerate(machine.observed) if not row.cut_from)
    return Cone(
        netlist=_netlist(nets, machine.storage), channels=channels, gates=(), clock_gates=(), clock_latches=(),
        elements=elements, free_inputs=(), constants={}, clock=2, clock_edge="rising", graph=nx.DiGraph(),
        feedback=machine.registers, loads=loads, obstacles=(), forced=(), assumed=(),
    )  # fmt: skip


def _netlist(nets: Sequence[str], instances: Sequence[str]) -> Netlist:
    """Return a netlist that holds names only."""
    none = np.zeros(0, dtype=np.int32)
    return Netlist(
        top="gen", files=("gen.v",), cell_types=(), pin_names=(), ports=(), net_names=nets,
        net_of_name={name: k for k, name in enumerate(nets)}, net_file=none, net_line=none, instance_names=instances,
        instance_type=none, instance_file=none, instance_line=none, first_pin=none, pin_name=none, pin_net=none,
    )  # fmt: skip


FINDINGS = (
    Finding(
        "windows-overlap", "error", ("chain[0]", "chain[1]"),
        "Part of both scan chains always holds the same bits, so faults that need them to differ stay undetected.",
        {"separation": "17", "identical_pairs": "47", "example": "chain[0] cell 17 and chain[1] cell 0"},
        SourcePlace("gen.v", 120),
    ),
    Finding(
        "fan-out-over-limit", "warning", ("q[2]",), "The flip-flop drives more pins than the stated limit.",
        {"fan_out": 6, "limit": 4, "share": 1.23456789}, SourcePlace("gen.v", 14), waived="sized by hand, see review 7",
    ),
    Finding("single-tap-channel", "note", ("chain[0]",), "The chain is fed by one stage without any XOR.", {}, None),
)  # fmt: skip
