"""Logarithms in any field GF(2)[x]/(f) by index calculus in the canonical field of its degree."""

from collections.abc import Sequence

from auditor.errors import InternalError
from auditor.gf2.batch import LinearMap, Ring
from auditor.gf2.calculus.descent import Descent
from auditor.gf2.calculus.factor_base import FactorBase
from auditor.gf2.calculus.roots import root
from auditor.gf2.calculus.work import Work
from auditor.gf2.polynomial import multiply_modulo
from auditor.notation import Polynomial


def field_logarithms(
    values: Sequence[Polynomial], f: Polynomial, base: FactorBase, modulus: int, work: Work
) -> list[int]:
    """Return the logarithms to base x modulo f of reduced values other than zero.

    ``modulus`` divides that of the base and the order of x modulo f. The x of the user is a root of f in the canonical
    field: if its logarithm there is r and that of a value is s, the value is x^(s / r). ``OutOfWork`` where the limit
    is reached; ``InternalError`` if r has no inverse, as then the base is wrong.
    """
    work.report("a root in the canonical field")
    image = root(f, base.field)
    powers = [1]
    for _ in range(f.bit_length() - 2):
        powers.append(multiply_modulo(powers[-1], image, base.field))
    user, canonical = Ring(f), Ring(base.field)
    images = canonical.unpack(LinearMap(canonical.pack(powers))(user.pack(values)))
    own, *found = Descent(base, work).logarithms([image, *images])
    try:
        scale = pow(own, -1, modulus)
    except ValueError as error:
        raise InternalError(f"the logarithm of x modulo {f:#x} contradicts its order") from error
    return [log * scale % modulus for log in found]
