"""Files → modules: the main verb of this room."""

import gc
from collections.abc import Iterator, Sequence
from contextlib import contextmanager
from pathlib import Path
from typing import Literal

from auditor.errors import TroubleList
from auditor.verilog.scanner import scan
from auditor.verilog.statements import Module
from auditor.verilog.text import blank, read_text


def read_verilog(paths: Sequence[Path], lane: Literal["both", "grammar"] = "both") -> dict[str, Module]:
    """Return the modules of all files by name, in the order of the text; files and modules may come in any order.

    Plain statements take the fast lane, others the grammar lane; with ``lane`` "grammar" every statement takes the
    latter, which is slow and gives the same modules. Raises InputError with the troubles of all files.
    """
    troubles = TroubleList()
    modules: dict[str, Module] = {}
    with _collector_paused():
        for path in dict.fromkeys(paths):
            for module in _modules_of(path, lane == "both", troubles):
                before = modules.setdefault(module.name, module)
                if before is not module:
                    found = f"module {module.name} is defined again, first at {before.place}"
                    troubles.add(found, "leave one of the definitions out", module.place)
    if not modules and not troubles.troubles:
        files = ", ".join(map(str, paths)) or "no file"
        troubles.add(f"no module in {files}", "give a netlist with at least one module")
    troubles.raise_any()
    return modules


def _modules_of(path: Path, plain: bool, troubles: TroubleList) -> Iterator[Module]:
    """Yield the modules of one file, noting troubles."""
    text = read_text(path, troubles)
    blanked = None if text is None else blank(text, str(path), troubles)
    if blanked is None:
        return
    for draft in scan(blanked, str(path), troubles, plain):
        if draft.waiting:
            from auditor.verilog.grammar import read_waiting  # noqa: PLC0415  (many netlists never need this lane)

            read_waiting(draft)
        yield draft.finish()


@contextmanager
def _collector_paused() -> Iterator[None]:
    """Keep the cyclic garbage collector from walking millions of new tuples again and again: none is in a cycle."""
    was_enabled = gc.isenabled()
    gc.disable()
    try:
        yield
    finally:
        if was_enabled:
            gc.enable()
