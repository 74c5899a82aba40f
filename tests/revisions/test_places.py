"""Flip-flops found by where they stand, names and streams left out of it."""

import random
from pathlib import Path

from auditor.revisions.places import matched_by_place
from tests.support.audits import audit_text
from tests.support.damages import feedback_tap
from tests.support.limpet import ECHO
from tests.support.mapped import mapped
from tests.support.rewrites import renamed

KELP = Path(__file__).parents[2] / "sample_netlists" / "kelp90.lib"


def test_renamed_flip_flops_are_found_behind_a_changed_feedback(tmp_path: Path) -> None:
    """After a moved feedback tap and new names, every flip-flop that is matched is matched with itself; most are."""
    rng = random.Random(4)
    netlist = mapped(ECHO, 1, rng)
    old = audit_text(tmp_path, netlist.text(), (KELP,), mode={"en": 1})
    assert feedback_tap(netlist, rng)
    names = [instance.name for instance in netlist.instances]
    renamed(netlist, rng)
    now = dict(zip(names, (instance.name for instance in netlist.instances), strict=True))
    new = audit_text(tmp_path, netlist.text(), (KELP,), mode={"en": 1})
    machines = [facts.extraction.machine for facts in (old, new)]
    assert machines[0] is not None
    assert machines[1] is not None
    pairs = [(i, i) for i in range(16)]
    found = matched_by_place((machines[0], machines[1]), (old.cone, new.cone), pairs)
    assert len(found) >= 30
    for element, other in found.items():
        assert new.cone.elements[element].name == now[old.cone.elements[other].name]
