"""Making a factor base: right, the same every time, and stopped by a limit on work."""

import pytest

from auditor.errors import InternalError
from auditor.gf2.calculus import table
from auditor.gf2.calculus.elimination import SparseSystem
from auditor.gf2.calculus.factor_base import irreducibles
from auditor.gf2.calculus.table import LARGEST_DEGREE, make_factor_base
from auditor.gf2.calculus.work import OutOfWork, Work
from auditor.gf2.polynomial import power_modulo

# Large primes of 2^n - 1, from the Cunningham tables (Brillhart and others 1988).
LARGE = {49: 4432676798593, 61: 2**61 - 1, 65: 145295143558111}


@pytest.mark.parametrize("n", LARGE)
def test_logarithms_of_the_base_are_right(n):
    """Every logarithm found is one, by exponentiation of single elements, and nearly all are found."""
    base = make_factor_base(n, LARGE[n], Work())
    cofactor = ((1 << n) - 1) // LARGE[n]
    found = 0
    for prime, log in zip(irreducibles(base.degree).tolist(), base.logs, strict=True):
        if log is not None:
            found += 1
            assert power_modulo(2, log * cofactor, base.field) == power_modulo(prime, cofactor, base.field)
    assert found > 0.9 * len(base.logs)
    assert base.logs[0] == 1


def test_a_table_is_the_same_again():
    """Nothing depends on chance."""
    assert make_factor_base(49, LARGE[49], Work()) == make_factor_base(49, LARGE[49], Work())


def test_work_is_counted_and_limited():
    """The same work is done with a limit that it just reaches, and none of the sieve with one less than a block."""
    work = Work()
    base = make_factor_base(49, LARGE[49], work)
    assert make_factor_base(49, LARGE[49], Work(limit=work.done)) == base
    for limit in (0, work.done - 1):
        with pytest.raises(OutOfWork):
            make_factor_base(49, LARGE[49], Work(limit=limit))


def test_beyond_the_largest_degree_there_is_no_table():
    """A degree without parameters ends the work before it begins."""
    with pytest.raises(OutOfWork):
        make_factor_base(LARGEST_DEGREE + 1, 3, Work())


def test_a_wrong_solution_of_the_equations_is_told(monkeypatch):
    """One logarithm of the core is spoilt: some relation does not hold."""
    right = SparseSystem.solution

    def spoilt(system):
        found = right(system)
        return found | {1: found[1] + 1}

    monkeypatch.setattr(table.SparseSystem, "solution", spoilt)
    with pytest.raises(InternalError, match="does not hold"):
        make_factor_base(49, LARGE[49], Work())


def test_progress_is_told():
    """Short phrases say how many relations there are."""
    phrases = []
    make_factor_base(49, LARGE[49], Work(progress=phrases.append))
    assert phrases[0].startswith("relations 0/")
    assert phrases[-1].startswith("linear algebra")
