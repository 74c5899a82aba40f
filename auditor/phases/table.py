"""Where every channel stands on its cycle: the noun of this room.

Channels are numbered as ``LinearMachine.observed``. A lead is counted in cycles of the register's clock.
"""

from dataclasses import dataclass
from typing import Literal, TypeAlias

from auditor.notation import Polynomial, Vector

LeadKind: TypeAlias = Literal["exact", "from", "modulo", "none", "undecided"]


@dataclass(frozen=True, slots=True)
class Infinite:
    """The separation of streams that never coincide."""

    def __str__(self) -> str:
        return "infinite"


Separation: TypeAlias = int | Infinite | None  # None: undecided


@dataclass(frozen=True, slots=True)
class Neighbour:
    """The nearest channel of the same class and how far it is; ``complement`` where the streams are complements."""

    channel: int
    separation: int
    complement: bool


@dataclass(frozen=True, slots=True)
class Phase:
    """The phase of one channel against its class reference.

    ``group``       index into the classes, None for a channel without one (constant, refused)
    ``lead``        0 <= lead < modulus, None where there is none or it is undecided
    ``kind``        exact: known modulo the class modulus and true from cycle 0 on; from: true from ``valid_from`` on;
                    modulo: known only modulo ``lead_modulus``, a proper divisor; none: there is none
    ``no_lead_because``  in words, for none and undecided
    ``inverted``    the channel is the complement of the shifted reference; None without a lead
    ``valid_from``  the cycle from which y_i(t) = y_ref(t + lead) + inverted holds for every state at cycle 0
    """

    group: int | None
    lead: int | None
    kind: LeadKind
    lead_modulus: int | None
    inverted: bool | None
    valid_from: int
    no_lead_because: str = ""
    nearest: Neighbour | None = None

    def lag(self, modulus: int) -> int | None:
        """Return -lead modulo the class modulus."""
        return None if self.lead is None else -self.lead % modulus


@dataclass(frozen=True, slots=True)
class Closest:
    """The two channels of a class that are nearest to each other, in ascending order."""

    channels: tuple[int, int]
    cycles: int
    complement: bool


@dataclass(frozen=True, slots=True)
class PhaseClass:
    """Channels whose streams are shifts or complements of each other.

    ``modulus`` is the period of the stream, None where the order is undecided; ``minimum`` is None for a class of one
    channel or while undecided. ``half_turn``: the stream is its own complement shifted by half the modulus.
    """

    reference: int
    modulus: int | None
    channels: tuple[int, ...]
    minimum: Closest | None
    half_turn: bool = False

    @property
    def turn(self) -> int | None:
        """The modulus of distances: a shift by it gives the stream again or its complement."""
        return self.modulus // 2 if self.modulus and self.half_turn else self.modulus


@dataclass(frozen=True, slots=True)
class Factor:
    """An irreducible factor of a characteristic polynomial; ``primitive`` None where 2^n - 1 is not factored."""

    polynomial: Polynomial
    multiplicity: int
    primitive: bool | None


@dataclass(frozen=True, slots=True)
class ResetFacts:
    """Where a register starts: ``state`` over the register's own elements, ``unknown`` those without a reset.

    ``stuck``   the reset state is a lock-up state; ``period`` of the orbit from it; both None while bits are unknown.
    """

    state: Vector
    unknown: tuple[int, ...]
    stuck: bool | None
    period: int | None


@dataclass(frozen=True, slots=True)
class RegisterFacts:
    """One feedback register; vectors are over its own elements, bit k = ``elements[k]``.

    ``period``  of the affine map on its cycling part; None where an order is undecided
    ``lock_up_states``  ascending, at most 16 of ``lock_up_count``
    """

    elements: tuple[int, ...]
    cycling_degree: int
    characteristic_polynomial: Polynomial
    connection_polynomial: Polynomial
    factors: tuple[Factor, ...]
    period: int | None
    maximum_period: int
    primitive: bool | None
    lock_up_count: int
    lock_up_states: tuple[Vector, ...]
    reset: ResetFacts | None


@dataclass(frozen=True, slots=True)
class InStep:
    """Registers, by number, that share irreducible factors of degree 2 or more, and how they run from reset.

    ``shifts``   of each register but the first: the cycles by which the stream of its first element leads that of
                 the first register's, complements included; None where not known
    ``closest``  of the channels that tap these registers, the two that come nearest from reset, channels that keep
                 their distance whatever the start left out; None where none is known
    ``certain_below``  no other pair of them is closer than both this and ``closest``; None: at any distance
    """

    registers: tuple[int, ...]
    factors: tuple[Polynomial, ...]
    shifts: tuple[Separation, ...]
    closest: Closest | None
    certain_below: int | None


@dataclass(frozen=True, slots=True)
class PhaseTable:
    """The registers, the classes, and one phase a channel.

    ``certified_at_least``  every separation inside a class is at least this; None where all leads are known
    ``close_pairs``   all pairs closer than ``window`` of which a lead is undecided, ascending:
                      (i, j, cycles, complement), channel i leads channel j by so many cycles
    ``window``        None where all leads are known
    ``in_step``       the registers that share factors
    """

    registers: tuple[RegisterFacts, ...]
    classes: tuple[PhaseClass, ...]
    phases: tuple[Phase, ...]
    certified_at_least: int | None
    close_pairs: tuple[tuple[int, int, int, bool], ...] = ()
    window: int | None = None
    in_step: tuple[InStep, ...] = ()

    def decides(self, bound: int) -> bool:
        """Whether every pair closer than the bound is known."""
        return self.window is None or bound <= self.window
