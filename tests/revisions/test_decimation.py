"""Decimated and reversed streams against bits picked out of streams that were stepped."""

import pytest

from auditor.revisions.decimation import Decimation, find_decimation
from auditor.revisions.steady import Steady, settle
from tests.support import stream_sets
from tests.support.linear_machines import linear_machine
from tests.support.machines import Machine, fibonacci, galois, with_channels

OLD = with_channels(fibonacci((5, 3), 5), [(0, 2), (1, 4)])


def stepped(machine: Machine, factor: int) -> Machine:
    """Return the machine that goes ``factor`` steps in a cycle, backwards where it is negative (period 31)."""
    rows = []
    for k in range(machine.size):
        row = 1 << k
        for _ in range(factor % 31):
            row = machine.pulled_back(row)
        rows.append(row)
    return Machine(tuple(rows), machine.channels)


def settled(machine: Machine) -> Steady:
    """Return the steady part."""
    proved = linear_machine(machine.rows, [(row, 0) for row in machine.channels])
    return settle(proved, proved.transient, range(len(machine.channels)))


def found(old: Machine, new: Machine) -> Decimation | None:
    """Return what is found."""
    steadies = settled(old), settled(new)
    pairs = [(steadies[0].rows[i], steadies[1].rows[i]) for i in range(len(old.channels))]
    return find_decimation(steadies[0].step, steadies[1].step, pairs)


@pytest.mark.parametrize("factor", [-1, 2, 3, -3, 4, 5, 7, -7, 11])
def test_factor_is_one_that_stepping_confirms(factor: int) -> None:
    """The factor found makes the new streams out of the old ones, whatever equal factor was put in."""
    new = stepped(OLD, factor)
    decimation = found(OLD, new)
    assert decimation is not None
    assert decimation.one_map
    assert (decimation.factor - factor) % 31 == 0 or stream_sets.decimated(OLD, new, 0, decimation.factor)
    assert stream_sets.decimated(OLD, new, 0, decimation.factor)


def test_each_channel_may_have_a_shift_of_its_own() -> None:
    """Channels that are decimated and moved by different shifts are told as such."""
    faster = stepped(OLD, 3)
    new = Machine(faster.rows, (faster.channels[0], faster.pulled_back(faster.channels[1])))
    decimation = found(OLD, new)
    assert decimation is not None
    assert (decimation.factor, decimation.one_map) == (3, False)


def test_polynomials_of_other_periods_have_no_factor() -> None:
    """Streams of another degree are no decimation."""
    assert found(OLD, with_channels(galois((6, 1, 0)), [(0, 2), (1, 4)])) is None
