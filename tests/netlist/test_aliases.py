"""Classes of nets that are one."""

from hypothesis import given
from hypothesis import strategies as st

from auditor.errors import TroubleList
from auditor.netlist.aliases import Tie, classes_of
from auditor.notation import SourcePlace

_NAMES = ["1'b0", "1'b1", *(f"n{k}" for k in range(2, 12))]


def _ties(pairs: list[tuple[int, int]]) -> list[Tie]:
    return [Tie(first, second, SourcePlace("f.v", line)) for line, (first, second) in enumerate(pairs, 1)]


def _reachable(start: int, pairs: list[tuple[int, int]]) -> set[int]:
    found = {start}
    while True:
        more = {b for pair in pairs for a, b in (pair, pair[::-1]) if a in found} - found
        if not more:
            return found
        found |= more


@given(pairs=st.lists(st.tuples(st.integers(2, 11), st.integers(2, 11))))
def test_classes_are_what_a_search_reaches(pairs: list[tuple[int, int]]) -> None:
    """Each net's representative is the lowest net that a plain search over the ties reaches."""
    classes = classes_of(12, _ties(pairs), _NAMES, TroubleList())
    assert classes.tolist() == [min(_reachable(net, pairs)) for net in range(12)]


def test_a_class_takes_its_constant() -> None:
    """A tie to a constant holds for the class, whatever the order of the ties."""
    classes = classes_of(6, _ties([(2, 1), (3, 2), (0, 5)]), _NAMES, TroubleList())
    assert classes.tolist() == [0, 1, 1, 1, 4, 0]


def test_both_constants_are_named_with_their_places() -> None:
    """Net 0 and net 1 never merge: the trouble names the two ties that would merge them."""
    troubles = TroubleList()
    classes_of(6, _ties([(3, 0), (4, 1), (3, 4)]), _NAMES, troubles)
    classes_of(2, _ties([(0, 1)]), _NAMES, troubles)
    assert [str(trouble) for trouble in troubles.troubles] == [
        "f.v:2: net n4 is tied to 1 here and to 0 at f.v:1; leave one of the two out",
        "f.v:1: net 1'b1 is tied to 0 here and to 1 at f.v:1; leave one of the two out",
    ]
