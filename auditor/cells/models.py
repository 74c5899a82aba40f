"""Reads files of Verilog cell models, which share their macros and may hold parts of each other."""

from collections.abc import Callable, Iterator, Mapping, Sequence
from functools import partial
from pathlib import Path

from auditor.cells.library import Cell
from auditor.cells.model import ModuleText, Primitive
from auditor.cells.model_cells import model_cell
from auditor.cells.model_split import split_models
from auditor.cells.model_text import Preprocessor
from auditor.errors import TroubleList
from auditor.notation import SourcePlace


class ModelFiles:
    """All models read so far; of two that share a name the last counts, also inside others."""

    def __init__(self, defines: Mapping[str, str], folders: Sequence[Path]) -> None:
        self._preprocessor = Preprocessor(defines, folders)
        self._models: dict[str, Primitive | ModuleText] = {}

    def read(self, path: Path, text: str) -> Iterator[tuple[str, SourcePlace, Callable[[], Cell]]]:
        """Yield name, place and maker of each cell of a file. Raises ``InputError`` with all its troubles at the end.

        A cell is to be made when all files are read.
        """
        troubles = TroubleList()
        for model in split_models(self._preprocessor.read(path, text, troubles), troubles):
            self._models[model.name] = model
            yield model.name, model.place, partial(model_cell, model.name, self._models)
        troubles.raise_any()
