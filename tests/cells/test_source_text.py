"""Opening the files that describe cells: encodings, packing, and what cannot be text."""

import gzip

import pytest

from auditor.cells.source_text import read_text
from auditor.errors import InputError

PLAIN = "library (small) {\n  cell (AND2) {\n  }\n}\n"


@pytest.mark.parametrize(
    "data",
    [
        b"\xef\xbb\xbf" + PLAIN.encode(),
        PLAIN.replace("\n", "\r\n").encode(),
        PLAIN.replace("\n", "\r").encode(),
        gzip.compress(PLAIN.encode(), mtime=0),
        gzip.compress(PLAIN[:20].encode(), mtime=0) + gzip.compress(PLAIN[20:].encode(), mtime=0),
    ],
    ids=["byte order mark", "CR LF", "CR", "gz", "gz in two members"],
)
def test_encodings_of_the_same_text(tmp_path, data):
    """A byte order mark, other line ends and gz change nothing, lines included."""
    path = tmp_path / "a.lib"
    path.write_bytes(data)
    assert read_text(path) == PLAIN


def test_latin_1_is_read_where_utf_8_fails(tmp_path):
    """A file that is not UTF-8 is taken as Latin-1."""
    path = tmp_path / "a.lib"
    path.write_bytes("25 \u00b0C".encode("latin-1"))
    assert read_text(path) == "25 \u00b0C"


@pytest.mark.parametrize(
    ("data", "expected"),
    [
        (b"", "the file is empty; give a Liberty file, Verilog cell models or a cell table"),
        (b" \n\t", "the file is empty; give a Liberty file, Verilog cell models or a cell table"),
        (b"library\0(", "this is a binary file; give a Liberty file, Verilog cell models or a cell table"),
        (gzip.compress(PLAIN.encode(), mtime=0)[:-9], "the gz file is cut off or damaged; fetch or pack it again"),
        (b"\x1f\x8bnonsense", "the gz file is cut off or damaged; fetch or pack it again"),
    ],
    ids=["empty", "blank", "binary", "cut gz", "no gz"],
)
def test_a_file_that_cannot_be_text(tmp_path, data, expected):
    """Empty, binary and damaged files are told by name."""
    path = tmp_path / "a.lib"
    path.write_bytes(data)
    with pytest.raises(InputError) as caught:
        read_text(path)
    assert str(caught.value) == f"{path}: {expected}"


def test_a_file_that_cannot_be_opened(tmp_path):
    """A missing file, a directory and an impossible name are told by name."""
    for path, expected in [
        (tmp_path / "none.lib", "no such file; mend its name"),
        (tmp_path, "this is a directory; name the files in it one by one"),
        (tmp_path / ("x" * 300), "cannot be read (File name too long); make it readable"),
    ]:
        with pytest.raises(InputError) as caught:
            read_text(path)
        assert str(caught.value) == f"{path}: {expected}"
