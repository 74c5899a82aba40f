"""Waivers: what they cover, and that they name findings that exist."""

from pathlib import Path

import pytest

from auditor.errors import InputError
from auditor.plan import Plan, Waiver
from auditor.risks.finding import Finding
from auditor.risks.waivers import check_waivers, waived

PAIR = Finding("windows-overlap", "error", ("so[1]", "so[12]"), "They overlap.")


@pytest.mark.parametrize(
    ("slug", "where", "covered"),
    [
        ("windows-overlap", ("so[1]", "so[12]"), True),
        ("windows-overlap", ("so[12]",), True),
        ("windows-overlap", ("so[1]", "so[2]"), False),
        ("windows-overlap", ("so[*]",), True),
        ("windows-overlap", ("so[1?]",), True),
        ("windows-overlap", ("so1",), False),  # brackets are no character class
        ("windows-overlap", ("SO[1]",), False),
        ("channels-in-lockstep", ("so[1]",), False),
    ],
)
def test_a_waiver_covers_by_slug_and_all_of_its_names(slug: str, where: tuple[str, ...], covered: bool) -> None:
    """Every name of the waiver must be among the objects; * and ? are patterns, brackets stand for themselves."""
    assert waived(PAIR, [Waiver(slug, where, "known")]).waived == ("known" if covered else None)


def test_the_first_waiver_that_covers_gives_the_reason() -> None:
    """Later waivers of the same finding change nothing."""
    waivers = [Waiver("windows-overlap", ("a",), "no"), Waiver("windows-overlap", ("so*",), "first"),
               Waiver("windows-overlap", ("so[1]",), "second")]  # fmt: skip
    assert waived(PAIR, waivers).waived == "first"


def test_a_finding_without_objects_cannot_be_named() -> None:
    """No pattern covers a finding that has no objects."""
    assert (
        waived(Finding("windows-overlap", "error", (), "Many."), [Waiver("windows-overlap", ("*",), "x")]).waived
        is None
    )


def test_waivers_of_unknown_findings_are_refused() -> None:
    """A slug that does not exist is an error that lists what there is or suggests the nearest."""
    good = Waiver("single-tap-channel", ("a",), "b")
    check_waivers(Plan((), waivers=(good,)))
    bad = (Waiver("single-tap", ("a",), "b"), Waiver("zzz", ("a",), "b"))
    with pytest.raises(InputError) as caught:
        check_waivers(Plan((), waivers=(good, *bad), file=Path("p.toml")))
    first, second = map(str, caught.value.troubles)
    assert first.startswith(
        "p.toml: a waiver names the finding single-tap, which does not exist; did you mean single-tap-"
    )
    assert second.startswith(
        "p.toml: a waiver names the finding zzz, which does not exist; use one of channels-in-lock"
    )
