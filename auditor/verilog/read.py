"""Files → modules: the main verb of this room."""

import gc
from collections.abc import Container, Iterator, Mapping, Sequence
from contextlib import contextmanager
from pathlib import Path
from types import MappingProxyType
from typing import Literal

from auditor.errors import TroubleList
from auditor.verilog.draft import Draft
from auditor.verilog.finish import modules_of
from auditor.verilog.preprocess import Preprocessor
from auditor.verilog.scanner import scan
from auditor.verilog.statements import Module, Reading
from auditor.verilog.text import blank, read_text


def read_verilog(
    paths: Sequence[Path],
    lane: Literal["both", "grammar"] = "both",
    defines: Mapping[str, str] = MappingProxyType({}),
    include: Sequence[Path] = (),
    reading: Reading | None = None,
    cells: Container[str] = (),
) -> dict[str, Module]:
    """Return the modules of all files by name, in the order of the text; files and modules may come in any order.

    ``defines`` are macros that are defined from the start, ``include`` the folders in which an included file is looked
    for behind that of the including one; a macro of one file is known to those that follow. Plain statements take the
    fast lane, others the grammar lane; with ``lane`` "grammar" every statement takes the latter, which is slow and
    gives the same modules. Of a module that is one of ``cells``, which a library describes, only the ports are read:
    it may be a model that is not structural, and what it holds beside them is noted. Included files and notes are
    entered into ``reading``. Raises InputError with the troubles of all files.
    """
    troubles, told = TroubleList(), reading or Reading()
    preprocessor = Preprocessor(defines, include, troubles, told)
    drafts: dict[str, Draft] = {}
    primitives: list[str] = []
    with _collector_paused():
        for path in dict.fromkeys(paths):
            text = read_text(path, troubles)
            source = None if text is None else preprocessor.run(text, path)
            blanked = None if source is None else blank(source, troubles)
            if blanked is None:
                continue
            del text, source
            scanned = scan(blanked, troubles, told, lane == "both", cells)
            primitives += scanned.primitives
            for draft in scanned.drafts:
                before = drafts.setdefault(draft.name, draft)
                if before is not draft:
                    found = f"module {draft.name} is defined again, first at {before.place}"
                    troubles.add(found, "leave one of the definitions out", draft.place)
        modules = modules_of(drafts, primitives)
    if not modules and not troubles.troubles:
        files = ", ".join(map(str, paths)) or "no file"
        troubles.add(f"no module in {files}", "give a netlist with at least one module")
    troubles.raise_any()
    told.notes[:] = dict.fromkeys(told.notes + _passed_over(drafts))
    return modules


def _passed_over(drafts: Mapping[str, Draft]) -> list[str]:
    """Return a note on the modules that say otherwise what a cell does, if there are any."""
    doubled = [draft for draft in drafts.values() if draft.passed_over]
    if not doubled:
        return []
    names = (
        f"module {doubled[0].name} is" if len(doubled) == 1 else f"{len(doubled)} modules ({doubled[0].name} first) are"
    )
    return [f"{doubled[0].place}: {names} described by --cells as well: the cell counts"]


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
