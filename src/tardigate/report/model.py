"""What a report shows, with names joined to the numbers: times in femtoseconds, names as text. Data only.

A time of None belongs to what never changes. Assumptions are keys of `analysis/assumptions.py` with counts.
"""

from __future__ import annotations

from dataclasses import dataclass

from tardigate.parts.kind import Edge
from tardigate.source.diagnostic import Diagnostic
from tardigate.source.span import Span


@dataclass(frozen=True, slots=True)
class Subject:
    """What a report is about: the design's top and size, and which delays were taken.

    `condition_assumed`: nobody chose the condition, so it is the first of the parts file.
    """

    top: str
    instances: int
    nets: int
    grade: str
    condition: str | None
    condition_assumed: bool
    files: tuple[str, ...]
    parts: tuple[str, ...]


@dataclass(frozen=True, slots=True)
class HopRecord:
    """A hop through a part instance to the net it drives; `begins` and `over` count from the source."""

    instance: str
    kind: str
    from_pin: str
    from_edge: Edge
    to_pin: str
    to_edge: Edge
    net: str
    delay: float
    begins: float
    over: float
    place: Span | None


@dataclass(frozen=True, slots=True)
class FoldRecord:
    """A run of hops that are not told one by one."""

    hops: int
    delay: float
    begins: float
    over: float


@dataclass(frozen=True, slots=True)
class EndRecord:
    """An end of a trail: `what` is `input port`, `clock pin`, `output port`, `register pin` or `net`."""

    name: str
    edge: Edge
    what: str


@dataclass(frozen=True, slots=True)
class TrailRecord:
    """A trail of `count` hops, told by `hops` in order."""

    source: EndRecord
    sink: EndRecord
    total: float
    count: int
    hops: tuple[HopRecord | FoldRecord, ...]


@dataclass(frozen=True, slots=True)
class SinkRecord:
    """When an output port or a register pin settles and stirs, by edge (rise, fall)."""

    name: str
    what: str
    settles: tuple[float | None, float | None]
    stirs: tuple[float | None, float | None]

    @property
    def window(self) -> tuple[float, float] | None:
        """From when until when it may move, both edges taken together; None for never."""
        late = [time for time in self.settles if time is not None]
        early = [time for time in self.stirs if time is not None]
        return (min(early), max(late)) if late and early else None


@dataclass(frozen=True, slots=True)
class SinksRecord:
    """Sinks of one sort, slowest first: those shown, how many there are, and by when the rest has settled."""

    shown: tuple[SinkRecord, ...]
    count: int
    rest: float | None


@dataclass(frozen=True, slots=True)
class PaceRecord:
    """When a design settles. `between_registers` is its slowest trail from a clock pin to a register pin."""

    subject: Subject
    outputs: SinksRecord
    register_pins: SinksRecord
    limiting: TrailRecord | None
    between_registers: TrailRecord | None
    assumptions: tuple[tuple[str, int], ...]
    warnings: tuple[Diagnostic, ...]


@dataclass(frozen=True, slots=True)
class TrailsRecord:
    """The slowest or fastest trails, in order; `from_names`, `to_names` as asked for."""

    subject: Subject
    slowest: bool
    from_names: tuple[str, ...]
    to_names: tuple[str, ...]
    trails: tuple[TrailRecord, ...]
    assumptions: tuple[tuple[str, int], ...]
    warnings: tuple[Diagnostic, ...]


@dataclass(frozen=True, slots=True)
class KindRecord:
    """A kind in use: how many instances it has and where its delays come from; `words` names the place."""

    name: str
    group: str
    inputs: int
    count: int
    origin: str
    words: str
    register: bool


@dataclass(frozen=True, slots=True)
class ScopeRecord:
    """A group of like instances in the hierarchy, `alike` of them.

    Each holds `own` part instances, and `total` with all that is below it; `groups` is how many groups stand
    right below it. `lasts` says for each level from the top's children down to its own whether it is the
    last there; the top has none.
    """

    name: str
    module: str
    alike: int
    own: int
    total: int
    groups: int
    lasts: tuple[bool, ...]


@dataclass(frozen=True, slots=True)
class ClockRecord:
    """A net that clocks registers."""

    net: str
    registers: int


@dataclass(frozen=True, slots=True)
class SurveyRecord:
    """What is in a design. `undescribed` names modules that nobody describes, with their instances."""

    subject: Subject
    modules: int
    scopes: int
    ports: tuple[int, int, int]
    registers: int
    clocks: tuple[ClockRecord, ...]
    kinds: tuple[KindRecord, ...]
    hierarchy: tuple[ScopeRecord, ...]
    undescribed: tuple[tuple[str, int], ...]
    warnings: tuple[Diagnostic, ...]
