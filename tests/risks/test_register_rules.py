"""Rules on feedback registers, on registers whose periods are small enough to step through."""

from dataclasses import replace

import pytest

from auditor.plan import Patterns
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
    """Two registers of one polynomial are reported; what the reset states say is told with them."""
    transition = side_by_side(PRIMITIVE, PRIMITIVE)
    machine = linear_machine(transition, [(1, 0), (1 << 4, 0)])
    (finding,) = registers_in_step(evidence(machine))
    assert (finding.slug, finding.level, finding.where) == ("registers-in-step", "error", machine.storage)
    # The register's characteristic polynomial is the reciprocal of its connection polynomial x^4 + x^3 + 1.
    assert finding.figures == {"shared_factor": "x^4 + x + 1", "degree": 4, "reset": "unknown"}
    assert finding.says == (
        "The registers q[0] to q[3] (4 elements) and q[4] to q[7] (4 elements) share the factor x^4 + x + 1, so chains "
        "fed from the one can carry shifted copies of what chains fed from the other carry, and no phase shifter "
        "separates them; how far apart they run depends on their start states, which are not known."
    )
    (finding,) = registers_in_step(evidence(replace(machine, reset_known=0xFF, reset_state=0x35)))
    assert finding.figures["reset"] == "known"
    assert "their reset states 5 and 3 (hex) fix how far apart they run" in finding.says
    (finding,) = registers_in_step(evidence(replace(machine, reset_known=0xFF, reset_state=0x33)))
    assert finding.figures["reset"] == "same"
    assert "they run in step, bit by bit" in finding.says


def test_equal_start_states_of_different_registers_say_nothing() -> None:
    """Equal reset states make two registers run in step only where nothing else differs or acts on them."""
    transition = side_by_side(PRIMITIVE, PRIMITIVE)
    machine = linear_machine(transition, [(1, 0), (1 << 4, 0)], reset_known=0xFF, reset_state=0x33, offset=1)
    (finding,) = registers_in_step(evidence(machine))
    assert finding.figures["reset"] == "known"
    coupled = [transition[0], *transition[1:4], transition[4] | 1, *transition[5:]]
    machine = linear_machine(coupled, [(1 << 4, 0)], reset_known=0xFF, reset_state=0x33)
    (finding,) = registers_in_step(evidence(machine))
    assert finding.figures["reset"] == "known"


def test_registers_that_share_nothing_but_a_constant_are_not_reported() -> None:
    """Different factors, and the factor x + 1 of registers that hold, are no common streams."""
    apart = linear_machine(side_by_side(PRIMITIVE, SHORT), [(1, 0), (1 << 4, 0)])
    assert not list(registers_in_step(evidence(apart)))
    holding = linear_machine(side_by_side([1], [1]), [(1, 0), (2, 0)])
    assert not list(registers_in_step(evidence(holding)))


def test_several_registers_are_reported_with_the_first_only() -> None:
    """Four registers of one polynomial give three findings, not six."""
    machine = linear_machine(side_by_side(*[PRIMITIVE] * 4), [(1 << 4 * k, 0) for k in range(4)])
    assert len([f for f in find_risks(evidence(machine)) if f.slug == "registers-in-step"]) == 3
