"""Published registers, drawn as gates and audited: stage phases, maximal lengths, orders, and a known misprint."""

import random
from pathlib import Path

import pytest

from auditor.phases.table import RegisterFacts
from tests.support.audits import audit_block
from tests.support.gates import Recipe, draw
from tests.support.machines import (
    Machine,
    automaton,
    berlekamp_massey,
    beside,
    bits_of,
    fibonacci,
    galois,
    with_channels,
)
from tests.support.published import (
    CELLULAR_AUTOMATA,
    MAXIMAL_STAGES,
    MISPRINT,
    MISPRINT_FACTOR_DEGREES,
    MISPRINT_MENDED,
    STAGE_PHASES,
    STANDARD_POLYNOMIALS,
)

MIXED = Recipe(forms=("xor_gate", "xnor_gate", "four_nands"), complemented=True, all_storage=True, buffers=True)


def audited_registers(folder: Path, machines: list[Machine]) -> list[RegisterFacts]:
    """Draw registers beside each other in one block, audit it and return what it says of each, in their order."""
    block = draw(beside([with_channels(machine, [[0]]) for machine in machines]), MIXED, random.Random(1))
    facts = audit_block(folder, block)
    assert facts.phases is not None
    assert facts.extraction.machine is not None
    storage = facts.extraction.machine.storage
    of_element = {storage[k]: register for register in facts.phases.registers for k in register.elements}
    first, found = 0, []
    for machine in machines:
        names = block.names[first : first + machine.size]
        (register,) = {id(of_element[name]): of_element[name] for name in names}.values()
        assert len(register.elements) == register.cycling_degree == machine.size
        found.append(register)
        first += machine.size
    return found


def audited_register(folder: Path, machine: Machine) -> RegisterFacts:
    """Return what an audit says of one register."""
    return audited_registers(folder, [machine])[0]


@pytest.mark.parametrize("form", [1, 2], ids=["fibonacci", "distributed"])
@pytest.mark.parametrize("exponents", STAGE_PHASES, ids=str)
def test_every_stage_has_its_phase(tmp_path: Path, exponents: tuple[int, ...], form: int) -> None:
    """The lead of stage k against stage 1, as computed by stepping, of Fibonacci and distributed-feedback registers."""
    row, size = STAGE_PHASES[exponents], max(exponents)
    machine = fibonacci(row[0], size) if form == 1 else galois(exponents)
    block = draw(with_channels(machine, [[k] for k in range(size)]), MIXED, random.Random(form))
    facts = audit_block(tmp_path, block, reference=block.channels[0])
    assert facts.phases is not None
    assert tuple(phase.lead for phase in facts.phases.phases) == row[form]
    assert tuple(bits_of(facts.phases.registers[0].characteristic_polynomial)) == tuple(sorted(exponents))


def test_published_cellular_automata_are_maximal(tmp_path: Path) -> None:
    """Hortensius et al. (1989): the rule vectors of 4 to 28 sites have the period 2^n - 1."""
    machines = [automaton(rules) for rules in CELLULAR_AUTOMATA]
    for machine, register in zip(machines, audited_registers(tmp_path, machines), strict=True):
        assert register.primitive is True
        assert register.period == (1 << machine.size) - 1
        stream = with_channels(machine, [[0]]).stream(0, 1, 2 * machine.size)
        assert register.characteristic_polynomial == berlekamp_massey(stream)


@pytest.mark.parametrize("sizes", [range(3, 65), range(65, 105), range(105, 141), range(141, 169)], ids=str)
def test_tabled_stages_are_maximal(tmp_path: Path, sizes: range) -> None:
    """The stage-number table prints connection polynomials; all rows but the misprint are primitive."""
    rows = [row for row in MAXIMAL_STAGES if row[0] in sizes and row[0] != MISPRINT]
    registers = audited_registers(tmp_path, [fibonacci(row, row[0]) for row in rows])
    for row, register in zip(rows, registers, strict=True):
        assert tuple(bits_of(register.connection_polynomial)) == (0, *sorted(row))
        assert register.primitive is True


def test_the_misprinted_row_is_not_maximal(tmp_path: Path) -> None:
    """The row of 102 as printed falls into factors of degree 3, 34 and 65; the mended row is primitive."""
    printed = next(row for row in MAXIMAL_STAGES if row[0] == MISPRINT)
    register = audited_register(tmp_path, fibonacci(printed, MISPRINT))
    assert register.primitive is False
    degrees = [factor.polynomial.bit_length() - 1 for factor in register.factors]
    assert tuple(sorted(degrees)) == MISPRINT_FACTOR_DEGREES
    assert register.period is not None
    assert register.period < register.maximum_period
    assert audited_register(tmp_path, fibonacci(MISPRINT_MENDED, MISPRINT)).primitive is True


def test_registers_of_standards_have_their_order(tmp_path: Path) -> None:
    """PRBS, scrambler and CRC polynomials: period and factor degrees of the register that the standard draws."""
    rows = list(STANDARD_POLYNOMIALS.values())
    machines = [fibonacci([e for e in exponents if e], max(exponents)) for exponents, _, _ in rows]
    for (exponents, order, degrees), register in zip(rows, audited_registers(tmp_path, machines), strict=True):
        assert tuple(bits_of(register.connection_polynomial)) == tuple(sorted(exponents))
        assert register.period == order
        found = [f.polynomial.bit_length() - 1 for f in register.factors for _ in range(f.multiplicity)]
        assert tuple(sorted(found)) == degrees
        assert register.primitive is (order == (1 << max(exponents)) - 1)
