"""The bounds of logarithms and their progress."""

from auditor.gf2.effort import Effort


def test_phrases_stand_under_what_they_belong_to():
    """A phrase of the work comes behind that of its caller, and nobody need listen."""
    heard: list[str] = []
    effort = Effort(7, 9.0, heard.append)
    effort.report("leads")
    inner = effort.under("leads").under("degree 5")
    inner.work().report("relations")
    assert heard == ["leads", "leads: degree 5: relations"]
    assert (inner.work().limit, inner.work().deadline, inner.tables) == (7, 9.0, effort.tables)
    Effort().under("leads").report("relations")
