"""The import law: data goes one way, a stage knows nouns and no other stage's verbs, libraries stay in their rooms."""

import ast
from collections.abc import Iterator
from pathlib import Path

import pytest

PACKAGE = Path(__file__).parents[1] / "auditor"

# The route. A stage may import from stages before it, and from them only nouns.
ROUTE = (
    "verilog",
    "netlist",
    "cells",
    "cone",
    "machine",
    "replay",
    "phases",
    "array",
    "drafting",
    "risks",
    "revisions",
    "report",
)

# What a stage shows to the ones after it: its data classes, and pure questions asked of them.
NOUNS = {
    "verilog": {"statements"},
    "netlist": {"netlist"},
    "cells": {"library", "function", "primitives", "cell_table", "words"},
    "cone": {"cone", "constants", "fold", "wiring"},
    "machine": {"machine", "diagrams"},
    "phases": {"table", "separations", "overlap", "streams", "leads"},
    "array": {"scan_array", "circuit"},
    "drafting": {"candidate", "proposal"},
    "risks": {"finding"},
    "revisions": {"comparison"},
    "report": {"facts"},
}
EVERYWHERE = {"notation", "errors", "gf2", "plan", ""}

# Third-party package → the places that may import it.
LIBRARIES = {
    "pyverilog": ("verilog/",),
    "networkx": ("cone/",),
    "dd": ("machine/",),
    "rich": ("report/", "cli.py"),
    "numpy": ("netlist/", "cells/", "cone/", "replay/", "gf2/", "phases/", "array/", "drafting/", "verilog/"),
}

SOURCES = sorted(path.relative_to(PACKAGE).as_posix() for path in PACKAGE.rglob("*.py"))


def imports(source: str) -> Iterator[str]:
    """Yield every module that a file imports, wherever the import stands."""
    for node in ast.walk(ast.parse((PACKAGE / source).read_text(encoding="utf-8"))):
        if isinstance(node, ast.Import):
            yield from (alias.name for alias in node.names)
        elif isinstance(node, ast.ImportFrom):
            assert node.level == 0, f"{source}: write absolute imports"
            assert node.module is not None
            module = node.module
            yield from (f"{module}.{alias.name}" if module.count(".") == 0 else module for alias in node.names)


@pytest.mark.parametrize("source", [source for source in SOURCES if Path(source).parts[0] in (*ROUTE, "gf2")])
def test_rooms_import_backwards_and_only_nouns(source: str) -> None:
    """A file of a stage imports its own room, the shared pages, and the nouns of stages before it."""
    room = Path(source).parts[0]
    for module in imports(source):
        if not module.startswith("auditor."):
            continue
        _, target, *rest = module.split(".")
        if target == room or target in EVERYWHERE or target == "__version__":
            continue
        assert room != "gf2", f"{source} imports {module}: gf2 knows no netlist"
        assert target in ROUTE, f"{source} imports {module}"
        assert ROUTE.index(target) < ROUTE.index(room), f"{source} imports {module}, which comes after it"
        assert rest[0] in NOUNS[target], f"{source} imports {module}, which is no noun of {target}"


@pytest.mark.parametrize("source", SOURCES)
def test_libraries_stay_in_their_rooms(source: str) -> None:
    """Each third-party package is imported only where it belongs; nothing else is imported but the standard library."""
    import sys

    for module in imports(source):
        package = module.split(".")[0]
        if package == "auditor" or package in sys.stdlib_module_names:
            continue
        assert package in LIBRARIES, f"{source} imports {package}, which is not among the dependencies"
        assert source.startswith(LIBRARIES[package]), f"{source} imports {package}"


def test_no_two_rooms_import_each_other() -> None:
    """The files of the package form no circle."""
    graph = {source: set[str]() for source in SOURCES}
    for source in SOURCES:
        for module in imports(source):
            path = "/".join(module.removeprefix("auditor.").split("."))
            graph[source] |= {known for known in (f"{path}.py", f"{path}/__init__.py") if known in graph} - {source}
    while leaves := [source for source, targets in graph.items() if not targets & graph.keys()]:
        for leaf in leaves:
            del graph[leaf]
    assert not graph, f"a circle of imports: {sorted(graph)}"


@pytest.mark.parametrize("source", SOURCES)
def test_files_stay_short(source: str) -> None:
    """No file is longer than 350 lines."""
    assert len((PACKAGE / source).read_text(encoding="utf-8").splitlines()) <= 350
