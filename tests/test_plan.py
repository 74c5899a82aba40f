"""A plan and the options over it."""

from dataclasses import replace
from pathlib import Path

from auditor.plan import Limits, Options, Patterns, Plan, merge

PLAN = Plan(
    netlists=(Path("old.v"), Path("rest.v")),
    cells=(Path("a.lib"),),
    top="block",
    mode={"scan_en": 0, "hold": 1},
    channels=("so",),
    reference="so[0]",
    chain_length=40,
    limits=Limits(separation=100, taps=3),
    file=Path("plan.toml"),
)


def test_without_options_the_plan_stands() -> None:
    """Options that are not given change nothing."""
    assert merge(PLAN, Options()) == PLAN


def test_given_lists_and_values_replace_those_of_the_plan() -> None:
    """A list or a single value from the command line takes the place of the plan's."""
    options = Options(
        netlists=(Path("new.v"),),
        cells=(Path("b.lib"), Path("c.lib")),
        top="other",
        channels=("x", "y"),
        reference="x",
        chain_length=7,
        fail_at="note",
        work_limit=9,
    )
    merged = merge(PLAN, options)
    assert (merged.netlists, merged.cells) == (options.netlists, options.cells)
    assert (merged.top, merged.channels, merged.reference) == ("other", ("x", "y"), "x")
    assert (merged.chain_length, merged.fail_at, merged.work_limit) == (7, "note", 9)
    assert merged.file == PLAN.file


def test_mode_and_limits_are_replaced_key_by_key() -> None:
    """A mode or limit that only the plan states stays beside those of the command line."""
    merged = merge(PLAN, Options(mode={"scan_en": 1, "test": 0}, limits={"taps": 5, "depth": 0}))
    assert merged.mode == {"scan_en": 1, "hold": 1, "test": 0}
    assert merged.limits == Limits(separation=100, taps=5, depth=0)


def test_a_net_held_by_the_command_line_is_held_in_every_mode() -> None:
    """The option overrides each named mode key by key, and each mode gives a plan of its own."""
    stated = replace(PLAN, mode={}, modes={"shift": {"scan_en": 0, "hold": 1}, "rest": {}})
    merged = merge(stated, Options(mode={"scan_en": 1}))
    assert merged.modes == {"shift": {"scan_en": 1, "hold": 1}, "rest": {"scan_en": 1}}
    assert merged.mode == {}
    plans = merged.by_mode()
    assert plans["shift"] == replace(PLAN, mode={"scan_en": 1, "hold": 1})
    assert list(plans) == ["shift", "rest"]
    assert PLAN.by_mode() == {"": PLAN}


def test_options_alone_make_a_plan() -> None:
    """Without a plan file the options are all there is, and a finding of level error fails the audit."""
    merged = merge(None, Options(netlists=(Path("a.v"),)))
    assert merged == Plan(netlists=(Path("a.v"),))
    assert merged.fail_at == "error"


def test_clocks_of_a_pattern_count_capture_only_where_the_generator_advances() -> None:
    """A generator that holds in capture takes its shift clocks alone."""
    assert Patterns(10, 40, 2).clocks_per_pattern == 40
    assert Patterns(10, 40, 2, "advances").clocks_per_pattern == 42
