"""The text of a draft: TOML whatever the names, with a reason on every line that states something."""

import random
import tomllib
from dataclasses import replace
from pathlib import Path

from auditor.drafting.text import plan_text
from tests.support import machines
from tests.support.drafts import drafted, proposed
from tests.support.gates import Recipe, draw


def test_hostile_names_stay_text(tmp_path: Path) -> None:
    """Names with quotes, backslashes and control codes come back from the TOML as they are, comments in one line."""
    machine = machines.with_channels(machines.fibonacci([7, 6], 7), [[0, 3], [1, 4]])
    found = drafted(tmp_path, draw(machine, Recipe(enable="multiplexer"), random.Random(1)).text)
    nasty = 'a"b\\c\x1b[2J\nd'
    channels = tuple(
        replace(channel, name=f"{nasty}{k}", reason=nasty) for k, channel in enumerate(proposed(found).channels)
    )
    constants = tuple(replace(constant, name=nasty, reason=nasty) for constant in proposed(found).constants)
    hostile = replace(found, proposal=replace(proposed(found), channels=channels, constants=constants, clock=nasty))
    text = plan_text(hostile, [nasty], ["c.lib"])
    assert "\x1b" not in text
    plan = tomllib.loads(text)
    assert plan["netlist"]["files"] == [nasty]
    assert plan["mode"] == {nasty: 1}
    assert plan["channels"]["names"] == [f"{nasty}0", f"{nasty}1"]


def test_every_line_has_its_reason(tmp_path: Path) -> None:
    """Each constant, channel and the reference carries a comment."""
    machine = machines.with_channels(machines.fibonacci([7, 6], 7), [[0, 3], [1, 4]])
    block = draw(machine, Recipe(enable="multiplexer", scan_multiplexer=True), random.Random(1))
    lines = plan_text(drafted(tmp_path, block.text), ["n.v"], ["c.lib"]).splitlines()
    stated = lines[lines.index("[mode]") + 1 :]
    wanted = [line for line in stated if line and not line.startswith(("#", "[", "]", "names"))]
    assert len(wanted) == len(block.mode) + 3
    assert all("  # " in line for line in wanted)
