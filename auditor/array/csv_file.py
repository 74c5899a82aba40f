"""The lines of a CSV file that the reviewer writes."""

import csv
from collections.abc import Iterator
from pathlib import Path

from auditor.errors import fail
from auditor.notation import SourcePlace


def csv_lines(path: Path, what: str, option: str, remedy: str) -> Iterator[tuple[int, list[str]]]:
    """Yield (line, words) of every line that is not empty.

    Raises ``InputError`` where there is no CSV; ``what`` it holds, the option and the remedy stand in the message.
    """
    place = SourcePlace(str(path))
    try:
        with path.open(newline="", encoding="utf-8-sig") as source:
            reader = csv.reader(source, strict=True)
            for words in reader:
                if any(words):
                    yield reader.line_num, [word.strip() for word in words]
    except (OSError, ValueError) as error:  # ValueError: not UTF-8, or a NUL in the name
        reason = getattr(error, "strerror", None) or "not UTF-8 text"
        raise fail(f"the {what} cannot be read: {reason}", f"give {option} a CSV file in UTF-8", place) from None
    except csv.Error as error:
        raise fail(f"the {what} are no CSV: {error}", remedy, place) from None
