"""Reads the words after ``auditor compare`` into two requests for an audit: options of both, and of one revision."""

from collections.abc import Sequence
from dataclasses import dataclass

from auditor.arguments import COMMAND_LINE, Request, audit_parser, read_arguments
from auditor.errors import InputError, Trouble, TroubleList

SIDES = ("old", "new")
_OF_BOTH = ("--json", "--quiet")

HELP = """\
usage: auditor compare OLD NEW [options]

Compares two revisions of a generator by what they do. OLD and NEW are each a netlist or a plan (.toml).

Options are those of auditor audit and hold for both revisions; --old-... and --new-... hold for one, as in
--old-cells F or --new-mode NET=0. --old-netlist F and --new-netlist F add further netlists; both may be repeated.
--json F writes the comparison; --quiet shows nothing.

Exit status: 0 the same machine, up to its encoding, with the same streams from reset where both resets are known;
1 not; 2 wrong use or unusable input; 3 undecided; 4 internal error.
"""


@dataclass(frozen=True, slots=True)
class CompareRequest:
    """One call of ``auditor compare``; ``json`` may be ``-``."""

    old: Request
    new: Request
    json: str | None
    quiet: bool


def read_compare_arguments(words: Sequence[str]) -> CompareRequest:
    """Return what the words ask for. Raises ``InputError`` with all that is wrong with them."""
    troubles = TroubleList()
    named, by_side = _sorted_words(words, troubles)
    if len(named) != len(SIDES):
        count = {0: "no revision is", 1: "one revision is"}.get(len(named), f"{len(named)} revisions are")
        remedy = "write auditor compare OLD NEW; further netlists go to --old-netlist or --new-netlist"
        troubles.add(f"{count} named", remedy, COMMAND_LINE)
    requests = []
    for side, name in zip(SIDES, (*named, "", "")[: len(SIDES)], strict=True):
        subject = [f"--plan={name}"] if name.endswith(".toml") else [name] if name else []
        try:
            requests.append(read_arguments([*subject, *by_side[side], *by_side[""]]))
        except InputError as error:
            troubles.troubles += [_of_compare(trouble) for trouble in error.troubles]
    if any(request.use_draft for request in requests):
        remedy = "write plans with auditor draft"
        troubles.add("--use-draft guesses, and a comparison of guesses proves nothing", remedy, COMMAND_LINE)
    troubles.raise_any()
    old, new = requests
    return CompareRequest(old, new, old.json, old.quiet)


def _sorted_words(words: Sequence[str], troubles: TroubleList) -> tuple[list[str], dict[str, list[str]]]:
    """Return the revisions named, and the options of each side as words of an audit; those of both stand under ""."""
    flags = _flags()
    named: list[str] = []
    by_side: dict[str, list[str]] = {"old": [], "new": [], "": []}
    rest = list(words)
    while rest:
        word = rest.pop(0)
        if not word.startswith("--"):
            named.append(word)
            continue
        option, equals, value = word.partition("=")
        side, plain = _of_side(option)
        if not equals and plain not in flags and rest:
            equals, value = "=", rest.pop(0)
        if side and plain in _OF_BOTH:
            troubles.add(f"{option} asks for a report of one revision", f"write {plain}", COMMAND_LINE)
        elif side and plain == "--netlist":
            by_side[side].append(value)
        else:
            by_side[side] += [plain, value] if equals and not value.startswith("-") else [f"{plain}{equals}{value}"]
    return named, by_side


def _flags() -> set[str]:
    """Return the options of an audit that take no value."""
    actions = audit_parser()._actions
    return {option for action in actions if action.nargs == 0 for option in action.option_strings}


def _of_side(option: str) -> tuple[str, str]:
    """Return the revision that an option is for, empty for both, and the option without it."""
    for side in SIDES:
        if option.startswith(f"--{side}-"):
            return side, "--" + option[len(side) + 3 :]
    return "", option


def _of_compare(trouble: Trouble) -> Trouble:
    """Return a trouble of the audit's words as one of this command's."""
    return Trouble(trouble.found.replace("auditor audit", "auditor compare"),
                   trouble.remedy.replace("auditor audit", "auditor compare"), trouble.place)  # fmt: skip
