"""The circuit under test in the JSON report."""

from typing import Any, TypeAlias

from auditor.array.circuit import CaptureFacts, ConeFacts, GivenCones
from auditor.plan import Plan
from auditor.report.wording import decimal

Json: TypeAlias = dict[str, Any]


def capture_part(capture: CaptureFacts | None, given: GivenCones | None, plan: Plan) -> Json:
    """Return the entries of the report that speak of cones and nets; they are empty where nobody asked."""
    cones_given = _cones(given.cones, "given") if given else []
    if capture is None:
        return {"capture": None, "cones": cones_given, "frozen_nets": [], "undecided_nets": []}
    circuit, cones, nets = capture.circuit, capture.cones, capture.nets
    return {
        "capture": {
            "constants": dict(plan.capture or {}),
            "gates": len(circuit.gates),
            "scan_cells": len(circuit.cells),
            "free_inputs": [circuit.wire_name(net) for net in circuit.free_inputs],
            "sources_outside": [{"name": source.name, "is": source.because} for source in circuit.outside],
            "two_cycles": cones.two_cycles,
            "dimension": cones.dimension,
            "examined_nets": nets.examined,
            "simulated_patterns": decimal(nets.patterns),
        },
        "cones": [*_cones(cones, "circuit"), *cones_given],
        "frozen_nets": [
            {
                "net": circuit.wire_name(net.net),
                "value": net.value,
                "scope": net.scope,
                "proved_by": net.proved_by,
                "follows": net.follows,
            }
            for net in nets.frozen
        ],
        "undecided_nets": [circuit.wire_name(net) for net in nets.undecided],
    }


def _cones(facts: ConeFacts, known_from: str) -> list[Json]:
    return [
        {
            "net": cone.name,
            "known_from": known_from,
            "size": facts.sets[cone.cells].size,
            "rank": facts.sets[cone.cells].rank,
            "combinations": decimal(1 << facts.sets[cone.cells].rank),
            "outside_lock_up": decimal(facts.sets[cone.cells].occurring),
        }
        for cone in facts.cones
    ]
