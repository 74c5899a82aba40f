"""Short fractions and the search among their combinations."""

import pytest

from auditor.gf2.calculus.lattice import Search, find_smooth, short_fractions
from auditor.gf2.calculus.work import OutOfWork, Work
from auditor.gf2.factorisation import factor
from auditor.gf2.polynomial import degree, multiply_modulo, remainder

F = 1 << 63 | 0b11  # x^63 + x + 1


@pytest.mark.parametrize("a", [1, 2, 0b1011, 1 << 31, 1 << 40, F >> 1, pow(3, 39), 0])
def test_short_fractions(a):
    """Both fractions stand for the element, both are short, and as their determinant is the modulus they span all."""
    (r0, s0), (r1, s1) = short_fractions(a, F)
    for r, s in ((r0, s0), (r1, s1)):
        assert multiply_modulo(s, a, F) == remainder(r, F)
    assert degree(r0) + max(degree(s1), 0) == degree(F)
    assert degree(r1) <= 31
    assert degree(s1) <= 31


def _searches(count):
    fractions = [short_fractions(pow(3, 39 + k) & (1 << 63) - 1, F) for k in range(count)]
    return [Search((r0, r1), (s0, s1)) for (r0, s0), (r1, s1) in fractions]


@pytest.mark.parametrize("power", [1, 4])
def test_fractions_offered_are_smooth_combinations(power):
    """Each search is offered fractions of smooth parts, one after another until one is accepted."""
    searches = _searches(20)
    offered = {}

    def accept(number, left, right):
        offered.setdefault(number, []).append((left, right))
        return len(offered[number]) == 2

    left_out = find_smooth(searches, power, 4, 16, accept, Work())
    assert left_out == [k for k in range(20) if len(offered.get(k, [])) < 2]
    assert any(len(pairs) == 2 for pairs in offered.values())
    for number, pairs in offered.items():
        assert len(pairs) <= 2
        assert len(set(pairs)) == len(pairs)
        possible = _all_combinations(searches[number], power, 4)
        for left, right in pairs:
            assert (left, right) in possible
            assert all(degree(p) <= 16 for side in (left, right) for p, _ in factor(side))


def _all_combinations(search, power, size):
    """Return all fractions by their definition."""
    spread = [sum((m >> k & 1) << power * k for k in range(size)) for m in range(1 << size)]
    lefts = [multiply_modulo(m, part, 1 << 200) for part in search.left for m in range(1 << size)]
    rights = [multiply_modulo(m, part, 1 << 200) for part in search.right for m in spread]
    half = 1 << size
    return {
        (lefts[alpha] ^ lefts[half + beta], rights[alpha] ^ rights[half + beta])
        for alpha in range(half)
        for beta in range(half)
    }


def test_nothing_is_offered_twice_the_same_way():
    """The same searches offer the same fractions in the same order."""
    runs = []
    for _ in range(2):
        offered = []
        find_smooth(_searches(10), 1, 5, 18, lambda *offer, to=offered: bool(to.append(offer)), Work())
        runs.append(offered)
    assert runs[0] == runs[1]
    assert runs[0]


def test_work_is_limited():
    """A search that would exceed the limit is not begun."""
    work = Work(limit=100)
    with pytest.raises(OutOfWork):
        find_smooth(_searches(10), 1, 4, 18, lambda *_: True, work)
    assert work.done == 0


def test_no_search_is_no_work():
    """An empty list of searches has nothing left over."""
    work = Work(limit=0)
    assert find_smooth([], 1, 6, 18, lambda *_: True, work) == []


def test_short_elements_are_their_own_fractions():
    """An element as short as 1 stands over 1, however long the other row of its lattice: no field is too large."""
    field = 1 << 163 | 0b11001001
    elements = [1, 2, 0b1011]
    fractions = [short_fractions(element, field) for element in elements]
    offered = {}

    def accept(number, left, right):
        offered[number] = left, right
        return True

    searches = [Search((r0, r1), (s0, s1)) for (r0, s0), (r1, s1) in fractions]
    assert not find_smooth(searches, 1, 4, 24, accept, Work())
    assert offered == {number: (element, 1) for number, element in enumerate(elements)}
