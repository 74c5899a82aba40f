"""Opens a file that describes cells: plain or gz, UTF-8 or Latin-1, any line ends."""

import gzip
import zlib
from pathlib import Path

from auditor.errors import fail
from auditor.notation import SourcePlace

_GZ = b"\x1f\x8b"


def read_text(path: Path) -> str:
    """Return the text with line feeds alone and without a byte order mark.

    Raises ``InputError`` for what is missing, a directory, unreadable, a broken gz file, binary or empty.
    """
    place = SourcePlace(str(path))
    try:
        data = path.read_bytes()
    except FileNotFoundError:
        raise fail("no such file", "mend its name", place) from None
    except IsADirectoryError:
        raise fail("this is a directory", "name the files in it one by one", place) from None
    except OSError as error:
        raise fail(f"cannot be read ({error.strerror})", "make it readable", place) from None
    if data.startswith(_GZ):
        try:
            data = gzip.decompress(data)
        except (EOFError, gzip.BadGzipFile, zlib.error):
            raise fail("the gz file is cut off or damaged", "fetch or pack it again", place) from None
    if b"\0" in data:
        raise fail("this is a binary file", "give a Liberty file, Verilog cell models or a cell table", place)
    try:
        text = data.decode("utf-8-sig")
    except UnicodeDecodeError:
        text = data.decode("latin-1")
    if not text.strip():
        raise fail("the file is empty", "give a Liberty file, Verilog cell models or a cell table", place)
    return text.replace("\r\n", "\n").replace("\r", "\n") if "\r" in text else text
