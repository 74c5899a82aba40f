"""Rules on load and structure: fan-out and capacitance of flip-flops, taps and depth of channels, forced nets."""

from collections.abc import Iterator

from auditor.risks.evidence import Evidence
from auditor.risks.finding import Finding
from auditor.risks.levels import finding


def fan_out_over_limit(evidence: Evidence) -> Iterator[Finding]:
    """Report flip-flops over the stated fan-out, and output pins over the library's capacitance."""
    limit = evidence.plan.limits.fan_out
    for load in evidence.cone.loads:
        name, place = evidence.cone.elements[load.element].name, evidence.element_place(load.element)
        pins = sum(load.leaf)
        if limit is not None and pins > limit:
            yield finding(
                "fan-out-over-limit",
                (name,),
                f"{name} drives {pins} pins through buffers and inverters, {pins - limit} over the limit of {limit}: "
                "its edges are slow or need a buffer tree, and the shift clock must allow for that.",
                {"fan_out": pins, "limit": limit},
                place,
            )
        for pin, capacitance, most in zip(load.pins, load.capacitance_ff, load.limit_ff, strict=True):
            if capacitance is not None and most is not None and capacitance > most:
                yield finding(
                    "fan-out-over-limit",
                    (name,),
                    f"Pin {pin} of {name} carries {capacitance:.1f} fF without wires where {most:.1f} fF are allowed: "
                    "its delay is not what the library describes, and shift at speed can fail.",
                    {"pin": pin, "capacitance_ff": capacitance, "limit_ff": most},
                    place,
                )


def taps_over_limit(evidence: Evidence) -> Iterator[Finding]:
    """Report channels with more taps than the stated limit."""
    limit = evidence.plan.limits.taps
    for _, row in evidence.channels():
        if limit is not None and len(row.taps) > limit:
            yield finding(
                "taps-over-limit",
                (row.name,),
                f"Channel {row.name} is the sum of {len(row.taps)} register elements where the limit is {limit}: "
                "each further tap costs XOR gates and loads the register.",
                {"taps": len(row.taps), "limit": limit},
                evidence.net_place(row.name),
            )


def depth_over_limit(evidence: Evidence) -> Iterator[Finding]:
    """Report channels that pass more XOR nodes in a row than the stated limit."""
    limit = evidence.plan.limits.depth
    for _, row in evidence.channels():
        if limit is not None and row.xor_depth > limit:
            yield finding(
                "depth-over-limit",
                (row.name,),
                f"Channel {row.name} passes {row.xor_depth} XOR nodes in a row where the limit is {limit}: "
                "this path from the register into the chain can bound the shift frequency.",
                {"depth": row.xor_depth, "limit": limit},
                evidence.net_place(row.name),
            )


def forced_net(evidence: Evidence) -> Iterator[Finding]:
    """Report internal nets that the mode forces although their driver could take the other value."""
    netlist = evidence.cone.netlist
    for net in evidence.cone.forced:
        name, value = netlist.net_names[net], evidence.cone.constants.get(net)
        yield finding(
            "forced-net",
            (name,),
            f"The mode holds {name} at {value} although its driver can give both values: all that is said here "
            "holds only while the chip keeps it there throughout the scan test.",
            {"value": value},
            netlist.net_place(net),
        )
