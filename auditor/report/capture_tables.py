"""The circuit under test on the terminal."""

from collections import Counter

from auditor.array.circuit import CaptureFacts, Circuit, ConeFacts, Scope
from auditor.report.facts import AuditFacts
from auditor.report.page import Page
from auditor.report.wording import decimal, plural

_MOST_OUTSIDE = 5
_SCOPES: dict[Scope, str] = {
    "every-state": "in every state outside lock-up",
    "planned-patterns": "in all planned patterns",
    "only-with-freedom": "unless inputs or sources outside move",
}


def say_capture(page: Page, facts: AuditFacts) -> None:
    """Add what the generator cannot do to the circuit under test, where the plan asks."""
    capture = facts.capture
    if capture is None:
        return
    page.heading("Circuit under test")
    constants = facts.plan.capture or {}
    page.entry("capture", ", ".join(f"{net}={value}" for net, value in constants.items()) or "nothing held")
    _say_size(page, capture.circuit)
    _say_cones(page, capture.cones)
    _say_nets(page, capture, len(facts.plan.seeds))


def say_given_cones(page: Page, facts: AuditFacts) -> None:
    """Add the cones that the reviewer gives, where there are any."""
    if facts.given is not None:
        page.heading("Given cones")
        _say_cones(page, facts.given.cones)


def _say_size(page: Page, circuit: Circuit) -> None:
    sizes = [plural(len(circuit.gates), "gate"), plural(len(circuit.cells), "scan cell")]
    page.entry("found", ", ".join([*sizes, plural(len(circuit.free_inputs), "free input")]))
    if circuit.outside:
        shown = [f"{source.name} ({source.because})" for source in circuit.outside[:_MOST_OUTSIDE]]
        more = len(circuit.outside) - len(shown)
        rest = [f"{more} more in the JSON"] if more else []
        page.entry("outside", f"{len(circuit.outside)}, taken as free: " + ", ".join(shown + rest))


def _say_cones(page: Page, cones: ConeFacts) -> None:
    tests = "two-cycle tests, launched by the last shift" if cones.two_cycles else "single-cycle tests only"
    page.entry("tests", tests)
    short = [cells for cells in cones.sets if cells.short]
    sets = f"{plural(len(cones.cones), 'cone')} with {plural(len(cones.sets), 'different set')} of scan cells"
    if not short:
        page.entry("cones", f"{sets}: every combination occurs in each")
        return
    worst = max(short, key=lambda cells: cells.size - cells.rank)
    page.entry("cones", f"{sets}: {len(short)} short of rank, the worst takes 2^{worst.rank} of 2^{worst.size}")


def _say_nets(page: Page, capture: CaptureFacts, seeds: int) -> None:
    nets = capture.nets
    scopes = Counter(net.scope for net in nets.frozen)
    told = [f"{scopes[scope]} {words}" for scope, words in _SCOPES.items() if scopes[scope]]
    page.entry("nets", f"{plural(nets.examined, 'net')} behind scan cells; frozen: {', '.join(told) or 'none'}")
    if nets.patterns:
        starts = f" from each of {seeds} seeds" if seeds > 1 else ""
        page.entry("simulated", f"{decimal(nets.patterns)} planned patterns{starts}")
    if nets.undecided:
        names = [capture.circuit.wire_name(net) for net in nets.undecided[:_MOST_OUTSIDE]]
        page.entry("undecided", f"{len(nets.undecided)}, such as {', '.join(names)}")
