"""A comparison as JSON, laid out as the audit's; counts of cycles are decimal strings."""

from collections.abc import Sequence

from auditor import __version__
from auditor.notation import Vector, state_hex
from auditor.report.compared import Compared, Comparisons
from auditor.report.facts import AuditFacts
from auditor.report.json_report import Json, finding_json, layout
from auditor.report.wording import decimal, exponents
from auditor.revisions.comparison import (
    ChangedNet,
    ChannelChange,
    ChannelFacts,
    Comparison,
    FlipFlopChange,
    FlipFlopFacts,
    Structure,
)

SCHEMA = "auditor-compare-1"


def comparison_text(comparisons: Comparisons) -> str:
    """Return the comparisons as JSON text."""
    return layout(comparison_json(comparisons), "") + "\n"


def comparison_json(comparisons: Comparisons) -> Json:
    """Return the comparisons as plain dicts and lists; those of named modes stand in ``modes``."""
    any_of_them = next(iter(comparisons.by_mode.values()))
    common = {
        "schema": SCHEMA,
        "tool": {"name": "auditor", "version": __version__},
        "environment": dict(any_of_them.new.environment),
        "old": _side(any_of_them.old),
        "new": _side(any_of_them.new),
        "outcome": comparisons.outcome,
    }
    if "" in comparisons.by_mode:
        return {**common, **_found(comparisons.by_mode[""])}
    modes = [{"name": name, **_found(compared)} for name, compared in comparisons.by_mode.items()]
    return {**common, "modes": modes, "modes_of_one_plan": list(comparisons.only)}


def _side(facts: AuditFacts) -> Json:
    return {"top": facts.cone.netlist.top, "inputs": [source._asdict() for source in facts.inputs]}


def _found(compared: Compared) -> Json:
    old, new, found = compared.old, compared.new, compared.comparison
    return {
        "verdicts": {"old": old.verdict, "new": new.verdict},
        "mode": {"old": dict(old.mode), "new": dict(new.mode)},
        "compare": {
            "class": found.name,
            "outcome": found.outcome,
            "holds_from": found.holds_from,
            "shift": _cycles(found.shift),
            "factor": found.factor,
            "one_map": found.one_map,
            "reset_shift": _cycles(found.reset.shift),
            "reset": {
                "agree": found.reset.agree,
                "known_from": found.reset.known_from,
                "agree_from": found.reset.agree_from,
                "because": found.reset.because or None,
            },
            "state_map": found.state_map
            and {
                "rows": [None if row is None else exponents(row)[::-1] for row in found.state_map.rows],
                "offset": exponents(found.state_map.offset)[::-1],
            },
            "channels": [_channel(change) for change in found.channels],
            "findings": {
                "gained": [finding_json(finding) for finding in found.findings.gained],
                "lost": [finding_json(finding) for finding in found.findings.lost],
                "worse": [{"old": finding_json(a), "new": finding_json(b)} for a, b in found.findings.worse],
            },
            "flip_flops": [_flip_flop(change) for change in found.flip_flops],
            "changed_nets": [_changed_net(net) for net in found.changed_nets],
            "structure": {"old": _structure(found.before), "new": _structure(found.after)},
            "witness": _witness(compared, found),
            "remarks": list(found.remarks),
        },
    }  # fmt: skip


def _cycles(number: int | None) -> str | None:
    """Return a count of cycles, which may be negative, in decimal digits."""
    if number is None:
        return None
    return "-" + decimal(-number) if number < 0 else decimal(number)


def _channel(change: ChannelChange) -> Json:
    return {
        "old": change.old,
        "new": change.new,
        "matched_by": change.matched_by,
        "status": change.status,
        "shift": _cycles(change.shift),
        "inverted": change.inverted,
        "carries": change.carries,
        "before": _channel_facts(change.before),
        "after": _channel_facts(change.after),
    }


def _channel_facts(facts: ChannelFacts | None) -> Json | None:
    if facts is None:
        return None
    return {
        "taps": list(facts.taps),
        "inverted": facts.inverted,
        "lead": _cycles(facts.lead),
        "nearest": facts.nearest,
        "separation": _cycles(facts.separation),
    }


def _flip_flop(change: FlipFlopChange) -> Json:
    return {
        "old": change.old,
        "new": change.new,
        "matched_by": change.matched_by,
        "inverted": change.inverted,
        "before": _flip_flop_facts(change.before),
        "after": _flip_flop_facts(change.after),
    }


def _flip_flop_facts(facts: FlipFlopFacts | None) -> Json | None:
    if facts is None:
        return None
    return {
        "cell": facts.cell,
        "reset": facts.reset,
        "direct_fan_out": facts.direct_fan_out,
        "fan_out": facts.fan_out,
        "xor_fan_out": facts.xor_fan_out,
    }


def _changed_net(net: ChangedNet) -> Json:
    return {
        "net": net.net,
        "file": net.place.file,
        "line": net.place.line or None,
        "instance": net.instance or None,
        "cell": net.cell or None,
        "channels": list(net.feeds),
        "next_states": list(net.rows),
    }


def _structure(structure: Structure) -> Json:
    return {
        "cells": dict(structure.cells),
        "area": None if structure.area is None else round(structure.area, 3),
        "xor_inputs": structure.xor_inputs,
        "xor_depth": structure.xor_depth,
        "smallest_separation": _cycles(structure.smallest_separation),
    }


def _witness(compared: Compared, found: Comparison) -> Json | None:
    witness = found.witness
    if witness is None:
        return None
    return {
        "old_state": _state(compared.old, witness.old_state),
        "new_state": _state(compared.new, witness.new_state),
        "cycle": witness.cycle,
        "channel": witness.new_channel,
        "old_channel": witness.old_channel,
        "start": witness.start,
        "confirmed_by_replay": witness.confirmed,
    }


def _state(facts: AuditFacts, state: Vector) -> str:
    machine = facts.extraction.machine
    storage: Sequence[object] = machine.storage if machine else facts.cone.elements
    return state_hex(state, len(storage))
