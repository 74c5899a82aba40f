"""Findings recognised across revisions."""

from auditor.revisions.findings import compare_findings
from auditor.risks.finding import Finding, Level


def finding(
    slug: str, where: tuple[str, ...], level: Level = "error", waived: str | None = None, **figures: object
) -> Finding:
    """Return a finding with these figures."""
    return Finding(slug, level, where, "It costs coverage.", dict(figures), waived=waived)  # type: ignore[arg-type]


def test_gained_lost_and_kept() -> None:
    """A finding on the same objects, in any order and under their new names, is the same finding."""
    old = [finding("windows-overlap", ("a", "b")), finding("constant-channel", ("c",))]
    new = [finding("windows-overlap", ("b", "x")), finding("single-tap-channel", ("c",))]
    found = compare_findings(old, new, {"a": "x"})
    assert [f.slug for f in found.gained] == ["single-tap-channel"]
    assert [f.slug for f in found.lost] == ["constant-channel"]
    assert found.worse == ()


def test_worse_is_said_by_level_figure_and_waiver() -> None:
    """A higher level, a smaller separation, a greater load and a waiver that is gone are worse; the reverse is not."""
    pairs = [
        (finding("x", ("a",), "warning"), finding("x", ("a",), "error")),
        (finding("x", ("a",), separation="12"), finding("x", ("a",), separation="9")),
        (finding("x", ("a",), fan_out=8), finding("x", ("a",), fan_out=10)),
        (finding("x", ("a",), waived="known"), finding("x", ("a",))),
    ]
    for better, worse in pairs:
        assert compare_findings([better], [worse], {}).worse == ((better, worse),)
        assert compare_findings([worse], [better], {}).worse == ()
        assert compare_findings([worse], [worse], {}).worse == ()


def test_a_figure_that_is_no_number_is_no_comparison() -> None:
    """Texts and very long numbers are left alone."""
    old, new = finding("x", ("a",), separation="infinite"), finding("x", ("a",), separation="9" * 5000)
    assert compare_findings([old], [new], {}).worse == ()
