"""The audit as JSON: the form on which other programs rely.

Counts of cycles and whatever else can pass 2^53 are decimal strings. Polynomials list their exponents from the highest
down; hexadecimal forms have bit k for x^k or for element k. The same facts give the same bytes.
"""

import json
from collections.abc import Container, Sequence
from typing import Any, TypeAlias

from auditor import __version__
from auditor.cone.cone import Load
from auditor.machine.machine import LinearMachine
from auditor.notation import Polynomial, Vector, state_hex
from auditor.phases.table import PhaseClass, RegisterFacts, ResetFacts
from auditor.plan import Plan
from auditor.report.array_json import array_part
from auditor.report.capture_json import capture_part
from auditor.report.digest import ChannelView, channel_views, cut_views, fed_channels, heaviest_output
from auditor.report.facts import AuditFacts, Audits, worst
from auditor.report.pairs_json import close_pairs
from auditor.report.wording import CAUTIONS, decimal, exponents
from auditor.risks.finding import Finding

SCHEMA = "auditor-audit-1"

_SHORT_LINE = 100

Json: TypeAlias = dict[str, Any]


def json_text(audits: Audits) -> str:
    """Return the report as text: ASCII, laid out so that a change of one fact is a change of few lines."""
    return layout(as_json(audits), "") + "\n"


def as_json(audits: Audits) -> Json:
    """Return the report as plain dicts, lists, strings and numbers, in the order in which they are written.

    What one audit found stands at the top level; the audits of named modes stand in ``modes``.
    """
    any_of_them = next(iter(audits.values()))
    common = {
        "schema": SCHEMA,
        "tool": {"name": "auditor", "version": __version__},
        "environment": dict(any_of_them.environment),
        "inputs": [source._asdict() for source in any_of_them.inputs],
        "top": any_of_them.cone.netlist.top,
        "asked": _asked(any_of_them.plan),
    }
    if "" in audits:
        found = _found(audits[""])
    else:
        modes = [{"name": name, **_found(facts)} for name, facts in audits.items()]
        found = {"verdict": worst(audits), "modes": modes}
    return {**common, **found, "cautions": list(CAUTIONS)}


def _asked(plan: Plan) -> Json:
    """Return the bounds that the reviewer stated, null for each that was not."""
    limits, patterns = plan.limits, plan.patterns
    return {
        "chain_length": plan.chain_length,
        "limits": {
            "separation": _decimal(limits.separation),
            "fan_out": limits.fan_out,
            "taps": limits.taps,
            "depth": limits.depth,
        },
        "patterns": patterns
        and {
            "count": decimal(patterns.count),
            "shift_cycles": decimal(patterns.shift_cycles),
            "capture_cycles": decimal(patterns.capture_cycles),
            "generator_in_capture": patterns.generator_in_capture,
            "twin_window": patterns.twin_window,
            "launch": patterns.launch,
        },
        "scan_outputs": list(plan.scan_outputs),
        "relations": plan.relations,
        "fail_at": plan.fail_at,
        "work_limit": _decimal(plan.work_limit),
        "time_limit": plan.time_limit,
    }


def _found(facts: AuditFacts) -> Json:
    """Return what the audit of one mode found."""
    table, netlist = facts.phases, facts.cone.netlist
    return {
        "clock": {"net": netlist.net_names[facts.cone.clock], "edge": facts.cone.clock_edge},
        "mode": dict(facts.mode),
        "verdict": facts.verdict,
        "machine": _machine(facts),
        "classes": _classes(facts),
        "certified_at_least": _decimal(table.certified_at_least if table else None),
        "close_pairs": close_pairs(facts),
        "channels": [_channel(view, facts) for view in channel_views(facts)],
        "cut_nets": [{**_channel(view, facts), "channel": view.row.cut_from} for view in cut_views(facts) if view.row],
        "flip_flops": [_flip_flop(load, facts) for load in facts.cone.loads],
        **capture_part(facts.capture, facts.given, facts.plan),
        **array_part(facts.array, facts.extraction.machine.size if facts.extraction.machine else 0),
        "findings": [finding_json(finding) for finding in facts.findings],
        "assumed": list(facts.assumed),
        "undecided": list(facts.undecided),
    }


def _decimal(number: int | None) -> str | None:
    return None if number is None else decimal(number)


def _bits(vector: Vector) -> list[int]:
    """Return the indices of the ones, ascending."""
    return exponents(vector)[::-1]


def _names(facts: AuditFacts) -> list[str]:
    """Return the names of the observed rows, which number the channels of the phase table."""
    machine = facts.extraction.machine
    return [row.name for row in machine.observed] if machine else []


def _machine(facts: AuditFacts) -> Json | None:
    machine, table = facts.extraction.machine, facts.phases
    if machine is None:
        return None
    return {
        "storage": list(machine.storage),
        "transition": [_bits(row) for row in machine.transition],
        "input_matrix": [_bits(row) for row in machine.input_matrix],
        "offset": _bits(machine.offset),
        "free_inputs": list(machine.free_inputs),
        "transient": machine.transient,
        "cycling_degree": machine.cycling_degree,
        "proof": "decision-diagrams",
        "registers": [_register(register, machine) for register in (table.registers if table else ())],
        "replay": facts.replay._asdict() if facts.replay else None,
    }


def _register(register: RegisterFacts, machine: LinearMachine) -> Json:
    width = len(register.elements)
    return {
        "storage": [machine.storage[k] for k in register.elements],
        "cycling_degree": register.cycling_degree,
        "characteristic_polynomial": _polynomial(register.characteristic_polynomial),
        "connection_polynomial": _polynomial(register.connection_polynomial),
        "factors": [
            {"exponents": exponents(f.polynomial), "multiplicity": f.multiplicity, "primitive": f.primitive}
            for f in register.factors
        ],
        "period": _decimal(register.period),
        "maximum_period": decimal(register.maximum_period),
        "primitive": register.primitive,
        "lock_up": {
            "count": decimal(register.lock_up_count),
            "states": [state_hex(state, width) for state in register.lock_up_states],
        },
        "reset": _reset(register.reset, width),
    }


def _polynomial(polynomial: Polynomial) -> Json:
    return {"exponents": exponents(polynomial), "hex": f"{polynomial:x}"}


def _reset(reset: ResetFacts | None, width: int) -> Json | None:
    if reset is None:
        return None
    return {
        "state": state_hex(reset.state, width),
        "unknown": list(reset.unknown),
        "stuck": reset.stuck,
        "period": _decimal(reset.period),
    }


def _classes(facts: AuditFacts) -> list[Json]:
    table, names = facts.phases, _names(facts)
    return [_phase_class(group, names, fed_channels(facts)) for group in (table.classes if table else ())]


def _phase_class(group: PhaseClass, names: Sequence[str], fed: Container[int]) -> Json:
    least = group.minimum
    return {
        "reference": names[group.reference],
        "modulus": _decimal(group.modulus),
        "channels": [names[k] for k in group.channels if k in fed],
        "minimum": least
        and {
            "channels": [names[k] for k in least.channels],
            "cycles": decimal(least.cycles),
            "complement": least.complement,
        },
    }


def _channel(view: ChannelView, facts: AuditFacts) -> Json:
    return {"name": view.name, **_row_part(view, facts), **_phase_part(view, facts), **_structure_part(view, facts)}


def _row_part(view: ChannelView, facts: AuditFacts) -> Json:
    machine, observed = facts.extraction.machine, view.row
    storage, free_inputs = (machine.storage, machine.free_inputs) if machine else ((), ())
    row = observed.row if observed else None
    return {
        "class": view.phase.group if view.phase else None,
        "taps": [storage[tap.element] for tap in observed.taps] if observed else [],
        "tap_delays": [tap.delay for tap in observed.taps] if observed else [],
        "observed_taps": [storage[k] for k in _bits(row.state)] if row else [],
        "input_taps": [free_inputs[k] for k in _bits(row.inputs)] if row else [],
        "constant": row.constant if row else None,
    }


def _phase_part(view: ChannelView, facts: AuditFacts) -> Json:
    phase, stages = view.phase, view.row.pipeline_stages if view.row else 0
    if phase is None:
        because = "the machine was refused"
        return {"inverted": None, "pipeline_stages": stages, "lead": None, "lag": None, "lead_kind": "none",
                "lead_modulus": None, "valid_from": 0, "no_lead_because": because}  # fmt: skip
    group = facts.phases.classes[phase.group] if facts.phases and phase.group is not None else None
    modulus = phase.lead_modulus or (group.modulus if group else None)
    return {
        "inverted": phase.inverted,
        "pipeline_stages": stages,
        "lead": _decimal(phase.lead),
        "lag": _decimal(phase.lag(modulus)) if modulus else None,
        "lead_kind": phase.kind,
        "lead_modulus": _decimal(phase.lead_modulus),
        "valid_from": phase.valid_from,
        "no_lead_because": phase.no_lead_because or None,
    }


def _structure_part(view: ChannelView, facts: AuditFacts) -> Json:
    nearest = view.phase.nearest if view.phase else None
    return {
        "cut_at": view.refusal.gate if view.refusal else None,
        "xor_inputs": view.row.xor_inputs if view.row else 0,
        "xor_depth": view.row.xor_depth if view.row else 0,
        "nearest": nearest
        and {
            "channel": _names(facts)[nearest.channel],
            "separation": decimal(nearest.separation),
            "complement": nearest.complement,
        },
    }


def _flip_flop(load: Load, facts: AuditFacts) -> Json:
    element, machine = facts.cone.elements[load.element], facts.extraction.machine
    heaviest = heaviest_output(load)
    columns = zip(load.pins, load.direct, load.leaf, load.capacitance_ff, load.limit_ff, strict=True)
    return {
        "name": element.name,
        "cell": element.cell,
        "direct_fan_out": sum(load.direct),
        "fan_out": sum(load.leaf),
        "xor_fan_out": machine.xor_fan_out[load.element] if machine else None,
        "capacitance_ff": _rounded(load.capacitance_ff[heaviest]) if heaviest is not None else None,
        "limit_ff": _rounded(load.limit_ff[heaviest]) if heaviest is not None else None,
        "outputs": [
            {"pin": pin, "direct_fan_out": direct, "fan_out": leaf,
             "capacitance_ff": _rounded(capacitance), "limit_ff": _rounded(limit)}
            for pin, direct, leaf, capacitance, limit in columns
        ],
    }  # fmt: skip


def _rounded(figure: float | None) -> float | None:
    return None if figure is None else round(float(figure), 3)


def finding_json(finding: Finding) -> Json:
    """Return a finding."""
    place = finding.place
    return {
        "slug": finding.slug,
        "level": finding.level,
        "where": list(finding.where),
        "figures": {k: round(v, 3) if isinstance(v, float) else v for k, v in finding.figures.items()},
        "says": finding.says,
        "place": {"file": place.file, "line": place.line or None} if place else None,
        "waived": finding.waived,
    }


def layout(value: object, margin: str) -> str:
    """Return JSON text: on one line what is short and what is flat, else an entry a line."""
    whole = json.dumps(value, allow_nan=False)
    if not isinstance(value, dict | list) or len(margin) + len(whole) <= _SHORT_LINE:
        return whole
    entries = list(value.values()) if isinstance(value, dict) else value
    if not any(isinstance(entry, dict | list) or (isinstance(entry, str) and " " in entry) for entry in entries):
        return whole
    keys = [json.dumps(key) + ": " for key in value] if isinstance(value, dict) else [""] * len(value)
    inner = margin + "  "
    lines = ",\n".join(inner + key + layout(entry, inner) for key, entry in zip(keys, entries, strict=True))
    return f"{whole[0]}\n{lines}\n{margin}{whole[-1]}"
