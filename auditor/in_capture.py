"""Whether the generator holds or advances while the chip captures: proved under the constants of ``[capture]``."""

from dataclasses import replace

from auditor.cells.library import CellLibrary
from auditor.cone.cone import Cone
from auditor.cone.extract import extract_cone
from auditor.errors import InputError, fail
from auditor.gf2.matrix import ones, row_times
from auditor.machine.machine import LinearMachine
from auditor.machine.prove import prove_machine
from auditor.notation import SourcePlace, Vector
from auditor.plan import Plan


def settle_capture(
    plan: Plan, cone: Cone, library: CellLibrary, machine: LinearMachine
) -> tuple[Plan, tuple[str, ...]]:
    """Return the plan with what the generator does in capture, and a sentence for the assumptions if it is not proved.

    What the netlist proves is taken where the plan is silent; where it proves the contrary, ``InputError``.
    """
    if plan.patterns is None or not plan.patterns.capture_cycles:
        return plan, ()
    stated = plan.patterns.generator_in_capture
    found = _in_capture(plan, cone, library, machine) if plan.capture is not None else None
    if found and stated and found != stated:
        raise fail(
            f"the plan says that the generator {stated} in capture, but under [capture] all of it {found}",
            "mend generator_in_capture or the constants of [capture]",
            SourcePlace(str(plan.file)) if plan.file else None,
        )
    settled = found or stated or "holds"
    why = "no constants of [capture] are stated" if plan.capture is None else "the constants of [capture] prove neither"
    assumed = () if found else (f"the generator {settled} in capture{', as the plan says' * bool(stated)}: {why}",)
    return replace(plan, patterns=replace(plan.patterns, generator_in_capture=settled)), assumed


def _in_capture(plan: Plan, cone: Cone, library: CellLibrary, machine: LinearMachine) -> str | None:
    """Return "holds" or "advances" if the machine, its pipelines included, does so on its own clock, else None."""
    nets = {e.name: cone.netlist.net_names[e.outputs[0][0]] for e in cone.elements if e.outputs}
    if not machine.registers or any(name not in nets for name in machine.storage):
        return None
    try:
        behind = extract_cone(cone.netlist, library, plan.capture or {}, [nets[name] for name in machine.storage])
        captured = prove_machine(behind, plan.work_limit).machine
    except InputError:  # a clock that capture turns off or leaves open, for one: neither is proved
        return None
    if captured is None or behind.clock != cone.clock:
        return None
    rows = _rows(captured, machine)
    if rows is None:
        return None
    shifted = [1, *(row << 1 | machine.offset >> k & 1 for k, row in enumerate(machine.transition))]
    shifts = min(machine.transient, plan.patterns.shift_cycles if plan.patterns else 0)

    def same(row: Vector, wanted: Vector) -> bool:
        """Whether two rows agree on every state that a load leaves."""
        difference = row ^ wanted
        for _ in range(shifts):
            difference = difference and row_times(difference, shifted)
        return not difference

    inputs = [row for _, row in rows]
    if not any(inputs) and all(same(row, 1 << k) for k, (row, _) in enumerate(rows, 1)):
        return "holds"
    advances = all(same(row, wanted) for (row, _), wanted in zip(rows, shifted[1:], strict=True))
    return "advances" if advances and inputs == list(machine.input_matrix) else None


def _rows(captured: LinearMachine, machine: LinearMachine) -> list[tuple[Vector, Vector]] | None:
    """Return the next state of each element of ``machine`` in capture: a row (constant first) and one over its inputs.

    None if capture brings in elements or inputs that the machine has not.
    """
    place = {name: k for k, name in enumerate(captured.storage)}
    columns = {name: 1 << k for k, name in enumerate(machine.storage, 1)}
    pins = {name: 1 << k for k, name in enumerate(machine.free_inputs)}
    rows = []
    for name in machine.storage:
        if (k := place.get(name)) is None:
            return None
        stored = [captured.storage[i] for i in ones(captured.transition[k])]
        read = [captured.free_inputs[i] for i in ones(captured.input_matrix[k])]
        if not columns.keys() >= set(stored) or not pins.keys() >= set(read):
            return None
        rows.append((sum(columns[s] for s in stored) | captured.offset >> k & 1, sum(pins[s] for s in read)))
    return rows
