"""A report is written whole or not at all, and what went wrong is said."""

import errno
import os
import resource
import signal
import stat
import threading
from pathlib import Path

import pytest

from auditor.errors import InputError
from auditor.report.write import write_whole


def _trouble(path: Path) -> str:
    with pytest.raises(InputError) as caught:
        write_whole(path, "text")
    (trouble,) = caught.value.troubles
    assert trouble.place
    assert trouble.place.file == str(path)
    assert trouble.remedy
    return trouble.found


def test_the_file_holds_the_text_and_nothing_lies_beside_it(tmp_path):
    """The bytes are the text in UTF-8 with its line ends as they are."""
    write_whole(tmp_path / "r.json", "é\nb\r\n")
    assert (tmp_path / "r.json").read_bytes() == b"\xc3\xa9\nb\r\n"
    assert os.listdir(tmp_path) == ["r.json"]


def test_a_new_file_has_the_usual_permissions_and_an_old_one_keeps_its_own(tmp_path):
    """A new file follows the umask; a file that was private stays private."""
    before = os.umask(0o027)
    try:
        write_whole(tmp_path / "new", "x")
    finally:
        os.umask(before)
    assert stat.S_IMODE((tmp_path / "new").stat().st_mode) == 0o640
    (tmp_path / "old").write_text("y")
    (tmp_path / "old").chmod(0o600)
    write_whole(tmp_path / "old", "x")
    assert stat.S_IMODE((tmp_path / "old").stat().st_mode) == 0o600


def test_a_link_is_followed(tmp_path):
    """Writing to a link changes what it points to and leaves the link."""
    (tmp_path / "real").write_text("old")
    (tmp_path / "link").symlink_to("real")
    write_whole(tmp_path / "link", "new")
    assert (tmp_path / "link").is_symlink()
    assert (tmp_path / "real").read_text() == "new"


def test_what_a_killed_process_left_is_no_hindrance(tmp_path):
    """A temporary file under the same name is left alone, and the report is written."""
    left = tmp_path / f".auditor-{os.getpid()}-0.part"
    left.write_text("left")
    write_whole(tmp_path / "r", "x")
    assert (tmp_path / "r").read_text() == "x"
    assert left.read_text() == "left"


def test_a_missing_directory_is_said(tmp_path):
    """The trouble says that the directory does not exist; none is made."""
    assert _trouble(tmp_path / "no" / "r.json") == "the report cannot be written: its directory does not exist"
    assert os.listdir(tmp_path) == []


def test_a_directory_in_place_of_a_file_is_said(tmp_path):
    """The path of a directory is refused and the directory stays as it is."""
    assert _trouble(tmp_path) == "the report cannot be written: it is a directory"
    assert _trouble(Path()) == "the report cannot be written: it is a directory"
    assert os.listdir(tmp_path) == []


def test_a_file_in_place_of_a_directory_is_said(tmp_path):
    """A path through a file is refused."""
    (tmp_path / "f").write_text("x")
    assert _trouble(tmp_path / "f" / "r") == "the report cannot be written: a part of its path is no directory"


def test_a_name_that_is_too_long_or_impossible_is_said(tmp_path):
    """Names that no file system takes end in a trouble, not in a traceback."""
    assert _trouble(tmp_path / ("n" * 300)) == "the report cannot be written: the name is too long"
    assert "null" in _trouble(tmp_path / "a\0b")
    assert os.listdir(tmp_path) == []


def test_missing_permission_is_said(tmp_path, monkeypatch):
    """Where the system refuses to make a file, or the old one is read-only, the trouble says so."""

    def refuse(*_: object) -> int:
        raise PermissionError(errno.EACCES, "no")

    (tmp_path / "old").write_text("old")
    with monkeypatch.context() as patch:
        patch.setattr("auditor.report.write.os.access", lambda *_: False)
        assert _trouble(tmp_path / "old") == "the report cannot be written: writing there is not permitted"
    monkeypatch.setattr("auditor.report.write.os.open", refuse)
    assert _trouble(tmp_path / "new") == "the report cannot be written: writing there is not permitted"
    assert (tmp_path / "old").read_text() == "old"
    assert os.listdir(tmp_path) == ["old"]


def test_a_file_that_cannot_grow_leaves_the_old_one(tmp_path):
    """When writing stops half-way the old report is untouched and no temporary file stays."""
    path = tmp_path / "r"
    path.write_text("old")
    limits = resource.getrlimit(resource.RLIMIT_FSIZE)
    handler = signal.signal(signal.SIGXFSZ, signal.SIG_IGN)
    try:
        resource.setrlimit(resource.RLIMIT_FSIZE, (1000, limits[1]))
        with pytest.raises(InputError, match="the file would be larger than is allowed"):
            write_whole(path, "x" * 5000)
    finally:
        resource.setrlimit(resource.RLIMIT_FSIZE, limits)
        signal.signal(signal.SIGXFSZ, handler)
    assert path.read_text() == "old"
    assert os.listdir(tmp_path) == ["r"]


def test_a_full_disk_is_said(tmp_path, monkeypatch):
    """A disk that is full at the last moment, when the data is flushed, is told as such and leaves nothing."""

    def full(_: int) -> None:
        raise OSError(errno.ENOSPC, "No space left on device")

    monkeypatch.setattr("auditor.report.write.os.fsync", full)
    assert _trouble(tmp_path / "r") == "the report cannot be written: the disk is full"
    assert os.listdir(tmp_path) == []


@pytest.mark.skipif(not Path("/dev/full").exists(), reason="the system has no device that is always full")
def test_a_full_device_is_said():
    """Into a device the text is written straight, and its trouble is told in the same way."""
    assert _trouble(Path("/dev/full")) == "the report cannot be written: the disk is full"


def test_an_interrupt_leaves_nothing(tmp_path, monkeypatch):
    """An interrupt while writing goes through and leaves neither report nor temporary file."""

    def interrupt(_: int) -> None:
        raise KeyboardInterrupt

    monkeypatch.setattr("auditor.report.write.os.fsync", interrupt)
    with pytest.raises(KeyboardInterrupt):
        write_whole(tmp_path / "r", "x")
    assert os.listdir(tmp_path) == []


def test_a_pipe_gets_the_text(tmp_path):
    """A named pipe is written to and stays a pipe."""
    path, got = tmp_path / "pipe", []
    os.mkfifo(path)
    reader = threading.Thread(target=lambda: got.append(path.read_text()))
    reader.start()
    write_whole(path, "text")
    reader.join(timeout=10)
    assert got == ["text"]
    assert stat.S_ISFIFO(path.stat().st_mode)
