"""Published registers, drawn as gates and audited: stage phases, maximal lengths, orders, and a known misprint."""

import random
from pathlib import Path

import pytest

from auditor.phases.table import RegisterFacts
from tests.support.audits import audit_block
from tests.support.gates import Recipe, draw
from tests.support.machines import Machine, automaton, berlekamp_massey, bits_of, fibonacci, galois, with_channels
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


def audited_register(folder: Path, machine: Machine, observed: int = 0) -> RegisterFacts:
    """Draw a register with one channel, audit it and return what it says of the register."""
    block = draw(with_channels(machine, [[observed]]), MIXED, random.Random(machine.size))
    facts = audit_block(folder, block)
    assert facts.phases is not None
    (register,) = facts.phases.registers
    assert register.cycling_degree == machine.size
    return register


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


@pytest.mark.parametrize("rules", CELLULAR_AUTOMATA)
def test_published_cellular_automata_are_maximal(tmp_path: Path, rules: str) -> None:
    """Hortensius et al. (1989): the rule vectors of 4 to 28 sites have the period 2^n - 1."""
    machine = automaton(rules)
    register = audited_register(tmp_path, machine)
    assert register.primitive is True
    assert register.period == (1 << len(rules)) - 1
    stream = with_channels(machine, [[0]]).stream(0, 1, 2 * len(rules))
    assert register.characteristic_polynomial == berlekamp_massey(stream)


@pytest.mark.parametrize("stages", [row for row in MAXIMAL_STAGES if row[0] <= 40 or row[0] % 16 == 0], ids=str)
def test_tabled_stages_are_maximal(tmp_path: Path, stages: tuple[int, ...]) -> None:
    """The stage-number table prints connection polynomials, and its rows are primitive."""
    register = audited_register(tmp_path, fibonacci(stages, stages[0]))
    assert tuple(bits_of(register.connection_polynomial)) == (0, *sorted(stages))
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


@pytest.mark.parametrize("name", STANDARD_POLYNOMIALS)
def test_registers_of_standards_have_their_order(tmp_path: Path, name: str) -> None:
    """PRBS, scrambler and CRC polynomials: period and factor degrees of the register that the standard draws."""
    exponents, order, degrees = STANDARD_POLYNOMIALS[name]
    size = max(exponents)
    register = audited_register(tmp_path, fibonacci([e for e in exponents if e], size))
    assert tuple(bits_of(register.connection_polynomial)) == tuple(sorted(exponents))
    assert register.period == order
    found = [f.polynomial.bit_length() - 1 for f in register.factors for _ in range(f.multiplicity)]
    assert tuple(sorted(found)) == degrees
    assert register.primitive is (order == (1 << size) - 1)
