import pytest

from auditor.errors import InternalError
from auditor.phases.classes import alike, choose_reference, cyclic_spaces
from auditor.phases.leads import coordinates
from auditor.phases.streams import read_streams
from tests.support.linear_machines import fibonacci, linear_machine


def test_spaces_part_channels_that_see_different_states() -> None:
    """One register, its copy, and the sum of both are three spaces, although all have one annihilator."""
    register = fibonacci((4, 3, 0))
    machine = linear_machine(register + [row << 4 for row in register], [(1, 0), (2, 1), (16, 0), (17, 0), (34, 0)])
    spaces = cyclic_spaces(read_streams(machine))
    assert [space.members for space in spaces] == [(0, 1), (2,), (3, 4)]
    assert {space.annihilator for space in spaces} == {0b10011}


def test_a_channel_with_a_smaller_annihilator_is_in_no_space_of_the_others() -> None:
    """Where the register falls into two factors, a channel that sees one of them alone is apart."""
    transition = fibonacci((3, 2, 0)) + [row << 3 for row in fibonacci((2, 1, 0))]
    spaces = cyclic_spaces(read_streams(linear_machine(transition, [(9, 0), (1, 0), (18, 0)])))
    assert [space.members for space in spaces] == [(0, 2), (1,)]


def test_members_of_a_non_primitive_field_fall_into_cosets() -> None:
    """x^4 + x^3 + x^2 + x + 1 has order 5: the 15 streams of its register are 3 classes of 5."""
    machine = linear_machine(fibonacci((4, 3, 2, 1, 0)), [(row, 0) for row in range(1, 16)])
    (space,) = cyclic_spaces(read_streams(machine))
    groups = alike(space, coordinates(space.units, space.factors))
    assert sorted(map(len, groups)) == [5, 5, 5]


def test_steady_rows_that_are_not_steady_are_an_internal_error() -> None:
    """A row that dies out later than the stated transient is refused."""
    with pytest.raises(InternalError, match="not steady"):
        cyclic_spaces(read_streams(linear_machine([1, 1, 2], [(1 << 2 | 1, 0)], transient=0)))


def test_the_reference_is_the_named_one_else_the_first_that_is_no_cut_net() -> None:
    """A name outside the class does not count."""
    cut = [True, False, False, True]
    assert choose_reference([0, 1, 2], 2, cut) == 2
    assert choose_reference([0, 1, 2], 3, cut) == 1
    assert choose_reference([0, 3], None, cut) == 0
