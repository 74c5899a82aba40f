"""The close pairs in the JSON are all there are, each as far apart as the leads say."""

from dataclasses import replace
from itertools import combinations

import pytest

from auditor.phases.separations import separation
from auditor.plan import Limits, Plan
from auditor.report import pairs_json
from auditor.report.pairs_json import close_pairs
from tests.support.facts import refused_facts, small_facts


@pytest.mark.parametrize(("length", "limit", "bound"), [(100, None, 100), (None, 40, 40), (30, 90, 90), (90, 30, 90)])
def test_all_pairs_closer_than_the_bound_are_listed(length, limit, bound):
    """The bound is the larger of chain length and limit; pairs are those that a look at every pair finds."""
    facts = small_facts()
    facts = replace(facts, plan=replace(facts.plan, chain_length=length, limits=Limits(separation=limit)))
    assert facts.extraction.machine
    assert facts.phases
    names = [row.name for row in facts.extraction.machine.observed if not row.cut_from]
    distances = {(i, j): separation(facts.phases, i, j) for i, j in combinations(range(len(names)), 2)}
    expected = sorted((d, names[i], names[j]) for (i, j), d in distances.items() if isinstance(d, int) and d < bound)
    found = close_pairs(facts)
    assert found
    assert sorted((int(pair["cycles"]), *pair["channels"]) for pair in found["pairs"]) == expected
    assert (found["bound"], found["count"], found["complete"]) == (str(bound), len(expected), True)


def test_without_a_bound_or_a_machine_nothing_is_listed():
    """What was not asked is null."""
    facts = small_facts()
    assert close_pairs(replace(facts, plan=replace(facts.plan, chain_length=None, limits=Limits()))) is None
    assert close_pairs(refused_facts()) is None


def test_a_long_list_is_cut_and_counted(monkeypatch):
    """The closest pairs are listed, and the count is of all."""
    facts = small_facts()
    whole = close_pairs(facts)
    monkeypatch.setattr(pairs_json, "MOST_PAIRS", 1)
    found = close_pairs(facts)
    assert whole
    assert found == {**whole, "pairs": whole["pairs"][:1]}
    cycles = [int(pair["cycles"]) for pair in whole["pairs"]]
    assert cycles == sorted(cycles)
    assert len(cycles) == whole["count"] > 1


def test_what_a_bounded_search_leaves_open_is_said():
    """Beyond the window of a search the list is not called complete."""
    facts = small_facts()
    assert facts.phases
    table = replace(facts.phases, window=50, certified_at_least=50)
    found = [close_pairs(replace(facts, phases=table, plan=Plan((), chain_length=n))) for n in (50, 51)]
    assert [part and part["complete"] for part in found] == [True, False]
