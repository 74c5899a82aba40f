import pytest

from auditor.errors import InternalError
from auditor.phases.streams import Alignment, Orbit, read_streams
from tests.support.linear_machines import fibonacci, linear_machine


def test_pipeline_registers_stand_behind_what_registers_see() -> None:
    """Steady rows are no longer than the register and the constant, with the pipeline first in the machine's order."""
    transition = [1 << 1, 1 << 2, *(row << 2 for row in fibonacci((5, 3, 0)))]
    streams = read_streams(linear_machine(transition, [(1, 0), (2, 1), (4, 0)]))
    assert {i: row.bit_length() > 6 for i, row in streams.rows.items()} == {0: True, 1: True, 2: False}
    assert all(1 < row < 1 << 6 for row in streams.steady.values())


def test_elements_that_no_channel_sees_are_left_out() -> None:
    """A second register without channels does not lengthen the rows."""
    register = fibonacci((5, 3, 0))
    streams = read_streams(linear_machine(register + [row << 5 for row in register], [(1 << 7, 0)]))
    assert len(streams.step) == 6


def test_an_orbit_reaches_any_cycle_without_stepping() -> None:
    """The row 2^61 cycles later is that of the remainder modulo the period, 31."""
    streams = read_streams(linear_machine(fibonacci((5, 3, 0)), [(1, 1)], offset=5))
    orbit = Orbit(streams, 0)
    assert orbit.at(1 << 61) == orbit.at((1 << 61) % 31)
    assert orbit.at(0) == streams.rows[0]


def test_alignment_says_from_when_and_whether_complemented() -> None:
    """Behind one more flip-flop the stream is right from cycle 1 on; a wrong lead is refused."""
    streams = read_streams(linear_machine([*fibonacci((5, 3, 0)), 1], [(1, 0), (1 << 5, 1)]))
    assert Orbit(streams, 0).align(1, 30) == Alignment(valid_from=1, inverted=True)
    with pytest.raises(InternalError, match="lead 29"):
        Orbit(streams, 0).align(1, 29)
