"""Nets that toggle while the scan cells may hold anything, but not under the generator. Main verb of this subject.

The planned patterns are simulated first, then random states; what moved in both is done. Of the rest diagrams decide
whether any state outside lock-up moves it at all.
"""

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field

import numpy as np

from auditor.array.circuit import Circuit, FrozenFacts, FrozenNet, Scope
from auditor.array.equations import Equations, outside_lock_up
from auditor.array.explain import confirm_examples, with_example
from auditor.array.loading import Loading, States
from auditor.array.proofs import NODE_LIMIT, Formulas, Reference
from auditor.array.simulation import simulation
from auditor.array.toggling import Planned, first_load, simulated, unmoved_by_patterns, unmoved_by_states
from auditor.cells.words import Words
from auditor.errors import InternalError
from auditor.gf2 import matrix
from auditor.machine.diagrams import TooLargeError
from auditor.notation import Vector

_CELL, _GENERATOR, _FREE = 1, 2, 4


def find_frozen(
    circuit: Circuit, loading: Loading, planned: Planned | None, node_limit: int = NODE_LIMIT
) -> FrozenFacts:
    """Return the frozen nets of a circuit under test, and those on which nothing is decided.

    Raises ``InternalError`` if the simulated gates contradict a proof.
    """
    sources = _sources(circuit)
    nets = [gate.output for gate in circuit.gates if gate.output in sources and sources[gate.output] & _CELL]
    nets = [net for net in nets if net < len(circuit.netlist.net_names)]
    start = outside_lock_up(Equations(), loading.lock_ups)
    if not nets or start is None:
        return FrozenFacts(len(nets), (), (), 0)
    reference = Reference(start.solution(), loading.width, loading.lock_ups)
    idle = unmoved_by_patterns(circuit, loading, planned, nets) if planned else nets
    never = unmoved_by_states(circuit, loading, reference.state, idle)
    proofs = _Proofs(circuit, loading, reference, node_limit)
    for net in never:
        proofs.decide(net)
    _confirm(circuit, proofs)
    frozen, undecided = proofs.frozen, proofs.undecided
    if planned:
        settled = {*(net.net for net in frozen), *proofs.constant, *undecided}
        quiet = [net for net in idle if net not in settled]
        whole = simulated(planned) == planned.patterns
        kept = [net for net in quiet if whole and not sources[net] & _FREE]
        undecided += sorted(set(quiet) - set(kept))
        values = _first_values(circuit, loading, planned, kept)
        frozen += [FrozenNet(net, value, "planned-patterns", "simulation") for net, value in values.items()]
    patterns = simulated(planned) if planned else 0
    ordered = [proofs.with_example(net) for net in _with_followers(circuit, frozen)]
    confirm_examples(circuit, ordered)
    return FrozenFacts(len(nets), tuple(ordered), tuple(undecided), patterns)


def _sources(circuit: Circuit) -> dict[int, int]:
    """Return which kinds of sources every wire may depend on."""
    kinds = dict.fromkeys(circuit.cells, _CELL)
    kinds |= dict.fromkeys(circuit.generator, _GENERATOR) | dict.fromkeys(circuit.free, _FREE)
    for gate in circuit.gates:
        kinds[gate.output] = 0
        for wire in gate.inputs:
            kinds[gate.output] |= kinds[wire]
    return kinds


@dataclass(slots=True)
class _Proofs:
    """What diagrams say of the nets given to it, in topological order.

    ``moved``     net → a vector (state, free sources) in which it is not what it is in the reference state
    ``constant``  nets that do not toggle with free scan cells either
    ``forms``     source wire → form over the state and the free sources
    ``independent``  a form of its own for every source → the source's number
    """

    circuit: Circuit
    loading: Loading
    reference: Reference
    node_limit: int
    frozen: list[FrozenNet] = field(default_factory=list)
    moved: dict[int, Vector] = field(default_factory=dict)
    constant: set[int] = field(default_factory=set)
    undecided: list[int] = field(default_factory=list)
    forms: dict[int, Vector] = field(init=False)
    independent: dict[Vector, int] = field(init=False)
    under_generator: Formulas = field(init=False)
    with_free_cells: Formulas = field(init=False)

    def __post_init__(self) -> None:
        circuit, gates = self.circuit, {gate.output: gate for gate in self.circuit.gates}
        self.forms = dict(zip(circuit.loaded, self.loading.steady, strict=True))
        self.forms |= {wire: 1 << self.loading.width + k for k, wire in enumerate(circuit.free)}
        own = {wire: 2 << k for k, wire in enumerate((*circuit.loaded, *circuit.free))}
        self.independent = {form: k for k, form in enumerate(own.values())}
        self.under_generator = Formulas(gates, self.forms, self.node_limit)
        self.with_free_cells = Formulas(gates, own, self.node_limit)

    def decide(self, net: int) -> None:
        """Find out whether any state moves a net, and if not, whether free scan cells would."""
        formulas = self.under_generator
        try:
            diagram = formulas.diagram(net)
            vector = self.reference.moves(formulas, diagram)
            if vector is not None:
                self.moved[net] = vector
                return
            kept = formulas.algebra.constant_of(self.reference.at_reference(formulas.algebra, diagram))
            if kept is not None:
                formulas.fix(net, kept)
            if self._toggles_freely(net):
                scope: Scope = "only-with-freedom" if kept is None else "every-state"
                self.frozen.append(FrozenNet(net, kept, scope, "decision-diagrams"))
            else:
                self.constant.add(net)
        except TooLargeError:
            self.undecided.append(net)

    def with_example(self, net: FrozenNet) -> FrozenNet:
        """Return a net with an example of what would free it, where no net before it has the blame."""
        if net.scope != "every-state" or net.follows:
            return net
        return with_example(net, self.with_free_cells, self.independent, self.loading.steady)

    def _toggles_freely(self, net: int) -> bool:
        """Tell whether a net depends on a scan cell where scan cells may hold anything."""
        formulas = self.with_free_cells
        diagram = formulas.diagram(net)
        kept = formulas.algebra.constant_of(diagram)
        if kept is not None:
            formulas.fix(net, kept)
        cells = 2 << len(self.circuit.cells)
        return any(formulas.algebra.forms[variable] < cells for variable in formulas.algebra.support(diagram))


def _confirm(circuit: Circuit, proofs: _Proofs) -> None:
    """Simulate every state that was found to move a net, one a lane, beside the reference state."""
    if not proofs.moved:
        return
    width, lanes = proofs.loading.width + len(circuit.free), len(proofs.moved)
    state = (1 << proofs.loading.width) - 1
    found = list(proofs.moved.values())
    start = [vector & ~state | proofs.reference.state & state for vector in found]
    run = simulation(circuit, proofs.moved)
    forms = [proofs.forms[wire] for wire in (*circuit.loaded, *circuit.free)]
    sides: list[Words] = []
    for vectors in (found, start):
        values = States(matrix.transpose(vectors, width), lanes).values(forms)
        sides.append(run.run(values[: len(circuit.loaded)], values[len(circuit.loaded) :]))
    slot = {net: k for k, net in enumerate(run.gates)}
    for lane, net in enumerate(proofs.moved):
        word, bit = divmod(lane, 64)
        if not int(sides[0][slot[net], word] ^ sides[1][slot[net], word]) >> bit & 1:
            raise InternalError(f"{circuit.wire_name(net)} does not move in the state that was found to move it")


def _first_values(circuit: Circuit, loading: Loading, planned: Planned, nets: Sequence[int]) -> dict[int, int]:
    """Return what nets are in the first planned pattern; no free source decides them."""
    run = simulation(circuit, nets)
    values = run.run(
        first_load(loading, planned).values(loading.rows), np.zeros((len(circuit.free), 1), dtype=np.uint64)
    )
    found = {net: int(value) & 1 for net, value in zip(run.gates, values[:, 0].tolist(), strict=True)}
    return {net: found[net] for net in nets}


def _with_followers(circuit: Circuit, frozen: Sequence[FrozenNet]) -> tuple[FrozenNet, ...]:
    """Return the nets in topological order, and say of each whether a net before it is frozen."""
    by_net: Mapping[int, FrozenNet] = {one.net: one for one in frozen}
    return tuple(
        by_net[gate.output]._replace(follows=any(wire in by_net for wire in gate.inputs))
        for gate in circuit.gates
        if gate.output in by_net
    )
