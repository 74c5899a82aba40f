"""Small phrases are right for one and for many, for small and for huge numbers."""

import pytest

from auditor.report.wording import (
    CAUTIONS,
    as_power,
    decimal,
    exponents,
    level_counts,
    number_text,
    plural,
    polynomial_text,
)


@pytest.mark.parametrize(
    ("number", "text"),
    [(0, ""), (1, ""), (2, ""), (3, "2^2 - 1"), (4, "2^2"), (6, ""), (2**32 - 1, "2^32 - 1"), (2**127, "2^127"),
     (2**127 - 2, "")],
)  # fmt: skip
def test_powers_are_named_where_they_are_ones(number, text):
    """2^n and 2^n - 1 are named, other numbers are not; below 3 the number says it better."""
    assert as_power(number) == text


def test_numbers_are_told_in_full_up_to_512_bits_and_by_size_beyond():
    """A number is told with its digits and power; a longer one by the power or the powers around it."""
    assert number_text(255) == "255 = 2^8 - 1"
    assert number_text(21) == "21"
    assert number_text(2**512 - 1).startswith("134078079299425970995740249982058461274793658205923933777235614437")
    assert number_text(2**4096 - 1) == "2^4096 - 1"
    assert number_text(3 * 2**4095) == "between 2^4096 and 2^4097 (all digits in the JSON)"


@pytest.mark.parametrize(("power", "more"), [(0, -1), (0, 8), (3999, 0), (4000, 0), (8000, 7), (9001, -1)])
def test_decimal_digits_are_right_at_any_length(power, more):
    """The digits, read back piece by piece, are the number, with no zero lost between the pieces."""
    number, value = 10**power + more, 0
    digits = decimal(number)
    for start in range(0, len(digits), 1000):
        piece = digits[start : start + 1000]
        value = value * 10 ** len(piece) + int(piece)
    assert value == number
    assert digits == "0" or digits[0] != "0"


def test_polynomials_are_written_from_the_highest_power_down():
    """x^4 + x + 1 is 10011 in binary; a dense one is told by its hexadecimal form; zero is 0."""
    assert polynomial_text(0b10011) == "x^4 + x + 1"
    assert exponents(0b10011) == [4, 1, 0]
    assert polynomial_text(0) == "0"
    assert polynomial_text((1 << 41) - 1) == "41 terms, hex 1ffffffffff"


def test_counts_agree_with_their_noun():
    """One is singular, none and many are plural, irregular plurals are given."""
    assert [plural(k, "channel") for k in (0, 1, 2)] == ["0 channels", "1 channel", "2 channels"]
    assert plural(2, "mismatch", "mismatches") == "2 mismatches"
    assert level_counts(["note", "error", "error"]) == "2 errors, 1 note"
    assert level_counts([]) == "no findings"


def test_the_cautions_name_what_was_not_checked():
    """Mode, clocks, timing, faults, library, and who decides are all in the cautions, which are plain ASCII."""
    text = " ".join(CAUTIONS)
    for word in ("mode", "ideal", "timing", "fault", "library", "release decision", "assumed"):
        assert word in text
    assert text.isascii()
