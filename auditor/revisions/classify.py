"""The class of two machines: under which map, and after which change, the streams of one are those of the other.

Shift, permutation and inversion are told against a state map. It is the one under which most channels agree, unless
the flip-flops of both registers have the same names and these make a map of their own.
"""

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field, replace

from auditor.gf2.effort import Effort
from auditor.notation import Vector
from auditor.revisions.align import Alignment, RowPair, agreeing, align, align_registers
from auditor.revisions.comparison import ChannelStatus
from auditor.revisions.decimation import Decimation, find_decimation
from auditor.revisions.permutation import find_permutation
from auditor.revisions.relations import Relations
from auditor.revisions.shifts import Shift, shifts
from auditor.revisions.steady import Steady

Pair = tuple[int, int]  # old channel, new channel


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
            names = ["reversed" if self.decimation.factor == -1 else "decimated"]
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
    ``leads``   lead of a channel against its class reference, old and new, with the class: channel → (class, lead)
    """

    old: Steady
    new: Steady
    pairs: tuple[Pair, ...]
    names: Sequence[Pair]
    least: int
    leads: tuple[Mapping[int, tuple[int, int]], Mapping[int, tuple[int, int]]] = field(default=({}, {}))
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
        if permuted := find_permutation(question.old, question.new, rows):
            turn = _turn(question, named, permuted)
            best = agreeing(permuted, rows)
        elif not (named and best.inverted) and (
            decimation := find_decimation(question.old.step, question.new.step, rows, question.effort)
        ):
            found = [Relation("different", None, decimation.inverted.get(place)) for place in range(len(rows))]
            return Classified(question.pairs, tuple(found), None, decimation)
    found = _relations(question, best)
    if turn:
        found = [replace(r, shift=turn, status="permuted" if r.status == "permuted" else "shifted") for r in found]
    return Classified(question.pairs, tuple(found), best.relations, storage=named)


def _one_shift(question: Question, named: Relations) -> bool:
    """Whether the first channel is a shift of its old self under the map of the names."""
    old, new = question.rows()[0]
    base = named.to_new(old)
    found = shifts(question.new.step, [(base, new)], (), question.effort)[0] if base is not None else None
    return bool(found and found.cycles)


def _turn(question: Question, named: Relations | None, permuted: Relations) -> int:
    """Return by how much the map of the channels is ahead of that of the names; 0 where the names make none."""
    row = next(old for old, _ in question.rows() if old > 1)
    if named is None or (base := named.to_new(row)) is None or (image := permuted.to_new(row)) is None:
        return 0
    found = shifts(question.new.step, [(base, image)], (), question.effort)[0]
    return found.cycles or 0 if found else 0


def _relations(question: Question, best: Alignment) -> list[Relation]:
    """Return what became of every pair under the best map."""
    relations, rows = best.relations, question.rows()
    found: dict[int, Relation] = {
        place: Relation("inverted" if inverted else "same", 0, inverted) for place, inverted in best.inverted.items()
    }
    carried = _carried(question, relations, [place for place in range(len(rows)) if place not in found])
    open_places, pairs, hints = [], list[tuple[Vector, Vector]](), list[int | None]()
    for place, (old, new) in enumerate(rows):
        if place in found:
            continue
        base = relations.to_new(old)
        if place in carried:
            found[place] = Relation("permuted", 0, *carried[place])
        elif base is None:
            found[place] = Relation("different")
        else:
            open_places.append(place)
            pairs.append((base, new))
            hints.append(_hint(question, best, place))
    for place, shift in zip(open_places, shifts(question.new.step, pairs, hints, question.effort), strict=True):
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


def _hint(question: Question, best: Alignment, place: int) -> int | None:
    """Return the shift that the leads of both audits give, by way of a channel of the same classes that agrees."""
    (i, j), (old, new) = question.pairs[place], question.leads
    if i not in old or j not in new:
        return None
    for other, inverted in best.inverted.items():
        a, b = question.pairs[other]
        if not inverted and a in old and b in new and old[a][0] == old[i][0] and new[b][0] == new[j][0]:
            return (new[j][1] - new[b][1]) - (old[i][1] - old[a][1])
    return None
