"""The scan array and the seeds in the JSON report."""

from typing import Any, TypeAlias

from auditor.array.scan_array import (
    ArrayFacts,
    Chain,
    Loads,
    Place,
    Relations,
    ScanArray,
    SeedPair,
    Seeds,
    TwinChains,
    Twins,
    WithoutShifter,
)
from auditor.notation import state_hex
from auditor.report.wording import decimal

Json: TypeAlias = dict[str, Any]

_MOST_CYCLES = 100  # lengths


def array_part(array: ArrayFacts | None, elements: int) -> Json:
    """Return the entries of the report that speak of chains and seeds; ``elements`` are those of a state."""
    scan = array.scan if array else None
    return {
        "array": _array(array, scan) if array and scan else None,
        "without_shifter": _without(array.bare, scan) if array and scan and array.bare else None,
        "seeds": _seeds(array.seeds, elements) if array and array.seeds else [],
    }


def _array(array: ArrayFacts, scan: ScanArray) -> Json:
    return {
        "known_from": scan.known_from,
        "chains": [_chain(chain) for chain in scan.chains],
        "twins": array.twins and _twins(array.twins, scan),
        "relations": {
            "three": array.three and _relations(array.three, scan),
            "four": array.four and _relations(array.four, scan),
        },
        "distinct_patterns": _decimal(array.loads.different if array.loads else None),
        "distinct_patterns_basis": array.loads and _loads(array.loads),
    }


def _loads(loads: Loads) -> Json:
    shortest = loads.cycles[:_MOST_CYCLES]
    return {
        "period": _decimal(loads.period),
        "start": loads.start,
        "exact": loads.exact,
        "counted": _decimal(loads.counted),
        "beyond_the_test": loads.beyond,
        "cycles": [{"length": decimal(length), "count": decimal(count)} for length, count in shortest],
        "all_cycles_listed": len(shortest) == len(loads.cycles),
    }


def _decimal(number: int | None) -> str | None:
    return None if number is None else decimal(number)


def _significant(figure: float) -> float:
    """Return four digits of a figure, so that its last bits do not show."""
    return float(f"{figure:.4g}")


def _chain(chain: Chain) -> Json:
    cells = [{"name": cell.name, "delay": cell.delay, "inverted": cell.inverted} for cell in chain.cells]
    return {"channel": chain.channel, "length": chain.length, "cells": cells}


def _twins(twins: Twins, scan: ScanArray) -> Json:
    return {
        "count": decimal(twins.pairs),
        "pairs_of_chains": twins.chain_pairs,
        "nearest": _decimal(twins.nearest),
        "inside_one_chain": {"count": decimal(twins.repeats), "chains": twins.repeating},
        "across_patterns": {
            "window": twins.window,
            "count": decimal(twins.across),
            "pairs_of_chains": twins.across_chains,
        },
        "examples": [_twin_chains(twin, scan) for twin in twins.examples],
    }


def _twin_chains(twin: TwinChains, scan: ScanArray) -> Json:
    return {
        "channels": [scan.chains[number].channel for number in twin.chains],
        "distance": decimal(twin.distance),
        "patterns_later": twin.later,
        "pairs": decimal(twin.pairs),
        "cells": [_cell(place, scan) for place in twin.example],
        "complement": twin.complement,
    }


def _cell(place: Place, scan: ScanArray) -> list[str]:
    """Return the channel and the name or number of a scan cell."""
    chain = scan.chains[place.chain]
    return [chain.channel, chain.name_of(place.cell)]


def _relations(relations: Relations, scan: ScanArray) -> Json:
    skewness = relations.skewness
    return {
        "distinct_cells": relations.distinct,
        "relations": relations.relations,
        "places": _decimal(relations.places),
        "of_sum_1": decimal(relations.ones),
        "cell_sets": _decimal(relations.cell_sets),
        "expected": _significant(relations.expected),
        "skewness": None if skewness is None else _significant(skewness),
        "complete": True,
        "examples": [
            {"cells": [_cell(place, scan) for place in one.cells], "sum": one.constant, "places": one.places}
            for one in relations.examples
        ],
    }


def _without(bare: WithoutShifter, scan: ScanArray) -> Json:
    share = bare.area / bare.register_area if bare.area is not None and bare.register_area else None
    return {
        "elements": bare.elements,
        "chains": len(scan.chains),
        "twins": bare.twins and decimal(bare.twins.pairs),
        "nearest": _decimal(bare.twins.nearest if bare.twins else None),
        "three": bare.three and {"places": _decimal(bare.three.places), "expected": _significant(bare.three.expected)},
        "network": {
            "two_input_xors": bare.xors,
            "area": None if bare.area is None else round(bare.area, 3),
            "register_area": None if bare.register_area is None else round(bare.register_area, 3),
            "share_of_register": None if share is None else round(share, 3),
        },
    }


def _seeds(seeds: Seeds, elements: int) -> list[Json]:
    """Return one entry a seed; of the pairs on one cycle each stands at the seed that comes earlier."""
    meeting: dict[int, list[SeedPair]] = {}
    for pair in seeds.pairs:
        meeting.setdefault(pair.seeds[1], []).append(pair)
    return [
        {
            "name": run.name,
            "state": state_hex(run.state, elements),
            "lock_up_registers": list(run.stuck),
            "period": _decimal(run.period),
            "distinct_patterns": _decimal(run.distinct),
            "reaches": [
                {
                    "seed": seeds.runs[pair.seeds[0]].name,
                    "cycles": decimal(pair.cycles),
                    "overlap": decimal(pair.overlap),
                    "repeated_patterns": decimal(pair.repeated),
                }
                for pair in meeting.get(number, [])
            ],
        }
        for number, run in enumerate(seeds.runs)
    ]
