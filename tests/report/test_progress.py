"""Progress is for a person at a terminal only."""

import io

import pytest
from rich.console import Console

from auditor.report.progress import stages


class Terminal:
    """A console that believes it is a terminal, and what it wrote."""

    def __init__(self) -> None:
        self.console = Console(file=io.StringIO(), force_terminal=True, width=80)

    @property
    def text(self) -> str:
        return self.console.file.getvalue()


def test_a_terminal_shows_the_stage_and_is_clean_afterwards():
    """The running stage is shown, names are no markup, and the last thing written brings the cursor back."""
    terminal = Terminal()
    with stages(terminal.console) as step:
        step("proving [red]rows")
        assert "\x1b[?25l" in terminal.text
    assert "proving [red]rows" in terminal.text
    assert terminal.text.rstrip().endswith(("\x1b[?25h", "\x1b[2K"))
    assert "\x1b[?25h" in terminal.text


def test_a_terminal_is_clean_after_an_error_too():
    """When a stage fails the error goes through and the cursor is back."""
    terminal = Terminal()

    def broken_stage() -> None:
        with stages(terminal.console) as step:
            step("reading")
            raise ValueError("broken")

    with pytest.raises(ValueError, match="broken"):
        broken_stage()
    assert "\x1b[?25h" in terminal.text


@pytest.mark.parametrize(("terminal", "enabled"), [(False, True), (True, False), (False, False)])
def test_nothing_is_shown_in_a_pipe_or_when_not_wanted(terminal, enabled):
    """In a pipe, and on a terminal where it is switched off, not a single character is written."""
    console = Console(file=io.StringIO(), force_terminal=terminal)
    with stages(console, enabled) as step:
        step("reading")
    assert console.file.getvalue() == ""
