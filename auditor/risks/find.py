"""From the facts of an audit to its findings: the main verb of this room."""

from collections.abc import Callable, Iterator
from typing import TypeAlias

from auditor.risks import array_rules, capture_rules, distance_rules, load_rules, register_rules, stream_rules
from auditor.risks.evidence import Evidence
from auditor.risks.finding import LEVELS, Finding
from auditor.risks.waivers import waived

Rule: TypeAlias = Callable[[Evidence], Iterator[Finding]]

RULES: tuple[Rule, ...] = (
    stream_rules.not_affine,
    stream_rules.constant_channel,
    distance_rules.channels_in_lockstep,
    distance_rules.windows_overlap,
    stream_rules.single_tap_channel,
    stream_rules.free_input,
    register_rules.resets_into_lock_up,
    register_rules.registers_in_step,
    register_rules.period_short_of_test,
    register_rules.period_short_of_maximum,
    register_rules.no_reset_and_no_load,
    array_rules.scan_cells_twinned,
    array_rules.scan_cell_relation,
    capture_rules.net_frozen,
    capture_rules.cone_short_of_rank,
    array_rules.patterns_repeat,
    array_rules.seed_in_lock_up,
    array_rules.seeds_overlap,
    load_rules.fan_out_over_limit,
    load_rules.taps_over_limit,
    load_rules.depth_over_limit,
    load_rules.forced_net,
)


def find_risks(evidence: Evidence) -> tuple[Finding, ...]:
    """Return all findings, errors first, else in the order of the rules; waived ones carry their reason."""
    found = [waived(finding, evidence.plan.waivers) for rule in RULES for finding in rule(evidence)]
    return tuple(sorted(found, key=lambda finding: -LEVELS.index(finding.level)))
