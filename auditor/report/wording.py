"""The cautions and the small phrases that every writer shares; all of them plain ASCII."""

from collections.abc import Iterable, Sequence

from auditor.notation import Polynomial

CAUTIONS = (
    "The mode is taken as stated: whether the chip can be brought into it, and stays in it, was not checked.",
    "Clocks are taken as ideal: every clock pin sees the edge of its root at the same moment. "
    "No timing was analysed: no setup, hold, skew or glitch.",
    "No fault was simulated: what a finding costs in fault coverage was not measured.",
    "The cell library is taken as true: what a cell does and what its pins weigh is as its files say, without wires.",
    "Whatever is listed as assumed was taken for granted and not checked.",
    "The audit is evidence and no approval: the release decision stays with the responsible engineers "
    "and their own rules.",
)

# Longer numbers are told by their size; the JSON holds every digit.
_MOST_DIGITS_BITS = 512
# A denser polynomial is told by its hexadecimal form alone.
_MOST_TERMS = 40
# The interpreter refuses to convert integers of more than 4300 digits at once.
_SAFE_BITS = 14_000
_CHUNK_DIGITS = 4_000


def plural(count: int, noun: str, nouns: str = "") -> str:
    """Return "1 channel", "300 channels"; ``nouns`` where the plural is not the noun with an s."""
    return f"{count} {noun if count == 1 else nouns or noun + 's'}"


def listing(phrases: Sequence[str]) -> str:
    """Return "a", "a and b", "a, b and c"."""
    return " and ".join([", ".join(phrases[:-1]), phrases[-1]] if len(phrases) > 1 else phrases)


def decimal(number: int) -> str:
    """Return the decimal digits of ``number`` >= 0, however many there are."""
    if number.bit_length() <= _SAFE_BITS:
        return str(number)
    chunks = []
    while number.bit_length() > _SAFE_BITS:
        number, rest = divmod(number, 10**_CHUNK_DIGITS)
        chunks.append(f"{rest:0{_CHUNK_DIGITS}d}")
    return str(number) + "".join(reversed(chunks))


def as_power(number: int) -> str:
    """Return "2^n" or "2^n - 1" where the number is of that form and is not smaller than 3, else nothing."""
    if number < 3:
        return ""
    if number & (number + 1) == 0:
        return f"2^{number.bit_length()} - 1"
    return f"2^{number.bit_length() - 1}" if number & (number - 1) == 0 else ""


def number_text(number: int) -> str:
    """Return the number for a reader: "4294967295 = 2^32 - 1", "12", or its size where it has too many digits."""
    power = as_power(number)
    if number.bit_length() <= _MOST_DIGITS_BITS:
        return f"{decimal(number)} = {power}" if power else decimal(number)
    return power or f"between 2^{number.bit_length() - 1} and 2^{number.bit_length()} (all digits in the JSON)"


def exponents(polynomial: Polynomial) -> list[int]:
    """Return the exponents with coefficient 1, the highest first."""
    found = []
    while polynomial:
        found.append(polynomial.bit_length() - 1)
        polynomial ^= 1 << found[-1]
    return found


def polynomial_text(polynomial: Polynomial) -> str:
    """Return "x^4 + x + 1", or the number of terms and the hexadecimal form where there are too many."""
    powers = exponents(polynomial)
    if len(powers) > _MOST_TERMS:
        return f"{len(powers)} terms, hex {polynomial:x}"
    names = {0: "1", 1: "x"}
    return " + ".join(names.get(k, f"x^{k}") for k in powers) or "0"


def level_counts(levels: Iterable[str]) -> str:
    """Return "2 errors, 1 warning" for the levels of all findings that are not waived, or "no findings"."""
    seen = list(levels)
    counts = [plural(seen.count(level), level) for level in ("error", "warning", "note") if level in seen]
    return ", ".join(counts) or "no findings"
