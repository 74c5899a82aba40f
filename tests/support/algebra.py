"""PARI/GP through the package cypari: the outside reference for factors, orders and logarithms."""

from cypari import pari

pari.allocatemem(1 << 28, silent=True)  # logarithms overflow the stack that it starts with


def pari_polynomial(p: int) -> object:
    """Return a polynomial over GF(2) as PARI holds it."""
    return pari(f"Mod(1,2)*Pol(binary({p}))")


def from_pari(polynomial: object) -> int:
    """Return the int of a PARI polynomial with coefficients modulo 2."""
    return int(pari.fromdigits(pari.lift(pari.Vec(polynomial)), 2))


def pari_factors(p: int) -> tuple[tuple[int, int], ...]:
    """Return the factorisation over GF(2) that PARI gives, ascending."""
    bases, multiplicities = pari.factor(pari_polynomial(p))
    return tuple(sorted((from_pari(base), int(count)) for base, count in zip(bases, multiplicities, strict=True)))


def pari_order_of_x(f: int) -> int:
    """Return the order of x modulo an irreducible f."""
    return int(pari.fforder(pari.ffgen(pari_polynomial(f))))


def pari_logarithm(value: int, f: int) -> int:
    """Return the logarithm of a value to base x modulo an irreducible f."""
    x = pari.ffgen(pari_polynomial(f))
    element = pari.subst(pari(f"Pol(binary({value}))"), "x", x)
    return int(pari.fflog(element, x))
