"""Modules by the values of their parameters: each is read once for every set that an instance gives."""

import re
from collections.abc import Iterable, Iterator, Mapping, Sequence

from auditor.errors import near_misses
from auditor.verilog.draft import Draft
from auditor.verilog.plain import NAME, RefusedError, plain_name
from auditor.verilog.statements import Constant

MOST_VARIANTS = 1000
_PARAMETER = re.compile(rf"parameter\b[^=\\]*?({NAME})\s*=")

# The values given to an instance, by name or in order.
Values = Sequence[tuple[str | None, Constant]]


class Variants:
    """Modules by name and by what their parameters are given; those that are asked for are read in turn."""

    def __init__(self, drafts: Mapping[str, Draft], primitives: Iterable[str]) -> None:
        self.drafts, self.primitives = drafts, frozenset(primitives)
        # Reading empties a draft, and any module with parameters may be wanted once more.
        self.originals = {name: draft.variant(name, {}) for name, draft in drafts.items() if _parameters(draft)}
        self.asked: dict[str, Draft] = {}
        self.families: dict[str, str] = {}

    def pending(self) -> Iterator[Draft]:
        """Yield every draft, also those that are asked for meanwhile."""
        yield from self.drafts.values()
        done = 0
        while done < len(self.asked):
            yield list(self.asked.values())[done]
            done += 1

    def name_of(self, cell: str, values: Values) -> str:
        """Return the name of a module under values for its parameters. Raises RefusedError.

        A cell that no module describes is another cell under each set of values: what it does may depend on them.
        """
        original = self.originals.get(cell)
        names = _parameters(original) if original else []
        if cell in self.drafts and len(values) > len(names):
            raise RefusedError(f"{cell} is given {len(values)} parameters and has {len(names)}", "leave some out")
        given: dict[str, Constant] = {}
        for number, (name, value) in enumerate(values):
            own = names[number] if name is None and names else str(number) if name is None else name
            if cell in self.drafts and own not in names:
                remedy = near_misses(own, names) or f"use one of {', '.join(names)}"
                raise RefusedError(f"{cell} has no parameter {own}", remedy)
            given[own] = value
        if not given:
            return cell
        variant = f"{cell} #({', '.join(f'{name}={_written(given[name])}' for name in sorted(given))})"
        if original and variant not in self.asked:
            if len(self.asked) >= MOST_VARIANTS:
                raise RefusedError(f"{cell} is given more than {MOST_VARIANTS} sets of values", "give them fewer")
            self.asked[variant] = original.variant(variant, given)
            self.families[variant] = cell
        return variant


def _parameters(draft: Draft) -> list[str]:
    """Return the names of a module's parameters in order."""
    found = (_PARAMETER.match(wait.item.text) for wait in draft.waiting if wait.kind == "parameter")
    return [plain_name(match[1]) for match in found if match]


def _written(value: Constant) -> str:
    if not value.sized and set(value.bits) <= {"0", "1"}:
        return str(int(value.bits, 2))
    return f"{len(value.bits)}'b{value.bits}"
