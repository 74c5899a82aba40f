"""Scan cells of two chains that hold the same bit of one stream, whatever the state the generator starts from.

Scan cell j of a chain, counted from 1 at its scan input, holds y(t - j) when t is the cycle after the last shift. With
y_1(t) = y_ref(t + s_1) and y_2 likewise, cell j of chain 1 and cell k of chain 2 agree if and only if

    s_1 - j = s_2 - k  modulo M,   that is   j - k = e  with  e = d = s_1 - s_2  modulo M.

For one e the cells j = max(1, 1 + e) ... min(L_1, L_2 + e) have a partner k = j - e.
"""

from dataclasses import dataclass, replace

from auditor.phases.separations import find_close_pair
from auditor.phases.table import PhaseTable


@dataclass(frozen=True, slots=True)
class Overlap:
    """How many pairs of scan cells agree, and the first: scan cell of chain 1, scan cell of chain 2, from 1 on.

    ``complement``  in the example the cells hold complements rather than equal bits
    """

    pairs: int
    example: tuple[int, int] | None
    complement: bool = False


def shared_cells(difference: int, modulus: int | None, length_1: int, length_2: int) -> Overlap:
    """Count the pairs of scan cells that agree, for two chains of a given lead difference s_1 - s_2.

    The modulus is the period of the streams; None leaves only e = ``difference``. The first pair is the one with
    the least cell of chain 1, then of chain 2.
    """
    step = modulus or length_1 + length_2 + abs(difference)
    least = 1 - length_2
    pairs, examples = 0, []
    for e in range(least + (difference - least) % step, length_1, step):
        count = min(length_1, length_2 + e) - max(0, e)
        if count > 0:
            first = max(0, e) + 1
            pairs += count
            examples.append((first, first - e))
    return Overlap(pairs, min(examples, default=None))


def overlap(table: PhaseTable, i: int, j: int, length_i: int, length_j: int) -> Overlap | None:
    """Count the pairs of scan cells of channels i and j that agree or are complements, whatever the state.

    Channels of two classes have none. Where a lead is undecided the close pairs tell, as long as the chains are not
    longer than their window; the count is then the least possible if the modulus is undecided too. None where
    neither helps, and where a channel is refused or constant.
    """
    one, other = table.phases[i], table.phases[j]
    if "none" in (one.kind, other.kind):
        return None
    if one.group is not None and other.group is not None and one.group != other.group:
        return Overlap(0, None)
    group = None if one.group is None else table.classes[one.group]
    if i == j:
        difference, complement = 0, False
    elif one.lead is not None and other.lead is not None and group:
        difference, complement = one.lead - other.lead, one.inverted != other.inverted
    elif pair := find_close_pair(table, i, j):
        difference, complement = pair[2] if pair[:2] == (i, j) else -pair[2], pair[3]
    else:
        return Overlap(0, None) if table.decides(max(length_i, length_j)) else None
    turn = group.turn if group else None
    found = shared_cells(difference, turn, length_i, length_j)
    if not found.pairs and not turn and abs(difference) < max(length_i, length_j):
        return None  # an unknown modulus could be so short that the pair meets the other way round
    if group and group.half_turn and turn and found.example:
        turns = (difference - found.example[0] + found.example[1]) // turn
        complement = complement != bool(turns % 2)
    return replace(found, complement=complement and found.pairs > 0)
