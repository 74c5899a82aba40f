"""The audit on the terminal, or as plain text in a pipe."""

from collections import Counter
from collections.abc import Sequence

from rich.console import Console

from auditor.report.array_tables import say_array
from auditor.report.capture_tables import say_capture, say_given_cones
from auditor.report.digest import channel_views
from auditor.report.facts import AuditFacts, Audits
from auditor.report.modes import VERDICT_STYLE, finding_counts, say_modes
from auditor.report.page import Page
from auditor.report.sentences import bounded, name_runs, say_register
from auditor.report.tables import MOST_ROWS, say_channels, say_classes, say_flip_flops, say_separations
from auditor.report.wording import CAUTIONS, plural
from auditor.risks.finding import LEVELS, Finding

_LEVEL_STYLE = {"error": "bold red", "warning": "bold yellow", "note": "bold"}
_MOST_OF_ONE_KIND = 10
_MOST_NAMES = 12


def print_audits(audits: Audits, console: Console) -> None:
    """Print the audits: folded to the width of a terminal; in a pipe on wide lines, without colour.

    Named modes stand side by side first, then each on its own. Names are shown as plain text whatever they hold;
    nothing of a name reaches the terminal as a command.
    """
    page = Page(console)
    if "" not in audits:
        say_modes(page, audits)
    for name, facts in audits.items():
        if name:
            page.heading(f"Mode {name}")
        _say_audit(page, facts)
    _say_list(page, "Cautions", CAUTIONS)
    page.show()


def _say_audit(page: Page, facts: AuditFacts) -> None:
    """Add the page of one mode."""
    _say_verdict(page, facts)
    _say_audited(page, facts)
    _say_machine(page, facts)
    say_separations(page, facts)
    say_classes(page, facts)
    say_channels(page, facts)
    say_flip_flops(page, facts)
    say_array(page, facts)
    say_capture(page, facts)
    say_given_cones(page, facts)
    _say_findings(page, facts.findings)
    _say_list(page, "Assumed, not checked", facts.assumed)
    _say_list(page, "Not decided", facts.undecided)


def _say_verdict(page: Page, facts: AuditFacts) -> None:
    text = f"Verdict {facts.verdict}: {facts.cone.netlist.top}, {finding_counts(facts.findings)}"
    page.say(text, margin=0, style=VERDICT_STYLE[facts.verdict])


def _say_audited(page: Page, facts: AuditFacts) -> None:
    cone = facts.cone
    for role in dict.fromkeys(source.role for source in facts.inputs):
        page.entry(role, ", ".join(source.path for source in facts.inputs if source.role == role))
    page.entry("mode", ", ".join(f"{net}={value}" for net, value in facts.mode.items()) or "none stated")
    page.entry("clock", f"{cone.netlist.net_names[cone.clock]}, {cone.clock_edge} edge")
    sizes = [plural(len(channel_views(facts)), "channel"), plural(len(cone.elements), "storage element")]
    page.entry("found", ", ".join([*sizes, plural(len(cone.feedback), "feedback register")]))
    if facts.replay:
        runs = f"{facts.replay.states} random states, {facts.replay.cycles} cycles each"
        page.entry(
            "replay", f"gates against machine, {runs}: {plural(facts.replay.mismatches, 'mismatch', 'mismatches')}"
        )


def _say_machine(page: Page, facts: AuditFacts) -> None:
    """Say what the registers are, or why there is no machine."""
    machine, table = facts.extraction.machine, facts.phases
    if machine is None or table is None:
        page.heading("No linear machine")
        for number, members in enumerate(facts.cone.feedback, 1):
            names = [facts.cone.elements[k].name for k in members]
            page.entry(f"register {number}", f"{len(names)} elements: {name_runs(names)}")
        for refusal in facts.extraction.refusals[:MOST_ROWS]:
            cure = f"; cure: {refusal.cure}" if refusal.cure else ""
            page.say(f"{refusal.what}: {refusal.because}{cure} (at {refusal.gate}, {refusal.place})", first="- ")
        if len(facts.extraction.refusals) > MOST_ROWS:
            page.say(f"Shown are {MOST_ROWS} of {len(facts.extraction.refusals)} refusals.")
        return
    if machine.free_inputs:
        page.entry(
            "free inputs",
            f"{len(machine.free_inputs)}: {name_runs(machine.free_inputs)}; periods, leads and separations are given "
            "for all of them at 0",
        )
    if machine.transient:
        page.entry("transient", f"{plural(machine.transient, 'cycle')} until every state lies on a cycle")
    for number, register in enumerate(table.registers, 1):
        say_register(page, register, machine, number, len(table.registers))


def _say_findings(page: Page, findings: Sequence[Finding]) -> None:
    """List the findings, errors first; of many of one kind the first ten, and how many more there are."""
    page.heading("Findings")
    if not findings:
        page.say("None.")
    for level in reversed(LEVELS):
        of_level = [finding for finding in findings if finding.level == level]
        seen: Counter[str] = Counter()
        for finding in of_level:
            seen[finding.slug] += 1
            if seen[finding.slug] <= _MOST_OF_ONE_KIND:
                _say_finding(page, finding)
        for slug, count in seen.items():
            if count > _MOST_OF_ONE_KIND:
                page.say(f"{count - _MOST_OF_ONE_KIND} more of {slug} in the JSON.")


def _say_finding(page: Page, finding: Finding) -> None:
    title = ": ".join(filter(None, (finding.slug, bounded(finding.where, _MOST_NAMES))))
    page.say(title, first=f"{finding.level:<8}  ", first_style=_LEVEL_STYLE[finding.level], style="bold")
    page.say(finding.says, margin=12)
    told = [name for name, value in finding.figures.items() if _is_phrase(value) and str(value) in finding.says]
    fresh = [(name, value) for name, value in finding.figures.items() if name not in told]
    figures = "; ".join(f"{name.replace('_', ' ')} {_figure(value)}" for name, value in fresh)
    for aside in (figures, str(finding.place or ""), f"waived: {finding.waived}" if finding.waived else ""):
        if aside:
            page.say(aside, margin=12, style="dim")


def _is_phrase(value: object) -> bool:
    """Say whether a figure is a text of several words, which the sentence may hold already."""
    return isinstance(value, str) and " " in value


def _figure(value: int | float | str | None) -> str:
    if value is None:
        return "-"
    return f"{value:.3f}" if isinstance(value, float) else str(value)


def _say_list(page: Page, title: str, sentences: Sequence[str]) -> None:
    if not sentences:
        return
    page.heading(title)
    for sentence in sentences[:MOST_ROWS]:
        page.say(sentence, first="- ")
    if len(sentences) > MOST_ROWS:
        page.say(f"{len(sentences) - MOST_ROWS} more in the JSON.")
