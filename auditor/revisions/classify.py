"""The class of two machines: under which map, and after which change, the streams of one are those of the other.

Shift, permutation and inversion are told against a state map. It is the one under which most channels agree, unless
the flip-flops of both registers have the same names and these make a map of their own.
"""

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field, replace
from typing import NamedTuple

from auditor.gf2.effort import Effort
from auditor.notation import Vector
from auditor.revisions.align import Alignment, RowPair, agreeing, align, align_registers
from auditor.revisions.comparison import ChannelStatus
from auditor.revisions.decimation import Decimation, find_decimation
from auditor.revisions.permutation import find_permutation
from auditor.revisions.relations import Relations
from auditor.revisions.shifts import Shift, nearest, shifts
from auditor.revisions.steady import Steady

Pair = tuple[int, int]  # old channel, new channel


class Lead(NamedTuple):
    """A lead that an audit proved: y(t) = y_ref(t + cycles) + inverted, y_ref the reference of the class ``group``."""

    group: int
    cycles: int
    inverted: bool
    modulus: int


@dataclass(frozen=True, slots=True)
class Relation:
    """What became of one pair of channels; ``carries`` is the old channel whose stream the new one now carries."""

    status: ChannelStatus
    shift: int | None = None
    inverted: bool | None = None
    carries: int | None = None


@dataclass(frozen=True, slots=True)
class Classified:
    """The class of the pairs.

    ``relations``  the state map by which the channels were told, where there is one
    ``storage``    the map that flip-flops of one name make, where they make one: it is another one where all channels
                   are shifted
    """

    pairs: tuple[Pair, ...]
    found: tuple[Relation, ...]
    relations: Relations | None
    decimation: Decimation | None = None
    storage: Relations | None = None

    @property
    def parts(self) -> tuple[str, ...]:
        """The class in words but for the encoding; empty where all channels are the same."""
        statuses = {relation.status for relation in self.found}
        inverted = any(relation.inverted for relation in self.found)
        if self.decimation:
            names: list[str] = [self.decimation.name]
        elif {"different", "undecided"} & statuses:
            # That no map makes all agree is proved, even where it is open whether some channel is a shift.
            return ("different",)
        elif len({relation.shift for relation in self.found}) > 1:
            return ("different",)
        else:
            names = ["shifted"] if self.found and self.found[0].shift else []
            names += ["permuted"] if "permuted" in statuses else []
        return (*names, "inverted") if inverted else tuple(names)

    @property
    def shift(self) -> int | None:
        """The one shift of all channels, None where they are not shifted by one."""
        return self.found[0].shift if "shifted" in self.parts else None


@dataclass(slots=True)
class Question:
    """What is asked: the steady parts, the channels paired so far, and what names and audits offer.

    ``names``   elements of one name in both registers       ``least``  how many of them must speak for a map
    ``leads``   what both audits proved of the channels that have a lead
    """

    old: Steady
    new: Steady
    pairs: tuple[Pair, ...]
    names: Sequence[Pair]
    least: int
    leads: tuple[Mapping[int, Lead], Mapping[int, Lead]] = field(default=({}, {}))
    effort: Effort = field(default_factory=Effort)

    def rows(self) -> list[RowPair]:
        """Return the rows of the pairs."""
        return [self.rows_at(place) for place in range(len(self.pairs))]

    def rows_at(self, place: int) -> RowPair:
        """Return the rows of one pair."""
        i, j = self.pairs[place]
        return self.old.rows[i], self.new.rows[j]


def classify(question: Question) -> Classified:
    """Find the map and the class of all pairs."""
    rows = question.rows()
    best = align(question.old.step, question.new.step, rows)
    named = align_registers(question.old, question.new, question.names, question.least)
    if named:
        by_names = agreeing(named, rows)
        whole = len(best.inverted) == len(rows)
        if by_names.size >= best.size or (whole and _one_shift(question, named)):
            best = by_names
    turn = 0
    if 2 * len(best.inverted) <= len(rows):
        permuted = find_permutation(question.old, question.new, rows) if _may_be_permuted(question) else None
        if permuted:
            turn = _turn(question, named, permuted)
            best = agreeing(permuted, rows)
        elif not (named and best.inverted) and (
            decimation := find_decimation(question.old.step, question.new.step, rows, question.effort)
        ):
            found = [Relation(decimation.name, None, decimation.inverted.get(place)) for place in range(len(rows))]
            return Classified(question.pairs, tuple(found), None, decimation)
    found = _relations(question, best)
    if turn:
        found = [replace(r, shift=turn, status="permuted" if r.status == "permuted" else "shifted") for r in found]
    return Classified(question.pairs, tuple(found), best.relations, storage=named)


def _one_shift(question: Question, named: Relations) -> bool:
    """Whether the first channel is a shift of its old self under the map of the names."""
    old, new = question.rows()[0]
    base = named.to_new(old)
    found = shifts(question.new.step, [(base, new)], question.effort)[0] if base is not None else None
    return bool(found and found.cycles)


def _may_be_permuted(question: Question) -> bool:
    """Whether the leads leave it open: in one class, a permutation turns the circle of all old leads into the new."""
    leads = [[side.get(pair[k]) for pair in question.pairs] for k, side in enumerate(question.leads)]
    old, new = ([lead for lead in own if lead] for own in leads)
    whole = len(old) == len(new) == len(question.pairs)
    if not whole or len({lead.group for lead in old}) > 1 or len({lead[0::3] for lead in new}) > 1:
        return True
    modulus, targets = new[0].modulus, {lead.cycles for lead in new}
    apart = [lead.cycles - old[0].cycles for lead in old]
    return any(all((first + d) % modulus in targets for d in apart) for first in targets)


def _turn(question: Question, named: Relations | None, permuted: Relations) -> int:
    """Return by how much the map of the channels is ahead of that of the names; 0 where the names make none."""
    row = next(old for old, _ in question.rows() if old > 1)
    if named is None or (base := named.to_new(row)) is None or (image := permuted.to_new(row)) is None:
        return 0
    found = shifts(question.new.step, [(base, image)], question.effort)[0]
    return found.cycles or 0 if found else 0


def _relations(question: Question, best: Alignment) -> list[Relation]:
    """Return what became of every pair under the best map."""
    relations, rows = best.relations, question.rows()
    found: dict[int, Relation] = {
        place: Relation("inverted" if inverted else "same", 0, inverted) for place, inverted in best.inverted.items()
    }
    carried = _carried(question, relations, [place for place in range(len(rows)) if place not in found])
    open_places, pairs = list[int](), list[tuple[Vector, Vector]]()
    for place, (old, new) in enumerate(rows):
        if place in found:
            continue
        base = relations.to_new(old)
        if place in carried:
            found[place] = Relation("permuted", 0, *carried[place])
        elif base is None:
            found[place] = Relation("different")
        elif by_leads := _by_leads(question, best, place):
            found[place] = _shifted(by_leads)
        else:
            open_places.append(place)
            pairs.append((base, new))
    for place, shift in zip(open_places, shifts(question.new.step, pairs, question.effort), strict=True):
        found[place] = _shifted(shift)
    return [found[place] for place in range(len(rows))]


def _shifted(shift: Shift | None) -> Relation:
    if shift is None:
        return Relation("different")
    return Relation("undecided" if shift.cycles is None else "shifted", shift.cycles, shift.inverted)


def _carried(question: Question, relations: Relations, places: Sequence[int]) -> dict[int, tuple[bool, int]]:
    """Return (inverted, old channel carried) of channels that only changed places among each other, else nothing."""
    images: dict[Vector, int] = {}
    for place in places:
        image = relations.to_new(question.rows_at(place)[0])
        if image is not None:
            images.setdefault(image, question.pairs[place][0])
    found = {}
    for place in places:
        new = question.rows_at(place)[1]
        if new in images or new ^ 1 in images:
            found[place] = new not in images, images[new if new in images else new ^ 1]
    carried = {channel for _, channel in found.values()}
    # A channel that now doubles another one has not changed places with it.
    return found if carried == {question.pairs[place][0] for place in found} else {}


def _by_leads(question: Question, best: Alignment, place: int) -> Shift | None:
    """Return the shift that the leads of both audits give, by way of a channel of the same classes that agrees.

    All of it is proved: both leads by their audits, and that channel by the map.
    """
    (i, j), (old, new) = question.pairs[place], question.leads
    if i not in old or j not in new:
        return None
    for other, inverted in best.inverted.items():
        a, b = question.pairs[other]
        if a in old and b in new and old[a].group == old[i].group and new[b].group == new[j].group:
            cycles = (new[j].cycles - new[b].cycles) - (old[i].cycles - old[a].cycles)
            bits = (new[j].inverted, new[b].inverted, old[i].inverted, old[a].inverted, inverted)
            return Shift(nearest(cycles % new[j].modulus, new[j].modulus), sum(bits) % 2 == 1)
    return None
