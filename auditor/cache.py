"""Keeps factor bases, so that the logarithms of a second register of one degree need not make them again.

They stay in memory as long as the audit runs, and in files of the user's cache directory, one a degree. A file is a
line of text, the SHA-256 digest of what follows, and the logarithms: numbers of one width, all ones where there is
none. Nothing in it is believed: it counts only if every logarithm stands the check by exponentiation. Whatever is
wrong with the directory, the audit goes on without it.
"""

import contextlib
import hashlib
import os
import tempfile
from pathlib import Path

from auditor.gf2.calculus.factor_base import FactorBase, canonical_polynomial, irreducibles
from auditor.gf2.calculus.table import TableSource, base_degree, make_factor_base
from auditor.gf2.calculus.work import Work
from auditor.gf2.polynomial import degree

VERSION = 1


def cache_folder() -> Path | None:
    """Return ``$XDG_CACHE_HOME/auditor``, without it ``~/.cache/auditor``; None where there is no home either.

    A path that is not absolute is ignored, as the XDG Base Directory Specification has it.
    """
    stated = os.environ.get("XDG_CACHE_HOME", "")
    if os.path.isabs(stated):
        return Path(stated) / "auditor"
    try:
        return Path.home() / ".cache" / "auditor"
    except RuntimeError:
        return None


def kept_tables(folder: Path | None, make: TableSource = make_factor_base) -> TableSource:
    """Return a source of factor bases that keeps those it makes: in memory, and in the folder if one is given.

    Under a limit on work every one is made anew: what a limit leaves undecided must not depend on what was kept.
    """
    known: dict[tuple[int, int], FactorBase] = {}

    def tables(n: int, modulus: int, work: Work) -> FactorBase:
        if work.limit is not None:
            return make(n, modulus, work)
        if (n, modulus) not in known:
            path = folder and folder / f"factor-base-{n}"
            kept = _read(path, n, modulus, work) if path else None
            known[n, modulus] = kept or make(n, modulus, work)
            if path and not kept:
                _write(path, known[n, modulus])
        return known[n, modulus]

    return tables


def _file(n: int, body: bytes) -> bytes:
    return (
        f"auditor factor base, version {VERSION}, degree {n}\n".encode("ascii") + hashlib.sha256(body).digest() + body
    )


def _width(modulus: int) -> int:
    return (modulus.bit_length() + 7) // 8


def _read(path: Path, n: int, modulus: int, work: Work) -> FactorBase | None:
    """Return the factor base in a file, None where there is none that is right."""
    bound, width = base_degree(n), _width(modulus)
    length = width * len(irreducibles(bound))
    try:
        if not path.is_file() or path.stat().st_size != len(_file(n, b"")) + length:
            return None
        data = path.read_bytes()
    except (OSError, ValueError):
        return None
    body = data[-length:]
    if data != _file(n, body):
        return None
    work.report(f"checking the kept table of degree {n}")
    numbers = (int.from_bytes(body[start : start + width], "little") for start in range(0, length, width))
    logs = tuple(number if number < modulus else None for number in numbers)
    base = FactorBase(canonical_polynomial(n, modulus), bound, modulus, logs)
    return base if base.check() else None


def _write(path: Path, base: FactorBase) -> None:
    """Write a factor base for this user alone, all of it or nothing."""
    width = _width(base.modulus)
    none = b"\xff" * width
    logs = (none if log is None else log.to_bytes(width, "little") for log in base.logs)
    data = _file(degree(base.field), b"".join(logs))
    with contextlib.suppress(OSError, ValueError):
        path.parent.mkdir(mode=0o700, parents=True, exist_ok=True)
        handle, temporary = tempfile.mkstemp(prefix=f".{path.name}-", dir=path.parent)
        try:
            with open(handle, "wb") as file:
                file.write(data)
            os.replace(temporary, path)
        except BaseException:
            os.unlink(temporary)
            raise
