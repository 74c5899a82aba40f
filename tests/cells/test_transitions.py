"""Finding the structure of a stored bit: whatever is built is found again, and does the same."""

from hypothesis import assume, given, settings
from hypothesis import strategies as st

from auditor.cells.library import Function
from auditor.cells.transitions import Transitions, recognise, recognise_latch
from tests.support.cell_models import value

NAMES = ("a", "b", "c")
STATE = "q"
PLACES = 16  # three inputs and the state
tables = st.integers(0, (1 << PLACES) - 1)


def bit(table, place):
    return table >> place & 1


def described_step(found, before, now, state):
    """Return the state after the inputs, numbers with bit j for name j, change."""
    pins = [{name: bit(place, j) for j, name in enumerate(NAMES)} | {STATE: state} for place in (before, now)]
    clear, preset = (value(f, pins[1]) if f else 0 for f in (found.clear, found.preset))
    if clear and preset:
        return int(found.both)
    if clear or preset:
        return preset
    opened = value(found.clock, pins[1])
    if found.kind == "flip-flop":
        opened = opened and not value(found.clock, pins[0])
    return value(found.data, pins[1]) if opened else state


def without(table, *columns):
    """Return the table made independent of some of its names: their value 0 counts."""
    for j in columns:
        table = sum(bit(table, place & ~(1 << j)) << place for place in range(PLACES))
    return table


def transitions(step):
    """Return the transitions of ``step(inputs before, inputs now, changed, state)``, which gives 0, 1 or None."""
    ones, zeros = [0, 0, 0], [0, 0, 0]
    for changed in range(3):
        for place in range(PLACES):
            now, state = place & 7, place >> 3
            after = step(now ^ 1 << changed, now, changed, state)
            ones[changed] |= (after == 1) << place
            zeros[changed] |= (after == 0) << place
    return Transitions(NAMES, tuple(ones), tuple(zeros))


def agrees(found, step, forced):
    """Compare after every change from every state that can occur."""
    for place in range(PLACES):
        before, state = place & 7, place >> 3
        if forced(before) in (None, state):
            for changed in range(3):
                now = before ^ 1 << changed
                assert described_step(found, before, now, state) == step(before, now, changed, state)


@settings(max_examples=150, deadline=None)
@given(st.integers(0, 2), st.integers(0, 1), tables, tables, tables)
def test_flip_flops_are_found(clock, edge, data, clear, preset):
    """Any clock and edge, any data over inputs and state, any asynchronous conditions over the other inputs."""
    clear, preset = without(clear & clear >> 1, clock, 3), without(preset, clock, 3)

    def forced(inputs):
        return 1 if bit(preset, inputs) else 0 if bit(clear, inputs) else None

    def step(_before, now, changed, state):
        if forced(now) is not None:
            return forced(now)
        return bit(data, now | state << 3) if changed == clock and bit(now, clock) == edge else state

    taken = [(now, s) for now in range(8) for s in (0, 1) if bit(now, clock) == edge and forced(now) is None]
    assume({(s, bit(data, now | s << 3)) for now, s in taken} >= {(0, 1), (1, 0)})  # else it may be stuck
    found = recognise(transitions(step), STATE)
    assert found is not None
    agrees(found, step, forced)


@settings(max_examples=150, deadline=None)
@given(tables, tables)
def test_latches_are_found(opened, data):
    """Any function of levels as the gate, any data: the result is a latch that does the same."""
    opened, data = without(opened, 3), without(data, 3)
    assume({bit(data, now) for now in range(8) if bit(opened, now)} == {0, 1})  # else it is stuck

    def forced(inputs):
        return bit(data, inputs) if bit(opened, inputs) else None

    def step(_before, now, _changed, state):
        return bit(data, now) if bit(opened, now) else state

    found = recognise(transitions(step), STATE)
    assert found is not None
    assert found.kind == "latch"
    agrees(found, step, forced)


@settings(max_examples=100, deadline=None)
@given(st.lists(tables, min_size=6, max_size=6))
def test_what_is_found_in_noise_does_the_same(noise):
    """Random transitions are no storage, or the structure found agrees with them wherever a state can occur."""
    ones = [table & mask for table, mask in zip(noise[:3], noise[3:], strict=True)]
    zeros = [~table & mask for table, mask in zip(noise[:3], noise[3:], strict=True)]
    found = recognise(Transitions(NAMES, tuple(ones), tuple(zeros)), STATE)
    assert found is None or found.kind in ("flip-flop", "latch")
    if found:
        for before in range(8):
            for state in (0, 1):
                if described_step(found, before, before, state) == state or found.kind == "flip-flop":
                    for changed in range(3):
                        now = before ^ 1 << changed
                        after = described_step(found, before, now, state)
                        place = now | state << 3
                        holds = described_step(found, before, before, state) == state
                        assert not holds or bit((zeros, ones)[after][changed], place)


def test_a_clock_that_is_given_is_the_only_one_tried():
    """Where the clock is known, a structure with another clock is not taken."""

    def step(_before, now, changed, state):
        return bit(now, 0) if changed == 1 and bit(now, 1) else state

    plain = transitions(step)
    assert recognise(plain, STATE).clock == Function(("b",), ("$0",))
    for clock, expected in ((1, True), (0, False), (2, False)):
        given_clock = Transitions(plain.inputs, plain.ones, plain.zeros, clock)
        assert (recognise(given_clock, STATE) is not None) == expected
    assert recognise_latch(plain, STATE) is None


def test_too_many_inputs_are_not_tried():
    """Beyond twelve inputs nothing is found, whatever the tables hold."""
    assert recognise(Transitions(tuple(f"i{k}" for k in range(13)), (0,) * 13, (0,) * 13), STATE) is None
    assert recognise_latch(Transitions(tuple(f"i{k}" for k in range(13)), (0,) * 13, (0,) * 13), STATE) is None
