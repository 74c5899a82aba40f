"""Cuts a text of cell models into modules and primitives; primitives are read at once, modules when asked for."""

import re
from collections.abc import Iterator

from auditor.cells.model import ModuleText, Primitive
from auditor.cells.model_primitive import read_primitive
from auditor.cells.model_text import ModelText
from auditor.errors import TroubleList

_BOUND = re.compile(r'\\\S++|"(?:[^"\\\n]|\\.)*+"|\b(?P<word>(?:macro)?module|primitive|endmodule|endprimitive)\b')
_NAME = re.compile(r"\s*+(?:([A-Za-z_][\w$]*+)|\\(\S++))")
_LABEL = re.compile(r"\s*+:\s*+[A-Za-z_][\w$]*+")
_OUTSIDE = re.compile(r"[\s;]*+")


def split_models(source: ModelText, troubles: TroubleList) -> Iterator[Primitive | ModuleText]:
    """Yield what the text defines, in its order; troubles are noted."""
    text, position, line = source.text, 0, 0
    opened: re.Match[str] | None = None
    counted = 0
    for found in _BOUND.finditer(text):
        word = found["word"]
        if word is None or found.start() < position:
            continue
        line, counted = line + text.count("\n", counted, found.start()), found.start()
        if opened is None and not word.startswith("end"):
            _refuse_outside(source, position, found.start(), troubles)
            opened, first = found, line
        elif opened is not None and word == f"end{opened['word'].removeprefix('macro')}":
            body = text[opened.end() : found.start()]
            model = _model(opened["word"], body, source, first, troubles)
            if model:
                yield model
            label = _LABEL.match(text, found.end())
            opened, position = None, label.end() if label else found.end()
        elif opened is None:
            troubles.add(f"{word} ends nothing", "leave it out or mend what stands before it", source.places[line])
        else:
            begun = f"{opened['word']} that begins at line {source.places[first].line}"
            troubles.add(
                f"{word} stands inside the {begun}", f"end that first with {_end(opened)}", source.places[line]
            )
            opened, first = (None, line) if word.startswith("end") else (found, line)
            position = found.end()
    if opened is not None:
        what = f"the {opened['word']} that begins here is not ended"
        troubles.add(what, f"end it with {_end(opened)}", source.places[first])
    else:
        _refuse_outside(source, position, len(text), troubles)


def _end(opened: re.Match[str]) -> str:
    return f"end{opened['word'].removeprefix('macro')}"


def _refuse_outside(source: ModelText, start: int, end: int, troubles: TroubleList) -> None:
    """Note what stands outside modules and primitives."""
    blank = _OUTSIDE.match(source.text, start, end)
    at = blank.end() if blank else start
    if at < end:
        word = source.text[at:end].split()[0][:40]
        place = source.places[source.text.count("\n", 0, at)]
        troubles.add(f"{word} stands outside a module or primitive", "leave it out", place)


def _model(word: str, body: str, source: ModelText, first: int, troubles: TroubleList) -> Primitive | ModuleText | None:
    """Return the module or primitive whose text after its keyword, from line ``first`` on, is ``body``."""
    places = source.places[first : first + 1 + body.count("\n")]
    name = _NAME.match(body)
    if name is None:
        troubles.add(f"{word} without a name", "name it", places[0])
        return None
    skipped = body.count("\n", 0, name.end())
    text = ModuleText(name[1] or name[2], body[name.end() :], places[skipped:])
    return read_primitive(text, troubles) if word == "primitive" else text
