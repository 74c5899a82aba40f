"""The scan chains and the seeds on the terminal."""

from auditor.array.scan_array import ArrayFacts, Loads, Relations, ScanArray, SeedPair, Seeds, Twins, WithoutShifter
from auditor.notation import state_hex
from auditor.plan import Plan
from auditor.report.facts import AuditFacts
from auditor.report.page import EMPTY, Column, Page, Row
from auditor.report.wording import decimal, number_text, plural

_MOST_SEEDS, _MOST_LENGTHS = 40, 6
_SOURCES = {"length": "stated", "file": "from the file of the chains", "netlist": "traced in the netlist"}


def say_array(page: Page, facts: AuditFacts) -> None:
    """Add what the generator does to the scan chains, with and without its phase shifter, and the seeds."""
    array, machine = facts.array, facts.extraction.machine
    if array is None or machine is None:
        return
    if array.scan:
        page.heading("Scan chains")
        page.entry("chains", _chains_text(array.scan))
        if array.twins:
            _say_twins(page, array.twins)
        for relations in (array.three, array.four):
            if relations:
                _say_relations(page, relations, array.scan)
        if array.loads and facts.plan.patterns:
            page.entry("patterns", _loads_text(array.loads, facts.plan.patterns.count))
            if array.loads.cycles:
                page.entry("cycles", _cycles_text(array.loads))
        if array.bare:
            _say_without(page, array, array.bare)
    if array.seeds:
        _say_seeds(page, array.seeds, machine.size, facts.plan)


def _chains_text(scan: ScanArray) -> str:
    lengths = [chain.length for chain in scan.chains]
    size = f"of {min(lengths)}" if min(lengths) == max(lengths) else f"of {min(lengths)} to {max(lengths)}"
    return f"{len(lengths)} {size} scan cells, {scan.size} in all, {_SOURCES[scan.known_from]}"


def _say_twins(page: Page, twins: Twins) -> None:
    if twins.pairs:
        chains = plural(twins.chain_pairs, "pair") + " of chains"
        page.entry("twins", f"{decimal(twins.pairs)} in {chains} in every pattern")
    else:
        page.entry("twins", "no two chains hold a common bit")
    if twins.repeats:
        page.entry("", f"{decimal(twins.repeats)} inside {plural(twins.repeating, 'chain')}")
    if twins.window:
        across = f"{decimal(twins.across)} in {plural(twins.across_chains, 'pair')} of chains"
        page.entry("", f"{across} between patterns up to {twins.window} apart")


def _say_relations(page: Page, relations: Relations, scan: ScanArray) -> None:
    size = {3: "three", 4: "four"}[relations.size]
    count = decimal(relations.places or 0)
    shifts = ""
    if relations.places and relations.relations is not None:
        shifts = (
            f", {plural(relations.relations, 'relation')} with {'its' if relations.relations == 1 else 'their'} shifts"
        )
    expected = f"random rows would have {relations.expected:.3g}"
    page.entry(f"sums of {size}", f"{_sets(count)} of constant sum{shifts}; {expected}")
    if relations.examples:
        most = relations.examples[0]
        cells = (f"{scan.chains[c].channel} cell {scan.chains[c].name_of(j)}" for c, j in most.cells)
        page.entry("", f"{' + '.join(cells)} = {most.constant}, and {plural(most.places - 1, 'shift')} of it")


def _sets(count: str) -> str:
    """Return "1 set" or "12 sets"."""
    return f"{count} set{'s' * (count != '1')}"


def _loads_text(loads: Loads, planned: int) -> str:
    if loads.distinct is None and loads.beyond:
        return f"{decimal(planned)} planned; the period is longer than the test"
    if loads.distinct is None:
        return f"{decimal(planned)} planned; how many can differ is undecided"
    if loads.counted is not None:
        return f"{decimal(planned)} planned; {decimal(loads.counted)} differ from {loads.start}, counted one by one"
    most = "" if loads.exact else "at most "
    return f"{decimal(planned)} planned; {most}{number_text(loads.distinct)} differ from {loads.start}"


def _cycles_text(loads: Loads) -> str:
    """Return how many cycles of each length there are, the shortest few and the longest."""
    told = [f"{decimal(count)} of length {decimal(length)}" for length, count in loads.cycles]
    if len(told) > _MOST_LENGTHS:
        told[_MOST_LENGTHS - 1 : -1] = [f"{len(told) - _MOST_LENGTHS} lengths more"]
    return ", ".join(told)


def _say_without(page: Page, array: ArrayFacts, bare: WithoutShifter) -> None:
    """Put the phase shifter's figures beside those of the same register without it."""
    page.say(f"As it is, and with the chains fed straight from {plural(bare.elements, 'flip-flop')} in turn:")
    rows = [Row(("twins between chains", _pairs(array.twins), _pairs(bare.twins)))]
    rows.append(Row(("smallest separation within the chains", _nearest(array.twins), _nearest(bare.twins))))
    if array.three or bare.three:
        rows.append(Row(("sets of three of constant sum", _places(array.three), _places(bare.three))))
    rows.append(Row(("two-input XORs", str(bare.xors), "0")))
    if bare.area is not None and bare.register_area:
        share = f"{bare.area:.2f} ({100 * bare.area / bare.register_area:.0f} % of the register)"
        rows.append(Row(("area of the network", share, "0")))
    page.table([Column(""), Column("as it is", True), Column("straight", True)], rows)


def _pairs(twins: Twins | None) -> str:
    return decimal(twins.pairs) if twins else EMPTY


def _nearest(twins: Twins | None) -> str:
    if twins is None:
        return EMPTY
    return "none" if twins.nearest is None else decimal(twins.nearest)


def _places(relations: Relations | None) -> str:
    return EMPTY if relations is None or relations.places is None else decimal(relations.places)


def _say_seeds(page: Page, seeds: Seeds, elements: int, plan: Plan) -> None:
    page.heading("Seeds")
    nearest: dict[int, tuple[str, SeedPair]] = {}
    for pair in seeds.pairs:
        for own, other in (pair.seeds, pair.seeds[::-1]):
            nearest.setdefault(own, (seeds.runs[other].name, pair))
    columns = [Column("seed"), Column("state"), Column("period", True), Column("nearest seed"), Column("cycles", True)]
    if plan.patterns:
        columns += [Column("different patterns", True), Column("patterns twice", True)]
    rows = []
    for number, run in enumerate(seeds.runs[:_MOST_SEEDS]):
        name, met = nearest.get(number) or (EMPTY, None)
        period = EMPTY if run.period is None else decimal(run.period)
        cells = [run.name, state_hex(run.state, elements), period, name, decimal(met.cycles) if met else EMPTY]
        if plan.patterns:
            cells += [EMPTY if run.distinct is None else decimal(run.distinct), decimal(met.repeated) if met else EMPTY]
        rows.append(Row(tuple(cells), "in lock-up" if run.stuck else ""))
    page.table(columns, rows)
    if len(seeds.runs) > _MOST_SEEDS:
        page.say(f"Shown are {_MOST_SEEDS} of {len(seeds.runs)} seeds; the rest in the JSON.")
    if seeds.at_least is not None:
        page.say(f"{plural(seeds.undecided, 'pair')} of seeds are at least {decimal(seeds.at_least)} cycles apart.")
    if seeds.apart:
        page.say(f"{plural(seeds.apart, 'pair')} of seeds run through different cycles and never meet.")
