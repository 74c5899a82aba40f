"""Rules on loads, taps, depth and forced nets: a figure at its limit is no finding, one above is."""

from dataclasses import replace

from auditor.cone.cone import Load
from auditor.notation import SourcePlace
from auditor.plan import Limits
from auditor.risks.load_rules import depth_over_limit, fan_out_over_limit, forced_net, taps_over_limit
from tests.support.evidence import INSTANCE_LINE, NET_LINE, evidence
from tests.support.linear_machines import fibonacci, linear_machine

MACHINE = linear_machine(fibonacci((4, 3, 0)), [(0b0111, 0), (0b0011, 0)])
LOADS = (
    Load(0, ("Q", "QN"), (2, 3), (4, 5), (10.0, 20.5), (10.0, 20.0)),
    Load(1, ("Q",), (2,), (8,), (99.0,), (None,)),
    Load(2, ("Q",), (2,), (1,), (None,), (5.0,)),
)


def test_fan_out_is_compared_over_both_outputs() -> None:
    """The stated limit holds for the leaf pins on Q and QN together."""
    told = [
        f for f in fan_out_over_limit(evidence(MACHINE, loads=LOADS, limits=Limits(fan_out=8))) if "limit" in f.figures
    ]
    (finding,) = told
    assert (finding.slug, finding.level, finding.where) == ("fan-out-over-limit", "warning", ("q[0]",))
    assert finding.figures == {"fan_out": 9, "limit": 8}
    assert finding.place == SourcePlace("block.v", INSTANCE_LINE)
    assert finding.says == (
        "q[0] drives 9 pins through buffers and inverters, 1 over the limit of 8: its edges are slow or need a buffer "
        "tree, and the shift clock must allow for that."
    )


def test_capacitance_is_compared_pin_by_pin() -> None:
    """The library's limit holds for each output by itself, with or without a stated limit; unknown figures are none."""
    (finding,) = fan_out_over_limit(evidence(MACHINE, loads=LOADS))
    assert (finding.where, finding.figures) == (("q[0]",), {"pin": "QN", "capacitance_ff": 20.5, "limit_ff": 20.0})
    assert finding.says.startswith("Pin QN of q[0] carries 20.5 fF without wires where 20.0 fF are allowed")


def test_taps_are_compared_with_the_limit() -> None:
    """Three taps miss a limit of two and keep one of three."""
    (finding,) = taps_over_limit(evidence(MACHINE, limits=Limits(taps=2)))
    assert (finding.slug, finding.level, finding.where) == ("taps-over-limit", "warning", ("c0",))
    assert finding.figures == {"taps": 3, "limit": 2}
    assert finding.place == SourcePlace("block.v", NET_LINE)
    assert not list(taps_over_limit(evidence(MACHINE, limits=Limits(taps=3))))
    assert not list(taps_over_limit(evidence(MACHINE)))


def test_depth_is_compared_with_the_limit() -> None:
    """A depth of one misses a limit of zero; without a limit nothing is asked."""
    deep = replace(MACHINE, observed=(replace(MACHINE.observed[0], xor_depth=1), MACHINE.observed[1]))
    (finding,) = depth_over_limit(evidence(deep, limits=Limits(depth=0)))
    assert (finding.slug, finding.level, finding.where) == ("depth-over-limit", "warning", ("c0",))
    assert finding.figures == {"depth": 1, "limit": 0}
    assert not list(depth_over_limit(evidence(deep, limits=Limits(depth=1))))
    assert not list(depth_over_limit(evidence(deep)))


def test_forced_nets_are_noted() -> None:
    """A net that the mode forces is noted with its value and place."""
    told = evidence(MACHINE)
    cone = replace(told.cone, forced=(3,), constants={3: 1})
    (finding,) = forced_net(replace(told, cone=cone))
    assert (finding.slug, finding.level, finding.where, finding.figures) == (
        "forced-net",
        "note",
        ("c0",),
        {"value": 1},
    )
    assert finding.says == (
        "The mode holds c0 at 1 although its driver can give both values: all that is said here holds only while the "
        "chip keeps it there throughout the scan test."
    )
