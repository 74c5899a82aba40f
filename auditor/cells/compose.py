"""Functions of the nets or pins inside a cell, put into each other until only its inputs and stored bits are left."""

from collections.abc import Collection, Mapping

from auditor.cells.library import Function
from auditor.cells.storage import rewrite

LONGEST_PROGRAM = 100_000  # what grows beyond is no cell


class NotUnderstood(Exception):  # noqa: N818 - it is an answer, not a failure
    """Why a cell's behaviour cannot be taken from its description: a clause that fits after the cell's name."""


def put_into_each_other(functions: Mapping[str, Function], variables: Collection[str]) -> dict[str, Function]:
    """Return the functions of pins with the functions of other (internal, output) pins put in for their names.

    A name that is also a state variable means the variable. Raises ``NotUnderstood`` where pins depend in a circle.
    """
    needs = {
        name: [used for used in function.inputs if used in functions and used not in variables]
        for name, function in functions.items()
    }
    users: dict[str, list[str]] = {name: [] for name in functions}
    for name, used_ones in needs.items():
        for used in used_ones:
            users[used].append(name)
    missing = {name: len(used_ones) for name, used_ones in needs.items()}
    ready = [name for name, count in missing.items() if count == 0]
    done: dict[str, Function] = {}
    for name in ready:  # which grows as it goes
        done[name] = rewrite(functions[name], {used: done[used] for used in needs[name]})
        if len(done[name].program) > LONGEST_PROGRAM:
            raise NotUnderstood(f"the function of its pin {name} has more than {LONGEST_PROGRAM} terms")
        for user in users[name]:
            missing[user] -= 1
            if missing[user] == 0:
                ready.append(user)
    if len(done) < len(functions):
        circle = ", ".join([name for name in functions if name not in done][:10])
        raise NotUnderstood(f"the functions of its pins {circle} depend on each other in a circle")
    return done
