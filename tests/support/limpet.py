"""What the sample netlists were mapped from: registers and channels, without pipelines and inversions."""

from tests.support.machines import automaton, fibonacci, galois, with_channels

ECHO_TAPS = (
    (1, 20, 27), (2, 8, 21), (3, 5, 14), (8, 9, 23), (2, 13, 16), (1, 19, 28), (6, 11, 30), (0, 12, 19),
    (5, 17, 29), (9, 20, 25), (11, 18, 29), (7, 13, 21), (7, 10, 16), (15, 22, 25), (24, 26, 31), (0, 4, 28),
)  # fmt: skip
SALINITY_TAPS = (
    (5, 20), (4, 9), (7, 19), (6, 23), (10, 17), (15, 18), (1, 22), (0, 13), (8, 14), (11, 21), (2, 16), (3, 12),
)  # fmt: skip
SALINITY_INVERTED = frozenset((1, 4, 7, 10))
WAVE_SITES = (0, 1, 3, 4, 6, 7, 8, 9, 10, 11, 12, 13, 14, 16, 18, 20)
SURGE_TAPS = ((2, 10), (5, 13, 19), (0, 8), (4, 12), (7, 18), (1, 15, 17), (3, 14), (4, 12))

LEVEL = with_channels(fibonacci((16, 15, 13, 4), 16), [[k] for k in range(16)])
ECHO = with_channels(fibonacci((32, 22, 2, 1), 32), ECHO_TAPS)
SALINITY = with_channels(galois((24, 7, 2, 1, 0)), SALINITY_TAPS)
WAVE = with_channels(automaton("111111010010110101010110"), [[k] for k in WAVE_SITES])
SURGE = with_channels(fibonacci((20, 17), 20), SURGE_TAPS)
