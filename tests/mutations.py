"""The mutation run: many rewritten and many damaged generators, each compared with its original.

    python -m tests.mutations --count 500 --seed 1 --log mutations.csv --report reports/mutations.md

Half of the work are rewrites that keep the function (the comparison must say *same*), half are damages in one place
(it must say *differs*, and name the damaged instance, or exactly the channels and rows of A that it moves; three in ten
have new names throughout as well). Truth comes from ``tests.support.gate_truth``, a simulator of the printed text with
its own cell table, over more cycles from reset than two linear machines of the size need to show a difference; a damage
that it does not see is harmless and leaves the count. The log holds a line a case; a run that finds lines of the same
seed in it goes on behind them.
"""

import argparse
import csv
import platform
import random
import sys
import tempfile
import time
from collections import Counter
from collections.abc import Iterator
from dataclasses import asdict, dataclass, fields, replace
from pathlib import Path

from auditor.audit import audit
from auditor.compare import compare
from auditor.errors import InputError
from auditor.plan import Plan
from auditor.report.facts import AuditFacts
from auditor.revisions.comparison import Comparison
from tests.support.damages import DAMAGES, Damage, reached_from
from tests.support.gate_truth import streams
from tests.support.machines import Machine, automaton, fibonacci, galois, with_channels
from tests.support.mapped import Mapped, mapped
from tests.support.rewrites import REWRITES, buffers, inverted_storage, pipelined, renamed

ROOT = Path(__file__).parents[1]
CELLS = ROOT / "sample_netlists" / "kelp90.lib"
CYCLES = 256

REGISTERS = (
    fibonacci((8, 6, 5, 4), 8), fibonacci((11, 9), 11), fibonacci((16, 15, 13, 4), 16), fibonacci((20, 17), 20),
    galois((7, 1, 0)), galois((10, 3, 0)), galois((15, 1, 0)), galois((24, 7, 2, 1, 0)),
    automaton("0101"), automaton("110010100111"),
)  # fmt: skip


@dataclass(frozen=True)
class Case:
    """One line of the log.

    ``right``  the outcome is the true one     ``located``  how the damage is named     ``drivers``  how many were named
    """

    seed: int
    number: int
    kind: str
    what: str
    truth: str
    outcome: str
    name: str
    right: bool
    located: str
    drivers: int


@dataclass(frozen=True)
class Original:
    """A generator before it is changed."""

    machine: Machine
    reset: int
    netlist: Mapped


def original(rng: random.Random) -> Original:
    """Return a generator of random taps: perhaps with enables, a pipeline, buffers and inverted storage."""
    register = rng.choice(REGISTERS)
    taps = [rng.sample(range(register.size), rng.randint(2, 3)) for _ in range(rng.randint(4, 8))]
    machine = with_channels(register, taps, rng.getrandbits(len(taps)))
    reset = rng.randrange(1, 1 << machine.size)
    netlist = mapped(machine, reset, rng, enabled=rng.random() < 0.5)
    if rng.random() < 0.4:
        pipelined(netlist, rng)
    for change in (buffers, inverted_storage):
        if rng.random() < 0.5:
            change(netlist, rng)
    return Original(machine, reset, netlist)


def other_form(found: Original, rng: random.Random) -> Mapped:
    """Return the same streams from another register: the state in another basis, drawn anew, with its pipeline."""
    machine, reset = found.machine, found.reset
    for _ in range(rng.randint(1, 4)):
        machine, reset = _added(machine, reset, *rng.sample(range(machine.size), 2))
    return mapped(machine, reset, rng)


def _added(machine: Machine, state: int, i: int, j: int) -> tuple[Machine, int]:
    """Return machine and state where element i holds the sum of the old elements i and j."""

    def substituted(row: int) -> int:
        return row ^ (1 << j if row >> i & 1 else 0)

    rows = list(machine.rows)
    rows[i] ^= rows[j]
    offset = machine.offset ^ (machine.offset >> j & 1) << i
    moved = Machine(tuple(map(substituted, rows)), tuple(map(substituted, machine.channels)), offset, machine.constants)
    return moved, state ^ (state >> j & 1) << i


def rewritten(found: Original, rng: random.Random) -> tuple[str, Mapped]:
    """Return a netlist of the same function, and what was done."""
    if rng.random() < 0.15 and not any(i.name.startswith("ff_p") for i in found.netlist.instances):
        return "other register form", other_form(found, rng)
    netlist, names = found.netlist.copy(), rng.sample(list(REWRITES), rng.randint(1, 4))
    for name in names:
        REWRITES[name](netlist, rng)
    return ", ".join(sorted(names)), netlist


def damaged(found: Original, rng: random.Random) -> tuple[str, Mapped, Damage]:
    """Return a netlist that is damaged in one place, and what was done; some have new names throughout as well."""
    while True:
        name, netlist = rng.choice(list(DAMAGES)), found.netlist.copy()
        damage = DAMAGES[name](netlist, rng)
        if damage and rng.random() < 0.3:
            before = [instance.name for instance in netlist.instances]
            renamed(netlist, rng)
            names = dict(zip(before, (instance.name for instance in netlist.instances), strict=True))
            damage = replace(damage, instances=tuple(names[old] for old in damage.instances))
            name = f"{name}, renamed"
        if damage:
            return name, netlist, replace(damage, reached=reached_from(netlist, damage.instances))


def run_case(seed: int, number: int, folder: Path) -> Case:
    """Make, compare and judge one case; even numbers are rewrites, odd ones damages."""
    rng = random.Random(f"{seed}/{number}")
    found = original(rng)
    damage = None
    if number % 2 == 0:
        kind = "rewrite"
        what, netlist = rewritten(found, rng)
    else:
        kind = "damage"
        what, netlist, damage = damaged(found, rng)
    texts = [found.netlist.text(), netlist.text(rng if kind == "rewrite" else None)]
    truth = "same" if streams(texts[0], CYCLES) == streams(texts[1], CYCLES) else "differs"
    if kind == "rewrite" and truth != "same":
        raise AssertionError(f"case {seed}/{number}: the rewrite {what} does not keep the function")
    outcome, name, located, drivers = _compared(texts, folder, damage)
    right = outcome == truth or (outcome == "refused" and truth == "differs")
    return Case(seed, number, kind, what, truth, outcome, name, right, located, drivers)


def _compared(texts: list[str], folder: Path, damage: Damage | None) -> tuple[str, str, str, int]:
    """Return the outcome, the class, how the damage was found, and how many drivers are named."""
    sides = []
    for name, text in zip(("old.v", "new.v"), texts, strict=True):
        (folder / name).write_text(text)
        try:
            sides.append(_audit(folder / name))
        except InputError as error:
            return "refused", error.troubles[0].found.replace("\n", " "), "by refusal", 0
    found = compare(*sides)
    return found.outcome, found.name, _located(found, damage) if damage else "", len(found.changed_nets)


def _audit(path: Path) -> AuditFacts:
    return audit(Plan(netlists=(path,), cells=(CELLS,), mode={"en": 1}))


def _located(found: Comparison, damage: Damage) -> str:
    named = {net.instance for net in found.changed_nets}
    if named & set(damage.instances):
        return "instance"
    told = {name for net in found.changed_nets for name in (*net.feeds, *net.rows)}
    exact = told == damage.reached or (damage.channels and told == set(damage.channels))
    return "reach" if told and exact else "no"


def run(count: int, seed: int, log: Path | None) -> Iterator[Case]:
    """Yield ``count`` rewrites and ``count`` harmful damages, those of the log first."""
    done = [case for case in _logged(log) if case.seed == seed]
    yield from done
    kept = Counter(case.kind for case in done if _counts(case))
    tried = {"rewrite": 0, "damage": 1} | {case.kind: case.number + 2 for case in done}
    with tempfile.TemporaryDirectory() as folder:
        for kind in ("rewrite", "damage"):
            while kept[kind] < count:
                case = run_case(seed, tried[kind], Path(folder))
                tried[kind] += 2
                kept[kind] += _counts(case)
                _note(log, case)
                yield case


def _counts(case: Case) -> bool:
    """Whether a case counts: every rewrite, and a damage that the truth shows to be one."""
    return case.kind == "rewrite" or case.truth == "differs"


def _logged(log: Path | None) -> list[Case]:
    if log is None or not log.exists():
        return []
    with log.open(newline="") as lines:
        return [
            Case(int(r["seed"]), int(r["number"]), r["kind"], r["what"], r["truth"], r["outcome"], r["name"],
                 r["right"] == "True", r["located"], int(r["drivers"]))
            for r in csv.DictReader(lines)
        ]  # fmt: skip


def _note(log: Path | None, case: Case) -> None:
    if log is None:
        return
    fresh = not log.exists()
    with log.open("a", newline="") as lines:
        writer = csv.DictWriter(lines, [one.name for one in fields(Case)])
        if fresh:
            writer.writeheader()
        writer.writerow(asdict(case))


def report(cases: list[Case], command: str, seconds: float) -> str:
    """Return the result as Markdown."""
    counted = [case for case in cases if _counts(case)]
    rewrites = [case for case in counted if case.kind == "rewrite"]
    damages = [case for case in counted if case.kind == "damage"]
    lines = [
        "# Mutation run of the comparison", "", f"    {command}", "",
        f"{platform.machine()}, {platform.system()}, Python {platform.python_version()}, {seconds:.0f} s.", "",
        f"* {len(rewrites)} rewrites that keep the function: {sum(not c.right for c in rewrites)} false alarms.",
        f"* {len(damages)} damages: {sum(not c.right for c in damages)} missed, "
        f"{sum(c.right and c.located == 'no' for c in damages)} told but not located.",
        f"* {len(cases) - len(counted)} more damages were harmless by the truth and left the count.", "",
        "| damage | cases | told | by instance | alone | by its channels and rows of A | not |",
        "|---|---|---|---|---|---|---|",
    ]  # fmt: skip
    for what in (*DAMAGES, *(f"{what}, renamed" for what in DAMAGES)):
        own = [case for case in damages if case.what == what]
        found = Counter(case.located for case in own)
        alone = sum(case.located == "instance" and case.drivers == 1 for case in own)
        counts = (len(own), sum(case.right for case in own), found["instance"], alone, found["reach"],
                  found["no"])  # fmt: skip
        lines.append(f"| {what} | {' | '.join(map(str, counts))} |")
    lines += ["", "| rewrite (alone or with others) | cases | told the same |", "|---|---|---|"]
    for what in (*REWRITES, "other register form"):
        own = [case for case in rewrites if what in case.what.split(", ")]
        lines.append(f"| {what} | {len(own)} | {sum(case.right for case in own)} |")
    return "\n".join([*lines, ""])


def main() -> int:
    """Run as a command; exit status 1 if a case was judged wrongly or not located."""
    parser = argparse.ArgumentParser(prog="python -m tests.mutations")
    parser.add_argument("--count", type=int, default=500, help="rewrites, and as many damages")
    parser.add_argument("--seed", type=int, default=1)
    parser.add_argument("--log", type=Path, help="a line a case; a run that is started again goes on behind them")
    parser.add_argument("--report", type=Path, help="where the result goes as Markdown")
    given = parser.parse_args()
    start, cases, wrong = time.perf_counter(), list[Case](), 0
    for case in run(given.count, given.seed, given.log):
        cases.append(case)
        if _counts(case) and (not case.right or case.located == "no"):
            wrong += 1
            print(case)
    command = f"python -m tests.mutations --count {given.count} --seed {given.seed}"
    text = report(cases, command, time.perf_counter() - start)
    print(text)
    if given.report:
        given.report.write_text(text, encoding="utf-8")
    return 1 if wrong else 0


if __name__ == "__main__":
    sys.exit(main())
