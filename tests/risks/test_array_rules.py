"""Rules on scan chains and seeds: what is told, at which level, with which figures."""

from dataclasses import replace

from auditor.array.orbits import state_after
from auditor.array.scan_array import Chain, ScanArray
from auditor.notation import SourcePlace
from auditor.plan import Limits, Patterns
from auditor.risks.array_rules import (
    patterns_repeat,
    scan_cell_relation,
    scan_cells_twinned,
    seed_in_lock_up,
    seeds_overlap,
)
from auditor.risks.distance_rules import windows_overlap
from auditor.risks.questions import open_questions
from tests.support.evidence import INSTANCE_LINE, NET_LINE, evidence
from tests.support.linear_machines import fibonacci, linear_machine

MACHINE = linear_machine(fibonacci((5, 2, 0)), [(1, 0), (1 << 3, 1)], reset_known=31, reset_state=1)


def chains(*lengths: int) -> ScanArray:
    """Return chains of these lengths behind the channels c0, c1, ..."""
    return ScanArray(tuple(Chain(f"c{i}", length) for i, length in enumerate(lengths)), "file")


def test_twins_between_chains_are_counted_with_an_example() -> None:
    """c1 is the complement of c0 three cycles later: of 9 and 5 scan cells 5 pairs agree."""
    (found,) = scan_cells_twinned(evidence(MACHINE, scan=chains(9, 5)))
    assert (found.slug, found.level, found.where) == ("scan-cells-twinned", "error", ("c0", "c1"))
    assert found.figures == {
        "pairs": "5", "pairs_of_chains": 1, "cycles_apart": "3",
        "example": "chain c0 cell 4 = NOT chain c1 cell 1",
    }  # fmt: skip
    assert found.says == (
        "In every pattern 5 pairs of scan cells in 1 pair of chains hold the same bit or opposite ones, so a fault "
        "that needs another combination in one of these pairs is never detected."
    )
    assert found.place == SourcePlace("block.v", NET_LINE)
    assert list(scan_cells_twinned(evidence(MACHINE, scan=chains(3, 9)))) == []
    assert list(scan_cells_twinned(evidence(MACHINE))) == []


def test_a_chain_longer_than_the_period_repeats_itself() -> None:
    """40 scan cells under a period of 31: 9 pairs."""
    found = list(scan_cells_twinned(evidence(MACHINE, scan=ScanArray((Chain("c0", 40),), "file"))))
    (inside,) = found
    assert (inside.level, inside.where) == ("error", ("c0",))
    assert inside.figures == {"pairs": "9", "chains": 1, "example": "chain c0 cell 32 = chain c0 cell 1"}


def test_twins_across_patterns_are_a_warning() -> None:
    """Loads of 3 clocks and channels 3 cycles apart: one chain repeats in a pattern what the other held in another."""
    told = evidence(MACHINE, scan=chains(3, 3), patterns=Patterns(5, 3, twin_window=2))
    (found,) = [one for one in scan_cells_twinned(told) if one.level == "warning"]
    assert found.where == ("c0", "c1")
    assert found.figures["pairs"] == "3"
    assert found.figures["example"] == "chain c0 cell 1 = NOT chain c1 cell 1, 1 pattern later"


def test_relations_are_a_note_with_what_random_rows_would_have() -> None:
    """x^5 + x^2 + 1: of 9 scan cells of one chain the delays 0, 3, 5 and their shifts sum to zero, and others."""
    (found,) = scan_cell_relation(evidence(MACHINE, scan=ScanArray((Chain("c0", 6),), "file")))
    assert (found.slug, found.level, found.where) == ("scan-cell-relation", "note", ("c0",))
    assert found.figures == {
        "places": "1", "relations": 1, "expected": "0.625",
        "example": "chain c0 cell 1 + chain c0 cell 3 + chain c0 cell 6 = 0",
    }  # fmt: skip


def test_four_cells_are_looked_at_where_they_are_asked_for() -> None:
    """With relations = 4 a second finding counts the sets of four."""
    scan = ScanArray((Chain("c0", 9),), "file")
    sizes = [one.says.split("sets of ")[1].split()[0] for one in scan_cell_relation(evidence(MACHINE, scan=scan))]
    assert sizes == ["three"]
    four = list(scan_cell_relation(evidence(MACHINE, scan=scan, relations=4)))
    assert [one.says.split("sets of ")[1].split()[0] for one in four] == ["three", "four"]


def test_a_test_longer_than_the_orbit_repeats_its_patterns() -> None:
    """31 states met every 6 clocks: 31 different patterns of 40, and all of 31."""
    scan = chains(6, 6)
    (found,) = patterns_repeat(evidence(MACHINE, scan=scan, patterns=Patterns(40, 6)))
    assert (found.slug, found.level) == ("patterns-repeat", "error")
    assert found.where == tuple(f"q[{k}]" for k in range(5))
    assert found.figures == {"patterns": "40", "distinct": "31", "period": "31", "clocks_per_pattern": "6"}
    assert "only 31 differ from reset: the others load what patterns before them loaded" in found.says
    assert found.place == SourcePlace("block.v", INSTANCE_LINE)
    assert list(patterns_repeat(evidence(MACHINE, scan=scan, patterns=Patterns(31, 6)))) == []


def test_seeds_are_judged_one_by_one_and_in_pairs() -> None:
    """One seed is the lock-up state, two are 7 cycles apart under a test of 20 patterns of 4 clocks."""
    seeds = {"zero": 0, "first": 5, "second": state_after(MACHINE, 5, 7)}
    told = evidence(MACHINE, seeds=seeds, patterns=Patterns(5, 4))
    (stuck,) = seed_in_lock_up(told)
    assert (stuck.slug, stuck.level, stuck.where) == ("seed-in-lock-up", "error", ("zero",))
    assert stuck.figures == {"state": "00", "registers": 1}
    (overlap,) = seeds_overlap(told)
    assert (overlap.slug, overlap.level, overlap.where) == ("seeds-overlap", "error", ("second", "first"))
    assert overlap.figures == {"cycles": "7", "overlap": "13", "repeated_patterns": "0"}
    assert overlap.says == (
        "The run from seed first reaches that from seed second: second stands 7 cycles after first, so 13 of the 20 "
        "cycles of one test are those of the other and 0 patterns come twice."
    )
    (repeat,) = patterns_repeat(told)
    assert repeat.where == ("zero",)
    assert "only 1 differs from seed zero" in repeat.says


def test_many_pairs_of_seeds_are_counted_in_the_last() -> None:
    """Twelve seeds next to each other make 66 pairs, of which 50 are listed."""
    seeds = {f"s{k}": state_after(MACHINE, 5, k) for k in range(12)}
    found = list(seeds_overlap(evidence(MACHINE, seeds=seeds, patterns=Patterns(20, 4))))
    assert len(found) == 50
    assert found[-1].says.endswith("; 16 more pairs of seeds overlap.")


def test_loads_that_do_not_tell_states_apart_leave_a_question() -> None:
    """Two scan cells of five elements: whether 4 patterns differ is open, but for a known start; 40 never do."""
    scan, unset = ScanArray((Chain("c0", 2),), "file"), replace(MACHINE, reset_known=0)
    (question,) = open_questions(evidence(unset, scan=scan, patterns=Patterns(4, 2)))
    assert question.startswith("Whether all 4 planned patterns differ is not decided")
    for machine, count in ((unset, 40), (MACHINE, 40), (MACHINE, 9)):
        certain = evidence(machine, scan=scan, patterns=Patterns(count, 2))
        assert open_questions(certain) == ()
        assert len(list(patterns_repeat(certain))) == 1


def test_windows_are_those_of_the_chains() -> None:
    """Channels three cycles apart overlap in chains of 9 and 5 scan cells, not where the leading one has three."""
    (found,) = windows_overlap(evidence(MACHINE, scan=chains(9, 5)))
    assert found.figures == {
        "separation": "3", "streams": "complementary", "chain_length": "9, 5", "identical_pairs": "5",
        "example": "chain c0 cell 4 = NOT chain c1 cell 1",
    }  # fmt: skip
    assert list(windows_overlap(evidence(MACHINE, scan=chains(3, 9)))) == []
    (limited,) = windows_overlap(evidence(MACHINE, scan=chains(3, 9), limits=Limits(separation=4)))
    assert "identical_pairs" not in limited.figures
