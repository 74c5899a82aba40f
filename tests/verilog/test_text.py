"""Files to blanked text: what is tolerated, what is refused with which words, and that lines never move."""

import gzip
from pathlib import Path

import pytest

from auditor.errors import TroubleList
from auditor.verilog.statements import Lines
from auditor.verilog.text import SourceText, blank, read_text


def _troubles_of(path: Path) -> str:
    troubles = TroubleList()
    assert read_text(path, troubles) is None
    (trouble,) = troubles.troubles
    return str(trouble).replace(str(path), "FILE")


def _blanked(text: str) -> str | None:
    source = blank(SourceText(text, Lines((1,), ("f.v",), (1,))), TroubleList())
    return source.text if source else None


@pytest.mark.parametrize(
    ("name", "content", "message"),
    [
        ("missing.v", None, "FILE: there is no such file; mend the path"),
        ("empty.v", b"", "FILE: the file is empty; give a Verilog netlist"),
        ("blank.v", b" \r\n\t", "FILE: the file is empty; give a Verilog netlist"),
        (
            "binary.v",
            b"module\x00",
            "FILE: the file is binary, not text; give a Verilog netlist as text, plain or gzip",
        ),
        (
            "plain.v.gz",
            b"module m; endmodule",
            "FILE: the name ends in .gz but the content is not gzip; pack the file again or rename it",
        ),
        (
            "cut.v.gz",
            gzip.compress(b"module m; endmodule" * 9, mtime=0)[:-12],
            "FILE: the gzip data are cut off; copy or pack the file again",
        ),
        (
            "damaged.v.gz",
            gzip.compress(b"module m; endmodule" * 9, mtime=0)[:-8] + bytes(8),
            "FILE: the gzip data are damaged; copy or pack the file again",
        ),
    ],
)
def test_a_file_without_text_is_one_clear_trouble(
    tmp_path: Path, name: str, content: bytes | None, message: str
) -> None:
    """Each way in which a file holds no text has its own message and remedy."""
    if content is not None:
        (tmp_path / name).write_bytes(content)
    assert _troubles_of(tmp_path / name) == message


def test_a_directory_is_refused(tmp_path: Path) -> None:
    """A directory is told apart from a file that cannot be read."""
    assert _troubles_of(tmp_path) == "FILE: this is a directory, not a file; name the files in it"


@pytest.mark.parametrize(
    "content",
    [
        b"\xef\xbb\xbfa\xe9\r\nb\rc",
        gzip.compress(b"a\xe9\nb\nc", mtime=0),
        b"a\xc3\xa9\nb\nc",
    ],
)
def test_encodings_and_line_ends_are_tolerated(tmp_path: Path, content: bytes) -> None:
    """A byte order mark, latin-1, gzip under any name and all line ends give plain text with line feeds."""
    (tmp_path / "any.v").write_bytes(content)
    text = read_text(tmp_path / "any.v", TroubleList())
    assert text is not None
    assert text.lstrip("\xef\xbb\xbf") == "aé\nb\nc"


@pytest.mark.parametrize(
    ("text", "blanked"),
    [
        ("a // c\nb", "a  \nb"),
        ("a /* x\ny */ b", "a  \n b"),
        ('(* keep = "*)", p\n *) wire w;', " \n wire w;"),
        ("@(*) x", "@(*) x"),
        (r"wire \a//b , \x(*y , \c/*d ;", r"wire \a//b , \x(*y , \c/*d ;"),
        ('"// no comment" // one', '"// no comment"  '),
        ("/* // */ x", "  x"),
        ("plain", "plain"),
    ],
)
def test_blanking_keeps_lines_strings_and_escaped_names(text: str, blanked: str) -> None:
    """Comments and attributes go, line ends stay, signs inside other tokens are none."""
    assert _blanked(text) == blanked


@pytest.mark.parametrize(
    ("text", "messages"),
    [
        ("a\n /* b\nc", ["f.v:2: a comment begins here and never ends; end it with */"]),
        ("a /*/", ["f.v:1: a comment begins here and never ends; end it with */"]),
        ("\n(* b", ["f.v:2: an attribute begins here and never ends; end it with *)"]),
    ],
)
def test_what_cannot_be_blanked_is_noted(text: str, messages: list[str]) -> None:
    """What never ends is noted with the line on which it begins."""
    troubles = TroubleList()
    assert blank(SourceText(text, Lines((1,), ("f.v",), (1,))), troubles) is None
    assert list(map(str, troubles.troubles)) == messages
