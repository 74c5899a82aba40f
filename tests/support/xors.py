"""XOR in many shapes: cells, NANDs, compound gates, multiplexers, sums of products; and trees of them."""

from collections.abc import Callable
from typing import NamedTuple

from tests.support.sheet import Part, Sheet


class Signal(NamedTuple):
    """A net that carries a value or (``inverted``) its complement."""

    net: str
    inverted: bool = False


class Sum(NamedTuple):
    """The root of a tree over ``leaves`` operands, with at most ``depth`` XOR nodes on a path."""

    signal: Signal
    leaves: int
    depth: int


def xor_gate(sheet: Sheet, part: Part, a: str, b: str) -> Signal:
    return Signal(sheet.gate("xor", part, a, b))


def xnor_gate(sheet: Sheet, part: Part, a: str, b: str) -> Signal:
    return Signal(sheet.gate("xnor", part, a, b), True)


def four_nands(sheet: Sheet, part: Part, a: str, b: str) -> Signal:
    middle = sheet.gate("nand", part, a, b)
    left, right = sheet.gate("nand", part, a, middle), sheet.gate("nand", part, middle, b)
    return Signal(sheet.gate("nand", part, left, right))


def four_nors(sheet: Sheet, part: Part, a: str, b: str) -> Signal:
    middle = sheet.gate("nor", part, a, b)
    left, right = sheet.gate("nor", part, a, middle), sheet.gate("nor", part, middle, b)
    return Signal(sheet.gate("nor", part, left, right), True)


def three_nands_two_inverters(sheet: Sheet, part: Part, a: str, b: str) -> Signal:
    left = sheet.gate("nand", part, a, sheet.gate("inv", part, b))
    right = sheet.gate("nand", part, sheet.gate("inv", part, a), b)
    return Signal(sheet.gate("nand", part, left, right))


def and_or(sheet: Sheet, part: Part, a: str, b: str) -> Signal:
    both = sheet.gate("and", part, a, b)
    return Signal(sheet.gate("or", part, both, sheet.gate("nor", part, a, b)), True)


def compound(cell: str, sheet: Sheet, part: Part, **pins: str) -> str:
    output = sheet.net()
    sheet.cell(cell, part, **pins, Y=output)
    return output


def and_or_invert(sheet: Sheet, part: Part, a: str, b: str) -> Signal:
    neither = sheet.gate("nor", part, a, b)
    return Signal(compound("aoi21", sheet, part, A=a, B=b, C=neither))


def or_and_invert(sheet: Sheet, part: Part, a: str, b: str) -> Signal:
    not_both = sheet.gate("nand", part, a, b)
    return Signal(compound("oai21", sheet, part, A=a, B=b, C=not_both), True)


def two_ands_invert(sheet: Sheet, part: Part, a: str, b: str) -> Signal:
    not_a, not_b = sheet.gate("inv", part, a), sheet.gate("inv", part, b)
    return Signal(compound("aoi22", sheet, part, A=a, B=b, C=not_a, D=not_b))


def multiplexer(sheet: Sheet, part: Part, a: str, b: str) -> Signal:
    return Signal(compound("mux2", sheet, part, A=a, B=sheet.gate("inv", part, a), S=b))


PAIRS: dict[str, Callable[[Sheet, Part, str, str], Signal]] = {
    form.__name__: form
    for form in (
        xor_gate,
        xnor_gate,
        four_nands,
        four_nors,
        three_nands_two_inverters,
        and_or,
        and_or_invert,
        or_and_invert,
        two_ands_invert,
        multiplexer,
    )
}
TRIPLES = ("sum_of_products", "three_inputs")
FORMS = (*PAIRS, *TRIPLES)


def sum_of_products(sheet: Sheet, part: Part, nets: list[str]) -> Signal:
    """Return a three-input XOR in which no net between is affine but the inverted inputs."""
    low = [sheet.gate("inv", part, net) for net in nets]
    terms = [(nets[0], low[1], low[2]), (low[0], nets[1], low[2]), (low[0], low[1], nets[2]), tuple(nets)]
    minterms = [sheet.gate("nand", part, *term) for term in terms]
    return Signal(sheet.gate("nand", part, *minterms))


def add(sheet: Sheet, part: Part, forms: tuple[str, ...], operands: list[Signal]) -> Sum:
    """Return a tree of random shape over the operands, built from the given forms."""
    sums = [Sum(operand, 1, 0) for operand in operands]
    pair_forms = [form for form in forms if form in PAIRS] or ["xor_gate"]
    triple_forms = [form for form in forms if form in TRIPLES]
    while len(sums) > 1:
        sheet.rng.shuffle(sums)
        triple = triple_forms and len(sums) > 2 and sheet.rng.random() < 0.6
        taken = [sums.pop() for _ in range(3 if triple else 2)]
        nets = [one.signal.net for one in taken]
        if not triple:
            result = PAIRS[sheet.rng.choice(pair_forms)](sheet, part, *nets)
        elif sheet.rng.choice(triple_forms) == "sum_of_products":
            result = sum_of_products(sheet, part, nets)
        else:
            result = Signal(sheet.gate("xor", part, *nets))
        inverted = result.inverted ^ (sum(one.signal.inverted for one in taken) % 2 == 1)
        leaves, depth = sum(one.leaves for one in taken), 1 + max(one.depth for one in taken)
        sums.append(Sum(Signal(result.net, inverted), leaves, depth))
    return sums[0]


def true_net(sheet: Sheet, part: Part, signal: Signal, inverted: bool = False) -> str:
    """Return a net that carries the signal's value, or its complement where ``inverted``."""
    return sheet.gate("inv", part, signal.net) if signal.inverted != inverted else signal.net
