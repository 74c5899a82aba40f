"""Channels in lockstep and overlapping windows, against exhaustive comparison of scan cells."""

from itertools import combinations

import pytest

from auditor.machine.machine import LinearMachine
from auditor.notation import SourcePlace
from auditor.plan import Limits, Waiver
from auditor.risks import distance_rules
from auditor.risks.distance_rules import channels_in_lockstep, windows_overlap
from auditor.risks.find import find_risks
from tests.support.evidence import NET_LINE, evidence
from tests.support.linear_machines import fibonacci, linear_machine

REGISTER = fibonacci((5, 3, 0))  # period 31, the connection polynomial x^5 + x^3 + 1 (stage k leads stage k + 1 by one)
STAGES = [(1 << k, 0) for k in range(5)]


def test_equal_and_inverted_channels_are_in_lockstep_with_the_first() -> None:
    """Of three channels with one stream, each later one is reported with the first, and an inverse as such."""
    machine = linear_machine(REGISTER, [(0b11, 0), (0b100, 0), (0b11, 1), (0b11, 0)])
    first, second = channels_in_lockstep(evidence(machine))
    assert (first.slug, first.level, first.where) == ("channels-in-lockstep", "error", ("c0", "c2"))
    assert first.figures == {"separation": "0", "streams": "complementary"}
    assert first.says == (
        "c2 carries the inverse of the stream of c0, so scan cells at the same place of the two chains always hold "
        "opposite bits and no fault that needs another combination of them is detected."
    )
    assert first.place == SourcePlace("block.v", NET_LINE)
    assert (second.where, second.figures["streams"]) == (("c0", "c3"), "equal")


def test_a_net_behind_a_spoiled_channel_feeds_no_chain() -> None:
    """Nets that stand for a refused channel take part in no distance."""
    machine = linear_machine(REGISTER, [None, (0b11, 0), (0b11, 0)], cut_from=(2,))
    assert list(channels_in_lockstep(evidence(machine))) == []
    assert list(windows_overlap(evidence(machine, chain_length=9))) == []


def test_no_bound_no_question() -> None:
    """Without a chain length and a limit overlap is not asked."""
    assert list(windows_overlap(evidence(linear_machine(REGISTER, STAGES)))) == []


@pytest.mark.parametrize("length", [1, 2, 3, 4, 20, 40])
def test_overlap_is_what_comparing_all_scan_cells_gives(length: int) -> None:
    """The pairs found, their count and the example agree with the streams of every start state, cell by cell."""
    machine = linear_machine(REGISTER, [(1, 0), (2, 1), (0b10000, 0), (0b1001, 0)])
    found = {finding.where: finding for finding in windows_overlap(evidence(machine, chain_length=length))}
    streams = {state: _streams(state, machine, 2 * length) for state in range(1, 32)}
    for i, j in combinations(range(4), 2):
        alike = []
        for a in range(1, length + 1):
            for b in range(1, length + 1):
                # Scan cell a of a chain holds what its channel gave a cycles ago.
                sums = {s[i][length - a] ^ s[j][length - b] for s in streams.values()}
                if len(sums) == 1:
                    alike.append((a, b))
        finding = found.pop((f"c{i}", f"c{j}"), None)
        assert (finding is not None) == bool(alike)
        if finding:
            invert = "NOT " if finding.figures["streams"] == "complementary" else ""
            assert finding.figures["identical_pairs"] == str(len(alike))
            assert (
                finding.figures["example"] == f"chain c{i} cell {alike[0][0]} = {invert}chain c{j} cell {alike[0][1]}"
            )
    assert not found


def _streams(state: int, machine: LinearMachine, cycles: int) -> list[list[int]]:
    """Return the streams of all channels from a state, by stepping."""
    streams: list[list[int]] = [[] for _ in machine.observed]
    for _ in range(cycles):
        for stream, observed in zip(streams, machine.observed, strict=True):
            stream.append((observed.row.state & state).bit_count() % 2 ^ observed.row.constant)
        state = sum((row & state).bit_count() % 2 << k for k, row in enumerate(machine.transition))
    return streams


def test_the_sentence_says_what_is_shared() -> None:
    """With a chain length the finding counts the shared scan cells; it names the limit where one is stated."""
    machine = linear_machine(REGISTER, [(1, 0), (4, 0)])
    (finding,) = windows_overlap(evidence(machine, chain_length=10, limits=Limits(separation=5)))
    assert (finding.level, finding.where) == ("error", ("c0", "c1"))
    assert finding.figures == {
        "separation": "2", "streams": "equal", "limit": "5", "chain_length": "10", "identical_pairs": "8",
        "example": "chain c0 cell 3 = chain c1 cell 1",
    }  # fmt: skip
    assert finding.says == (
        "c0 and c1 carry equal streams 2 cycles apart, so in every pattern 8 pairs of scan cells of their chains hold "
        "the same bits, and no fault that needs another combination in such a pair is detected."
    )


@pytest.mark.parametrize("length", [None, 2])
def test_a_missed_limit_is_a_finding_without_shared_cells(length: int | None) -> None:
    """A separation limit is compared by itself: a pair can miss it without sharing a scan cell."""
    machine = linear_machine(REGISTER, [(1, 0), (4, 0)])
    (finding,) = windows_overlap(evidence(machine, chain_length=length, limits=Limits(separation=3)))
    assert "identical_pairs" not in finding.figures
    assert (finding.figures["separation"], finding.figures["limit"]) == ("2", "3")
    assert finding.says == (
        "c0 and c1 carry equal streams 2 cycles apart, less than the 3 asked for: their chains come close to the same "
        "patterns."
    )
    assert not list(windows_overlap(evidence(machine, chain_length=length, limits=Limits(separation=2))))


def test_a_long_list_is_cut_and_counted(monkeypatch: pytest.MonkeyPatch) -> None:
    """Of very many pairs the closest are listed behind a finding that counts all of them."""
    monkeypatch.setattr(distance_rules, "MOST_PAIRS", 50)
    machine = linear_machine(fibonacci((20, 17, 0)), [(1 << k, 0) for k in range(20)])
    count, *listed = windows_overlap(evidence(machine, chain_length=100))
    assert count.where == ()
    assert count.figures == {"pairs": 190, "separation": "1", "bound": "100"}
    assert [finding.figures["separation"] for finding in listed] == ["1"] * 19 + ["2"] * 18 + ["3"] * 13


def test_waived_pairs_do_not_hide_others_in_a_long_list(monkeypatch: pytest.MonkeyPatch) -> None:
    """Pairs that a waiver names are listed and counted apart, and the count of the others is not waived with them."""
    monkeypatch.setattr(distance_rules, "MOST_PAIRS", 50)
    machine = linear_machine(fibonacci((20, 17, 0)), [(1 << k, 0) for k in range(20)])
    waiver = Waiver("windows-overlap", ("c0",), "its chain holds one scan cell")
    found = find_risks(evidence(machine, chain_length=100, waivers=(waiver,)))
    pairs = [finding for finding in found if finding.slug == "windows-overlap"]
    counts = [finding for finding in pairs if not finding.where]
    assert [(finding.figures["pairs"], finding.waived) for finding in counts] == [(171, None)]
    waived = [finding for finding in pairs if finding.waived]
    assert len(waived) == 19
    assert all("c0" in finding.where for finding in waived)
    assert not any("c0" in finding.where for finding in pairs if not finding.waived)


def test_a_long_list_of_waived_pairs_is_counted_as_waived(monkeypatch: pytest.MonkeyPatch) -> None:
    """A waiver of everything leaves one count that is waived, so nothing fails and nothing is lost."""
    monkeypatch.setattr(distance_rules, "MOST_PAIRS", 50)
    machine = linear_machine(fibonacci((20, 17, 0)), [(1 << k, 0) for k in range(20)])
    waiver = Waiver("windows-overlap", ("*",), "a trial")
    found = [
        f for f in find_risks(evidence(machine, chain_length=100, waivers=(waiver,))) if f.slug == "windows-overlap"
    ]
    assert all(finding.waived for finding in found)
    assert found[0].figures["pairs"] == 190
