"""LinearMachine -> PhaseTable: the main verb of this room.

The machine is taken as it runs by itself, free inputs at 0.
"""

from dataclasses import dataclass, field, replace

from auditor.errors import fail, near_misses
from auditor.gf2 import matrix
from auditor.gf2.effort import Effort
from auditor.gf2.order import order_of_x
from auditor.machine.machine import LinearMachine, ObservedRow
from auditor.phases.classes import CyclicSpace, alike, choose_reference, cyclic_spaces
from auditor.phases.in_step import in_step, run_from_reset, shared_factors
from auditor.phases.leads import Coordinates, coordinates
from auditor.phases.links import Links, find_links, proved_pairs
from auditor.phases.registers import register_facts
from auditor.phases.separations import closest, nearest_neighbours
from auditor.phases.streams import Orbit, Streams, reached, read_streams
from auditor.phases.table import LeadKind, Phase, PhaseClass, PhaseTable

_TOGGLE = 0b11
# Channels squared times window: the search of so many costs a few seconds and some hundred megabytes.
_SEARCH_LIMIT = 1 << 46
_WITHOUT_BOUNDS = Effort()


def find_phases(
    machine: LinearMachine, reference: str | None = None, window: int = 1 << 20, effort: Effort = _WITHOUT_BOUNDS
) -> PhaseTable:
    """Return the registers, the classes and the phase of every channel.

    ``reference`` names the reference of the class it is in. Where logarithms are out of reach, or a bound of the
    effort ends them, all pairs closer than ``window`` cycles are still found; the table says so if many channels made
    it less. ``InputError`` if no channel has the name; ``InternalError`` if a lead fails its proof.
    """
    affordable = min(window, _SEARCH_LIMIT // max(1, len(machine.observed)) ** 2)
    search = _Search(machine, read_streams(machine), _numbered(machine, reference), affordable, effort)
    for channel, observed in enumerate(machine.observed):
        if reason := _without_lead(search, channel, observed):
            search.phases[channel] = Phase(None, None, "none", None, None, 0, reason)
    for space in cyclic_spaces(search.streams):
        _solve(search, space)
    table = _table(search)
    if not shared_factors(table.registers):
        return table
    start = run_from_reset(machine)
    run = find_phases(start.machine, window=affordable, effort=effort)
    return replace(table, in_step=tuple(in_step(machine, table, start, run)))


@dataclass(slots=True)
class _Search:
    """What is known so far; ``open_classes`` may have members that are not recognised as such."""

    machine: LinearMachine
    streams: Streams
    named: int | None
    window: int
    effort: Effort
    phases: dict[int, Phase] = field(default_factory=dict)
    classes: list[PhaseClass] = field(default_factory=list)
    open_classes: set[int] = field(default_factory=set)
    pairs: list[tuple[int, int, int, bool]] = field(default_factory=list)


def _numbered(machine: LinearMachine, reference: str | None) -> int | None:
    if reference is None:
        return None
    numbers = {observed.name: i for i, observed in enumerate(machine.observed) if not observed.cut_from}
    if reference not in numbers:
        remedy = near_misses(reference, numbers) or "name one of the channels"
        raise fail(f"the reference {reference} is no channel", remedy)
    return numbers[reference]


def _without_lead(search: _Search, channel: int, observed: ObservedRow) -> str:
    """Return why a channel can have no lead: it is refused, or constant in the long run. Empty if it can have one."""
    if observed.row is None:
        return (observed.refusal and observed.refusal.because) or "not affine"
    steady, row = search.streams.steady[channel], search.streams.rows[channel]
    if steady > 1:
        return ""
    seen = reached(search.machine.transition, [observed.row.state])
    if observed.row.inputs or any(search.machine.input_matrix[element] for element in seen):
        return "no register in it, only free inputs"
    start = 0
    while row > 1:
        row, start = matrix.row_times(row, search.streams.step), start + 1
    return f"constant {steady}" + (f" from cycle {start} on" if start else "")


@dataclass(frozen=True, slots=True)
class _Method:
    """How leads of one space are found: by logarithms where they are complete, else by chains of close pairs."""

    found: Coordinates
    links: Links | None
    period: int | None
    half_turn: bool

    def lead(self, member: int, base: int) -> int | None:
        """Return the lead of a member against a base of its class, None while undecided."""
        if member == base:
            return 0
        if self.links is None:
            return self.found.difference(member, base)
        linked = self.links.difference(member, base)
        return None if linked is None or self.period is None else linked % self.period

    def belongs(self, member: int, base: int) -> bool:
        """Whether a member of one signature with the base is proved to be of its class."""
        return self.found.decided or self.links is None or self.links.difference(member, base) is not None


def _solve(search: _Search, space: CyclicSpace) -> None:
    """Split a space into classes and give its members their phases."""
    method = _method(search, space)
    cut = [bool(observed.cut_from) for observed in search.machine.observed]
    for group in alike(space, method.found):
        reference = choose_reference([space.members[place] for place in group], search.named, cut)
        base = space.members.index(reference)
        inside = [place for place in group if method.belongs(place, base)]
        _add_class(search, space, method, inside, base)
        if len(inside) < len(group):
            search.open_classes.add(len(search.classes) - 1)
            for place in set(group) - set(inside):
                search.phases[space.members[place]] = Phase(
                    None, None, "undecided", None, None, 0, method.found.because
                )
    if method.links:
        settled = {place for place, channel in enumerate(space.members) if search.phases[channel].lead is not None}
        search.pairs += proved_pairs(search.streams, space, method.links, settled)


def _method(search: _Search, space: CyclicSpace) -> _Method:
    if len(space.members) == 1:
        found, period = Coordinates(()), order_of_x(space.annihilator)
        complete = True
    else:
        found = coordinates(space.units, space.factors, search.effort)
        period = found.period
        complete = found.decided and found.known_period == period
    half_turn = False
    if period is not None and any(factor == _TOGGLE for factor, _ in space.factors):
        first = space.members[0]
        half_turn = Orbit(search.streams, first).align(first, period).inverted
    return _Method(found, None if complete else find_links(space, search.window), period, half_turn)


def _add_class(search: _Search, space: CyclicSpace, method: _Method, inside: list[int], base: int) -> None:
    index, period = len(search.classes), method.period
    modulus = 2 * period if period and method.half_turn else period
    orbit = Orbit(search.streams, space.members[base]) if len(inside) > 1 else None
    for place in inside:
        channel, lead = space.members[place], method.lead(place, base)
        if lead is None:
            search.open_classes.add(index)
            phase = Phase(index, None, "undecided", method.found.known_period, None, 0, method.found.because)
        elif orbit is None or place == base:
            phase = Phase(index, 0, "exact", modulus, False, 0)
        else:
            phase = _proved(orbit, channel, lead, Phase(index, lead, "exact", modulus, False, 0), method)
        search.phases[channel] = phase
    channels = tuple(space.members[place] for place in inside)
    search.classes.append(PhaseClass(space.members[base], modulus, channels, None, method.half_turn))


def _proved(orbit: Orbit, channel: int, lead: int, phase: Phase, method: _Method) -> Phase:
    """Prove a lead on the rows. Where half a turn complements the stream, take the lead that needs no complement."""
    alignment = orbit.align(channel, lead)
    if alignment.inverted and method.half_turn and method.period:
        lead += method.period
        alignment = orbit.align(channel, lead)
    start = alignment.valid_from
    kind: LeadKind = "from" if start else "exact"
    return replace(phase, lead=lead, kind=kind, inverted=alignment.inverted, valid_from=start)


def _table(search: _Search) -> PhaseTable:
    order = sorted(range(len(search.classes)), key=lambda index: search.classes[index].channels[0])
    renumbered = {old: new for new, old in enumerate(order)}
    phases = [
        phase if phase.group is None else replace(phase, group=renumbered[phase.group])
        for _, phase in sorted(search.phases.items())
    ]
    classes = [search.classes[index] for index in order]
    open_classes = {renumbered[index] for index in search.open_classes}
    pairs = tuple(sorted(search.pairs))
    cut = {channel for channel, observed in enumerate(search.machine.observed) if observed.cut_from}
    neighbours = nearest_neighbours(classes, phases, dict.fromkeys(open_classes, search.window), pairs, cut)
    phases = [replace(phase, nearest=neighbours.get(channel)) for channel, phase in enumerate(phases)]
    between = {channel: near for channel, near in neighbours.items() if channel not in cut}
    classes = [replace(group, minimum=closest(group.channels, between)) for group in classes]
    undecided = any(phase.kind == "undecided" for phase in phases)
    certified = min((near.separation for near in between.values()), default=search.window)
    return PhaseTable(
        registers=register_facts(search.machine),
        classes=tuple(classes),
        phases=tuple(phases),
        certified_at_least=min(certified, search.window) if undecided else None,
        close_pairs=pairs,
        window=search.window if undecided else None,
    )
