"""The screen shows the facts at every width, plain in a pipe, whatever the names hold."""

import io
import re
from dataclasses import replace

import pytest
from rich.cells import cell_len
from rich.console import Console

from auditor.phases.table import Factor, ResetFacts
from auditor.report.facts import AuditFacts
from auditor.report.terminal import print_audits
from auditor.report.wording import CAUTIONS
from auditor.risks.finding import Finding
from tests.support.facts import large_facts, refused_facts, small_facts

STYLE = re.compile(r"\x1b\[[0-9;]*m")
FACTS = {"small": small_facts, "large": large_facts, "refused": refused_facts}
HOSTILE = "\x1b]0;owned\x07[red]\u202e:smile:\n\u0301漢" + "x" * 90


def _screen(facts: AuditFacts, width: int) -> str:
    console = Console(file=io.StringIO(), width=width, force_terminal=True, color_system="standard")
    print_audits({"": facts}, console)
    return console.file.getvalue()


def _piped(facts: AuditFacts) -> str:
    console = Console(file=io.StringIO(), width=80)
    print_audits({"": facts}, console)
    return console.file.getvalue()


def _words(text: str) -> str:
    """Return the text with every run of blanks and line ends as one blank."""
    return " ".join(STYLE.sub("", text).split())


def _hostile(facts: AuditFacts) -> AuditFacts:
    """Return the facts with a hostile name wherever a name comes from the netlist."""
    machine, cone = facts.extraction.machine, facts.cone
    assert machine
    machine = replace(
        machine, storage=tuple(HOSTILE + name for name in machine.storage), free_inputs=(HOSTILE,),
        observed=tuple(replace(row, name=HOSTILE + row.name) for row in machine.observed),
    )  # fmt: skip
    cone = replace(
        cone, netlist=replace(cone.netlist, top=HOSTILE, net_names=[HOSTILE] * len(cone.netlist.net_names)),
        elements=tuple(replace(element, name=HOSTILE, cell=HOSTILE) for element in cone.elements),
        loads=tuple(replace(load, pins=(HOSTILE, HOSTILE)) for load in cone.loads),
    )  # fmt: skip
    finding = Finding("fan-out-over-limit", "warning", (HOSTILE,), HOSTILE, {"pin": HOSTILE}, None, HOSTILE)
    return replace(
        facts, extraction=replace(facts.extraction, machine=machine), cone=cone, mode={HOSTILE: 1},
        inputs=tuple(source._replace(path=HOSTILE) for source in facts.inputs), findings=(finding,),
        assumed=(HOSTILE,), undecided=(HOSTILE,),
    )  # fmt: skip


@pytest.mark.parametrize("name", FACTS)
@pytest.mark.parametrize("width", [40, 60, 80, 100, 140])
def test_no_line_is_wider_than_the_screen(name, width):
    """At every width each line fits, so that the terminal itself never folds."""
    lines = STYLE.sub("", _screen(FACTS[name](), width)).splitlines()
    assert max(map(cell_len, lines)) <= width
    assert not [line for line in lines if line != line.rstrip()]


@pytest.mark.parametrize("width", [40, 80, 140])
def test_every_word_of_the_pipe_is_on_the_screen(width):
    """The same characters stand in a pipe and on a terminal of any width; only dashes in empty cells may go."""
    facts = small_facts()
    piped, screen = (
        sorted(re.sub(r"[\s-]", "", STYLE.sub("", text))) for text in (_piped(facts), _screen(facts, width))
    )
    assert piped == screen


def test_the_first_line_is_the_verdict_with_counts():
    """The first line says the verdict, the top and the findings by level; a waived one counts apart."""
    assert _piped(small_facts()).splitlines()[0] == "Verdict fail: gen, 1 error, 1 note, 1 waived"


def test_what_was_audited_follows():
    """Files, mode and clock stand in the lines after the verdict."""
    lines = [line.split(None, 1) for line in _piped(small_facts()).splitlines()[1:5]]
    assert lines == [["netlist", "gen.v"], ["cells", "cells.lib"], ["mode", "test_en=1, scan_en=0"],
                     ["clock", "clk, rising edge"]]  # fmt: skip


def test_a_channel_stands_on_one_line_in_a_pipe():
    """In a pipe every channel has all its figures on one line, also where they have 39 digits."""
    facts = large_facts(channels=20)
    assert facts.phases
    assert facts.extraction.machine
    lines = _piped(facts).splitlines()
    names = [row.name for row in facts.extraction.machine.observed]
    for row, phase in zip(facts.extraction.machine.observed, facts.phases.phases, strict=True):
        near = phase.nearest
        assert near
        cells = [row.name, str(phase.lead), "yes" if phase.inverted else "no", "0",
                 ("~" if near.complement else "") + names[near.channel], str(near.separation), "3", "2",
                 *(facts.extraction.machine.storage[tap.element] for tap in row.taps)]  # fmt: skip
        assert cells in [line.split() for line in lines]


def test_a_pipe_gets_plain_text():
    """In a pipe there is no escape code, no box, no blank at the end of a line and no character beyond ASCII."""
    text = _piped(large_facts())
    assert text.isascii()
    assert "\x1b" not in text
    assert not [line for line in text.splitlines() if line != line.rstrip()]
    assert not re.search(r"[|+=]{2,}|-{3,}", text)


def test_no_colour_means_no_escape_code(monkeypatch):
    """With NO_COLOR a terminal gets plain text, folded to its width."""
    monkeypatch.setenv("NO_COLOR", "1")
    console = Console(file=io.StringIO(), width=80, force_terminal=True)
    print_audits({"": small_facts()}, console)
    text = console.file.getvalue()
    assert "\x1b" not in text
    assert max(map(len, text.splitlines())) <= 80


def test_a_long_lead_stays_whole_at_80_columns():
    """Leads and separations of 2^127 stand in one piece on a screen of 80 columns."""
    facts = large_facts(channels=20)
    assert facts.phases
    words = _words(_screen(facts, 80)).split()
    for phase in facts.phases.phases:
        assert phase.nearest
        assert {str(phase.lead), str(phase.nearest.separation)} <= set(words)


@pytest.mark.parametrize("width", [80, 140])
def test_hostile_names_are_inert(width):
    """No code of a name reaches the terminal, markup and emoji are letters like others, and the width is kept."""
    text = STYLE.sub("", _screen(_hostile(small_facts()), width))
    assert not [c for c in text if not c.isprintable() and c != "\n"]
    assert "[red]" in text
    assert ":smile:" in text
    assert "\\x1b]0;owned\\x07" in text
    assert max(map(cell_len, text.splitlines())) <= width


def test_hostile_names_are_inert_in_a_pipe():
    """The same holds in a pipe."""
    text = _piped(_hostile(small_facts()))
    assert not [c for c in text if not c.isprintable() and c != "\n"]


def test_a_name_that_the_console_cannot_encode_is_spelled_out():
    """On an ASCII console the bytes can be written and the character stands as its code."""
    raw = io.BytesIO()
    stream = io.TextIOWrapper(raw, encoding="ascii")
    print_audits({"": replace(small_facts(), mode={"é漢": 1})}, Console(file=stream, width=80))
    stream.flush()
    assert b"mode            \\xe9\\u6f22=1" in raw.getvalue()


def test_of_many_rows_the_closest_are_shown_and_the_rest_counted():
    """Of 300 channels the 40 closest are listed, nearest first, and a line says where the other 260 are."""
    facts = large_facts()
    assert facts.phases
    words = _words(_screen(facts, 80))
    assert "Shown are 40 of 300, the closest first; 260 more channels in the JSON." in words
    assert "Shown are 40 of 127, the most heavily loaded first; 87 more flip-flops in the JSON." in words
    table = _piped(facts).split("\nChannels\n")[1].split("\n\n")[0]
    leads = [line.split()[1] for line in table.splitlines() if line.startswith("  chain_in[")]
    near = sorted((p.nearest.separation, str(p.lead)) for p in facts.phases.phases if p.nearest)
    assert len(leads) == 40
    assert {lead for _, lead in near[:40]} == set(leads)


def test_forty_rows_are_all_shown():
    """Up to forty channels every one is listed, in the given order, and nothing is counted away."""
    text = _piped(large_facts(degree=40, channels=40))
    table = text.split("\nChannels\n")[1].split("\n\n")[0]
    assert re.findall(r"^  chain_in\[(\d+)\]", table, re.MULTILINE) == [str(k) for k in range(40)]
    assert "in the JSON" not in text


def test_register_facts_are_told():
    """Elements as a run, both polynomials, the period also as a power, the lock-up state and the reset."""
    text = _words(_piped(small_facts()))
    for words in ("elements 8: q[0..7]", "characteristic x^8 + x^4 + x^3 + x^2 + 1",
                  "connection x^8 + x^6 + x^5 + x^4 + 1 (its reciprocal)",
                  "period 255 = 2^8 - 1, the maximum; primitive",
                  "lock-up states 1: 00", "reset 01, period from there 255 = 2^8 - 1",
                  "the characteristic polynomial is primitive"):  # fmt: skip
        assert words in text


def test_a_poor_register_is_told_as_such():
    """A short period, several factors, many lock-up states, unknown reset bits and undecided facts are all said."""
    facts = small_facts()
    assert facts.phases
    register = replace(
        facts.phases.registers[0], period=21, primitive=False, cycling_degree=6, lock_up_count=2**70,
        lock_up_states=tuple(range(16)), factors=(Factor(3, 2, True), Factor(0x1F, 1, False), Factor(0x49, 1, None)),
        reset=ResetFacts(0x12, (1, 2, 3), None, None),
    )  # fmt: skip
    other = replace(register, period=None, primitive=None, reset=ResetFacts(0, (), True, 1), lock_up_count=0)
    text = _words(_piped(replace(facts, phases=replace(facts.phases, registers=(register, other)))))
    for words in ("Register 1 of 2", "21, short of 255 = 2^8 - 1; not primitive; the cycling part has degree 6",
                  "x + 1, 2 times: primitive", "x^4 + x^3 + x^2 + x + 1: irreducible, not primitive",
                  "primitive or not is undecided", "1180591620717411303424 = 2^70: 00, 01,", "0f and more",
                  "12, with 3 bits unknown: q[1..3]", "Register 2 of 2", "undecided, at most 255 = 2^8 - 1",
                  "lock-up states none", "00, which is a lock-up state"):  # fmt: skip
        assert words in text


def test_channels_without_lead_say_why():
    """A refused channel names its gate and place, a constant its value, a net behind the gate its channel."""
    text = _words(_piped(small_facts()))
    for words in ("cut at u_gen.U77 (gen.v:77): its NAND2 is not affine", "constant 1 no lead: it is constant",
                  "feeds chain[4]", "q[2](t-1) q[6](t-1)", "q[1] input extra_in"):  # fmt: skip
        assert words in text


def test_separations_stand_against_chain_length_and_limit():
    """The closest pairs are listed nearest first, with how much they fall short of what was stated."""
    lines = [line.split() for line in _piped(small_facts()).splitlines()]
    start = lines.index(["Smallest", "separations,", "in", "cycles"])
    assert lines[start + 3 : start + 6] == [
        ["chain[0]", "chain[1]", "38", "short", "by", "26", "short", "by", "62"],
        ["chain[1]", "~chain[2]", "62", "short", "by", "2", "short", "by", "38"],
        ["chain[0]", "~chain[2]", "100", "enough", "enough"],
    ]


def test_what_was_not_asked_is_said():
    """Without a chain length the screen says that overlap was not asked; with one it is kept or missed."""
    facts = small_facts()
    silent = replace(facts, plan=replace(facts.plan, chain_length=None))
    asked = replace(facts, plan=replace(facts.plan, chain_length=38))
    assert "No chain length is stated" in _piped(silent)
    assert "No chain length is stated" not in _piped(asked)
    assert "None of them is below the chain length 38." in _piped(asked)


def test_undecided_leads_are_said_with_what_is_proved():
    """An undecided lead is called so, with the separation that is proved all the same."""
    facts = small_facts()
    assert facts.phases
    phases = tuple(
        replace(phase, lead=None, kind="undecided", inverted=None, nearest=None) if phase.group == 0 else phase
        for phase in facts.phases.phases
    )
    table = replace(facts.phases, phases=phases, certified_at_least=1 << 20)
    text = _words(_piped(replace(facts, phases=table, undecided=("The lead of chain[1] is undecided.",))))
    assert "chain[1] undecided - 0 - - 3 2 q[0] q[3] q[5] separation at least 1048576" in text
    assert "Proved for every pair of one class: at least 1048576." in text
    reasoned = tuple(replace(phase, no_lead_because="the limit on work is reached") for phase in phases)
    text_with_reason = _words(_piped(replace(facts, phases=replace(table, phases=reasoned))))
    assert "lead undecided: the limit on work is reached; separation at least 1048576" in text_with_reason
    assert "Not decided - The lead of chain[1] is undecided." in text


def test_several_classes_are_told_apart():
    """With two classes each channel shows its class, and one alone in its class is infinitely far from all."""
    facts = small_facts()
    assert facts.phases
    lone = replace(facts.phases.classes[0], reference=5, channels=(5,), minimum=None)
    phases = list(facts.phases.phases)
    phases[5] = replace(phases[0], group=1, nearest=None)
    table = replace(facts.phases, classes=(*facts.phases.classes, lone), phases=tuple(phases))
    text = _words(_piped(replace(facts, phases=table)))
    assert "chain[5] 1 0 1 no 0 - infinite 2 1 q[1] input extra_in" in text
    assert "those of two classes never do" in text


def test_findings_stand_by_level_with_figures_place_and_waiver():
    """Errors come first; each finding has its sentence, figures, place and, if waived, the reason."""
    text = _words(_piped(replace(small_facts(), findings=tuple(reversed(small_facts().findings)))))
    places = [text.index(word) for word in ("error windows-overlap:", "warning fan-out", "note single-tap")]
    assert places == sorted(places)
    for finding in small_facts().findings:
        assert f"{finding.slug}: {', '.join(finding.where)} {finding.says}" in text
    assert "separation 17; identical pairs 47; example chain[0] cell 17 and chain[1] cell 0 gen.v:120" in text
    assert "waived: sized by hand, see review 7" in text


def test_many_findings_of_one_kind_and_many_names_are_counted():
    """Of more than ten findings of a kind, and twelve names in one, the number left to the JSON is said."""
    names = tuple(f"q[{2 * k}]" for k in range(30))
    many = tuple(Finding("fan-out-over-limit", "warning", (name,), "It drives much.") for name in names)
    facts = replace(small_facts(), findings=(*many, Finding("not-affine", "error", names, "It is not affine.")))
    text = _piped(facts)
    assert text.count("It drives much.") == 10
    assert "20 more of fan-out-over-limit in the JSON." in text
    assert "q[20], q[22] and 18 more in the JSON" in text


def test_no_findings_are_said_to_be_none():
    """An empty list of findings is said, in the verdict and in its section."""
    text = _piped(replace(small_facts(), findings=(), verdict="pass"))
    assert text.startswith("Verdict pass: gen, no findings\n")
    assert "\nFindings\n  None.\n" in text


@pytest.mark.parametrize("name", FACTS)
def test_cautions_and_assumptions_are_on_every_screen(name):
    """Every caution and every assumption is on the screen, with a refused machine too."""
    facts = FACTS[name]()
    text = _words(_screen(facts, 80))
    for sentence in (*CAUTIONS, *facts.assumed, *facts.undecided):
        assert sentence in text
    assert "the release decision stays with the responsible engineers and their own rules" in text


def test_a_refused_machine_says_where_and_what():
    """Without a machine the screen names each refusal with gate, place and cure, and claims nothing on channels."""
    text = _words(_piped(refused_facts()))
    assert "No linear machine register 1 8 elements: q[0..7]" in text
    assert "q[0]: the NOR4 in its next state is not affine (at u_gen.U3, gen.v:31)" in text
    assert "cure: hold test_en at 1" in text
    assert "Nothing can be said about 6 channels: the machine was refused." in text


def test_the_same_facts_give_the_same_screen():
    """Two printings of equal facts are the same, letter by letter."""
    assert _screen(large_facts(), 80) == _screen(large_facts(), 80)


def test_a_phrase_that_the_sentence_holds_is_not_told_twice():
    """A figure of several words that stands in the sentence is left out below it; numbers never are."""
    figures = {"cure": "hold n8 at 1", "gate": "u8", "count": 8}
    finding = Finding("not-affine", "error", ("q",), "u8 is no XOR: hold n8 at 1.", figures)
    text = _words(_piped(replace(small_facts(), findings=(finding,))))
    assert "u8 is no XOR: hold n8 at 1. gate u8; count 8" in text


def test_a_finding_without_objects_has_no_colon_behind_its_slug():
    """A finding that counts a list stands under its slug alone."""
    finding = Finding("windows-overlap", "error", (), "60 pairs are closer than 100 cycles.")
    lines = _piped(replace(small_facts(), findings=(finding,))).splitlines()
    assert "  error     windows-overlap" in lines
