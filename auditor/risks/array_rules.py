"""Rules on the scan chains and the planned test: twins, constant sums, repeated patterns, seeds."""

from collections.abc import Iterator
from dataclasses import replace

from auditor.array.scan_array import Place, Relations, ScanArray, TwinChains, Twins
from auditor.notation import SourcePlace, state_hex
from auditor.risks.evidence import Evidence, decimal, register_name
from auditor.risks.finding import Finding
from auditor.risks.levels import finding

_SIZES = {3: "three", 4: "four"}
MOST_SEED_PAIRS = 50  # told one by one, the nearest


def scan_cells_twinned(evidence: Evidence) -> Iterator[Finding]:
    """Report twins between chains and inside one in every pattern, and, as a warning, across patterns."""
    array = evidence.array
    if array is None or array.scan is None or array.twins is None:
        return
    twins, scan = array.twins, array.scan
    if twins.between:
        yield _between(evidence, scan, twins, twins.between)
    if twins.inside:
        yield _inside(evidence, scan, twins, twins.inside)
    if twins.later:
        yield _across(evidence, scan, twins, twins.later)


def _between(evidence: Evidence, scan: ScanArray, twins: Twins, most: TwinChains) -> Finding:
    names = tuple(dict.fromkeys(scan.chains[number].channel for number in twins.twinned))
    return finding(
        "scan-cells-twinned",
        names,
        f"In every pattern {_pairs(twins.pairs)} of scan cells in {_pairs(twins.chain_pairs)} of chains hold the same "
        "bit or opposite ones, so a fault that needs another combination in one of these pairs is never "
        "detected.",
        {
            "pairs": decimal(twins.pairs),
            "pairs_of_chains": twins.chain_pairs,
            "cycles_apart": None if twins.nearest is None else decimal(twins.nearest),
            "example": _twin(scan, most),
        },
        evidence.net_place(names[-1]),
    )


def _inside(evidence: Evidence, scan: ScanArray, twins: Twins, most: TwinChains) -> Finding:
    channel = scan.chains[most.chains[0]].channel
    return finding(
        "scan-cells-twinned",
        (channel,),
        f"In every pattern {_pairs(twins.repeats)} of scan cells of one and the same chain hold the same bit or "
        f"opposite ones, in {twins.repeating} chain{'s' * (twins.repeating != 1)}: the stream comes again before the "
        "chain is full, or two of its scan cells are filled at one time.",
        {"pairs": decimal(twins.repeats), "chains": twins.repeating, "example": _twin(scan, most)},
        evidence.net_place(channel),
    )


def _across(evidence: Evidence, scan: ScanArray, twins: Twins, most: TwinChains) -> Finding:
    names = tuple(dict.fromkeys(scan.chains[number].channel for number in most.chains))
    found = finding(
        "scan-cells-twinned",
        names,
        f"{_pairs(twins.across)} of scan cells hold in one pattern what they hold up to {twins.window} patterns "
        "later, or its complement: those patterns repeat parts of each other, so they detect fewer faults than as "
        "many independent ones.",
        {"pairs": decimal(twins.across), "pairs_of_chains": twins.across_chains, "example": _twin(scan, most)},
        evidence.net_place(names[-1]),
    )
    return replace(found, level="warning")


def _pairs(count: int) -> str:
    return f"{decimal(count)} pair{'s' * (count != 1)}"


def _twin(scan: ScanArray, twin: TwinChains) -> str:
    one, other = twin.example
    later = f", {twin.later} pattern{'s' * (twin.later != 1)} later" if twin.later else ""
    return f"{_cell(scan, one)} = {'NOT ' * twin.complement}{_cell(scan, other)}{later}"


def _cell(scan: ScanArray, place: Place) -> str:
    chain = scan.chains[place.chain]
    return f"chain {chain.channel} cell {chain.name_of(place.cell)}"


def scan_cell_relation(evidence: Evidence) -> Iterator[Finding]:
    """Report sets of three and of four scan cells whose sum never changes."""
    array = evidence.array
    for relations in (array.three, array.four) if array else ():
        if array and array.scan and relations and relations.places:
            yield _relations(evidence, array.scan, relations)


def _relations(evidence: Evidence, scan: ScanArray, relations: Relations) -> Finding:
    size, most = _SIZES[relations.size], relations.examples[0]
    names = tuple(dict.fromkeys(scan.chains[place.chain].channel for place in most.cells))
    count = decimal(relations.places or 0)
    return finding(
        "scan-cell-relation",
        names,
        f"{count} set{'s' * (count != '1')} of {size} scan cells can only be filled with an even number of ones, or "
        "only with an odd one, whatever the state: a fault whose detection needs another combination in one of them "
        f"escapes; as many random rows would have {_rounded(relations.expected)} such sets.",
        {
            "places": count,
            "relations": relations.relations,
            "expected": _rounded(relations.expected),
            "example": f"{' + '.join(_cell(scan, place) for place in most.cells)} = {most.constant}",
        },
        evidence.net_place(names[-1]),
    )


def _rounded(figure: float) -> str:
    return f"{figure:.3g}"


def patterns_repeat(evidence: Evidence) -> Iterator[Finding]:
    """Report a test of more patterns than there are different ones, from reset, from a seed or from any state."""
    array, patterns = evidence.array, evidence.plan.patterns
    if array is None or patterns is None:
        return
    if array.seeds:
        for run in array.seeds.runs:
            if run.distinct is not None and run.distinct < patterns.count:
                start = f"from seed {run.name}"
                yield _repeat(evidence, (run.name,), start, run.period, run.distinct, array.seeds.place)
    elif (loads := array.loads) and loads.different is not None and loads.different < patterns.count:
        names = tuple(name for register in evidence.registers for name in evidence.storage_names(register))
        place = evidence.element_place(evidence.registers[0].elements[0]) if evidence.registers else None
        yield _repeat(evidence, names, f"from {loads.start}", loads.period, loads.different, place)


def _repeat(
    evidence: Evidence, where: tuple[str, ...], start: str, period: int | None, distinct: int, place: SourcePlace | None
) -> Finding:
    patterns = evidence.plan.patterns
    count, clocks = (patterns.count, patterns.clocks_per_pattern) if patterns else (0, 0)
    verb = "differs" if distinct == 1 else "differ"
    return finding(
        "patterns-repeat",
        where,
        f"Of the {decimal(count)} planned patterns only {decimal(distinct)} {verb} {start}: the others load what "
        "patterns before them loaded, and test nothing new.",
        {
            "patterns": decimal(count),
            "distinct": decimal(distinct),
            "period": None if period is None else decimal(period),
            "clocks_per_pattern": decimal(clocks),
        },
        place,
    )


def seed_in_lock_up(evidence: Evidence) -> Iterator[Finding]:
    """Report seeds that a register never leaves."""
    seeds, machine = evidence.array and evidence.array.seeds, evidence.machine
    for run in seeds.runs if seeds and machine else ():
        if machine and run.stuck:
            registers = [register_name(evidence.storage_names(evidence.registers[number])) for number in run.stuck]
            yield finding(
                "seed-in-lock-up",
                (run.name,),
                f"From seed {run.name} the register {' and the register '.join(registers)} never moves, so the chains "
                "that it alone feeds receive constants.",
                {"state": state_hex(run.state, machine.size), "registers": len(run.stuck)},
                seeds.place if seeds else None,
            )


def seeds_overlap(evidence: Evidence) -> Iterator[Finding]:
    """Report pairs of seeds whose tests meet, the nearest first; of a long list the rest is counted in the last."""
    seeds, clocks = evidence.array and evidence.array.seeds, evidence.test_clocks
    if not seeds:
        return
    meeting = [pair for pair in seeds.pairs if pair.overlap or not pair.cycles]
    for number, pair in enumerate(meeting[:MOST_SEED_PAIRS], 1):
        later, earlier = (seeds.runs[k].name for k in pair.seeds)
        apart = f"{decimal(pair.cycles)} cycle{'s' * (pair.cycles != 1)} after" if pair.cycles else "in step with"
        says = f"The run from seed {earlier} reaches that from seed {later}: {later} stands {apart} {earlier}"
        if clocks is not None:
            says += (
                f", so {decimal(pair.overlap)} of the {decimal(clocks)} cycles of one test are those of the other and "
                f"{decimal(pair.repeated)} pattern{'s' * (pair.repeated != 1)} come twice"
            )
        more = len(meeting) - MOST_SEED_PAIRS
        yield finding(
            "seeds-overlap",
            (later, earlier),
            says + (f"; {more} more pairs of seeds overlap." if number == MOST_SEED_PAIRS and more > 0 else "."),
            {
                "cycles": decimal(pair.cycles),
                "overlap": decimal(pair.overlap),
                "repeated_patterns": decimal(pair.repeated),
            },
            seeds.place,
        )
