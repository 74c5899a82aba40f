"""Evidence built round a linear machine that was written down directly, for tests of the rules."""

from dataclasses import replace
from typing import Any

import networkx as nx
import numpy as np

from auditor.array.find import find_array
from auditor.array.scan_array import ScanArray
from auditor.cells.library import CellLibrary, Function
from auditor.cone.cone import Channel, Cone, Load, StorageElement
from auditor.gf2.matrix import ones
from auditor.machine.machine import Extraction, LinearMachine, ObservedRow, Refusal, Tap
from auditor.netlist.netlist import Netlist
from auditor.phases.find import find_phases
from auditor.phases.table import PhaseTable
from auditor.plan import Plan
from auditor.risks.evidence import Evidence

NET_LINE = 10  # every net's line in the invented file; element k stands on line 100 + k
INSTANCE_LINE = 100


def evidence(
    machine: LinearMachine,
    refusals: tuple[Refusal, ...] = (),
    loads: tuple[Load, ...] = (),
    proved: bool = True,
    scan: ScanArray | None = None,
    **stated: Any,
) -> Evidence:
    """Return the evidence of an audit of this machine; ``stated`` are fields of the plan.

    A channel's taps are the elements that its row reads. With ``proved`` False the machine is refused. The scan array
    is looked at where ``scan`` gives its chains or the plan has seeds.
    """
    machine = replace(machine, observed=tuple(map(_tapped, machine.observed)))
    plan, cone = Plan(netlists=(), **stated), _cone(machine, loads)
    phases, array = find_phases(machine) if proved else None, None
    if phases and (scan or plan.seeds):
        without_gates = replace(cone, feedback=())
        array = find_array(
            plan, without_gates, CellLibrary({}), machine, phases, scan, _solved, lambda _: None
        )  # fmt: skip
    return Evidence(
        plan=plan,
        cone=cone,
        extraction=Extraction(machine if proved else None, refusals),
        phases=phases,
        array=array,
    )


def _solved(machine: LinearMachine, window: int) -> PhaseTable:
    return find_phases(machine, window=window)


def _tapped(observed: ObservedRow) -> ObservedRow:
    if observed.row is None:
        return observed
    return replace(observed, taps=tuple(Tap(k, 0) for k in sorted(ones(observed.row.state))))


def _cone(machine: LinearMachine, loads: tuple[Load, ...]) -> Cone:
    nets = ("0", "1", "clk", *machine.free_inputs, *(row.name for row in machine.observed))
    base, buffer = len(nets), Function(("A",), ("$0",))
    channels = [
        Channel(row.name, nets.index(row.name), row.row.constant if row.row and not row.row.state else None)
        for row in machine.observed
        if not row.cut_from
    ]
    elements = tuple(
        StorageElement(
            name=name, cell="DFF", instance=k, bit=0, wire=base + k, data=buffer, inputs=(base + k,), step=0,
            clock=buffer, clock_inputs=(2,), reset=None, outputs=(),
        )
        for k, name in enumerate(machine.storage)
    )  # fmt: skip
    return Cone(
        netlist=_netlist(nets, machine.storage), channels=tuple(channels), gates=(), clock_gates=(), clock_latches=(),
        elements=elements, free_inputs=tuple(range(3, 3 + len(machine.free_inputs))), constants={}, clock=2,
        clock_edge="rising", graph=nx.DiGraph(), feedback=machine.registers, loads=loads, obstacles=(), forced=(),
        assumed=(),
    )  # fmt: skip


def _netlist(nets: tuple[str, ...], instances: tuple[str, ...]) -> Netlist:
    none = np.zeros(0, dtype=np.int32)
    return Netlist(
        top="block", files=("block.v",), cell_types=(), pin_names=(), ports=(), net_names=nets,
        net_of_name={name: k for k, name in enumerate(nets)}, net_file=np.zeros(len(nets), dtype=np.int32),
        net_line=np.full(len(nets), NET_LINE, dtype=np.int32), instance_names=instances, instance_type=none,
        instance_file=np.zeros(len(instances), dtype=np.int32),
        instance_line=np.arange(INSTANCE_LINE, INSTANCE_LINE + len(instances), dtype=np.int32),
        first_pin=none, pin_name=none, pin_net=none,
    )  # fmt: skip
