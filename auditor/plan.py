"""What the reviewer states: the plan, from a TOML file, from the command line, or both."""

import re
from collections.abc import Mapping
from dataclasses import dataclass, field, replace
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
    generator_in_capture: str | None = None  # "holds" or "advances"; None: what the netlist proves, else it holds
    twin_window: int = 0  # scan cells of patterns up to so many apart are compared
    launch: str = "none"  # or "shift": two-cycle tests, launched by the last shift

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


MACRO = re.compile(r"[A-Za-z_]\w*")  # what a macro may be called

# Every limit by its name in the plan and after --limit, with the least value that makes sense.
LEAST_LIMIT = {"separation": 1, "fan_out": 1, "taps": 1, "depth": 0}
BEYOND = 10**18  # every stated number is smaller
LONGEST_CHAIN = 10**7  # scan cells; far beyond any chain, and short enough to go through
LONGEST_TWIN_WINDOW = 10**4  # patterns


@dataclass(frozen=True, slots=True)
class Plan:
    """All that an audit is given. Paths are as they will be opened.

    ``mode``      net or port → 0 or 1        ``channels``  names, vectors or patterns; empty: all output ports
    ``modes``     name → a mode, where the plan names several; ``mode`` is then empty
    ``defines``   macros of the netlist and of cell models → their texts; ``include`` folders of included files
    ``chain_length``  scan cells of every chain, or None where not stated
    ``chain_file``, ``scan_outputs``  what tells the chains in its place: a file, or the nets they end at
    ``trace_forward``  the chains are traced from the channels on
    ``relations``  3 or 4: constant sums of up to so many scan cells are searched; None: of three where that is cheap
    ``cone_file``  cones that the reviewer gives, one line a scan cell
    ``seeds``      name → state, bit k for storage element k
    ``capture``    net or port → 0 or 1 in capture; None: the circuit under test is not asked about
    ``time_limit``  seconds from the start of the audit after which no lead is worked on
    ``guesses``   a sentence on everything in the plan that was drafted and not stated
    """

    netlists: tuple[Path, ...]
    cells: tuple[Path, ...] = ()
    top: str | None = None
    mode: Mapping[str, int] = field(default_factory=dict)
    modes: Mapping[str, Mapping[str, int]] = field(default_factory=dict)
    channels: tuple[str, ...] = ()
    reference: str | None = None
    chain_length: int | None = None
    patterns: Patterns | None = None
    limits: Limits = Limits()
    waivers: tuple[Waiver, ...] = ()
    fail_at: str = "error"
    work_limit: int | None = None
    time_limit: int | None = None
    file: Path | None = None
    guesses: tuple[str, ...] = ()
    defines: Mapping[str, str] = field(default_factory=dict)
    include: tuple[Path, ...] = ()
    chain_file: Path | None = None
    scan_outputs: tuple[str, ...] = ()
    trace_forward: bool = False
    relations: int | None = None
    cone_file: Path | None = None
    seeds: Mapping[str, int] = field(default_factory=dict)
    capture: Mapping[str, int] | None = None

    def by_mode(self) -> dict[str, "Plan"]:
        """Return a plan of one mode for each of the modes; the name is empty where the plan names none."""
        if not self.modes:
            return {"": self}
        return {name: replace(self, mode=mode, modes={}) for name, mode in self.modes.items()}


@dataclass(frozen=True, slots=True)
class Options:
    """What the command line states; None or empty means not given. Fields as in ``Plan``."""

    netlists: tuple[Path, ...] = ()
    cells: tuple[Path, ...] = ()
    top: str | None = None
    mode: Mapping[str, int] = field(default_factory=dict)
    channels: tuple[str, ...] = ()
    reference: str | None = None
    chain_length: int | None = None
    limits: Mapping[str, int] = field(default_factory=dict)
    fail_at: str | None = None
    work_limit: int | None = None
    time_limit: int | None = None
    defines: Mapping[str, str] = field(default_factory=dict)
    include: tuple[Path, ...] = ()
    chain_file: Path | None = None
    scan_outputs: tuple[str, ...] = ()
    trace_forward: bool = False
    relations: int | None = None
    cone_file: Path | None = None
    capture: Mapping[str, int] | None = None


def merge(plan: Plan | None, options: Options) -> Plan:
    """Return the plan under the options: a given list replaces the plan's, mode, capture, limits, defines do so by key.

    A net that the options hold is held in every mode of the plan. Chains that the options tell, by whichever of the
    four ways, replace the plan's.
    """
    stated = plan or Plan(netlists=())
    told = options.chain_length or options.chain_file or options.scan_outputs or options.trace_forward
    chains = options if told else stated
    return replace(
        stated,
        netlists=options.netlists or stated.netlists,
        cells=options.cells or stated.cells,
        top=stated.top if options.top is None else options.top,
        mode=stated.mode if stated.modes else {**stated.mode, **options.mode},
        modes={name: {**mode, **options.mode} for name, mode in stated.modes.items()},
        channels=options.channels or stated.channels,
        reference=stated.reference if options.reference is None else options.reference,
        chain_length=chains.chain_length,
        chain_file=chains.chain_file,
        scan_outputs=chains.scan_outputs,
        trace_forward=chains.trace_forward,
        relations=stated.relations if options.relations is None else options.relations,
        cone_file=options.cone_file or stated.cone_file,
        capture=stated.capture if options.capture is None else {**(stated.capture or {}), **options.capture},
        limits=replace(stated.limits, **options.limits),
        fail_at=options.fail_at or stated.fail_at,
        work_limit=stated.work_limit if options.work_limit is None else options.work_limit,
        time_limit=options.time_limit,
        defines={**stated.defines, **options.defines},
        include=options.include or stated.include,
    )
