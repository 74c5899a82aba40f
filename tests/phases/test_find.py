import random
from dataclasses import replace

import pytest

from auditor.errors import InputError, InternalError
from auditor.phases.find import find_phases
from auditor.phases.separations import pairs_closer_than, separation
from auditor.phases.table import Infinite, PhaseTable
from tests.support.brute_force import Columns, columns, random_transition
from tests.support.linear_machines import fibonacci, galois, linear_machine

# IS-GPS-200, Table 3-Ia: the two stages of the ten-stage G2 register that PRN 1 ... 37 add, and the delay in chips.
GPS_G2 = (10, 9, 8, 6, 3, 2, 0)
GPS_TAPS = (
    "2,6 3,7 4,8 5,9 1,9 2,10 1,8 2,9 3,10 2,3 3,4 5,6 6,7 7,8 8,9 9,10 1,4 2,5 3,6 4,7 5,8 6,9 1,3 4,6 5,7 6,8 7,9 "
    "8,10 1,6 2,7 3,8 4,9 5,10 4,10 1,7 2,8 4,10"
)
GPS_DELAYS = (
    "5 6 7 8 17 18 139 140 141 251 252 254 255 256 257 258 469 470 471 472 473 474 509 512 513 514 515 516 859 860 861 "
    "862 863 950 947 948 950"
)

# BeiDou B1I interface control document: the stages of the eleven-stage G2 register that ranging codes 1 ... 63 add.
# The advances were computed by a separate program, and agree with a second published list where that has them.
BEIDOU_G2 = (11, 9, 8, 5, 4, 3, 2, 1, 0)
BEIDOU_TAPS = (
    "1,3 1,4 1,5 1,6 1,8 1,9 1,10 1,11 2,7 3,4 3,5 3,6 3,8 3,9 3,10 3,11 4,5 4,6 4,8 4,9 4,10 4,11 5,6 5,8 5,9 5,10 "
    "5,11 6,8 6,9 6,10 6,11 8,9 8,10 8,11 9,10 9,11 10,11 1,2,7 1,3,4 1,3,6 1,3,8 1,3,10 1,3,11 1,4,5 1,4,9 1,5,6 "
    "1,5,8 1,5,10 1,5,11 1,6,9 1,8,9 1,9,10 1,9,11 2,3,7 2,5,7 2,7,9 3,4,5 3,4,9 3,5,6 3,5,8 3,5,10 3,5,11 3,6,9"
)
BEIDOU_ADVANCES = (
    "712 1581 1414 1550 581 771 1311 1043 1549 359 710 1579 1548 1103 579 769 358 709 1411 1547 1102 578 357 1577 1410 "
    "1546 1101 707 1576 1409 1545 354 705 1574 353 704 352 1828 1525 1775 26 452 1386 615 1178 1982 923 1427 1493 1362 "
    "1735 1022 1907 697 1331 1964 1228 1826 1523 1773 24 1651 1785"
)

# Advance of stage 1 ... n against stage 1, computed by a separate program: exponents of the characteristic
# polynomial, of the connection polynomial, and the advances in the Galois form.
STAGES = (
    ((5, 2, 0), (5, 3, 0), "0 30 3 2 1"),
    ((8, 4, 3, 2, 0), (8, 6, 5, 4, 0), "0 254 48 101 4 3 2 1"),
    ((8, 6, 5, 1, 0), (8, 7, 3, 2, 0), "0 196 195 194 193 140 2 1"),
    ((10, 3, 0), (10, 7, 0), "0 1022 1021 7 6 5 4 3 2 1"),
    ((12, 6, 4, 1, 0), (12, 11, 8, 6, 0), "0 2158 2157 2156 3121 3120 6 5 4 3 2 1"),
)


def numbers(text: str) -> list[int]:
    return [int(word) for word in text.split()]


def selectors(text: str) -> list[tuple[int, int]]:
    """Rows that add the stages named, stage s being element s - 1."""
    return [(sum(1 << int(stage) - 1 for stage in word.split(",")), 0) for word in text.split()]


def leads(table: PhaseTable) -> list[int | None]:
    return [phase.lead for phase in table.phases]


@pytest.mark.parametrize("seed", range(8))
def test_phases_of_small_machines_are_those_of_their_streams(seed: int) -> None:
    """Classes, leads, inversion, valid_from, moduli and neighbours agree with the streams from every state."""
    rng = random.Random(seed)
    for _ in range(30):
        size = rng.randint(1, 5)
        channels = [(rng.getrandbits(size), rng.getrandbits(1)) for _ in range(rng.randint(1, 7))]
        machine = linear_machine(random_transition(rng, size), channels, rng.getrandbits(size) * rng.randrange(2))
        table, streams = find_phases(machine), columns(machine)
        for channel in range(len(channels)):
            _check_phase(table, streams, channel)
        _check_pairs(table, streams)


def _check_phase(table: PhaseTable, streams: Columns, channel: int) -> None:
    phase = table.phases[channel]
    if streams.is_constant(channel):
        assert (phase.group, phase.lead, phase.kind) == (None, None, "none")
        return
    assert phase.group is not None
    assert phase.lead is not None
    assert phase.inverted is not None
    group = table.classes[phase.group]
    assert channel in group.channels
    assert group.reference == group.channels[0]
    assert group.modulus == streams.stream_period(group.reference) == phase.lead_modulus
    assert 0 <= phase.lead < group.modulus
    relation = (channel, group.reference, phase.lead, phase.inverted)
    assert streams.holds(*relation, phase.valid_from)
    assert not phase.valid_from or not streams.holds(*relation, phase.valid_from - 1)
    assert phase.kind == ("from" if phase.valid_from else "exact")
    if phase.inverted:
        plain = (streams.holds(*relation[:2], s, False, streams.settled) for s in range(group.modulus))
        assert not any(plain)


def _check_pairs(table: PhaseTable, streams: Columns) -> None:
    moving = [i for i in range(len(table.phases)) if not streams.is_constant(i)]
    related = {(i, j): streams.relations(i, j) for i in moving for j in moving if i != j}
    close = sorted((*min(found), i, j) for (i, j), found in related.items() if found and i < j)
    expected = [(i, j, cycles, complement) for cycles, complement, i, j in close]
    expected.sort(key=lambda pair: (pair[2], pair[:2]))
    for bound in (0, 1, 2, 4, 1000):
        assert pairs_closer_than(table, bound) == [pair for pair in expected if pair[2] < bound]
    for (i, j), found in related.items():
        assert (table.phases[i].group == table.phases[j].group) == bool(found)
        assert separation(table, i, j) == (min(found)[0] if found else Infinite())
    for i in moving:
        nearest = min(((s, j, v) for j in moving if i != j for s, v in related[i, j][:1]), default=None)
        near = table.phases[i].nearest
        assert (near and (near.separation, near.channel, near.complement)) == nearest
    for group in table.classes:
        inside = [pair for pair in expected if pair[0] in group.channels]
        minimum = group.minimum and (*group.minimum.channels, group.minimum.cycles, group.minimum.complement)
        assert minimum == (inside[0] if inside else None)


def test_gps_delays_come_out_as_published() -> None:
    """Every tap pair of IS-GPS-200 Table 3-Ia lags stage 10 by the published code delay; PRN 34 and 37 are one code."""
    machine = linear_machine(fibonacci(GPS_G2), [*selectors(GPS_TAPS), (1 << 9, 0)])
    table = find_phases(machine, reference="c37")
    assert [phase.lag(1023) for phase in table.phases] == [*numbers(GPS_DELAYS), 0]
    assert {phase.kind for phase in table.phases} == {"exact"}
    assert table.classes[0].minimum
    assert table.classes[0].minimum.channels == (33, 36)


def test_gps_selectors_have_the_known_close_pairs() -> None:
    """Of the 666 pairs of the 37 C/A selectors, 26, 78, 165 and 234 are closer than 2, 10, 100 and 200 cycles."""
    table = find_phases(linear_machine(fibonacci(GPS_G2), selectors(GPS_TAPS)))
    assert [len(pairs_closer_than(table, bound)) for bound in (2, 10, 100, 200, 512)] == [26, 78, 165, 234, 666]


def test_beidou_advances_come_out_as_listed() -> None:
    """The two- and three-stage selectors of B1I lead stage 11 by the listed advance, and have the known close pairs."""
    machine = linear_machine(fibonacci(BEIDOU_G2), [*selectors(BEIDOU_TAPS), (1 << 10, 0)])
    assert leads(find_phases(machine, reference="c63")) == [*numbers(BEIDOU_ADVANCES), 0]
    table = find_phases(linear_machine(fibonacci(BEIDOU_G2), selectors(BEIDOU_TAPS)))
    assert [len(pairs_closer_than(table, bound)) for bound in (2, 10, 100, 1024)] == [17, 74, 245, 1953]


@pytest.mark.parametrize(("characteristic", "connection", "advances"), STAGES)
def test_stages_stand_where_they_should(
    characteristic: tuple[int, ...], connection: tuple[int, ...], advances: str
) -> None:
    """Stages of a Fibonacci register lag one cycle each; Galois stages have the leads that another program found."""
    size, period = characteristic[0], (1 << characteristic[0]) - 1
    stages = [(1 << k, 0) for k in range(size)]
    assert leads(find_phases(linear_machine(fibonacci(connection), stages))) == [-k % period for k in range(size)]
    assert leads(find_phases(linear_machine(galois(characteristic), stages))) == numbers(advances)


def test_sums_of_two_registers_have_logarithms_in_two_fields() -> None:
    """A sum of two registers shifted by 1,000 cycles leads by 1,000, inverted where it is."""
    first, second = fibonacci((5, 3, 0)), fibonacci((7, 6, 0))
    transition = first + [row << 5 for row in second]
    rows = [0b1 | 1 << 5]
    for _ in range(1000):
        rows.append(_times(rows[-1], transition))
    # The periods 31 and 127 are coprime, so that shifting the second register alone is a shift of the sum.
    apart = rows[0] & 0b11111 | rows[1] & ~0b11111
    table = find_phases(linear_machine(transition, [(rows[0], 0), (rows[1000], 1), (apart, 0)]))
    assert table.classes[0].modulus == 31 * 127
    assert [phase.lead for phase in table.phases] == [0, 1000, 31 * pow(31, -1, 127)]
    assert [phase.inverted for phase in table.phases] == [False, True, False]


def test_sums_of_two_registers_of_one_degree_fall_into_many_classes() -> None:
    """Sums of a stage each of two registers of period 31 are one stream only where the stages are as far apart."""
    first, second = fibonacci((5, 3, 0)), fibonacci((5, 4, 3, 2, 0))
    transition = first + [row << 5 for row in second]
    sums = [(1 << i | 1 << 5 + j, 0) for i in range(5) for j in range(5)]
    table = find_phases(linear_machine(transition, sums))
    assert [phase.group for phase in table.phases] == [
        table.phases[5 * max(0, i - j) + max(0, j - i)].group for i in range(5) for j in range(5)
    ]
    assert len(table.classes) == 9


def _times(row: int, transition: list[int]) -> int:
    result = 0
    for k, other in enumerate(transition):
        if row >> k & 1:
            result ^= other
    return result


def test_two_registers_of_one_polynomial_are_two_classes() -> None:
    """Streams of two separate registers never coincide, although their polynomials are equal."""
    register = fibonacci((5, 3, 0))
    table = find_phases(linear_machine(register + [row << 5 for row in register], [(1, 0), (2, 0), (32, 0), (64, 0)]))
    assert [group.channels for group in table.classes] == [(0, 1), (2, 3)]
    assert separation(table, 0, 2) == Infinite()
    assert str(separation(table, 0, 2)) == "infinite"


def test_a_stream_that_is_its_own_complement_needs_no_inversion() -> None:
    """A toggling flip-flop has period 2; its complement leads by one cycle, and yet the two are in step."""
    table = find_phases(linear_machine([1], [(1, 0), (1, 1)], offset=1))
    assert (table.classes[0].modulus, table.classes[0].turn, table.classes[0].half_turn) == (2, 1, True)
    assert [(phase.lead, phase.inverted) for phase in table.phases] == [(0, False), (1, False)]
    assert pairs_closer_than(table, 1) == [(0, 1, 0, True)]


def test_pipeline_registers_delay_and_are_no_reason_for_having_no_lead() -> None:
    """A channel behind two more flip-flops lags two cycles, from the cycle on at which the register has filled them."""
    transition = [*fibonacci((5, 3, 0)), 1 << 0, 1 << 5]
    table = find_phases(linear_machine(transition, [(1, 0), (1 << 6, 0), (1 << 4, 0)]))
    assert [(phase.lead, phase.kind, phase.valid_from) for phase in table.phases] == [
        (0, "exact", 0),
        (29, "from", 2),
        (27, "exact", 0),
    ]


def test_channels_without_a_stream_say_why() -> None:
    """A constant channel gives its value and from when on, a refused one what its refusal says; neither has a class."""
    transition = [*fibonacci((3, 2, 0)), 0]
    table = find_phases(linear_machine(transition, [(0, 1), (1 << 3, 0), None, (1, 0)], offset=1 << 3))
    reasons = [phase.no_lead_because for phase in table.phases]
    assert reasons == ["constant 1", "constant 1 from cycle 1 on", "the function is not affine", ""]
    assert [phase.group for phase in table.phases] == [None, None, None, 0]
    assert separation(table, 0, 3) is None


def test_a_channel_of_free_inputs_alone_is_not_called_constant() -> None:
    """With the inputs at 0 it has no stream of its own; the reason says that it has no register, not a value."""
    machine = linear_machine([0b01, 0b00], [(0b01, 0), (0b10, 0)])
    machine = replace(machine, free_inputs=("si",), input_matrix=(0, 1))
    table = find_phases(machine)
    assert (table.phases[1].kind, table.phases[1].no_lead_because) == ("none", "no register in it, only free inputs")


def test_the_reference_is_named_or_the_first_that_is_a_channel() -> None:
    """A net behind a spoiled channel is the reference only where there is nothing else; a name comes first."""
    register = fibonacci((5, 3, 0))
    machine = linear_machine(register, [None, (1, 0), (2, 0), (4, 0)], cut_from=[1])
    assert find_phases(machine).classes[0].reference == 2
    assert find_phases(machine, reference="c3").classes[0].reference == 3
    only_cut = linear_machine(register, [None, (1, 0)], cut_from=[1])
    assert find_phases(only_cut).classes[0].reference == 1


def test_a_net_behind_a_spoiled_channel_is_nobodys_nearest() -> None:
    """It has a nearest channel, but the neighbours and the smallest pair of a class are channels that feed chains."""
    register = fibonacci((5, 3, 0))
    table = find_phases(linear_machine(register, [None, (1, 0), (1, 0), (4, 0)], cut_from=[1]))
    near = [phase.nearest and (phase.nearest.channel, phase.nearest.separation) for phase in table.phases]
    assert near == [None, (2, 0), (3, 2), (2, 2)]
    minimum = table.classes[0].minimum
    assert minimum
    assert (minimum.channels, minimum.cycles) == ((2, 3), 2)


def test_an_unknown_reference_is_an_input_error() -> None:
    """A reference that is no channel is refused with the names that come near."""
    with pytest.raises(InputError, match="the reference c111 is no channel; did you mean c11"):
        find_phases(linear_machine([1], [(1, 0)] * 12), reference="c111")


def test_a_machine_whose_transient_is_wrong_is_an_internal_error() -> None:
    """Rows that are not steady after the stated transient are never given a phase."""
    with pytest.raises(InternalError, match="not steady"):
        find_phases(linear_machine([2, 2], [(3, 0), (1, 0)], transient=0))
