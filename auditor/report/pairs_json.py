"""The pairs of channels that are closer than what was asked for, as JSON."""

from typing import Any, TypeAlias

from auditor.phases.separations import pairs_closer_than
from auditor.report.facts import AuditFacts
from auditor.report.wording import decimal

MOST_PAIRS = 100_000  # listed, the closest; all are counted

Json: TypeAlias = dict[str, Any]


def close_pairs(facts: AuditFacts) -> Json | None:
    """Return the pairs of channels closer than the longest chain or the stated separation, whichever is more.

    ``complete`` tells whether they are all there are. None where nothing was asked, or without a machine.
    """
    machine, table, plan = facts.extraction.machine, facts.phases, facts.plan
    chain = facts.array.scan.longest if facts.array and facts.array.scan else plan.chain_length
    bound = max(chain or 0, plan.limits.separation or 0)
    if machine is None or table is None or not bound:
        return None
    rows = machine.observed
    pairs = [pair for pair in pairs_closer_than(table, bound) if not (rows[pair[0]].cut_from or rows[pair[1]].cut_from)]
    return {
        "bound": decimal(bound),
        "count": len(pairs),
        "complete": table.decides(bound),
        "pairs": [
            {"channels": [rows[i].name, rows[j].name], "cycles": decimal(cycles), "complement": complement}
            for i, j, cycles, complement in pairs[:MOST_PAIRS]
        ],
    }
