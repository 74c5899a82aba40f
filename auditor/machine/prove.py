"""From the cone to the linear machine, each row proved: the main verb of this room."""

from collections.abc import Mapping
from dataclasses import dataclass, replace

from auditor.cone.cone import Channel, Cone
from auditor.errors import InternalError
from auditor.gf2.matrix import nilpotency_index, ones, rank_of_cycling_part
from auditor.machine.cycle import compose_cycle, pull_back
from auditor.machine.diagrams import NODE_LIMIT
from auditor.machine.machine import AffineRow, Extraction, LinearMachine, ObservedRow, Refusal, Tap
from auditor.machine.prover import Prover
from auditor.machine.refusal import refuse
from auditor.machine.xor import XorFigures, XorNetwork
from auditor.notation import Vector


def prove_machine(cone: Cone, node_limit: int | None = None) -> Extraction:
    """Prove every next state and every channel affine, or refuse it by name.

    A next state that is not affine and feeds a feedback register refuses the machine; elsewhere it refuses only the
    channels behind it. ``node_limit`` bounds the diagram nodes of one gate; beyond it a row is undecided.
    """
    prover = _prove_all(cone, node_limit or NODE_LIMIT)
    refused = _refused_elements(cone, prover)
    told = tuple(refused[number] for number in sorted(refused))
    if _reaches_register(cone, refused):
        return Extraction(None, told)
    ground = _ground(cone, prover, _behind_refused(cone, prover, refused))
    observed = _observe(ground)
    channels = [row.refusal for row in observed if row.refusal and not row.cut_from]
    return Extraction(_machine(ground, observed), tuple(dict.fromkeys([*told, *channels])))


@dataclass(frozen=True, slots=True)
class _Ground:
    """What the rows are read from once no register is refused.

    ``tainted``  elements without a row of their own or behind one, with the refusal at the root
    ``kept``     all others, ascending: the elements of the machine
    """

    cone: Cone
    prover: Prover
    tainted: Mapping[int, Refusal]
    kept: tuple[int, ...]
    registers: frozenset[int]
    data_rows: Mapping[int, Vector]
    network: XorNetwork

    def root_of(self, row: Vector) -> Refusal | None:
        """Return the refusal behind a row that reads a tainted element."""
        return next((refusal for number, refusal in self.tainted.items() if row >> number & 1), None)

    def split(self, row: Vector) -> AffineRow:
        """Split a row of the prover into state, inputs and constant, the state over the kept elements only."""
        n, k = len(self.cone.elements), len(self.cone.free_inputs)
        state = row & ((1 << n) - 1)
        if self.root_of(state):
            raise InternalError("a row reads an element that was refused")
        if self.tainted:
            state = sum(1 << place for place, number in enumerate(self.kept) if state >> number & 1)
        return AffineRow(state, row >> n & ((1 << k) - 1), row >> (n + k))

    def observe(self, name: str, row: Vector, wire: int | None, cut_from: str = "") -> ObservedRow:
        """Return a row with its taps and XOR figures; ``wire`` is None for a tied channel."""
        taps = pull_back(self.cone, self.data_rows, self.registers, row)
        place = {number: k for k, number in enumerate(self.kept)}
        figures = self.network.figures(wire) if wire is not None else XorFigures(1, 0)
        kept_taps = tuple(Tap(place[tap.element], tap.delay) for tap in taps)
        return ObservedRow(name, self.split(row), None, kept_taps, figures.inputs, figures.depth, cut_from)


def _ground(cone: Cone, prover: Prover, tainted: Mapping[int, Refusal]) -> _Ground:
    kept = tuple(number for number in range(len(cone.elements)) if number not in tainted)
    registers = frozenset(number for part in cone.feedback for number in part)
    pipeline = {cone.elements[number].wire: data_wire(number) for number in kept if number not in registers}
    data_rows = {number: prover.rows[data_wire(number)] for number in kept}
    return _Ground(cone, prover, tainted, kept, registers, data_rows, XorNetwork(prover.behind, pipeline))


def data_wire(number: int) -> int:
    """Return the number under which the next state of an element is proved; it is no wire of the netlist."""
    return -1 - number


def _prove_all(cone: Cone, node_limit: int) -> Prover:
    n, k = len(cone.elements), len(cone.free_inputs)
    inputs = {1 << (n + j): wire for j, wire in enumerate(cone.free_inputs)}
    prover = Prover(1 << (n + k), inputs, node_limit)
    for number, element in enumerate(cone.elements):
        prover.rows[element.wire] = 1 << number
        prover.instance_of[element.wire] = element.instance
    for row, wire in inputs.items():
        prover.rows[wire] = row
    for gate in cone.gates:
        prover.add(gate.output, gate.function, gate.inputs, gate.instance)
    for number, element in enumerate(cone.elements):
        prover.add(data_wire(number), element.data, element.inputs, element.instance)
    return prover


def _refused_elements(cone: Cone, prover: Prover) -> dict[int, Refusal]:
    """Return element number → why its next state has no row."""
    refusals = {
        o.element: Refusal(cone.elements[o.element].name, cone.elements[o.element].name, o.because, o.cure, o.place)
        for o in cone.obstacles
    }
    for number, element in enumerate(cone.elements):
        wire = data_wire(number)
        if wire not in prover.rows and number not in refusals:
            refusals[number], _ = refuse(cone, prover, element.name, wire, element.instance, element.wire)
    return refusals


def _reaches_register(cone: Cone, refused: Mapping[int, Refusal]) -> bool:
    """Tell whether a refused element is part of a feedback register or feeds one."""
    targets = {cone.elements[number].wire for part in cone.feedback for number in part}
    seen = {cone.elements[number].wire for number in refused}
    waiting = list(seen)
    while waiting:
        wire = waiting.pop()
        if wire in targets:
            return True
        for after in cone.graph.successors(wire):
            if after not in seen:
                seen.add(after)
                waiting.append(after)
    return False


def _behind_refused(cone: Cone, prover: Prover, refused: Mapping[int, Refusal]) -> dict[int, Refusal]:
    """Return the refused elements and those whose rows read one, each with the refusal at the root."""
    tainted = dict(refused)
    readers: dict[int, list[int]] = {}
    for number in range(len(cone.elements)):
        for read in ones(prover.rows.get(data_wire(number), 0) & ((1 << len(cone.elements)) - 1)):
            readers.setdefault(read, []).append(number)
    waiting = list(refused)
    while waiting:
        number = waiting.pop()
        for reader in readers.get(number, ()):
            if reader not in tainted:
                tainted[reader] = tainted[number]
                waiting.append(reader)
    return tainted


def _observe(ground: _Ground) -> list[ObservedRow]:
    """Return the rows of all channels, then those of the affine nets behind the gates that spoil some of them."""
    observed: list[ObservedRow] = []
    cut: list[ObservedRow] = []
    for channel in ground.cone.channels:
        row = ground.prover.rows.get(channel.wire)
        if channel.constant is not None:
            observed.append(ground.observe(channel.name, ground.prover.constant_bit * channel.constant, None))
        elif row is not None and not ground.root_of(row):
            observed.append(ground.observe(channel.name, row, channel.wire))
        else:
            refusal, behind = _refused_channel(ground, channel)
            observed.append(ObservedRow(channel.name, None, refusal, (), 0, 0))
            cut += [
                ground.observe(ground.cone.wire_name(wire), ground.prover.rows[wire], wire, channel.name)
                for wire in behind
            ]
    return observed + cut


def _refused_channel(ground: _Ground, channel: Channel) -> tuple[Refusal, list[int]]:
    """Return why a channel has no row, and the affine wires behind the gate that still carry the machine's state."""
    prover = ground.prover
    row = prover.rows.get(channel.wire)
    root = None if row is None else ground.root_of(row)
    if root:
        return replace(root, what=channel.name), []
    refusal, spoiler = refuse(ground.cone, prover, channel.name, channel.wire, prover.instance_of[channel.wire])
    state_bits = (1 << len(ground.cone.elements)) - 1
    behind = [w for w in (spoiler.behind if spoiler else ()) if prover.rows[w] & state_bits]
    return refusal, [wire for wire in behind if not ground.root_of(prover.rows[wire])]


def _machine(ground: _Ground, observed: list[ObservedRow]) -> LinearMachine:
    cone, kept = ground.cone, ground.kept
    composed = compose_cycle(cone, ground.data_rows)
    rows = [ground.split(composed[number]) for number in kept]
    transition = tuple(row.state for row in rows)
    place = {number: k for k, number in enumerate(kept)}
    elements = [cone.elements[number] for number in kept]
    fed = [c.wire for c in cone.channels if c.wire in ground.prover.rows and c.constant is None]
    sinks = fed + [data_wire(number) for number in kept]
    return LinearMachine(
        storage=tuple(element.name for element in elements),
        free_inputs=tuple(cone.wire_name(wire) for wire in cone.free_inputs),
        transition=transition,
        input_matrix=tuple(row.inputs for row in rows),
        offset=sum(row.constant << k for k, row in enumerate(rows)),
        observed=tuple(observed),
        registers=tuple(tuple(place[number] for number in part) for part in cone.feedback),
        half_cycle=frozenset(k for k, element in enumerate(elements) if element.step),
        reset_known=sum(1 << k for k, element in enumerate(elements) if element.reset is not None),
        reset_state=sum(1 << k for k, element in enumerate(elements) if element.reset),
        transient=nilpotency_index(transition),
        cycling_degree=rank_of_cycling_part(transition),
        xor_fan_out=ground.network.fan_out(sinks, [element.wire for element in elements]),
        network_xors=ground.network.two_input(fed),
    )
