"""Linear machines written down directly, for tests of what follows from one."""

from collections.abc import Sequence

from auditor.gf2.matrix import nilpotency_index, ones, rank_of_cycling_part
from auditor.machine.machine import AffineRow, LinearMachine, ObservedRow, Refusal
from auditor.notation import SourcePlace


def linear_machine(
    transition: Sequence[int],
    channels: Sequence[tuple[int, int] | None],
    offset: int = 0,
    registers: Sequence[Sequence[int]] | None = None,
    reset_known: int = 0,
    reset_state: int = 0,
    cut_from: Sequence[int] = (),
    transient: int | None = None,
) -> LinearMachine:
    """Return the machine with channels c0, c1, ...: each (row, constant), or None for a refused one.

    Registers are the parts of the transition that are strongly connected, unless they are given.
    """
    n = len(transition)
    observed = []
    for i, channel in enumerate(channels):
        row, refusal = None, None
        if channel is None:
            refusal = Refusal(f"c{i}", "u1", "the function is not affine", "", SourcePlace("built.v"))
        else:
            row = AffineRow(channel[0], 0, channel[1])
        observed.append(ObservedRow(f"c{i}", row, refusal, (), 0, 0, "c0" if i in cut_from else ""))
    return LinearMachine(
        storage=tuple(f"q[{k}]" for k in range(n)),
        free_inputs=(),
        transition=tuple(transition),
        input_matrix=(0,) * n,
        offset=offset,
        observed=tuple(observed),
        registers=tuple(map(tuple, strongly_connected(transition) if registers is None else registers)),
        half_cycle=frozenset(),
        reset_known=reset_known,
        reset_state=reset_state,
        transient=nilpotency_index(transition) if transient is None else transient,
        cycling_degree=rank_of_cycling_part(transition),
        xor_fan_out=(0,) * n,
    )


def strongly_connected(transition: Sequence[int]) -> list[list[int]]:
    """Return the elements that reach each other, part by part, parts without a loop left out; for small n."""
    reach = list(transition)
    for k in range(len(reach)):
        reach = [row | reach[k] if row >> k & 1 else row for row in reach]
    parts: list[list[int]] = []
    for i, row in enumerate(reach):
        part = [j for j in ones(row) if reach[j] >> i & 1]
        if row >> i & 1 and i == min(part):
            parts.append(sorted(part))
    return parts


def fibonacci(connection: Sequence[int]) -> list[int]:
    """Return the transition of the register of stages 1 ... n that the exponents of a connection polynomial name.

    Stage 1 (element 0) takes the sum of the stages named, every other stage takes the one before it.
    """
    taps = sum(1 << exponent - 1 for exponent in connection if exponent)
    return [taps] + [1 << k for k in range(max(connection) - 1)]


def galois(characteristic: Sequence[int]) -> list[int]:
    """Return the transition of multiplication by x modulo a polynomial: element k holds the coefficient of x^k."""
    n = max(characteristic)
    feedback = [1 << n - 1 if k in characteristic else 0 for k in range(n)]
    return [feedback[k] ^ (1 << k - 1 if k else 0) for k in range(n)]
