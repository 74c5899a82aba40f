"""What the reviewer states: the plan, from a TOML file, from the command line, or both."""

from collections.abc import Mapping
from dataclasses import dataclass, field
from pathlib import Path


@dataclass(frozen=True, slots=True)
class Waiver:
    """Silences findings by slug and object; ``where`` holds names that must all be among the finding's objects."""

    slug: str
    where: tuple[str, ...]
    reason: str


@dataclass(frozen=True, slots=True)
class Patterns:
    """The planned test: patterns, and per pattern the generator's clocks in shift and in capture."""

    count: int
    shift_cycles: int
    capture_cycles: int = 0
    generator_in_capture: str = "holds"  # or "advances"

    @property
    def clocks_per_pattern(self) -> int:
        """Generator clocks from the start of one load to the start of the next."""
        return self.shift_cycles + (self.capture_cycles if self.generator_in_capture == "advances" else 0)


@dataclass(frozen=True, slots=True)
class Limits:
    """Bounds that the reviewer sets; None means not asked."""

    separation: int | None = None
    fan_out: int | None = None
    taps: int | None = None
    depth: int | None = None


@dataclass(frozen=True, slots=True)
class Plan:
    """All that an audit is given. Paths are as they will be opened.

    ``mode``      net or port → 0 or 1        ``channels``  names, vectors or patterns; empty: all output ports
    ``chain_length``  scan cells of every chain, or None where not stated
    """

    netlists: tuple[Path, ...]
    cells: tuple[Path, ...] = ()
    top: str | None = None
    mode: Mapping[str, int] = field(default_factory=dict)
    channels: tuple[str, ...] = ()
    reference: str | None = None
    chain_length: int | None = None
    patterns: Patterns | None = None
    limits: Limits = Limits()
    waivers: tuple[Waiver, ...] = ()
    fail_at: str = "error"
    work_limit: int | None = None
    file: Path | None = None
