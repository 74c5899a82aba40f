"""Rules on feedback registers, on registers whose periods are small enough to step through."""

from dataclasses import replace
from typing import Any

import pytest

from auditor.phases.table import InStep
from auditor.plan import Limits, Patterns
from auditor.risks.find import find_risks
from auditor.risks.register_rules import (
    no_reset_and_no_load,
    period_short_of_maximum,
    period_short_of_test,
    registers_in_step,
    resets_into_lock_up,
)
from tests.support.evidence import INSTANCE_LINE, evidence
from tests.support.linear_machines import fibonacci, linear_machine

PRIMITIVE = fibonacci((4, 3, 0))  # x^4 + x^3 + 1, period 15
SHORT = fibonacci((4, 3, 2, 1, 0))  # all ones: irreducible, period 5
KNOWN = 0b1111


def side_by_side(*parts: list[int]) -> list[int]:
    """Return the transition of registers that do not see each other."""
    rows: list[int] = []
    for part in parts:
        first = len(rows)
        rows += [row << first for row in part]
    return rows


def test_a_short_period_is_a_warning() -> None:
    """A register of period 5 is reported against 2^4 - 1; a primitive one is not."""
    (finding,) = period_short_of_maximum(evidence(linear_machine(SHORT, [(1, 0)])))
    assert (finding.slug, finding.level) == ("period-short-of-maximum", "warning")
    assert finding.where == ("q[0]", "q[1]", "q[2]", "q[3]")
    assert finding.figures == {"period": "5", "maximum_period": "15", "degree": 4}
    assert finding.place is not None
    assert finding.place.line == INSTANCE_LINE
    assert finding.says.startswith("Register q[0] to q[3] (4 elements) repeats after at most 5 cycles where")
    assert not list(period_short_of_maximum(evidence(linear_machine(PRIMITIVE, [(1, 0)]))))


@pytest.mark.parametrize(("count", "capture", "found"), [(5, 0, False), (6, 0, True), (5, 1, True)])
def test_a_test_longer_than_the_stream_is_an_error(count: int, capture: int, found: bool) -> None:
    """15 cycles last for 5 patterns of 3 clocks, not for 6, nor for 5 with a clock in capture."""
    patterns = Patterns(count, 3, capture, "advances")
    findings = list(period_short_of_test(evidence(linear_machine(PRIMITIVE, [(1, 0), (3, 0)]), patterns=patterns)))
    assert bool(findings) == found
    if found:
        assert (findings[0].slug, findings[0].level, findings[0].where) == (
            "period-short-of-test",
            "error",
            ("c0", "c1"),
        )
        clocks = str(patterns.count * patterns.clocks_per_pattern)
        assert findings[0].figures == {"period": "15", "test_clocks": clocks, "from": "any state"}
        assert findings[0].says.startswith("The stream of c0 and 1 more of its class repeats after 15 cycles but the")


def test_a_short_orbit_from_reset_counts_as_the_period() -> None:
    """A register whose longest orbit is enough can reset into a shorter one."""
    transition = fibonacci((4, 2, 0))  # (x^2 + x + 1)^2: periods 3 and 6, and the state 0
    machine = linear_machine(transition, [(1, 0)], reset_known=KNOWN, reset_state=0b1011)
    (finding,) = period_short_of_test(evidence(machine, patterns=Patterns(1, 4)))
    assert finding.figures == {"period": "3", "test_clocks": "4", "from": "the reset state"}
    assert finding.where == machine.storage
    assert not list(period_short_of_test(evidence(machine, patterns=Patterns(1, 3))))
    assert not list(period_short_of_test(evidence(machine)))


def test_reset_into_a_lock_up_state_is_an_error() -> None:
    """The all-zero reset of an XOR register never moves; that of an XNOR register does."""
    machine = linear_machine(PRIMITIVE, [(1, 0)], reset_known=KNOWN)
    (finding,) = resets_into_lock_up(evidence(machine))
    assert (finding.slug, finding.level) == ("resets-into-lock-up", "error")
    assert finding.figures == {"state": "0", "lock_up_states": "1"}
    assert "Reset puts register q[0] to q[3] (4 elements) into the state 0 (hex)" in finding.says
    assert not list(resets_into_lock_up(evidence(replace(machine, offset=1))))
    assert not list(resets_into_lock_up(evidence(replace(machine, reset_known=0))))


def test_a_register_without_reset_and_load_is_a_warning() -> None:
    """Elements that no reset sets are named; an open input that reaches the register counts as a load."""
    machine = linear_machine(PRIMITIVE, [(1, 0)], reset_known=0b0101)
    (finding,) = no_reset_and_no_load(evidence(machine))
    assert (finding.slug, finding.level, finding.where) == ("no-reset-and-no-load", "warning", ("q[1]", "q[3]"))
    assert finding.figures == {"unknown": 2, "elements": 4}
    (finding,) = no_reset_and_no_load(evidence(replace(machine, reset_known=0)))
    assert finding.figures == {"unknown": 4, "elements": 4}
    assert not list(no_reset_and_no_load(evidence(replace(machine, reset_known=KNOWN))))
    loaded = replace(machine, free_inputs=("seed",), input_matrix=(1, 0, 0, 0))
    assert not list(no_reset_and_no_load(evidence(loaded)))


def test_a_load_through_other_storage_counts() -> None:
    """An input that reaches a register through a flip-flop in front of it loads it."""
    transition = [PRIMITIVE[0] | 1 << 4, *PRIMITIVE[1:], 0]
    machine = linear_machine(transition, [(1, 0)])
    assert len(list(no_reset_and_no_load(evidence(machine)))) == 1
    loaded = replace(machine, free_inputs=("seed",), input_matrix=(0, 0, 0, 0, 1))
    assert not list(no_reset_and_no_load(evidence(loaded)))


def test_registers_with_a_common_factor_are_an_error() -> None:
    """Two registers of one polynomial are an error while their starts, and how far apart they run, are not known."""
    machine = linear_machine(side_by_side(PRIMITIVE, PRIMITIVE), [(1, 0), (1 << 4, 0)])
    (finding,) = registers_in_step(evidence(machine, chain_length=1))
    assert (finding.slug, finding.level, finding.where) == ("registers-in-step", "error", machine.storage)
    # The register's characteristic polynomial is the reciprocal of its connection polynomial x^4 + x^3 + 1.
    nothing = {"shift": "unknown", "separation": None, "channels": None}
    assert finding.figures == {"shared_factor": "x^4 + x + 1", "degree": 4, **nothing}
    assert finding.says == (
        "The registers q[0] to q[3] (4 elements) and q[4] to q[7] (4 elements) share the factor x^4 + x + 1, so chains "
        "fed from one of them can carry shifted copies of what chains fed from another carry, and no phase shifter "
        "separates them; how far apart they run depends on their start states, which are not known; whether chains "
        "that they feed meet is not known."
    )


# Bit 0 of PRIMITIVE takes bit 2 + bit 3, the others shift up: from 5 the states are 5 b 7 f e c 8 1 2 4 9 3, so that
# the register that starts in 3 is 11 of 15 cycles ahead, or 4 behind.
@pytest.mark.parametrize(
    ("stated", "level", "says"),
    [
        (
            {},
            "error",
            "equal streams 4 cycles apart, and no chain length or planned test is stated to hold against it.",
        ),
        ({"chain_length": 5}, "error", "4 cycles apart, so scan cells of their chains share a bit in every pattern."),
        ({"limits": Limits(separation=5)}, "error", "4 cycles apart, less than the separation asked for."),
        (
            {"chain_length": 4, "patterns": Patterns(2, 4)},
            "error",
            "one chain receives bits that the other had before.",
        ),
        ({"chain_length": 4}, "note", "equal streams 4 cycles apart, and none of their channels are closer."),
        ({"patterns": Patterns(1, 4)}, "note", "equal streams 4 cycles apart, and none of their channels are closer."),
    ],
)
def test_registers_that_stay_apart_from_reset_are_a_note(stated: dict[str, Any], level: str, says: str) -> None:
    """With known starts the level is that of the meeting: an error within what was stated, a note beyond."""
    transition = side_by_side(PRIMITIVE, PRIMITIVE)
    machine = linear_machine(transition, [(1, 0), (1 << 4, 0)], reset_known=0xFF, reset_state=0x35)
    (finding,) = registers_in_step(evidence(machine, **stated))
    assert finding.level == level
    assert finding.says.endswith(says)
    assert "from reset q[4] leads q[0] by 11 cycles; from there c0 and c1" in finding.says
    assert finding.figures["shift"] == "11"
    assert (finding.figures["separation"], finding.figures["channels"]) == ("4", "c0, c1")


def test_equal_registers_in_equal_states_run_in_step() -> None:
    """Twins that reset alike are in step bit by bit, an error at any chain length; one in lock-up never meets."""
    transition = side_by_side(PRIMITIVE, PRIMITIVE)
    machine = linear_machine(transition, [(1, 0), (1 << 4, 0)], reset_known=0xFF, reset_state=0x33)
    (finding,) = registers_in_step(evidence(machine, chain_length=1))
    assert (finding.level, finding.figures["shift"]) == ("error", "0")
    assert (
        "from reset q[4] carries the stream of q[0] in step; from there c0 and c1 carry equal streams" in finding.says
    )
    (finding,) = registers_in_step(evidence(replace(machine, reset_state=0x30), chain_length=1))
    assert (finding.level, finding.figures["shift"]) == ("note", "infinite")
    assert finding.says.endswith(
        "q[4] never carries the stream of q[0]; no two channels of theirs ever carry one stream."
    )


@pytest.mark.parametrize(("length", "level"), [(100, "note"), (101, "error")])
def test_what_a_bounded_search_certifies_is_enough(length: int, level: str) -> None:
    """Where the lead is not decided, the bound up to which all pairs were searched is held against what is asked."""
    transition = side_by_side(PRIMITIVE, PRIMITIVE)
    told = evidence(linear_machine(transition, [(1, 0), (1 << 4, 0)], reset_known=0xFF), chain_length=length)
    assert told.phases is not None
    searched = InStep((0, 1), (0b10011,), (None,), None, certain_below=100)
    (finding,) = registers_in_step(replace(told, phases=replace(told.phases, in_step=(searched,))))
    assert finding.level == level
    ends = {"note": "no two channels of theirs are closer than 100 cycles.", "error": "meet is not known."}
    assert finding.says.endswith(ends[level])
    assert "how far apart they run is not decided" in finding.says


def test_an_offset_or_a_coupling_is_part_of_the_run() -> None:
    """Equal states of registers that differ say nothing: the shift is that of the streams themselves."""
    transition = side_by_side(PRIMITIVE, PRIMITIVE)
    machine = linear_machine(transition, [(1, 0), (1 << 4, 0)], reset_known=0xFF, reset_state=0x33, offset=1)
    (finding,) = registers_in_step(evidence(machine, chain_length=1))
    assert finding.figures["shift"] not in ("0", "unknown", "infinite")
    coupled = [*transition[:4], transition[4] | 1, *transition[5:]]
    machine = linear_machine(coupled, [(1, 0), (1 << 4, 0)], reset_known=0xFF, reset_state=0x33)
    (finding,) = registers_in_step(evidence(machine, chain_length=1))
    assert finding.figures["shift"] == "infinite"  # x^4 + x + 1 once in the one stream, twice in the other


def test_registers_that_share_nothing_but_a_constant_are_not_reported() -> None:
    """Different factors, and the factor x + 1 of registers that hold, are no common streams."""
    apart = linear_machine(side_by_side(PRIMITIVE, SHORT), [(1, 0), (1 << 4, 0)])
    assert not list(registers_in_step(evidence(apart)))
    holding = linear_machine(side_by_side([1], [1]), [(1, 0), (2, 0)])
    assert not list(registers_in_step(evidence(holding)))


def test_several_registers_are_one_finding() -> None:
    """Four registers of one polynomial give one finding with three shifts against the first."""
    machine = linear_machine(side_by_side(*[PRIMITIVE] * 4), [(1 << 4 * k, 0) for k in range(4)])
    (finding,) = [f for f in find_risks(evidence(machine)) if f.slug == "registers-in-step"]
    assert finding.where == machine.storage
    assert finding.figures["shift"] == "unknown, unknown, unknown"
    started = replace(machine, reset_known=0xF0FF, reset_state=0x3035)
    (finding,) = registers_in_step(evidence(started, chain_length=1))
    assert (finding.level, finding.figures["shift"]) == ("error", "11, unknown, 11")
    assert (
        "by 11 cycles, the lead of q[8] is not known, q[12] leads q[0] by 11 cycles; from there c1 and c3"
        in finding.says
    )
