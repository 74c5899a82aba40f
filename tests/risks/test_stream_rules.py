"""Rules on what single channels carry."""

from dataclasses import replace

import pytest

from auditor.machine.machine import AffineRow, LinearMachine, Refusal
from auditor.notation import SourcePlace
from auditor.risks.stream_rules import constant_channel, free_input, not_affine, single_tap_channel
from tests.support.evidence import NET_LINE, evidence
from tests.support.linear_machines import fibonacci, linear_machine

REGISTER = fibonacci((4, 3, 0))
PLACE = SourcePlace("block.v", NET_LINE)


def with_input(machine: LinearMachine, element: int) -> LinearMachine:
    """Return the machine with an open input ``seed`` that is added to one element."""
    rows = tuple(int(k == element) for k in range(machine.size))
    return replace(machine, free_inputs=("seed",), input_matrix=rows)


def refusal(what: str, cure: str = "", undecided: bool = False) -> Refusal:
    """Return a refusal at gate u7."""
    return Refusal(what, "u7", "NAND2 u7 is no XOR of a, b", cure, SourcePlace("block.v", 7), undecided)


def test_a_channel_that_is_not_affine_is_an_error_with_its_cure() -> None:
    """The finding names gate, reason, cure and place, and what is not known of the channel."""
    told = evidence(linear_machine(REGISTER, [(3, 0), None]), (refusal("c1", "--mode en=1"),))
    (finding,) = not_affine(told)
    assert (finding.slug, finding.level, finding.where) == ("not-affine", "error", ("c1",))
    assert finding.place == SourcePlace("block.v", 7)
    assert finding.figures == {"gate": "u7", "because": "NAND2 u7 is no XOR of a, b", "cure": "--mode en=1"}
    assert finding.says == (
        "c1 is no XOR of stored bits, because NAND2 u7 is no XOR of a, b (--mode en=1 would make it one): it has no "
        "taps and no lead, and what its chain shares with others stays unknown."
    )


def test_a_refused_register_leaves_nothing() -> None:
    """A next state that a register depends on says so; one beside the registers spoils only what it feeds."""
    machine = linear_machine(REGISTER, [(3, 0)])
    (finding,) = not_affine(evidence(machine, (refusal("q[0]"),), proved=False))
    assert finding.says.endswith("a register depends on it, so no polynomial, period, lead or separation can be given.")
    assert finding.figures["cure"] is None
    (finding,) = not_affine(evidence(machine, (refusal("q[0]"),)))
    assert finding.says.endswith("what it feeds has no taps and no lead.")


def test_an_undecided_refusal_is_no_finding() -> None:
    """What was neither proved nor refuted is a question, not a defect."""
    assert not list(not_affine(evidence(linear_machine(REGISTER, [None]), (refusal("c0", undecided=True),))))


def test_constant_channels_are_errors_with_their_value() -> None:
    """A tied channel has its value; one behind a transient or in a register that holds has one the start decides."""
    transition = [*REGISTER, 0, 1 << 5]  # element 4 takes 0 for ever, element 5 holds
    machine = linear_machine(transition, [(0, 1), (1 << 4, 0), (1 << 5, 0), (1, 0)])
    tied, transient, held = constant_channel(evidence(machine))
    assert (tied.slug, tied.level, tied.where, tied.place) == ("constant-channel", "error", ("c0",), PLACE)
    assert [finding.figures for finding in (tied, transient, held)] == [{"value": 1}, {"value": None}, {"value": None}]
    assert tied.says == (
        "The chain behind c0 is filled with the constant 1 in every pattern, so no fault is detected that needs the "
        "other value in one of its scan cells."
    )
    assert "one value that the start state decides" in held.says


def test_a_channel_that_an_open_input_moves_is_not_constant() -> None:
    """An input that acts on a channel, at once or through storage, keeps it from being constant."""
    machine = with_input(linear_machine([0, 1], [(2, 0), (0, 0)]), 0)
    seen = replace(machine.observed[1], row=AffineRow(0, 1, 0))
    machine = replace(machine, observed=(machine.observed[0], seen))
    assert not list(constant_channel(evidence(machine)))


def test_a_channel_whose_class_is_undecided_is_not_constant() -> None:
    """A channel that has no class because nothing was decided is no constant."""
    told = evidence(linear_machine(REGISTER, [(1, 0)]))
    assert told.phases
    open_phase = replace(told.phases.phases[0], group=None, lead=None, kind="undecided", inverted=None)
    assert not list(constant_channel(replace(told, phases=replace(told.phases, phases=(open_phase,)))))


def test_tied_channels_are_found_without_a_machine() -> None:
    """A refused machine does not hide a channel that is tied."""
    (finding,) = constant_channel(evidence(linear_machine(REGISTER, [(0, 0), (1, 0)]), proved=False))
    assert (finding.where, finding.figures) == (("c0",), {"value": 0})


def test_single_taps_are_noted() -> None:
    """A channel of one element is noted with the element, a sum of two is not."""
    (finding,) = single_tap_channel(evidence(linear_machine(REGISTER, [(0b1000, 1), (0b11, 0)])))
    assert (finding.slug, finding.level, finding.where) == ("single-tap-channel", "note", ("c0",))
    assert finding.figures == {"element": "q[3]", "delay": 0}
    assert finding.says == (
        "c0 carries the stream of q[3] unmixed: no XOR moves it away from its neighbours, so its chain is only as far "
        "from others as the elements of the register are."
    )


@pytest.mark.parametrize("proved", [True, False])
def test_open_inputs_are_noted(proved: bool) -> None:
    """An open input of the cone is noted, with or without a machine."""
    machine = with_input(linear_machine(REGISTER, [(1, 0)]), 2)
    (finding,) = free_input(evidence(machine, proved=proved))
    assert (finding.slug, finding.level, finding.where, finding.place) == ("free-input", "note", ("seed",), PLACE)
    assert finding.says.endswith("periods, leads and separations are given for all such inputs at 0.")
    assert finding.figures == ({"elements": 4, "channels": 1} if proved else {})
    assert not list(free_input(evidence(linear_machine(REGISTER, [(1, 0)]), proved=proved)))
