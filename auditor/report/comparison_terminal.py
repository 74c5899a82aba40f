"""A comparison on the terminal: what is the same is counted, what changed is listed."""

from collections import Counter
from collections.abc import Sequence

from rich.console import Console

from auditor.notation import state_hex
from auditor.report.compared import Compared, Comparisons
from auditor.report.facts import AuditFacts
from auditor.report.page import EMPTY, Column, Page, Row
from auditor.report.sentences import bounded
from auditor.report.tables import MOST_ROWS
from auditor.report.wording import decimal, listing, plural
from auditor.revisions.comparison import ChannelChange, Comparison, FlipFlopChange, FromReset
from auditor.risks.finding import Finding

OUTCOME_STYLE = {"same": "bold green", "differs": "bold red", "undecided": "bold yellow"}
_MEANING = {
    "identical": "the same machine up to names",
    "re-encoded": "every stream of one is a stream of the other; only the states are encoded differently",
    "shifted": "all channels carry what they did, by one number of cycles earlier or later",
    "permuted": "the channels carry the old streams in another order",
    "inverted": "some channels carry the complement of what they did",
    "reversed": "the channels carry the old streams backwards",
    "decimated": "the channels carry every d-th bit of the old streams",
    "different": "the machines do not do the same under any one change that has a name",
    "undecided": "whether the streams agree is not decided",
}
_MOST_NAMES = 8
_CAUTION = (
    "The modes, clocks and libraries of both audits are taken as stated; the comparison is evidence and no approval."
)


def print_comparisons(comparisons: Comparisons, console: Console) -> None:
    """Print the comparisons, one section a mode."""
    page = Page(console)
    for number, (name, compared) in enumerate(comparisons.by_mode.items()):
        if name:
            if number:
                page.say("")
            page.say(f"Mode {name}", margin=0, style="bold")
        _say_comparison(page, compared)
    if comparisons.only:
        page.heading("Modes of one plan only, not compared")
        page.say(", ".join(comparisons.only))
    page.heading("Cautions")
    page.say(_CAUTION, first="- ")
    page.show()


def _say_comparison(page: Page, compared: Compared) -> None:
    found = compared.comparison
    page.say(f"Outcome {found.outcome}: {found.name}", margin=0, style=OUTCOME_STYLE[found.outcome])
    _say_class(page, compared)
    _say_causes(page, found)
    _say_channels(page, found)
    _say_findings(page, found)
    _say_structure(page, found)
    _say_flip_flops(page, found)
    if found.remarks:
        page.heading("Remarks")
        for remark in found.remarks:
            page.say(remark, first="- ")


def _say_class(page: Page, compared: Compared) -> None:
    found = compared.comparison
    for side, facts in (("old", compared.old), ("new", compared.new)):
        page.entry(side, f"{facts.cone.netlist.top}, {_sources(facts)}; audit: {facts.verdict}")
    page.entry("class", f"{found.name}: {'; '.join(_MEANING[part] for part in found.parts)}{_share(found)}")
    if found.holds_from is not None:
        whole = "from cycle 0, for every state" if not found.holds_from else f"from cycle {found.holds_from} on"
        page.entry("holds", whole)
    if found.shift is not None:
        page.entry("shift", f"{_shift(found.shift)} cycles: new(t) = old(t {_shift(found.shift)})")
    if found.factor is not None:
        spread = "" if found.one_map else ", each channel with a shift of its own"
        page.entry("factor", f"{found.factor}: new(t) = old({found.factor} t){spread}")
    page.entry("from reset", _reset_text(found.reset))
    if witness := found.witness:
        states = [_hex(f, s) for f, s in ((compared.old, witness.old_state), (compared.new, witness.new_state))]
        names = f"{witness.old_channel} and {witness.new_channel}"
        channel = witness.new_channel if witness.old_channel == witness.new_channel else names
        text = f"from OLD {states[0]} and NEW {states[1]} ({witness.start}) {channel} differs in cycle {witness.cycle}"
        page.entry("witness", f"{text}; confirmed on the gates of both")


def _share(found: Comparison) -> str:
    """Return how many channels still agree where not all do."""
    same = sum(change.status == "same" for change in found.channels)
    return (
        f"; {same} of {plural(len(found.channels), 'channel')} carry the same stream"
        if "different" in found.parts
        else ""
    )


def _sources(facts: AuditFacts) -> str:
    return ", ".join(source.path for source in facts.inputs if source.role == "netlist")


def _hex(facts: AuditFacts, state: int) -> str:
    machine = facts.extraction.machine
    return state_hex(state, len(machine.storage if machine else facts.cone.elements))


def _reset_text(reset: FromReset) -> str:
    if reset.agree is None:
        return f"not compared: {reset.because}"
    since = f" from cycle {reset.known_from} on, where reset has reached every channel" if reset.known_from else ""
    if reset.agree:
        return f"every channel carries the same, cycle by cycle{since}"
    if reset.agree_from is not None:
        return f"the streams differ at first and agree from cycle {reset.agree_from} on"
    if reset.shift is None:
        return "the streams differ, and no shift is known that makes them agree"
    if reset.shift == 0:
        return "the streams differ, but both registers run in step: only what the channels make of them differs"
    return f"the streams differ: new(t) = old(t {_shift(reset.shift)}) but for channels that changed"


def _shift(cycles: int) -> str:
    return f"- {decimal(-cycles)}" if cycles < 0 else f"+ {decimal(cycles)}"


def _say_causes(page: Page, found: Comparison) -> None:
    """List the gates whose function changed although what they read did not."""
    if not found.changed_nets:
        return
    page.heading("Where the change stands: drivers that changed while all they read kept its function")
    columns = [Column("net"), Column("instance"), Column("cell"), Column("moves"), Column("place")]
    rows = []
    for net in found.changed_nets[:MOST_ROWS]:
        moves = [f"channel {bounded(net.feeds, _MOST_NAMES)}"] if net.feeds else []
        moves += [f"row of A of {bounded(net.rows, _MOST_NAMES)}"] if net.rows else []
        cells = (net.net, net.instance or "(the connection)", net.cell or EMPTY, "; ".join(moves), str(net.place))
        rows.append(Row(cells))
    page.table(columns, rows)
    _say_more(page, len(found.changed_nets), "driver")


def _say_channels(page: Page, found: Comparison) -> None:
    page.heading("Channels")
    same = [change for change in found.channels if change.status == "same"]
    renamed = sum(change.old != change.new for change in same)
    text = (
        f"{plural(len(same), 'channel')} carry the same stream"
        if len(same) != 1
        else "1 channel carries the same stream"
    )
    page.say(f"{text}, {renamed} of them under another name." if renamed else f"{text}.")
    changed = [change for change in found.channels if change.status != "same"]
    if not changed:
        return
    columns = [Column("channel"), Column("status"), Column("shift", True), Column("separation old", True),
               Column("separation new", True), Column("taps lost"), Column("taps gained")]  # fmt: skip
    page.table(columns, [_channel_row(change) for change in changed[:MOST_ROWS]])
    _say_more(page, len(changed), "changed channel")


def _channel_row(change: ChannelChange) -> Row:
    name = change.new or change.old or ""
    if change.old and change.new and change.old != change.new:
        name = f"{change.old} -> {change.new}"
    status: str = change.status
    if change.inverted and status != "inverted":
        status += ", inverted"
    if change.carries:
        status += f": carries old {change.carries}"
    apart = [decimal(f.separation) if f and f.separation is not None else EMPTY for f in (change.before, change.after)]
    before, after = (facts.taps if facts else () for facts in (change.before, change.after))
    taps = (_taps([tap for tap in before if tap not in after]), _taps([tap for tap in after if tap not in before]))
    shift = _shift(change.shift) if change.shift else EMPTY
    return Row((name, status, shift, *apart, *taps))


def _taps(taps: Sequence[str]) -> str:
    more = f" and {len(taps) - _MOST_NAMES} more" if len(taps) > _MOST_NAMES else ""
    return "  ".join(taps[:_MOST_NAMES]) + more or EMPTY


def _say_findings(page: Page, found: Comparison) -> None:
    page.heading("Findings")
    groups = (("gained", found.findings.gained), ("lost", found.findings.lost),
              ("worse", tuple(after for _, after in found.findings.worse)))  # fmt: skip
    if not any(findings for _, findings in groups):
        page.say("None was gained, lost or got worse.")
    for name, findings in groups:
        for finding in findings[:MOST_ROWS]:
            page.say(f"{finding.level} {finding.slug}: {bounded(finding.where, _MOST_NAMES)}{_figures(finding)}",
                     first=f"{name:<8}")  # fmt: skip
        if len(findings) > MOST_ROWS:
            page.say(f"{len(findings) - MOST_ROWS} more {name} in the JSON.")


def _figures(finding: Finding) -> str:
    told = [f"{name.replace('_', ' ')} {value}" for name, value in finding.figures.items() if value is not None]
    return f" ({'; '.join(told)})" if told else ""


def _say_structure(page: Page, found: Comparison) -> None:
    """Compare sizes; of the cells only those whose number changed."""
    before, after = found.before, found.after
    page.heading("Structure")
    rows = [
        ("smallest separation", _or_dash(before.smallest_separation), _or_dash(after.smallest_separation)),
        ("area", _area(before.area), _area(after.area)),
        ("XOR inputs", str(before.xor_inputs), str(after.xor_inputs)),
        ("XOR depth", str(before.xor_depth), str(after.xor_depth)),
    ]
    counts = Counter(after.cells)
    counts.subtract(before.cells)
    moved = [cell for cell, difference in sorted(counts.items()) if difference]
    rows += [
        (f"cells {cell}", str(before.cells.get(cell, 0)), str(after.cells.get(cell, 0))) for cell in moved[:MOST_ROWS]
    ]
    page.table([Column(""), Column("old", True), Column("new", True)], [Row(row) for row in rows])
    _say_more(page, len(moved), "changed cell")


def _or_dash(number: int | None) -> str:
    return EMPTY if number is None else decimal(number)


def _area(area: float | None) -> str:
    return EMPTY if area is None else f"{area:.2f}"


def _say_flip_flops(page: Page, found: Comparison) -> None:
    page.heading("Flip-flops")
    by = Counter(change.matched_by for change in found.flip_flops)
    told = [f"{by[name]} matched by {name}" for name in ("behaviour", "name") if by[name]]
    gone = sum(change.new is None for change in found.flip_flops)
    fresh = sum(change.old is None for change in found.flip_flops)
    told += [f"{count} only in {side}" for count, side in ((gone, "OLD"), (fresh, "NEW")) if count]
    inverted = sum(change.inverted for change in found.flip_flops)
    told += [f"{inverted} of them stored inverted"] if inverted else []
    page.say(listing(told) + "." if told else "None.")
    changed = [
        change for change in found.flip_flops if change.before and change.after and change.before != change.after
    ]
    columns = [
        Column("element"),
        Column("cell old"),
        Column("cell new"),
        Column("reset old", True),
        Column("reset new", True),
        Column("fan-out old"),
        Column("fan-out new"),
    ]
    if changed:
        page.say("Fan-out is direct, leaf, XOR.")
        page.table(columns, [_flip_flop_row(change) for change in changed[:MOST_ROWS]])
    _say_more(page, len(changed), "changed flip-flop")


def _flip_flop_row(change: FlipFlopChange) -> Row:
    name = change.new or ""
    if change.old and change.old != change.new:
        name = f"{change.old} -> {change.new}"
    sides = [facts for facts in (change.before, change.after) if facts]
    loads = [f"{f.direct_fan_out}, {f.fan_out}, {_or_dash(f.xor_fan_out)}" for f in sides]
    resets = [_or_dash(facts.reset) for facts in sides]
    return Row((name, *(facts.cell for facts in sides), *resets, *loads))


def _say_more(page: Page, total: int, noun: str) -> None:
    if total > MOST_ROWS:
        page.say(f"Shown are {MOST_ROWS} of {total}; {plural(total - MOST_ROWS, f'more {noun}')} in the JSON.")
