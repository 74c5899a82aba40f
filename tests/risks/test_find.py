"""All rules together, the table of findings, the open questions and the verdict."""

from dataclasses import replace

import pytest

from auditor.machine.machine import Refusal
from auditor.notation import SourcePlace
from auditor.plan import Limits, Patterns, Waiver
from auditor.risks.evidence import Evidence
from auditor.risks.find import RULES, find_risks
from auditor.risks.finding import LEVELS, Finding, Level
from auditor.risks.levels import KINDS
from auditor.risks.questions import open_questions
from auditor.risks.verdict import verdict
from tests.support.evidence import evidence
from tests.support.linear_machines import fibonacci, linear_machine

REGISTER = fibonacci((4, 3, 0))
MACHINE = linear_machine(REGISTER, [(1, 0), (1, 0), (2, 0)], reset_known=0b1111)

# The findings of this version with their default levels, as the contract with other programs states them.
CONTRACT = {
    "channels-in-lockstep": "error", "windows-overlap": "error", "single-tap-channel": "note",
    "constant-channel": "error", "not-affine": "error", "free-input": "note", "period-short-of-maximum": "warning",
    "period-short-of-test": "error", "resets-into-lock-up": "error", "no-reset-and-no-load": "warning",
    "registers-in-step": "error", "fan-out-over-limit": "warning", "taps-over-limit": "warning",
    "depth-over-limit": "warning", "forced-net": "note", "scan-cells-twinned": "error", "scan-cell-relation": "note",
    "patterns-repeat": "error", "seeds-overlap": "error", "seed-in-lock-up": "error",
    "cone-short-of-rank": "warning",
    "net-frozen": "error",
}  # fmt: skip


def test_slugs_and_levels_are_those_of_the_contract() -> None:
    """Slugs are relied upon by other programs; each has one rule of its name and a meaning in a line."""
    assert {slug: kind.level for slug, kind in KINDS.items()} == CONTRACT
    assert {rule.__name__.replace("_", "-") for rule in RULES} == set(CONTRACT)
    assert all(kind.meaning and "\n" not in kind.meaning for kind in KINDS.values())


def test_findings_come_errors_first_and_always_alike() -> None:
    """The order is by level, then by rule, and two runs agree."""
    told = evidence(MACHINE, chain_length=3)
    found = find_risks(told)
    ranks = [LEVELS.index(finding.level) for finding in found]
    assert ranks == sorted(ranks, reverse=True)
    assert found == find_risks(told)
    assert {"channels-in-lockstep", "windows-overlap", "single-tap-channel", "resets-into-lock-up"} == {
        finding.slug for finding in found
    }


def test_a_waived_finding_stays_listed_with_its_reason() -> None:
    """A waiver changes nothing about a finding but its reason."""
    plain = find_risks(evidence(MACHINE))
    waiver = Waiver("channels-in-lockstep", ("c0", "c1"), "one chain is a spare")
    waived = find_risks(evidence(MACHINE, waivers=(waiver,)))
    assert [replace(finding, waived=None) for finding in waived] == list(plain)
    assert [finding.slug for finding in waived if finding.waived == "one chain is a spare"] == ["channels-in-lockstep"]


@pytest.mark.parametrize(
    ("levels", "waived", "undecided", "fail_at", "result"),
    [
        ((), None, (), "note", "pass"),
        (("note",), None, (), "note", "fail"),
        (("note",), None, (), "warning", "pass"),
        (("warning", "error"), None, ("open",), "error", "fail"),
        (("warning",), None, ("open",), "error", "undecided"),
        (("error",), "known", (), "note", "pass"),
        (("error",), "known", ("open",), "note", "undecided"),
    ],
)
def test_the_verdict_takes_the_first_that_applies(
    levels: tuple[Level, ...], waived: str | None, undecided: tuple[str, ...], fail_at: str, result: str
) -> None:
    """A finding that counts fails the audit whatever is open; without one an open question leaves it undecided."""
    findings = [Finding("free-input", level, ("a",), "Open.", waived=waived) for level in levels]
    assert verdict(findings, undecided, fail_at) == result


def undecided_leads(certified: int | None, window: int, **stated: object) -> Evidence:
    """Return evidence in which the lead of c2 has no value and a bounded search certifies a separation."""
    told = evidence(linear_machine(REGISTER, [(1, 0), (3, 0), (2, 0)]), **stated)
    assert told.phases
    because = "the limit on work is reached"
    open_lead = replace(told.phases.phases[2], lead=None, kind="undecided", inverted=None, no_lead_because=because)
    phases = (*told.phases.phases[:2], open_lead)
    return replace(told, phases=replace(told.phases, phases=phases, certified_at_least=certified, window=window))


def test_a_lead_without_value_is_a_question_only_where_a_bound_needs_it() -> None:
    """Neither without a bound nor with a certified one does an undecided lead touch the verdict."""
    assert open_questions(undecided_leads(100, 100)) == ()
    assert open_questions(undecided_leads(100, 100, chain_length=100)) == ()
    assert open_questions(undecided_leads(100, 100, limits=Limits(separation=90), chain_length=101)) == (
        "Whether all channels are 101 cycles apart is not decided: 1 of 3 leads have no value (the limit on work "
        "is reached), and at least 100 cycles are certified.",
    )
    # A pair closer than the bound is known, and so are all others: the search looked far enough.
    assert open_questions(undecided_leads(3, 100, chain_length=100)) == ()


def test_an_undecided_order_is_a_question() -> None:
    """A period without value is one, and a test that needs it is another."""
    told = evidence(MACHINE, patterns=Patterns(2, 3))
    assert told.phases
    registers = tuple(replace(register, period=None) for register in told.phases.registers)
    classes = tuple(replace(group, modulus=None) for group in told.phases.classes)
    told = replace(told, phases=replace(told.phases, registers=registers, classes=classes))
    assert open_questions(told) == (
        "The period of register q[0] to q[3] (4 elements) is not decided: the factors of an order it needs are not "
        "known.",
        "Whether the stream of c0 repeats within the 6 cycles of the planned test is not decided: its period is not "
        "known.",
    )
    assert not [finding for finding in find_risks(told) if finding.slug.startswith("period")]


def test_a_proof_that_was_given_up_is_a_question() -> None:
    """An undecided refusal is named with its gate; without a machine all the rest is open as well."""
    given_up = Refusal("c0", "u1", "more than 1000 nodes", "", SourcePlace("a.v", 1), undecided=True)
    sentence = "Whether c0 is affine is not decided: more than 1000 nodes (at u1)."
    assert open_questions(evidence(linear_machine(REGISTER, [None]), (given_up,))) == (sentence,)
    assert open_questions(evidence(MACHINE, (given_up,), proved=False)) == (
        sentence,
        "Without a machine nothing is known about polynomials, periods, taps, leads and separations.",
    )


def test_a_waived_refusal_of_a_register_does_not_pass() -> None:
    """Who waives the refusal of a machine gets no verdict of "pass": nothing behind it was audited."""
    refused = Refusal("q[0]", "u1", "NOR u1 is no XOR of a, b", "", SourcePlace("a.v", 1))
    told = evidence(MACHINE, (refused,), proved=False, waivers=(Waiver("not-affine", ("q[0]",), "known"),))
    assert verdict(find_risks(told), open_questions(told), "note") == "undecided"
