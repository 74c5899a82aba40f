"""The draft as the text of a plan: TOML with the reason beside every line."""

import re
from collections.abc import Iterator, Sequence

from auditor.drafting.candidate import Candidate, Constant
from auditor.drafting.exits import Exit
from auditor.drafting.proposal import Draft, Proposal
from auditor.drafting.settle import STATED

_BARE = re.compile(r"[A-Za-z0-9_-]+")
_ESCAPES = {"\\": "\\\\", '"': '\\"'}


def plan_text(draft: Draft, netlists: Sequence[str], cells: Sequence[str]) -> str:
    """Return the plan; where none is clear, all but the files is a comment."""
    lines = [
        "# Starter plan, drafted from the netlist. What stands here is guessed: check every line against its reason.",
        "# Paths are relative to the file in which this is kept.",
        "",
        *(f"# {line}" for line in _candidates(draft)),
        "",
        "[netlist]",
        f"files = {_list(netlists)}",
        f"cells = {_list(cells)}",
        f"top = {_text(draft.top)}",
        "",
    ]
    lines += _proposed(draft.proposal) if draft.proposal else [f"# None is clear: {_plain(draft.because)}."]
    return "\n".join([*lines, ""])


def guesses(proposal: Proposal, with_channels: bool) -> tuple[str, ...]:
    """Return a sentence on every constant that was guessed, and on every channel where those were too."""
    held = [f"drafted: {c.name} = {c.value}: {_reason(c)}" for c in proposal.constants if c.reason != STATED]
    channels = [f"drafted: {g.name} is a channel: {g.reason}" for g in proposal.channels if g.kept and with_channels]
    return (*held, *channels)


def _candidates(draft: Draft) -> Iterator[str]:
    count = len(draft.candidates)
    yield f"{count} loop{'s' * (count != 1)} of storage {'were' if count != 1 else 'was'} looked into:"
    for number, (candidate, exits) in enumerate(zip(draft.candidates, draft.exits, strict=True), 1):
        chosen = draft.proposal is not None and number - 1 in draft.proposal.registers
        yield f"{number}. {_candidate(candidate, exits)}{'; proposed' if chosen else ''}"
    if draft.passed_over:
        yield f"{draft.passed_over} further loops, smaller or with more logic, were not looked into."


def _candidate(candidate: Candidate, exits: Sequence[Exit]) -> str:
    names = candidate.names
    told = f"{candidate.size} elements, {_plain(names[0])} to {_plain(names[-1])}"
    facts = candidate.facts
    if facts is None:
        tried = [f"{_plain(c.name)}={c.value}" for c in candidate.constants if c.reason != STATED]
        under = f" under {', '.join(tried)}" if tried else ""
        return f"{told}: not proved linear{under}: {_plain(candidate.because)}"
    kind = (
        "primitive"
        if facts.primitive
        else "primitive or not is undecided"
        if facts.primitive is None
        else "not primitive"
    )
    period = f", period {facts.period}" if facts.period is not None else ""
    parts = [f"{told}: linear, {kind}{period}", f"clock {_plain(candidate.clock)}"]
    if candidate.compacts:
        parts.append(f"set apart: {len(candidate.free_inputs)} nets from outside add into it (a response compactor?)")
        return "; ".join(parts)
    chains = [e.chain for e in exits if not e.port]
    parts.append(f"{len(exits)} channels leave it")
    if chains:
        span = f"{min(chains)} to {max(chains)}" if min(chains) < max(chains) else f"{max(chains)}"
        parts.append(f"{len(chains)} shift registers fed, of {span} stages")
    return "; ".join(parts)


def _proposed(proposal: Proposal) -> list[str]:
    lines = [f"# clock: {_plain(proposal.clock)}; traced, not stated in a plan", ""]
    if proposal.constants:
        lines += ["[mode]", *(f"{_key(c.name)} = {c.value}  # {_reason(c)}" for c in proposal.constants), ""]
    else:
        lines += ["# [mode]: nothing has to be held", ""]
    lines += ["[channels]", "names = ["]
    for guess in proposal.channels:
        lines.append(f"  {'' if guess.kept else '# '}{_text(guess.name)},  # {_plain(guess.reason)}")
    first = proposal.names[0]
    lines += ["]", f"reference = {_text(first)}  # the first channel; leads are counted from it", ""]
    return [*lines, *_chains(proposal)]


def _chains(proposal: Proposal) -> list[str]:
    lengths = proposal.chain_lengths
    if lengths:
        reason = f"the longest of {len(lengths)} shift registers found; the shortest has {lengths[0]} stages"
        return ["# [chains]", f"# length = {lengths[-1]}  # {reason}"]
    return ["# [chains]", "# length = 100  # not to be seen in the netlist: scan cells of the longest chain"]


def _reason(constant: Constant) -> str:
    kind = "input port" if constant.is_port else "internal net, no port decides it"
    return constant.reason if constant.reason == STATED else f"{kind}; {_plain(constant.reason)}"


def _list(texts: Sequence[str]) -> str:
    return f"[{', '.join(map(_text, texts))}]"


def _text(text: str) -> str:
    """Return a TOML string; control codes are written as numbers."""
    return '"' + "".join(_ESCAPES.get(c) or (c if c.isprintable() else f"\\U{ord(c):08X}") for c in text) + '"'


def _key(name: str) -> str:
    """Return a TOML key, in quotes where it needs them."""
    return name if _BARE.fullmatch(name) else _text(name)


def _plain(text: str) -> str:
    """Return a text for a comment: on one line, without control codes."""
    return "".join(c if c.isprintable() else "?" for c in text)
