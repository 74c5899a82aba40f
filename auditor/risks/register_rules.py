"""Rules on the feedback registers: periods, reset and load, registers that can run through the same streams."""

from collections.abc import Iterator

from auditor.machine.machine import LinearMachine
from auditor.notation import Polynomial, Vector, state_hex
from auditor.phases.table import RegisterFacts
from auditor.risks.evidence import Evidence, decimal, open_input_reach, register_name
from auditor.risks.finding import Finding
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
    """Report registers that share an irreducible factor of degree 2 or more, each with the first that has it."""
    first_with: dict[Polynomial, int] = {}
    shared: dict[tuple[int, int], list[Polynomial]] = {}
    for number, register in enumerate(evidence.registers):
        for factor in register.factors:
            first = first_with.setdefault(factor.polynomial, number)
            if first != number and factor.polynomial.bit_length() > 2:
                shared.setdefault((first, number), []).append(factor.polynomial)
    for (a, b), factors in shared.items():
        yield _in_step(evidence, evidence.registers[a], evidence.registers[b], factors)


def _in_step(evidence: Evidence, a: RegisterFacts, b: RegisterFacts, factors: list[Polynomial]) -> Finding:
    names_a, names_b = evidence.storage_names(a), evidence.storage_names(b)
    reset, what_is_known = _start_of_both(evidence.machine, a, b)
    text = ", ".join(_polynomial_text(factor) for factor in factors)
    return finding(
        "registers-in-step",
        names_a + names_b,
        f"The registers {register_name(names_a)} and {register_name(names_b)} share the factor {text}, so chains fed "
        "from the one can carry shifted copies of what chains fed from the other carry, and no phase shifter "
        f"separates them; {what_is_known}.",
        {"shared_factor": text, "degree": max(factor.bit_length() - 1 for factor in factors), "reset": reset},
        evidence.element_place(b.elements[0]),
    )


def _start_of_both(machine: LinearMachine | None, a: RegisterFacts, b: RegisterFacts) -> tuple[str, str]:
    """Return a word for the figures and a clause on what the reset states of two registers say."""
    if machine is None or a.reset is None or b.reset is None or a.reset.unknown or b.reset.unknown:
        return "unknown", "how far apart they run depends on their start states, which are not known"
    own = _alone(machine, a)
    if own is not None and own == _alone(machine, b) and a.reset.state == b.reset.state:
        return (
            "same",
            "both have the same next states and the same reset state, so from reset they run in step, bit by bit",
        )
    state_a, state_b = (state_hex(r.reset.state, len(r.elements)) for r in (a, b) if r.reset)
    return (
        "known",
        f"their reset states {state_a} and {state_b} (hex) fix how far apart they run, which was not computed",
    )


def _alone(machine: LinearMachine, register: RegisterFacts) -> tuple[list[Vector], Vector] | None:
    """Return A and a of a register over its own elements, or None where anything else acts on it."""
    place = {element: k for k, element in enumerate(register.elements)}
    rows, offset = [], 0
    for k, element in enumerate(register.elements):
        row = machine.transition[element]
        own = [place[j] for j in register.elements if row >> j & 1]
        if len(own) != row.bit_count() or machine.input_matrix[element]:
            return None
        rows.append(sum(1 << j for j in own))
        offset |= (machine.offset >> element & 1) << k
    return rows, offset


def _polynomial_text(polynomial: Polynomial) -> str:
    """Return "x^4 + x + 1", or the degree and the hexadecimal form of one with many terms."""
    if polynomial.bit_count() > 12:
        return f"of degree {polynomial.bit_length() - 1}, hex {polynomial:x}"
    powers = (k for k in range(polynomial.bit_length() - 1, -1, -1) if polynomial >> k & 1)
    return " + ".join({0: "1", 1: "x"}.get(k, f"x^{k}") for k in powers)
