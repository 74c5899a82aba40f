"""What the terminal report says about registers, and its lists of names."""

import re
from collections.abc import Sequence

from auditor.machine.machine import LinearMachine
from auditor.notation import Vector, state_hex
from auditor.phases.table import Factor, RegisterFacts, ResetFacts
from auditor.report.page import Page
from auditor.report.wording import number_text, plural, polynomial_text

_DIGITS = re.compile(r"(\d+)")


def name_runs(names: Sequence[str]) -> str:
    """Return the names in their order; three or more that only count up by one become "q[0..31]"."""
    return ", ".join(_run_text(run) for run in _runs(names))


def bounded(names: Sequence[str], most: int) -> str:
    """Return the names as ``name_runs``, at most ``most`` runs, and how many more names the JSON has."""
    runs = [part for run in _runs(names) for part in ([run] if len(run) > 2 else [[name] for name in run])]
    more = sum(map(len, runs[most:]))
    return ", ".join(map(_run_text, runs[:most])) + (f" and {more} more in the JSON" if more else "")


def _runs(names: Sequence[str]) -> list[list[str]]:
    """Return the names cut into stretches that count up by one in the same number."""
    runs: list[list[str]] = []
    for name in names:
        if runs and _continues(runs[-1], name):
            runs[-1].append(name)
        else:
            runs.append([name])
    return runs


def _continues(run: Sequence[str], name: str) -> bool:
    """Say whether ``name`` counts on from the run, in the number that the run counts in."""
    at = _counting_part(run[-1], name)
    return at is not None and (len(run) == 1 or _counting_part(run[-2], run[-1]) == at)


def _counting_part(before: str, after: str) -> int | None:
    """Return which part of the two names is the number that goes up by one, where nothing else differs."""
    old, new = _DIGITS.split(before), _DIGITS.split(after)
    differing = [k for k, (a, b) in enumerate(zip(old, new, strict=False)) if a != b]
    if len(old) != len(new) or len(differing) != 1 or differing[0] % 2 == 0:
        return None
    at = differing[0]
    return at if _number(new[at]) == _number(old[at]) + 1 and new[at] == str(_number(new[at])) else None


def _number(digits: str) -> int:
    return int(digits) if len(digits) < 20 else -2


def _run_text(run: Sequence[str]) -> str:
    at = _counting_part(run[0], run[1]) if len(run) > 2 else None
    if at is None:
        return ", ".join(run)
    parts = _DIGITS.split(run[0])
    parts[at] += ".." + _DIGITS.split(run[-1])[at]
    return "".join(parts)


def say_register(page: Page, register: RegisterFacts, machine: LinearMachine, number: int, count: int) -> None:
    """Add a section on one feedback register."""
    names = [machine.storage[k] for k in register.elements]
    page.heading(f"Register {number} of {count}" if count > 1 else "Register")
    page.entry("elements", f"{len(names)}: {name_runs(names)}")
    page.entry("characteristic", polynomial_text(register.characteristic_polynomial))
    page.entry("connection", polynomial_text(register.connection_polynomial) + " (its reciprocal)")
    for place, factor in enumerate(register.factors):
        page.entry("factors" if place == 0 else "", _factor_text(factor, alone=len(register.factors) == 1))
    page.entry("period", _period_text(register))
    page.entry("lock-up states", _lock_up_text(register))
    page.entry("reset", _reset_text(register.reset, names))


def _factor_text(factor: Factor, alone: bool) -> str:
    kind = {True: "primitive", False: "irreducible, not primitive", None: "irreducible, primitive or not is undecided"}
    said = kind[factor.primitive]
    if alone and factor.multiplicity == 1:
        return f"the characteristic polynomial is {said}"
    times = f", {factor.multiplicity} times" if factor.multiplicity > 1 else ""
    return f"{polynomial_text(factor.polynomial)}{times}: {said}"


def _period_text(register: RegisterFacts) -> str:
    primitive = {True: "primitive", False: "not primitive", None: "primitive or not is undecided"}[register.primitive]
    if register.period is None:
        reach = f"undecided, at most {number_text(register.maximum_period)}"
    elif register.period == register.maximum_period:
        reach = f"{number_text(register.period)}, the maximum"
    else:
        reach = f"{number_text(register.period)}, short of {number_text(register.maximum_period)}"
    part = ""
    if register.cycling_degree != len(register.elements):
        part = f"; the cycling part has degree {register.cycling_degree}"
    return f"{reach}; {primitive}{part}"


def _lock_up_text(register: RegisterFacts) -> str:
    if not register.lock_up_count:
        return "none"
    states = [_state(state, register) for state in register.lock_up_states]
    missing = " and more" if register.lock_up_count > len(states) else ""
    return f"{number_text(register.lock_up_count)}: {', '.join(states)}{missing}"


def _state(state: Vector, register: RegisterFacts) -> str:
    return state_hex(state, len(register.elements))


def _reset_text(reset: ResetFacts | None, names: Sequence[str]) -> str:
    if reset is None:
        return "no asynchronous reset"
    said = state_hex(reset.state, len(names))
    if reset.unknown:
        return (
            f"{said}, with {plural(len(reset.unknown), 'bit')} unknown: {name_runs([names[k] for k in reset.unknown])}"
        )
    if reset.stuck:
        return f"{said}, which is a lock-up state"
    return f"{said}, period from there {'undecided' if reset.period is None else number_text(reset.period)}"
