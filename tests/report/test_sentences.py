"""Lists of names are short and still say every name."""

import pytest

from auditor.report.sentences import bounded, name_runs


@pytest.mark.parametrize(
    ("names", "text"),
    [
        ([], ""),
        (["q[0]"], "q[0]"),
        (["q[0]", "q[1]"], "q[0], q[1]"),
        (["q[0]", "q[1]", "q[2]"], "q[0..2]"),
        (["pipe", "q_7_", "q_8_", "q_9_", "q_10_", "z"], "pipe, q_7..10_, z"),
        (["s[1].ff1", "s[2].ff1", "s[3].ff1"], "s[1..3].ff1"),
        (["q[0]", "q[2]", "q[4]"], "q[0], q[2], q[4]"),
        (["q[3]", "q[2]", "q[1]"], "q[3], q[2], q[1]"),
        (["q[08]", "q[09]", "q[10]"], "q[08], q[09], q[10]"),
        (["a[1]", "a[2]", "a[3]", "b[4]", "b[5]", "b[6]"], "a[1..3], b[4..6]"),
        (["a1[1]", "a1[2]", "a2[2]", "a3[2]"], "a1[1], a1[2], a2[2], a3[2]"),
        ([f"q{'9' * 40}", f"q1{'0' * 40}", "q"], f"q{'9' * 40}, q1{'0' * 40}, q"),
    ],
)
def test_runs_of_counting_names_become_one(names, text):
    """Three names or more that count up by one in one number become one; all others stay as they are."""
    assert name_runs(names) == text


def test_a_bounded_list_says_how_many_are_missing():
    """Up to the bound all names are given, beyond it their number; a run counts once."""
    assert bounded(["a", "b"], 2) == "a, b"
    assert bounded(["a", "b", "c"], 2) == "a, b and 1 more in the JSON"
    assert bounded([f"q[{k}]" for k in range(9)] + ["x", "y"], 2) == "q[0..8], x and 1 more in the JSON"
    assert bounded(["x", "q[0]", "q[1]"], 2) == "x, q[0] and 1 more in the JSON"
