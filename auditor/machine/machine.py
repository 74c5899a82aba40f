"""The linear machine that the gates were proved to be: the noun of this room.

    x(t+1) = A x(t) + B u(t) + a        y_i(t) = c_i x(t) + d_i u(t) + e_i        (all over GF(2))

Rows are ints, bit k = element k (of ``storage`` or of ``free_inputs``).
"""

from dataclasses import dataclass

from auditor.notation import SourcePlace, Vector


@dataclass(frozen=True, slots=True)
class AffineRow:
    """One affine form: ``state`` (n bits) times x, ``inputs`` (k bits) times u, plus ``constant``."""

    state: Vector
    inputs: Vector
    constant: int


@dataclass(frozen=True, slots=True)
class Refusal:
    """Why a next state or a channel is not affine, or could not be decided.

    ``what``      the element or channel concerned
    ``gate``      instance path of the first gate on the way whose output is not affine
    ``because``   a clause for the report; ``cure`` names the constant that would make it affine, or is empty
    ``undecided`` the node bound was reached: neither proved nor refuted
    """

    what: str
    gate: str
    because: str
    cure: str
    place: SourcePlace
    undecided: bool = False


@dataclass(frozen=True, slots=True)
class Tap:
    """One tap of a channel: a feedback register's element, read ``delay`` cycles before the channel shows it."""

    element: int
    delay: int


@dataclass(frozen=True, slots=True)
class ObservedRow:
    """A channel, or (``cut_from`` not empty) an affine net behind the gate that spoils the channel of that name.

    ``row`` is None exactly when ``refusal`` is not. ``taps`` by element, then delay. XOR figures as in the README;
    they are 0 where the row is refused.
    """

    name: str
    row: AffineRow | None
    refusal: Refusal | None
    taps: tuple[Tap, ...]
    xor_inputs: int
    xor_depth: int
    cut_from: str = ""

    @property
    def pipeline_stages(self) -> int:
        """The greatest delay between a feedback register and this channel, in cycles."""
        return max((tap.delay for tap in self.taps), default=0)


@dataclass(frozen=True, slots=True)
class LinearMachine:
    """The proved machine. Shapes: n elements, k free inputs, m observed rows.

    ``transition``    (n,) rows of A, n bits each          ``input_matrix``  (n,) rows of B, k bits each
    ``offset``        the vector a as an int, bit i = row i
    ``registers``     the feedback registers: tuples of element numbers, ascending
    ``half_cycle``    elements that take their data inside the cycle (steps 1 to 3); a next state that reads one of an
                      earlier step has what it takes in its place, so such a column of A may be zero
    ``reset_known``, ``reset_state``   which elements the asynchronous pins set, and to what (n bits each)
    ``transient``     T, the nilpotency index of A         ``cycling_degree``  rank of A^n
    ``xor_fan_out``   (n,) pairs (XOR node, input) reached from the element
    ``network_xors``  two-input XORs between registers and channels, those that several channels share counted once
    """

    storage: tuple[str, ...]
    free_inputs: tuple[str, ...]
    transition: tuple[Vector, ...]
    input_matrix: tuple[Vector, ...]
    offset: Vector
    observed: tuple[ObservedRow, ...]
    registers: tuple[tuple[int, ...], ...]
    half_cycle: frozenset[int]
    reset_known: Vector
    reset_state: Vector
    transient: int
    cycling_degree: int
    xor_fan_out: tuple[int, ...]
    network_xors: int = 0

    @property
    def size(self) -> int:
        """n, the number of storage elements."""
        return len(self.storage)


@dataclass(frozen=True, slots=True)
class Extraction:
    """What the proof gave: the machine, or None where a next state was refused; and every refusal."""

    machine: LinearMachine | None
    refusals: tuple[Refusal, ...]
