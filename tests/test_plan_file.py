"""Reading a plan from TOML: what it says, and the texts of everything that can be wrong with it."""

from pathlib import Path

import pytest

from auditor.errors import InputError
from auditor.plan import Limits, Patterns, Waiver
from auditor.plan_file import read_plan

COMPLETE = """\
[netlist]
files = ["generator.v", "sub/rest.v.gz"]
top = "generator"
cells = ["../lib/cells.lib"]

[mode]
scan_en = 0
"u1.hold" = 1

[channels]
names = ["so", "extra*"]
reference = "so[0]"

[chains]
length = 120

[patterns]
count = 10_000
shift_cycles = 120
capture_cycles = 2
generator_in_capture = "advances"
launch = "none"

[limits]
separation = 500
fan_out = 16
taps = 3
depth = 0

[[waivers]]
slug = "single-tap-channel"
where = ["so[0]"]
reason = "feeds a chain of one scan cell"
"""


def troubles(tmp_path: Path, text: str | bytes) -> list[str]:
    """Return the messages that reading a plan of this text gives, with the plan's folder cut off."""
    plan = tmp_path / "plan.toml"
    plan.write_bytes(text if isinstance(text, bytes) else text.encode())
    with pytest.raises(InputError) as caught:
        read_plan(plan)
    return [str(trouble).replace(f"{tmp_path}/", "") for trouble in caught.value.troubles]


def test_a_complete_plan_is_read(tmp_path: Path) -> None:
    """Every key of the plan arrives, and its paths are relative to it."""
    (tmp_path / "plan.toml").write_text(COMPLETE)
    plan = read_plan(tmp_path / "plan.toml")
    assert plan.netlists == (tmp_path / "generator.v", tmp_path / "sub/rest.v.gz")
    assert plan.cells == (tmp_path / "../lib/cells.lib",)
    assert plan.top == "generator"
    assert plan.mode == {"scan_en": 0, "u1.hold": 1}
    assert (plan.channels, plan.reference, plan.chain_length) == (("so", "extra*"), "so[0]", 120)
    assert plan.patterns == Patterns(10_000, 120, 2, "advances")
    assert plan.limits == Limits(500, 16, 3, 0)
    assert plan.waivers == (Waiver("single-tap-channel", ("so[0]",), "feeds a chain of one scan cell"),)
    assert (plan.fail_at, plan.work_limit, plan.file) == ("error", None, tmp_path / "plan.toml")


def test_a_short_plan_leaves_the_rest_unasked(tmp_path: Path) -> None:
    """A section that is not there asks nothing; a byte order mark and CRLF do not matter."""
    (tmp_path / "plan.toml").write_bytes(b'\xef\xbb\xbf[netlist]\r\nfiles = ["a.v"]\r\n')
    plan = read_plan(tmp_path / "plan.toml")
    assert plan.netlists == (tmp_path / "a.v",)
    assert (plan.patterns, plan.chain_length, plan.limits, plan.mode) == (None, None, Limits(), {})


def test_a_file_that_is_no_plan_says_so(tmp_path: Path) -> None:
    """A missing, empty, binary or broken plan and a directory each give one message with its place."""
    for path, message in (
        (
            tmp_path / "none.toml",
            "none.toml: the plan cannot be read: No such file or directory; mend the path after --plan",
        ),
        (tmp_path, f"{tmp_path}: the plan is a directory; give the plan's TOML file"),
    ):
        with pytest.raises(InputError) as caught:
            read_plan(path)
        assert str(caught.value).replace(f"{tmp_path}/", "") == message
    assert troubles(tmp_path, " \n") == ["plan.toml: the plan is empty; state at least [netlist] files"]
    assert troubles(tmp_path, b"a\nb\xff\xfe") == ["plan.toml:2: the plan is not UTF-8 text; give a TOML file in UTF-8"]
    assert troubles(tmp_path, "a\0b") == ["plan.toml: the plan is a binary file; give a TOML file in UTF-8"]
    assert troubles(tmp_path, "[netlist]\nfiles = [\n") == [
        "plan.toml:3: the plan is not valid TOML: Invalid value; mend this line"
    ]
    assert troubles(tmp_path, "[netlist]\nfiles 1\n") == [
        "plan.toml:2: the plan is not valid TOML: Expected '=' after a key in a key/value pair; mend this line"
    ]


def test_deep_nesting_and_endless_numbers_give_a_message(tmp_path: Path) -> None:
    """Neither a deep nest of lists nor a number of thousands of digits ends in a traceback."""
    assert len(troubles(tmp_path, "a = " + "[" * 100_000)) == 1
    assert len(troubles(tmp_path, "[chains]\nlength = " + "9" * 10_000)) == 1


def test_unknown_names_suggest_known_ones(tmp_path: Path) -> None:
    """An unknown section or key is named with its line and a near miss, or with all that is known."""
    text = (
        '[netlst]\nfiles = ["a.v"]\n[chains]\nlenght = 3\n[limits]\nzzz = 1\n[[waivers]]\nslug = "a"\nwhere = ["b"]\n'
    )
    text += 'reason = "c"\nuntil = 1\n'
    assert troubles(tmp_path, "size = 1\n" + text) == [
        "plan.toml:1: unknown key size in the plan; use one of netlist, mode, capture, channels, chains, patterns, "
        "array, limits, seeds, waivers, claims, or remove it",
        "plan.toml:2: unknown key netlst in the plan; did you mean netlist?",
        "plan.toml:5: unknown key lenght in [chains]; did you mean length?",
        "plan.toml:7: unknown key zzz in [limits]; use one of separation, fan_out, taps, depth, or remove it",
        "plan.toml:12: unknown key until in [[waivers]]; use one of slug, where, reason, or remove it",
    ]


def test_parts_that_come_later_are_refused(tmp_path: Path) -> None:
    """What the plan may hold one day is never ignored in silence."""
    text = "[mode]\nscan_en = 0\n[claims]\n"
    assert troubles(tmp_path, text) == ["plan.toml:3: [claims] comes with a later version of auditor; remove it"]


def test_capture_and_launch_are_read(tmp_path: Path) -> None:
    """A section [capture], empty or not, asks about the circuit under test; a launch by shift makes tests two-cycle."""
    plan = tmp_path / "plan.toml"
    plan.write_text("[mode]\nscan_en = 1\n")
    assert read_plan(plan).capture is None
    plan.write_text("[capture]\n")
    assert read_plan(plan).capture == {}
    plan.write_text('[capture]\nscan_en = 0\n"u.t" = 1\n[patterns]\ncount = 5\nshift_cycles = 3\nlaunch = "shift"\n')
    assert read_plan(plan).capture == {"scan_en": 0, "u.t": 1}
    assert read_plan(plan).patterns == Patterns(5, 3, launch="shift")
    assert troubles(tmp_path, '[capture]\nscan_en = "0"\n[patterns]\ncount = 1\nshift_cycles = 1\nlaunch = "x"\n') == [
        "plan.toml:2: scan_en in [capture] must be 0 or 1; write the constant as 0 or 1, without quotes",
        'plan.toml:6: launch in [patterns] must be "none" or "shift"; write launch = "none" or "shift"',
    ]


def test_chains_and_seeds_are_read(tmp_path: Path) -> None:
    """Chains come from a length, a file, scan outputs or a trace; seeds are hexadecimal states; relations 3 or 4."""
    (tmp_path / "plan.toml").write_text(
        '[chains]\nfile = "chains.csv"\n[array]\nrelations = 4\ncones = "cones.csv"\n'
        '[seeds]\nfirst = "1F"\nsecond = "000a"\n'
        "[patterns]\ncount = 5\nshift_cycles = 3\ntwin_window = 2\n"
    )
    plan = read_plan(tmp_path / "plan.toml")
    assert (plan.chain_file, plan.chain_length, plan.scan_outputs) == (tmp_path / "chains.csv", None, ())
    assert plan.cone_file == tmp_path / "cones.csv"
    assert (plan.relations, plan.seeds) == (4, {"first": 0x1F, "second": 10})
    assert plan.patterns == Patterns(5, 3, twin_window=2)
    (tmp_path / "plan.toml").write_text('[chains]\nscan_outputs = ["so", "misr_in"]\n')
    assert read_plan(tmp_path / "plan.toml").scan_outputs == ("so", "misr_in")
    assert not read_plan(tmp_path / "plan.toml").trace_forward
    (tmp_path / "plan.toml").write_text('[chains]\ntrace = "forward"\n')
    assert read_plan(tmp_path / "plan.toml").trace_forward
    assert troubles(tmp_path, '[chains]\ntrace = "back"\nlength = 5\n') == [
        "plan.toml:2: [chains] tells the chains by length and by trace; keep one of them",
        'plan.toml:2: trace in [chains] must be "forward"; write trace = "forward"',
    ]


def test_wrong_chains_and_seeds_are_told(tmp_path: Path) -> None:
    """Chains told twice, a number of cells that is neither three nor four, a state that is no hexadecimal text."""
    text = '[chains]\nlength = 5\nfile = "c.csv"\n[array]\nrelations = 5\n[seeds]\na = 31\nb = "0x1f"\nc = ""\n'
    state = "must be a state in hexadecimal digits; write"
    assert troubles(tmp_path, text) == [
        "plan.toml:3: [chains] tells the chains by length and by file; keep one of them",
        "plan.toml:5: relations in [array] must be a whole number from 3 to 4; write relations = N",
        f'plan.toml:7: a in [seeds] {state} a = "1f"',
        f'plan.toml:8: b in [seeds] {state} b = "1f"',
        f'plan.toml:9: c in [seeds] {state} c = "1f"',
    ]


def test_a_dotted_name_without_quotes_is_explained(tmp_path: Path) -> None:
    """A hierarchical net written without quotes is a table to TOML; the message gives the line and the cure."""
    (message,) = troubles(tmp_path, "[mode]\nscan = 1\nu1.enable = 0\n")
    assert message == (
        'plan.toml:3: u1 in [mode] is a table; quote a net whose name has dots, as in "u1.enable" = 0; a mode is a '
        "section [mode.NAME], its name made of letters, digits, _ and -"
    )
    (message,) = troubles(tmp_path, "[mode.shift]\nscan = 1\nu1.enable = 0\n")
    assert (
        message == 'plan.toml:3: u1 in [mode.shift] is a table; quote a net whose name has dots, as in "u1.enable" = 0'
    )


def test_several_modes_are_read(tmp_path: Path) -> None:
    """Each [mode.NAME] is a mode, in the order of the plan, one without constants too; [mode] itself is then empty."""
    plan = tmp_path / "plan.toml"
    plan.write_text('[mode.shift]\nscan = 1\n"u1.hold" = 0\n[mode."by-pass"]\n[mode.fast]\nscan = 0\n')
    read = read_plan(plan)
    assert list(read.modes.items()) == [("shift", {"scan": 1, "u1.hold": 0}), ("by-pass", {}), ("fast", {"scan": 0})]
    assert read.mode == {}


def test_wrong_modes_are_explained(tmp_path: Path) -> None:
    """Constants beside named modes, names that are none, and wrong values are told with their lines."""
    assert troubles(tmp_path, '[mode]\na = 0\nb = 1\n[mode.x]\nc = 2\n[mode."a b"]\n') == [
        'plan.toml: a b in [mode] is a table; quote a net whose name has dots, as in "a b.enable" = 0; a mode is a '
        "section [mode.NAME], its name made of letters, digits, _ and -",
        "plan.toml:2: [mode] holds a beside the named mode [mode.x]; state one mode under [mode], or each under a "
        "[mode.NAME] with all its constants",
        "plan.toml:5: c in [mode.x] must be 0 or 1; write the constant as 0 or 1, without quotes",
    ]


def test_values_of_the_wrong_kind_are_listed_together(tmp_path: Path) -> None:
    """Each wrong value is named with its line, what it must be, and how to write it; all in one go."""
    text = """\
[netlist]
files = "a.v"
top = ""
cells = [1]
[mode]
a = 2
b = true
c = "0"
[channels]
names = [""]
reference = 3
[chains]
length = 0
[patterns]
shift_cycles = 1.5
capture_cycles = -1
generator_in_capture = "runs"
[limits]
separation = 0
fan_out = true
taps = "3"
depth = -1
"""
    whole = "must be a whole number from"
    below = "to 999999999999999999; write"
    assert troubles(tmp_path, text) == [
        'plan.toml:2: files in [netlist] must be a list of texts; write files = ["...", "..."]',
        'plan.toml:3: top in [netlist] must be a text that is not empty; write top = "..."',
        'plan.toml:4: cells in [netlist] must be a list of texts; write cells = ["...", "..."]',
        *(
            f"plan.toml:{line}: {net} in [mode] must be 0 or 1; write the constant as 0 or 1, without quotes"
            for line, net in ((6, "a"), (7, "b"), (8, "c"))
        ),
        'plan.toml:10: names in [channels] must be a list of texts; write names = ["...", "..."]',
        'plan.toml:11: reference in [channels] must be a text that is not empty; write reference = "..."',
        f"plan.toml:13: length in [chains] {whole} 1 to 10000000; write length = N",
        "plan.toml:14: [patterns] has no count; state count = N",
        f"plan.toml:15: shift_cycles in [patterns] {whole} 1 {below} shift_cycles = N",
        f"plan.toml:16: capture_cycles in [patterns] {whole} 0 {below} capture_cycles = N",
        'plan.toml:17: generator_in_capture in [patterns] must be "holds" or "advances"; '
        'write generator_in_capture = "holds" or "advances"',
        f"plan.toml:19: separation in [limits] {whole} 1 {below} separation = N",
        f"plan.toml:20: fan_out in [limits] {whole} 1 {below} fan_out = N",
        f"plan.toml:21: taps in [limits] {whole} 1 {below} taps = N",
        f"plan.toml:22: depth in [limits] {whole} 0 {below} depth = N",
    ]


def test_a_section_must_be_a_section(tmp_path: Path) -> None:
    """A value where a section belongs is refused, and so are waivers that are no list of tables."""
    assert troubles(tmp_path, "netlist = 1\nmode = 2\nwaivers = 3\n") == [
        "plan.toml:1: netlist must be a section; write [netlist]",
        "plan.toml:2: mode must be a section; write [mode]",
        "plan.toml:3: waivers must be a list of tables; write [[waivers]]",
    ]


def test_an_incomplete_waiver_is_refused_in_its_own_table(tmp_path: Path) -> None:
    """A waiver needs a slug, objects and a reason; the line is that of the waiver concerned."""
    good = '[[waivers]]\nslug = "a"\nwhere = ["b"]\nreason = "c"\n'
    assert troubles(tmp_path, good + '[[waivers]]\nwhere = []\nreason = " "\n') == [
        'plan.toml:5: slug in [[waivers]] must be a text that is not empty; write slug = "..."',
        'plan.toml:6: where in [[waivers]] must be a list of names; write where = ["...", "..."]',
        'plan.toml:7: reason in [[waivers]] must be a text that is not empty; write reason = "..."',
    ]


def test_macros_are_names_with_texts(tmp_path: Path) -> None:
    """``defines`` is a table; a number counts as its digits, and anything else is refused in one sentence."""
    (tmp_path / "plan.toml").write_text('[netlist]\nfiles = ["n.v"]\ndefines = { SCAN = "", WIDTH = 8, B = "1\'b0" }\n')
    assert read_plan(tmp_path / "plan.toml").defines == {"SCAN": "", "WIDTH": "8", "B": "1'b0"}
    for wrong in ("true", '["A"]', '{ "a b" = "" }', "{ A = true }", "{ A = [1] }"):
        (tmp_path / "plan.toml").write_text(f"[netlist]\ndefines = {wrong}\n")
        with pytest.raises(InputError, match="must be a table of macros and texts; write defines"):
            read_plan(tmp_path / "plan.toml")
