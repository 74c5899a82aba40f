"""Claims are held against a run of the machine, and a wrong one is our own error."""

import pytest

from auditor.array.scan_array import Chain, Place, Relation, ScanCell
from auditor.array.witness import confirm, relation_claims
from auditor.errors import InternalError
from tests.support.linear_machines import fibonacci, linear_machine

MACHINE = linear_machine(fibonacci((5, 2, 0)), [(1, 0), (1 << 1, 1)])
CHAINS = [Chain("c0", 9), Chain("c1", 2, (ScanCell("a", 3, True), ScanCell("b", 4, False)))]


def test_true_relations_pass() -> None:
    """Stage 1 takes stage 5 + stage 2: delays 0, 2 and 5 sum to zero; c1 is stage 2 inverted, one cycle behind."""
    claims = relation_claims(
        CHAINS,
        [
            Relation((Place(0, 0), Place(0, 2), Place(0, 5)), 0, 1),
            Relation((Place(0, 3), Place(1, 0)), 0, 1),
            Relation((Place(0, 4), Place(1, 1)), 1, 1),
        ],
    )
    confirm(MACHINE, claims)


@pytest.mark.parametrize(
    "wrong",
    [
        Relation((Place(0, 0), Place(0, 2), Place(0, 5)), 1, 1),
        Relation((Place(0, 0), Place(0, 2), Place(0, 6)), 0, 1),
        Relation((Place(0, 3), Place(1, 0)), 1, 1),
    ],
)
def test_a_wrong_relation_is_an_internal_error(wrong: Relation) -> None:
    """A constant or a cell that is off by one does not survive the run."""
    with pytest.raises(InternalError):
        confirm(MACHINE, relation_claims(CHAINS, [wrong]))


def test_long_stretches_are_taken_at_once() -> None:
    """The period of a register is far beyond stepping: the stream comes again after it, and not one cycle before."""
    machine = linear_machine(fibonacci((60, 1, 0)), [(1, 0)])
    period = (1 << 60) - 1
    confirm(machine, [((("c0", 0), ("c0", period)), 0)])
    with pytest.raises(InternalError):
        confirm(machine, [((("c0", 0), ("c0", period - 1)), 0)])


def test_a_claim_may_hold_from_one_state_only() -> None:
    """From lock-up the stream is constant; from other states it is not."""
    confirm(MACHINE, [((("c0", 0), ("c0", 1)), 0)], start=0)
    with pytest.raises(InternalError):
        confirm(MACHINE, [((("c0", 0), ("c0", 1)), 0)], start=1)
