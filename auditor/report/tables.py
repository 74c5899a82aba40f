"""The tables of the terminal report: separations, classes, channels, flip-flops."""

from collections.abc import Sequence

from auditor.cone.cone import Load
from auditor.machine.machine import AffineRow, LinearMachine, ObservedRow
from auditor.phases.table import Phase, PhaseTable
from auditor.report.digest import (
    ChannelView,
    Pair,
    channel_views,
    closest_pairs,
    cut_views,
    fed_channels,
    heaviest_output,
)
from auditor.report.facts import AuditFacts
from auditor.report.page import EMPTY, Column, Page, Row
from auditor.report.wording import as_power, decimal, plural

MOST_ROWS = 40
_CLOSEST = 5
_CHANNEL_COLUMNS = (
    Column("channel"), Column("class", True), Column("lead", True), Column("from cycle", True), Column("inverted"),
    Column("pipeline stages", True), Column("nearest"), Column("separation", True, joined=True),
    Column("XOR inputs", True), Column("XOR depth", True, joined=True), Column("taps"),
)  # fmt: skip
_CHANNEL_LEGEND = (
    "A lead counts cycles ahead of the class reference. ~ stands before a channel whose stream is the complement. "
    "Taps name elements of a feedback register; (t-k) marks one that is read k cycles before the channel shows it."
)


def say_separations(page: Page, facts: AuditFacts) -> None:
    """Add the closest pairs of channels, measured against the chain length and the limit where they are stated."""
    machine, table = facts.extraction.machine, facts.phases
    if machine is None or table is None:
        return
    page.heading("Smallest separations, in cycles")
    pairs = closest_pairs(facts, _CLOSEST)
    if not pairs:
        page.say("No two channels are known to carry the same stream.")
    else:
        _pair_table(page, facts, machine, pairs)
    if table.certified_at_least is not None:
        page.say(f"Proved for every pair of one class: at least {decimal(table.certified_at_least)}.")
    if facts.plan.chain_length is None and not (facts.array and facts.array.scan):
        page.say("No chain length is stated, so whether chains repeat each other was not asked.")


def _pair_table(page: Page, facts: AuditFacts, machine: LinearMachine, pairs: Sequence[Pair]) -> None:
    chains = ("chain length", facts.plan.chain_length)
    if facts.array and facts.array.scan and chains[1] is None:
        chains = ("longest chain", facts.array.scan.longest)
    bounds = [chains, ("limit", facts.plan.limits.separation)]
    stated = [(name, bound) for name, bound in bounds if bound is not None]
    missed = [(name, bound) for name, bound in stated if pairs[0].cycles < bound]
    columns = [Column("channel"), Column("channel"), Column("separation", True)]
    rows = []
    for pair in pairs:
        second = _mark(machine.observed[pair.second].name, pair.complement)
        short = (f"short by {bound - pair.cycles}" if pair.cycles < bound else "enough" for _, bound in missed)
        rows.append(Row((machine.observed[pair.first].name, second, decimal(pair.cycles), *short)))
    page.table([*columns, *(Column(f"{name} {bound}") for name, bound in missed)], rows)
    kept = [f"the {name} {bound}" for name, bound in stated if pairs[0].cycles >= bound]
    if kept:
        page.say(f"None of them is below {' or '.join(kept)}.")


def _mark(name: str, complement: bool) -> str:
    """Return the name, with a sign in front where the streams are complements."""
    return f"~{name}" if complement else name


def say_classes(page: Page, facts: AuditFacts) -> None:
    """Add the classes: which channels carry the same stream, shifted or complemented."""
    machine, table = facts.extraction.machine, facts.phases
    if machine is None or table is None or not table.classes:
        return
    page.heading("Classes")
    if len(table.classes) > 1:
        page.say("Channels of one class carry the same stream, shifted or complemented; those of two classes never do.")
    columns = [Column("class", True), Column("reference"), Column("channels", True), Column("smallest", True)]
    rows, fed = [], fed_channels(facts)
    for number, group in enumerate(table.classes[:MOST_ROWS]):
        least = EMPTY if group.minimum is None else decimal(group.minimum.cycles)
        modulus = "undecided" if group.modulus is None else as_power(group.modulus) or decimal(group.modulus)
        cells = (
            str(number),
            machine.observed[group.reference].name,
            str(len(fed & set(group.channels))),
            least,
            modulus,
        )
        rows.append(Row(cells))
    page.table([*columns, Column("modulus")], rows)
    _say_rest(page, len(table.classes), "class", "classes")


def say_channels(page: Page, facts: AuditFacts) -> None:
    """Add the channel table; of more than forty, those that come closest to another."""
    views = channel_views(facts)
    page.heading("Channels")
    if facts.extraction.machine is None:
        page.say(f"Nothing can be said about {plural(len(views), 'channel')}: the machine was refused.")
        return
    page.say(_CHANNEL_LEGEND)
    shown = views if len(views) <= MOST_ROWS else sorted(views, key=_closeness)[:MOST_ROWS]
    _channel_table(page, facts, shown)
    _say_rest(page, len(views), "channel", order=", the closest first")
    cuts = cut_views(facts)
    if cuts:
        page.heading("Nets behind the gates that spoil a channel")
        _channel_table(page, facts, cuts[:MOST_ROWS])
        _say_rest(page, len(cuts), "net")


def _closeness(view: ChannelView) -> tuple[bool, int]:
    nearest = view.phase.nearest if view.phase else None
    return (nearest is None, nearest.separation if nearest else 0)


def _channel_table(page: Page, facts: AuditFacts, views: Sequence[ChannelView]) -> None:
    """Add the views; the columns for class and first cycle only where they tell something."""
    machine, table = facts.extraction.machine, facts.phases
    if machine is None or table is None:
        return
    idle = set() if len(table.classes) > 1 else {"class"}
    if not any(view.phase and view.phase.lead is not None and view.phase.valid_from for view in views):
        idle.add("from cycle")
    columns = [column for column in _CHANNEL_COLUMNS if column.heading not in idle]
    rows = []
    for view in views:
        cells = _channel_cells(view, machine, table)
        rows.append(Row(tuple(cells[column.heading] for column in columns), _remark(view, table)))
    page.table(columns, rows)


def _channel_cells(view: ChannelView, machine: LinearMachine, table: PhaseTable) -> dict[str, str]:
    """Return the cells of one channel by the heading of their column."""
    cells = dict.fromkeys((column.heading for column in _CHANNEL_COLUMNS), EMPTY) | {"channel": view.name}
    if (row := view.row) and row.row:
        cells |= {"pipeline stages": str(row.pipeline_stages), "XOR inputs": str(row.xor_inputs)}
        cells |= {"XOR depth": str(row.xor_depth), "taps": _taps(row, row.row, machine)}
    if phase := view.phase:
        cells |= {"class": _dash(phase.group), "lead": _lead(phase)}
        cells |= {"from cycle": _dash(None if phase.lead is None else phase.valid_from)}
        cells |= {"inverted": {True: "yes", False: "no", None: EMPTY}[phase.inverted]}
        if near := phase.nearest:
            cells |= {"nearest": _mark(machine.observed[near.channel].name, near.complement)}
            cells |= {"separation": decimal(near.separation)}
        elif phase.group is not None and len(table.classes[phase.group].channels) == 1:
            cells |= {"separation": "infinite"}
    return cells


def _dash(number: int | None) -> str:
    return EMPTY if number is None else decimal(number)


def _lead(phase: Phase) -> str:
    if phase.lead is None:
        return "undecided" if phase.kind == "undecided" else EMPTY
    part = f" mod {_dash(phase.lead_modulus)}" if phase.kind == "modulo" else ""
    return decimal(phase.lead) + part


def _taps(observed: ObservedRow, row: AffineRow, machine: LinearMachine) -> str:
    """Return the taps with their delays, then the external XOR inputs; a row without any is a constant."""
    words = [machine.storage[tap.element] + (f"(t-{tap.delay})" if tap.delay else "") for tap in observed.taps]
    words += [f"input {name}" for k, name in enumerate(machine.free_inputs) if row.inputs >> k & 1]
    return "  ".join(words) or f"constant {row.constant}"


def _remark(view: ChannelView, table: PhaseTable) -> str:
    """Return why a channel has no taps or no lead, or the channel that a cut net belongs to."""
    parts = []
    if view.refusal:
        parts.append(f"cut at {view.refusal.gate} ({view.refusal.place}): {view.refusal.because}")
    elif view.phase and view.phase.kind == "undecided":
        if view.phase.no_lead_because:
            parts.append(f"lead undecided: {view.phase.no_lead_because}")
        if table.certified_at_least is not None:
            parts.append(f"separation at least {decimal(table.certified_at_least)}")
    elif view.phase and view.phase.no_lead_because:
        parts.append(f"no lead: {view.phase.no_lead_because}")
    if view.row and view.row.cut_from:
        parts.append(f"feeds {view.row.cut_from}")
    return "; ".join(parts)


def say_flip_flops(page: Page, facts: AuditFacts) -> None:
    """Add the load of every storage element; of more than forty, the ones that drive the most."""
    machine, loads = facts.extraction.machine, facts.cone.loads
    page.heading("Flip-flops: fan-out (direct, leaf, XOR) and load of the heaviest output")
    if len(loads) > MOST_ROWS:
        loads = tuple(sorted(loads, key=lambda load: (-_use(load), -sum(load.leaf), load.element))[:MOST_ROWS])
    columns = [Column("element"), Column("cell"), Column("direct", True), Column("leaf", True), Column("XOR", True),
               Column("output"), Column("load fF", True), Column("limit fF", True), Column("used", True)]  # fmt: skip
    rows = []
    for load in loads:
        element = facts.cone.elements[load.element]
        gates = str(machine.xor_fan_out[load.element]) if machine else EMPTY
        figures = (str(sum(load.direct)), str(sum(load.leaf)), gates)
        rows.append(Row((element.name, element.cell, *figures, *_weight(load))))
    page.table(columns, rows)
    _say_rest(page, len(facts.cone.loads), "flip-flop", order=", the most heavily loaded first")


def _use(load: Load) -> float:
    """Return the share of its limit that the heaviest output carries, or 0 where it is not known."""
    pin = heaviest_output(load)
    limit = load.limit_ff[pin] if pin is not None else None
    return (load.capacitance_ff[pin] or 0.0) / limit if pin is not None and limit else 0.0


def _weight(load: Load) -> tuple[str, str, str, str]:
    """Return the heaviest output pin, its load, its limit and the share used."""
    pin = heaviest_output(load)
    if pin is None:
        return (EMPTY, EMPTY, EMPTY, EMPTY)
    limit = load.limit_ff[pin]
    used = f"{100 * _use(load):.0f} %" if limit else EMPTY
    return (load.pins[pin], f"{load.capacitance_ff[pin]:.2f}", f"{limit:.2f}" if limit is not None else EMPTY, used)


def _say_rest(page: Page, total: int, noun: str, nouns: str = "", order: str = "") -> None:
    if total > MOST_ROWS:
        hidden = plural(total - MOST_ROWS, f"more {noun}", f"more {nouns}" if nouns else "")
        page.say(f"Shown are {MOST_ROWS} of {total}{order}; {hidden} in the JSON.")
