"""Rules on the feedback registers: periods, reset and load, registers that can run through the same streams."""

from collections.abc import Iterator
from dataclasses import replace
from itertools import chain

from auditor.notation import Polynomial, state_hex
from auditor.phases.table import Closest, Infinite, InStep, Separation
from auditor.risks.evidence import Evidence, decimal, open_input_reach, register_name
from auditor.risks.finding import Finding, Level
from auditor.risks.levels import finding


def period_short_of_maximum(evidence: Evidence) -> Iterator[Finding]:
    """Report registers that repeat before they have run through all states but one."""
    for register in evidence.registers:
        if register.period is None or register.period >= register.maximum_period:
            continue
        names = evidence.storage_names(register)
        period, degree = decimal(register.period), register.cycling_degree
        yield finding(
            "period-short-of-maximum",
            names,
            f"Register {register_name(names)} repeats after at most {period} cycles where a primitive polynomial of "
            f"degree {degree} gives 2^{degree} - 1, and which states it runs through depends on where it starts: "
            "fewer different patterns reach the chains, and some seeds give far fewer than others.",
            {"period": period, "maximum_period": decimal(register.maximum_period), "degree": degree},
            evidence.element_place(register.elements[0]),
        )


def period_short_of_test(evidence: Evidence) -> Iterator[Finding]:
    """Report streams that repeat within the planned test; with one register, its orbit from reset counts too."""
    clocks = evidence.test_clocks
    if clocks is None or evidence.phases is None or evidence.machine is None:
        return
    for group in evidence.phases.classes:
        fed = evidence.chain_fed(group)
        if fed and group.modulus is not None and 1 < group.modulus < clocks:
            names = tuple(evidence.machine.observed[k].name for k in fed)
            says = f"The stream of {names[0]}" + (f" and {len(names) - 1} more of its class" if names[1:] else "")
            yield _short_of_test(names, says, group.modulus, clocks, "any state")
    if len(evidence.registers) == 1 and (reset := evidence.registers[0].reset):
        register, names = evidence.registers[0], evidence.storage_names(evidence.registers[0])
        period, shorter = reset.period, reset.period != register.period
        if period is not None and shorter and 1 < period < clocks and not reset.stuck:
            says = f"From its reset state, register {register_name(names)}"
            yield _short_of_test(names, says, period, clocks, "the reset state")


def _short_of_test(names: tuple[str, ...], subject: str, period: int, clocks: int, start: str) -> Finding:
    return finding(
        "period-short-of-test",
        names,
        f"{subject} repeats after {decimal(period)} cycles but the planned test takes {decimal(clocks)}: "
        "from then on the chains receive bits that they have had before, and later patterns can repeat earlier ones.",
        {"period": decimal(period), "test_clocks": decimal(clocks), "from": start},
    )


def resets_into_lock_up(evidence: Evidence) -> Iterator[Finding]:
    """Report registers whose reset state is a state that they never leave."""
    for register in evidence.registers:
        if register.reset is not None and register.reset.stuck:
            names = evidence.storage_names(register)
            state = state_hex(register.reset.state, len(register.elements))
            yield finding(
                "resets-into-lock-up",
                names,
                f"Reset puts register {register_name(names)} into the state {state} (hex), from which it never moves: "
                "without a seed the chains that it alone feeds receive constants and the test detects next to nothing.",
                {"state": state, "lock_up_states": decimal(register.lock_up_count)},
                evidence.element_place(register.elements[0]),
            )


def no_reset_and_no_load(evidence: Evidence) -> Iterator[Finding]:
    """Report registers with elements that no asynchronous pin sets, where no open input acts on the register."""
    if evidence.machine is None:
        return
    reached = open_input_reach(evidence.machine)
    for register in evidence.registers:
        reset = register.reset
        unknown = register.elements if reset is None else tuple(register.elements[k] for k in reset.unknown)
        if not unknown or any(reached >> element & 1 for element in register.elements):
            continue
        names = tuple(evidence.machine.storage[k] for k in unknown)
        yield finding(
            "no-reset-and-no-load",
            names,
            f"Under this mode neither an asynchronous pin nor an open input sets {register_name(names)}: the register "
            "can power up in any state, a lock-up state included, and no signature can be expected unless a load that "
            "the mode switches off, and that is not seen here, comes first.",
            {"unknown": len(unknown), "elements": len(register.elements)},
            evidence.element_place(unknown[0]),
        )


def registers_in_step(evidence: Evidence) -> Iterator[Finding]:
    """Report registers that share a factor: a note where their channels are known to stay apart as far as asked."""
    for shared in evidence.phases.in_step if evidence.phases else ():
        names = [evidence.storage_names(evidence.registers[number]) for number in shared.registers]
        factors = ", ".join(map(_polynomial_text, shared.factors))
        level, meeting = _meeting(evidence, shared)
        near = shared.closest
        yield replace(
            finding(
                "registers-in-step",
                tuple(chain.from_iterable(names)),
                f"The registers {' and '.join(map(register_name, names))} share the factor {factors}, so chains fed "
                "from one of them can carry shifted copies of what chains fed from another carry, and no phase "
                f"shifter separates them; {_shifts(shared, names)}; {meeting}.",
                {
                    "shared_factor": factors,
                    "degree": max(factor.bit_length() - 1 for factor in shared.factors),
                    "shift": ", ".join(map(_shift_text, shared.shifts)),
                    "separation": decimal(near.cycles) if near else None,
                    "channels": ", ".join(_channel_names(evidence, near)) if near else None,
                },
                evidence.element_place(evidence.registers[shared.registers[1]].elements[0]),
            ),
            level=level,
        )


def _shifts(shared: InStep, names: list[tuple[str, ...]]) -> str:
    """Return a clause on the streams of the registers' first elements from reset."""
    if all(shift is None for shift in shared.shifts):
        unknown = (
            "depends on their start states, which are not known" if shared.certain_below == 0 else "is not decided"
        )
        return f"how far apart they run {unknown}"
    told = []
    for shift, own in zip(shared.shifts, names[1:], strict=True):
        if shift is None:
            told.append(f"the lead of {own[0]} is not known")
        elif isinstance(shift, Infinite):
            told.append(f"{own[0]} never carries the stream of {names[0][0]}")
        elif shift:
            told.append(f"{own[0]} leads {names[0][0]} by {decimal(shift)} cycle{'s' * (shift != 1)}")
        else:
            told.append(f"{own[0]} carries the stream of {names[0][0]} in step")
    return f"from reset {', '.join(told)}"


def _shift_text(shift: Separation) -> str:
    """Return a shift for the figures: a decimal string, "infinite" or "unknown"."""
    return "unknown" if shift is None else decimal(shift) if isinstance(shift, int) else str(shift)


def _meeting(evidence: Evidence, shared: InStep) -> tuple[Level, str]:
    """Return the level and a clause on how near the channels of the registers come to each other from reset."""
    near, clocks, plan = shared.closest, evidence.test_clocks, evidence.plan
    asked = [
        (evidence.longest_chain, "so scan cells of their chains share a bit in every pattern"),
        (plan.limits.separation, "less than the separation asked for"),
        (clocks, "so within the planned test one chain receives bits that the other had before"),
    ]
    bound = max((bound for bound, _ in asked if bound is not None), default=None)
    apart = "no two channels of theirs ever carry one stream"
    if near is not None:
        how = "complementary" if near.complement else "equal"
        cycles = f"{decimal(near.cycles)} cycle{'s' * (near.cycles != 1)} apart" if near.cycles else "in step"
        apart = f"from there {' and '.join(_channel_names(evidence, near))} carry {how} streams {cycles}"
        for least, consequence in asked:
            if least is not None and near.cycles < least:
                return "error", f"{apart}, {consequence}"
    certain = shared.certain_below
    if certain is not None and (bound is None or certain < bound):
        return "error", "whether chains that they feed meet is not known"
    if bound is None and near is not None:
        return "error", f"{apart}, and no chain length or planned test is stated to hold against it"
    if certain is not None and (near is None or near.cycles > certain):
        return "note", f"no two channels of theirs are closer than {decimal(certain)} cycles"
    return "note", apart if near is None else f"{apart}, and none of their channels are closer"


def _channel_names(evidence: Evidence, near: Closest) -> list[str]:
    observed = evidence.machine.observed if evidence.machine else ()
    return [observed[channel].name for channel in near.channels]


def _polynomial_text(polynomial: Polynomial) -> str:
    """Return "x^4 + x + 1", or the degree and the hexadecimal form of one with many terms."""
    if polynomial.bit_count() > 12:
        return f"of degree {polynomial.bit_length() - 1}, hex {polynomial:x}"
    powers = (k for k in range(polynomial.bit_length() - 1, -1, -1) if polynomial >> k & 1)
    return " + ".join({0: "1", 1: "x"}.get(k, f"x^{k}") for k in powers)
