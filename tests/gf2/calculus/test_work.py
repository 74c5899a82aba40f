"""The count of work and its limit."""

from time import monotonic

import pytest

from auditor.gf2.calculus.work import OutOfWork, Work


def test_work_up_to_the_limit_is_allowed():
    """Ten units may be spent of ten, in any parts, and no more; what is refused is not counted."""
    work = Work(limit=10)
    work.spend(4)
    work.spend(6)
    with pytest.raises(OutOfWork):
        work.spend(1)
    assert work.done == 10


def test_without_a_limit_work_is_counted():
    """The count goes on."""
    work = Work()
    work.spend(10**12)
    work.spend(1)
    assert work.done == 10**12 + 1


def test_after_the_deadline_no_work_begins():
    """A time that is over ends all work, one far ahead none."""
    with pytest.raises(OutOfWork, match="time"):
        Work(deadline=monotonic() - 1).spend(1)
    Work(deadline=monotonic() + 1000).spend(1)


def test_phrases_are_passed_on():
    """A phrase reaches whoever listens, and nobody need listen."""
    heard = []
    Work(progress=heard.append).report("half of it")
    Work().report("all of it")
    assert heard == ["half of it"]
