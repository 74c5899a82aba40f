"""Reads the files that describe cells into a ``CellLibrary``: the main verb of this room."""

import re
from collections.abc import Callable, Iterator, Mapping, Sequence
from functools import partial
from pathlib import Path
from typing import TYPE_CHECKING, NamedTuple

from auditor.cells.cell_table import looks_like_table, table_cells
from auditor.cells.expression import ExpressionError, is_read_differently
from auditor.cells.liberty import Group, library_start, parse_liberty
from auditor.cells.liberty_cells import liberty_cell
from auditor.cells.liberty_pins import library_defaults
from auditor.cells.library import Cell, CellLibrary
from auditor.cells.source_text import read_text
from auditor.errors import InputError, Trouble, fail
from auditor.notation import SourcePlace

if TYPE_CHECKING:
    from auditor.cells.models import ModelFiles

_EXPRESSIONS = ("function", "three_state", "next_state", "clocked_on", "enable", "data_in", "clear", "preset")
_VERILOG = (".v", ".v.gz", ".sv", ".vh")
_MODELS = re.compile(r"^[ \t]*+(?:(?:macro)?module[ \t]++[\w\\]|primitive[ \t]++[\w\\]|`[a-z])", re.MULTILINE)


class _Source(NamedTuple):
    """Where a cell is described, and how to make it."""

    place: SourcePlace
    make: Callable[[], Cell]


class _CellsOnDemand(Mapping[str, Cell]):
    """Cells by name, each made when it is first asked for: of a library most are never used."""

    def __init__(self, sources: Mapping[str, _Source]) -> None:
        self._sources = sources
        self._made: dict[str, Cell] = {}

    def __getitem__(self, name: str) -> Cell:
        if name not in self._made:
            self._made[name] = self._sources[name].make()
        return self._made[name]

    def __contains__(self, name: object) -> bool:
        return name in self._sources

    def __iter__(self) -> Iterator[str]:
        return iter(self._sources)

    def __len__(self) -> int:
        return len(self._sources)


def read_cells(
    paths: Sequence[Path], defines: Mapping[str, str] | None = None, folders: Sequence[Path] = ()
) -> CellLibrary:
    """Return the cells that Liberty files, Verilog cell models and cell tables describe; the last description counts.

    What a file is is decided by its content. ``defines`` are the macros that hold in cell models, ``folders`` where
    their includes are sought besides their own. A cell whose behaviour cannot be read is ``not_understood``.

    Raises ``InputError`` with the troubles of all files: what cannot be opened or is no such file, syntax errors, wrong
    directives and primitives, and everything that is wrong in a cell table.
    """
    sources: dict[str, _Source] = {}
    notes: list[str] = []
    troubles: list[Trouble] = []
    models = _ModelReader(defines or {}, folders)
    for path in paths:
        try:
            described, more_notes = _read_file(path, models)
        except InputError as error:
            troubles += error.troubles
            continue
        notes += more_notes
        notes += _overridden(sources, described)
        sources.update(described)
    if troubles:
        raise InputError(troubles)
    return CellLibrary(_CellsOnDemand(sources), tuple(notes))


class _ModelReader:
    """Reads files of cell models; what that takes is imported with the first of them."""

    def __init__(self, defines: Mapping[str, str], folders: Sequence[Path]) -> None:
        self._given = defines, folders
        self._places: dict[str, SourcePlace] = {}
        self._files: ModelFiles | None = None

    def read(self, path: Path, text: str) -> tuple[dict[str, _Source], list[str]]:
        """Return the cells of one file and notes on it. Raises ``InputError``."""
        if self._files is None:
            from auditor.cells.models import ModelFiles  # noqa: PLC0415 - many audits have a Liberty file alone

            self._files = ModelFiles(*self._given)
        sources: dict[str, _Source] = {}
        notes: list[str] = []
        found = list(self._files.read(path, text))
        for name, place, make in found:
            if place.file != str(path) and self._places.get(name) == place:
                continue  # the same file is included again
            self._places[name] = place
            source = _Source(place, make)
            notes += _overridden(sources, {name: source})
            sources[name] = source
        return sources, notes if found else [f"{path} describes no cells"]


def _read_file(path: Path, models: _ModelReader) -> tuple[dict[str, _Source], list[str]]:
    """Return the cells of one file and notes on it."""
    text, file = read_text(path), str(path)
    start = library_start(text)
    head = text if start < 0 else text[:start]
    if path.name.lower().endswith(_VERILOG) or _MODELS.search(head):
        return models.read(path, text)
    if looks_like_table(head):
        cells = table_cells(text, file)
        whole = SourcePlace(file)
        return {
            name: _Source(cell.place or whole, partial(cells.__getitem__, name)) for name, cell in cells.items()
        }, []
    name = path.name.lower()
    if start >= 0 or name.endswith((".lib", ".lib.gz", ".lib_gz")):
        return _liberty_sources(parse_liberty(text, file), file)
    if name.endswith(".toml"):
        table_cells(text, file)  # tells what is wrong with it, if anything is
        return {}, [f"{file} describes no cells"]
    found = "this is neither a Liberty file nor cell models nor a cell table"
    raise fail(found, "give one of these", SourcePlace(file))


def _liberty_sources(libraries: Sequence[Group], file: str) -> tuple[dict[str, _Source], list[str]]:
    sources: dict[str, _Source] = {}
    notes: list[str] = []
    doubtful: list[str] = []
    for library in libraries:
        defaults = library_defaults(library, file)
        if "capacitive_load_unit" not in library.attributes:
            notes.append(f"{file}:{library.line}: the library states no unit of capacitance, pF is taken")
        described: dict[str, _Source] = {}
        for group in library.inside("cell"):
            name = "".join(group.arguments[:1])
            source = _Source(SourcePlace(file, group.line), partial(liberty_cell, group, defaults))
            notes += _overridden(described, {name: source})
            described[name] = source
            if _is_doubtful(group):
                doubtful.append(name)
        notes += _overridden(sources, described)
        sources.update(described)
    if doubtful:
        notes.append(
            f"{file}: an expression of {_counted(doubtful)} mixes ^ with operands side by side without parentheses; "
            "^ is taken to bind first, as the Liberty manual has it, though some programs read it otherwise"
        )
    return sources, notes


def _is_doubtful(group: Group) -> bool:
    """Return whether an expression in the cell is read differently by different programs."""
    levels = [group]
    for level in levels:
        levels += level.groups
        for attribute in _EXPRESSIONS:
            written = level.attributes.get(attribute)
            if written and "^" in written[0]:
                try:
                    if is_read_differently(written[0]):
                        return True
                except ExpressionError:
                    pass  # told where the cell is used
    return False


def _overridden(earlier: Mapping[str, _Source], later: Mapping[str, _Source]) -> list[str]:
    """Return a note for each file whose cells are described again, naming which description counts."""
    by_files: dict[tuple[str, str], list[str]] = {}
    for name, source in later.items():
        if name in earlier:
            by_files.setdefault((earlier[name].place.file, source.place.file), []).append(name)
    return [
        f"{_counted(names)} described at {earlier[names[0]].place} and at {later[names[0]].place}: the latter counts"
        for names in by_files.values()
    ]


def _counted(names: Sequence[str]) -> str:
    return f"cell {names[0]}" if len(names) == 1 else f"{len(names)} cells ({names[0]} first)"
