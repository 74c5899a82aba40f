"""Whether the generator holds or advances while the chip captures: proved under the constants of ``[capture]``."""

from dataclasses import replace

from auditor.cells.library import CellLibrary
from auditor.cone.cone import Cone
from auditor.cone.extract import extract_cone
from auditor.errors import InputError, fail
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
            f"the plan says that the generator {stated} in capture, but under [capture] every register of it {found}",
            "mend generator_in_capture or the constants of [capture]",
            SourcePlace(str(plan.file)) if plan.file else None,
        )
    settled = found or stated or "holds"
    why = "no constants of [capture] are stated" if plan.capture is None else "the constants of [capture] prove neither"
    assumed = () if found else (f"the generator {settled} in capture{', as the plan says' * bool(stated)}: {why}",)
    return replace(plan, patterns=replace(plan.patterns, generator_in_capture=settled)), assumed


def _in_capture(plan: Plan, cone: Cone, library: CellLibrary, machine: LinearMachine) -> str | None:
    """Return "holds" or "advances" if all registers do so under the constants of capture, else None."""
    registers = [machine.storage[k] for part in machine.registers for k in part]
    nets = {e.name: cone.netlist.net_names[e.outputs[0][0]] for e in cone.elements if e.outputs}
    if not registers or any(name not in nets for name in registers):
        return None
    try:
        captured = prove_machine(
            extract_cone(cone.netlist, library, plan.capture or {}, [nets[name] for name in registers]), plan.work_limit
        ).machine
    except InputError:  # a clock that capture turns off or leaves open, for one: neither is proved
        return None
    if captured is None:
        return None
    rows, as_shifted = _rows(captured), _rows(machine)
    if any(name not in rows for name in registers):
        return None
    if all(rows[name] == (frozenset({name}), frozenset(), 0) for name in registers):
        return "holds"
    return "advances" if all(rows[name] == as_shifted[name] for name in registers) else None


def _rows(machine: LinearMachine) -> dict[str, tuple[frozenset[str], frozenset[str], int]]:
    """Return element → (elements, inputs, constant) of its next state, all by name."""
    return {
        name: (
            _names(machine.transition[k], machine.storage),
            _names(machine.input_matrix[k], machine.free_inputs),
            machine.offset >> k & 1,
        )
        for k, name in enumerate(machine.storage)
    }


def _names(vector: Vector, names: tuple[str, ...]) -> frozenset[str]:
    return frozenset(name for k, name in enumerate(names) if vector >> k & 1)
