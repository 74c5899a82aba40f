"""The file of the chains: both forms, and the texts of everything that can be wrong with it."""

from pathlib import Path

import pytest

from auditor.array.chain_file import read_chain_file
from auditor.array.scan_array import Chain, ScanCell
from auditor.errors import InputError

CHANNELS = ("so[0]", "so[1]")


def troubles(tmp_path: Path, text: str | bytes) -> list[str]:
    """Return the messages that reading this text gives."""
    path = tmp_path / "chains.csv"
    path.write_bytes(text if isinstance(text, bytes) else text.encode())
    with pytest.raises(InputError) as caught:
        read_chain_file(path, CHANNELS)
    return [str(trouble).replace(f"{tmp_path}/", "") for trouble in caught.value.troubles]


def test_lengths_are_read(tmp_path: Path) -> None:
    """One line a chain; a byte order mark, blanks and empty lines do not matter."""
    path = tmp_path / "chains.csv"
    path.write_bytes(b"\xef\xbb\xbfchannel,length\r\nso[1], 7\r\n\r\nso[0],9\r\n")
    array = read_chain_file(path, CHANNELS)
    assert array.chains == (Chain("so[1]", 7), Chain("so[0]", 9))
    assert (array.known_from, array.longest, array.size) == ("file", 9, 16)


def test_scan_cells_are_read(tmp_path: Path) -> None:
    """One line a scan cell; delay and inversion have defaults."""
    path = tmp_path / "chains.csv"
    path.write_text("channel,cell,inverted,delay\nso[0],u1,1,0\nso[0],u2,0,3\n")
    (chain,) = read_chain_file(path, CHANNELS).chains
    assert chain == Chain("so[0]", 2, (ScanCell("u1", 0, True), ScanCell("u2", 3, False)))
    path.write_text("channel,cell\nso[0],u1\nso[1],v1\nso[0],u2\n")
    one, other = read_chain_file(path, CHANNELS).chains
    assert one == Chain("so[0]", 2, (ScanCell("u1", 1, False), ScanCell("u2", 2, False)))
    assert (other.channel, other.length, other.is_plain) == ("so[1]", 1, True)


def test_wrong_lines_are_told_together(tmp_path: Path) -> None:
    """Each wrong line gives its place and what to do."""
    text = "channel,length\nso[2],5\nso[0],0\nso[1]\nso[1],8\nso[1],9\n"
    assert troubles(tmp_path, text) == [
        "chains.csv:2: so[2] is no channel; did you mean so[1] or so[0]?",
        "chains.csv:3: the chain of so[0] has the length 0; give a whole number from 1 to 10000000",
        "chains.csv:4: the line has not one word for each column; give each column of the header a word",
        "chains.csv:6: channel so[1] has a chain already; give each channel one chain",
    ]
    text = "channel,cell,delay,inverted\nso[0],u1,-1,0\nso[0],u1,1,2\nso[0],u1,1,0\nso[1],u1,1,0\nso[1],,1,0\n"
    assert troubles(tmp_path, text) == [
        "chains.csv:2: the delay of u1 is -1; give a number from 0 to 10000000",
        "chains.csv:3: inverted of u1 is 2; write 0 or 1",
        "chains.csv:5: scan cell u1 stands twice; mend its name",
        "chains.csv:6: a scan cell has no name; mend its name",
    ]


def test_a_file_that_is_no_table_says_so(tmp_path: Path) -> None:
    """A missing or empty file, another header, other bytes and open quotes each give one message."""
    with pytest.raises(InputError) as caught:
        read_chain_file(tmp_path / "none.csv", CHANNELS)
    (trouble,) = caught.value.troubles
    assert trouble.found == "the chains cannot be read: No such file or directory"
    remedy = "write channel,length or channel,cell,delay,inverted"
    assert troubles(tmp_path, "") == [f"chains.csv:1: the chains have the header (none); {remedy}"]
    assert troubles(tmp_path, "chain,size\n") == [f"chains.csv:1: the chains have the header chain,size; {remedy}"]
    assert troubles(tmp_path, "channel,length\n") == [
        "chains.csv:1: the file names no chain; add a line for each chain or scan cell"
    ]
    assert troubles(tmp_path, b"channel,length\n\xff\xfe,3\n") == [
        "chains.csv: the chains cannot be read: not UTF-8 text; give --chains a CSV file in UTF-8"
    ]
    assert troubles(tmp_path, 'channel,length\n"so[0],3\n') == [
        f"chains.csv: the chains are no CSV: unexpected end of data; {remedy}"
    ]
