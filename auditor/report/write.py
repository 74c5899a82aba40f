"""Writes a report as a whole or not at all."""

import errno
import os
import stat
from pathlib import Path

from auditor.errors import InputError, fail
from auditor.notation import SourcePlace

_REMEDIES = {
    errno.ENOENT: ("its directory does not exist", "make the directory or give another path"),
    errno.ENOTDIR: ("a part of its path is no directory", "give a path inside a directory"),
    errno.EISDIR: ("it is a directory", "give the name of a file"),
    errno.EACCES: ("writing there is not permitted", "change the permission or give another path"),
    errno.EPERM: ("writing there is not permitted", "change the permission or give another path"),
    errno.EROFS: ("the file system is read-only", "give a path on another file system"),
    errno.ENOSPC: ("the disk is full", "free some space or give another path"),
    errno.EDQUOT: ("the disk quota is used up", "free some space or give another path"),
    errno.EFBIG: ("the file would be larger than is allowed", "raise the limit on file size or give another path"),
    errno.ENAMETOOLONG: ("the name is too long", "give a shorter path"),
}


def write_whole(path: Path, text: str) -> None:
    """Write ``text`` to ``path`` in UTF-8, so that the file holds either all of it or what it held before.

    The text goes to a temporary file in the same directory that takes the place of ``path`` at the end; on failure it
    is removed. A link is followed, permissions of an existing file are kept; into a device or a pipe the text is
    written straight. Raises ``InputError``.
    """
    data = text.encode("utf-8", "backslashreplace")
    try:
        before = _status(path)
        if before and not stat.S_ISREG(before.st_mode):
            path.write_bytes(data)
            return
        if before and not os.access(path, os.W_OK):
            raise PermissionError(errno.EACCES, "not writable")
        _replace(Path(os.path.realpath(path)), data, stat.S_IMODE(before.st_mode) if before else None)
    except (OSError, ValueError) as error:
        raise _trouble(path, error) from error


def _status(path: Path) -> os.stat_result | None:
    try:
        return path.stat()
    except FileNotFoundError:
        return None


def _replace(target: Path, data: bytes, mode: int | None) -> None:
    handle, temporary = _open_beside(target)
    try:
        with open(handle, "wb") as file:
            file.write(data)
            file.flush()
            os.fsync(file.fileno())
        if mode is not None:
            temporary.chmod(mode)
        temporary.replace(target)
    except BaseException:
        temporary.unlink(missing_ok=True)
        raise


def _open_beside(target: Path) -> tuple[int, Path]:
    """Create a new file in the directory of ``target``, with the permissions that a new file gets."""
    number = 0
    while True:
        temporary = target.parent / f".auditor-{os.getpid()}-{number}.part"
        try:
            return os.open(temporary, os.O_WRONLY | os.O_CREAT | os.O_EXCL, 0o666), temporary
        except FileExistsError:  # left by a process that was killed and had the same number
            number += 1


def _trouble(path: Path, error: OSError | ValueError) -> InputError:
    unknown = (str(error), "give another path")
    because, remedy = _REMEDIES.get(error.errno or 0, unknown) if isinstance(error, OSError) else unknown
    return fail(f"the report cannot be written: {because}", remedy, SourcePlace(str(path)))
