"""The JSON holds the facts under the names and in the forms on which other programs rely."""

import json
import sys
from dataclasses import replace

from auditor.cone.cone import Load
from auditor.machine.machine import Extraction
from auditor.plan import Limits, Patterns, Plan
from auditor.report.json_report import as_json, json_text
from auditor.report.wording import CAUTIONS
from tests.support.facts import large_facts, refused_facts, small_facts

CHANNEL_KEYS = [
    "name", "class", "taps", "tap_delays", "observed_taps", "input_taps", "constant", "inverted", "pipeline_stages",
    "lead", "lag", "lead_kind", "lead_modulus", "valid_from", "no_lead_because", "cut_at", "xor_inputs", "xor_depth",
    "nearest",
]  # fmt: skip


def report_of(facts):
    """Return the report on a plan that names no modes."""
    return as_json({"": facts})


def text_of(facts):
    """Return the text of that report."""
    return json_text({"": facts})


def test_the_top_level_names_stand_in_the_agreed_order():
    """The agreed names are all there, in the agreed order; what is added stands between them."""
    agreed = ["schema", "tool", "environment", "inputs", "mode", "verdict", "machine", "classes", "certified_at_least",
              "channels", "flip_flops", "findings", "assumed", "undecided"]  # fmt: skip
    report = report_of(small_facts())
    assert [key for key in report if key in agreed] == agreed
    assert set(report) - set(agreed) == {
        "top", "asked", "clock", "close_pairs", "cut_nets", "cautions", "array", "without_shifter", "seeds",
        "capture", "cones", "frozen_nets", "undecided_nets",
    }  # fmt: skip
    assert report["cautions"] == list(CAUTIONS)


def test_the_matrices_come_back_from_their_indices():
    """Rows rebuilt from the column indices are the rows of the proved machine."""
    facts = small_facts()
    assert facts.extraction.machine
    facts = replace(
        facts, extraction=Extraction(replace(facts.extraction.machine, offset=0b101, input_matrix=(1,) + (0,) * 8), ())
    )
    machine, report = facts.extraction.machine, report_of(facts)["machine"]
    assert machine
    assert tuple(sum(1 << k for k in row) for row in report["transition"]) == machine.transition
    assert report["input_matrix"] == [[0]] + [[]] * 8
    assert report["offset"] == [0, 2]
    assert report["storage"][report["transition"][0][0]] == "q[2]"
    assert report["proof"] == "decision-diagrams"
    assert report["replay"] == {"states": 64, "cycles": 256, "mismatches": 0}


def test_counts_of_cycles_are_decimal_strings_and_small_numbers_plain():
    """What can pass 2^53 is a decimal string without loss; stages, degrees and replay figures are numbers."""
    report = report_of(large_facts())
    register = report["machine"]["registers"][0]
    assert register["period"] == register["maximum_period"] == "170141183460469231731687303715884105727"
    assert register["lock_up"] == {"count": "1", "states": ["0" * 32]}
    assert report["classes"][0]["modulus"] == str(2**127 - 1)
    for channel in report["channels"]:
        assert (int(channel["lead"]) + int(channel["lag"])) % (2**127 - 1) == 0
        assert channel["lead_modulus"] == str(2**127 - 1)
        assert int(channel["nearest"]["separation"]) > 2**53
    for number in (report["machine"]["transient"], register["cycling_degree"], report["channels"][0]["valid_from"]):
        assert isinstance(number, int)


def test_numbers_longer_than_the_interpreter_converts_are_whole():
    """A period of more than 4300 digits is written in full."""
    facts = small_facts()
    assert facts.phases
    register = replace(facts.phases.registers[0], maximum_period=2**20000 - 1)
    text = text_of(replace(facts, phases=replace(facts.phases, registers=(register,))))
    digits = json.loads(text)["machine"]["registers"][0]["maximum_period"]
    assert len(digits) == 6021
    before = sys.get_int_max_str_digits()
    try:
        sys.set_int_max_str_digits(0)
        assert digits == str(2**20000 - 1)
    finally:
        sys.set_int_max_str_digits(before)


def test_polynomials_are_told_by_exponents_and_by_hexadecimal():
    """Characteristic 11d is x^8 + x^4 + x^3 + x^2 + 1, and the connection polynomial is its reciprocal."""
    register = report_of(small_facts())["machine"]["registers"][0]
    assert register["characteristic_polynomial"] == {"exponents": [8, 4, 3, 2, 0], "hex": "11d"}
    connection = register["connection_polynomial"]
    assert sorted(8 - k for k in connection["exponents"]) == [0, 2, 3, 4, 8]
    assert int(connection["hex"], 16) == sum(1 << k for k in connection["exponents"])
    assert register["factors"] == [{"exponents": [8, 4, 3, 2, 0], "multiplicity": 1, "primitive": True}]


def test_a_reset_is_told_over_the_register_and_its_unknown_bits_by_index():
    """State hex is of fixed width over the register's own elements; unknown bits index its storage list."""
    facts = small_facts()
    assert facts.phases
    register = facts.phases.registers[0]
    assert register.reset
    reset = replace(register.reset, state=0x05, unknown=(6, 7), stuck=None, period=None)
    facts = replace(facts, phases=replace(facts.phases, registers=(replace(register, reset=reset),)))
    report = report_of(facts)["machine"]["registers"][0]
    assert report["reset"] == {"state": "05", "unknown": [6, 7], "stuck": None, "period": None}
    assert [report["storage"][k] for k in report["reset"]["unknown"]] == ["q[6]", "q[7]"]


def test_every_channel_tells_its_row_and_phase():
    """Every channel has the agreed names, and they say what row and phase say."""
    facts = small_facts()
    machine, table = facts.extraction.machine, facts.phases
    assert machine
    assert table
    channels = {channel["name"]: channel for channel in report_of(facts)["channels"]}
    assert list(channels) == [f"chain[{k}]" for k in range(6)]
    for row, phase in zip(machine.observed[:6], table.phases, strict=False):
        told = channels[row.name]
        assert list(told) == CHANNEL_KEYS
        assert list(zip(told["taps"], told["tap_delays"], strict=True)) == [
            (machine.storage[tap.element], tap.delay) for tap in row.taps
        ]
        assert told["lead"] == (None if phase.lead is None else str(phase.lead))
        assert (told["class"], told["inverted"], told["lead_kind"]) == (phase.group, phase.inverted, phase.kind)
        assert (told["xor_inputs"], told["xor_depth"]) == (row.xor_inputs, row.xor_depth)
    assert channels["chain[2]"]["observed_taps"] == ["pipe"]
    assert channels["chain[2]"]["constant"] == 1
    assert channels["chain[2]"]["pipeline_stages"] == 1
    assert channels["chain[5]"]["input_taps"] == ["extra_in"]
    assert channels["chain[3]"]["no_lead_because"]
    assert channels["chain[1]"]["nearest"]["channel"] == "chain[0]"


def test_a_refused_channel_names_its_gate_and_the_net_behind_it():
    """A refused row has no constant and no taps but the gate; the nets behind the gate stand in a list of their own."""
    report = report_of(small_facts())
    refused = report["channels"][4]
    assert (refused["cut_at"], refused["constant"], refused["taps"]) == ("u_gen.U77", None, [])
    assert [channel["cut_at"] for k, channel in enumerate(report["channels"]) if k != 4] == [None] * 5
    assert [(net["name"], net["channel"], net["taps"]) for net in report["cut_nets"]] == [("n42", "chain[4]", ["q[4]"])]


def test_a_refused_machine_keeps_the_channels_and_loads():
    """Without a machine there is null, no class, and every channel and flip-flop with nothing claimed of it."""
    report = report_of(refused_facts())
    assert report["machine"] is None
    assert report["classes"] == []
    assert [channel["name"] for channel in report["channels"]] == [f"chain[{k}]" for k in range(6)]
    for channel in report["channels"]:
        assert list(channel) == CHANNEL_KEYS
        assert channel["lead"] is channel["lag"] is channel["class"] is channel["inverted"] is None
        assert channel["no_lead_because"] == "the machine was refused"
    assert report["channels"][4]["cut_at"] == "u_gen.U77"
    assert [flip_flop["xor_fan_out"] for flip_flop in report["flip_flops"]] == [None] * 9


def test_classes_name_their_channels():
    """Reference, members and the smallest pair are names of channels, no cut net among them; cycles are strings."""
    report = report_of(small_facts())["classes"][0]
    assert report["reference"] == "chain[0]"
    assert report["channels"] == ["chain[0]", "chain[1]", "chain[2]"]
    assert report["minimum"] == {"channels": ["chain[0]", "chain[1]"], "cycles": "38", "complement": False}


def test_a_flip_flop_is_told_by_its_most_used_output():
    """Fan-out adds up over the outputs; capacitance and limit are those of the output nearest to its limit."""
    facts = small_facts()
    load = Load(1, ("Q", "QN"), (7, 2), (9, 2), (30.00049999, 5.0), (60.0, 8.0))
    told = report_of(replace(facts, cone=replace(facts.cone, loads=(load,))))["flip_flops"][0]
    assert (told["name"], told["cell"], told["direct_fan_out"], told["fan_out"]) == ("q[0]", "DFFRX1", 9, 11)
    assert (told["capacitance_ff"], told["limit_ff"]) == (5.0, 8.0)
    assert told["xor_fan_out"] == 1
    assert [output["capacitance_ff"] for output in told["outputs"]] == [30.0, 5.0]


def test_capacitance_is_told_without_a_limit_and_null_without_capacitance():
    """Where no output has a limit the greatest capacitance is told; where the library gives none, null."""
    facts = small_facts()
    loads = (
        Load(1, ("Q", "QN"), (1, 1), (1, 1), (3.0, 5.0), (None, None)),
        Load(2, ("Q",), (1,), (1,), (None,), (60.0,)),
    )
    first, second = report_of(replace(facts, cone=replace(facts.cone, loads=loads)))["flip_flops"]
    assert (first["capacitance_ff"], first["limit_ff"]) == (5.0, None)
    assert (second["capacitance_ff"], second["limit_ff"]) == (None, None)


def test_findings_are_told_with_place_and_waiver():
    """A finding has exactly the agreed names; a waived one carries its reason, one without place null."""
    first, second, third = report_of(small_facts())["findings"]
    assert list(first) == ["slug", "level", "where", "figures", "says", "place", "waived"]
    assert first["place"] == {"file": "gen.v", "line": 120}
    assert second["waived"] == "sized by hand, see review 7"
    assert second["figures"]["share"] == 1.235
    assert third["place"] is None


def test_the_text_is_ascii_the_same_each_time_and_parses_back():
    """Two runs over equal facts give the same bytes, which parse to the report, whatever a name holds."""
    name = 'w\x1b[31m\u202e"é\n'
    facts = replace(small_facts(), mode={name: 1})
    text = text_of(facts)
    assert text == text_of(replace(small_facts(), mode={name: 1}))
    assert text.isascii()
    assert text.endswith("}\n")
    assert "\x1b" not in text
    assert json.loads(text) == report_of(facts)
    assert list(json.loads(text)["mode"]) == [name]


def test_a_change_of_one_fact_changes_few_lines():
    """The text is laid out for comparison: another verdict is one other line, and a row of the matrix is one line."""
    facts = small_facts()
    before, after = (text_of(f).splitlines() for f in (facts, replace(facts, verdict="pass")))
    assert sum(a != b for a, b in zip(before, after, strict=True)) == 1
    assert any(line.strip() == '"chain[1]",' for line in before) is False
    assert '"taps": ["q[0]", "q[3]", "q[5]"],' in [line.strip() for line in before]


def test_what_was_asked_stands_beside_the_answers():
    """Stated bounds are told, cycles as decimal strings; what was not stated is null."""
    facts = small_facts()
    limits, patterns = Limits(separation=10**17, fan_out=9), Patterns(20_000, 200, 1, "advances")
    plan = Plan((), chain_length=200, limits=limits, patterns=patterns, fail_at="warning", work_limit=7, time_limit=60)
    assert report_of(replace(facts, plan=plan))["asked"] == {
        "chain_length": 200,
        "limits": {"separation": str(10**17), "fan_out": 9, "taps": None, "depth": None},
        "patterns": {
            "count": "20000",
            "shift_cycles": "200",
            "capture_cycles": "1",
            "generator_in_capture": "advances",
            "twin_window": 0,
            "launch": "none",
        },
        "scan_outputs": [],
        "relations": None,
        "fail_at": "warning",
        "work_limit": "7",
        "time_limit": 60,
    }
    nothing = {"chain_length": None, "limits": dict.fromkeys(("separation", "fan_out", "taps", "depth"))}
    assert report_of(replace(facts, plan=Plan(())))["asked"] == {
        **nothing, "patterns": None, "scan_outputs": [], "relations": None, "fail_at": "error",
        "work_limit": None, "time_limit": None,
    }  # fmt: skip


def test_named_modes_stand_in_a_list_under_the_worst_verdict():
    """Each mode holds what a single audit has at the top level; what is the same for all stays at the top level."""
    passed, failed = replace(small_facts(), verdict="pass"), replace(refused_facts(), verdict="fail")
    report, single = as_json({"shift": passed, "hold": failed}), report_of(passed)
    assert list(report) == ["schema", "tool", "environment", "inputs", "top", "asked", "verdict", "modes", "cautions"]
    assert report["verdict"] == "fail"
    assert [(mode["name"], mode["verdict"]) for mode in report["modes"]] == [("shift", "pass"), ("hold", "fail")]
    first = report["modes"][0]
    assert {**{key: value for key, value in report.items() if key != "modes"}, **first} == {"name": "shift", **single}
