"""What a report shows, with names joined to the numbers: times in femtoseconds, names as text. Data only.

A time of None belongs to what never changes. Assumptions are keys of `analysis/assumptions.py` with counts.
Named tuples, as everywhere in this house: at start-up each costs a tenth of a frozen dataclass.
"""

from __future__ import annotations

from typing import NamedTuple

from tardigate.parts.kind import Edge
from tardigate.source.diagnostic import Diagnostic
from tardigate.source.span import Span


class Subject(NamedTuple):
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


class HopRecord(NamedTuple):
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


class FoldRecord(NamedTuple):
    """A run of hops that are not told one by one."""

    hops: int
    delay: float
    begins: float
    over: float


class EndRecord(NamedTuple):
    """An end of a trail: `what` is `input port`, `clock pin`, `output port`, `register pin` or `net`."""

    name: str
    edge: Edge
    what: str


class TrailRecord(NamedTuple):
    """A trail of `length` hops, told by `hops` in order."""

    source: EndRecord
    sink: EndRecord
    total: float
    length: int
    hops: tuple[HopRecord | FoldRecord, ...]


class SinkRecord(NamedTuple):
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


class SinksRecord(NamedTuple):
    """Sinks of one sort, slowest first: those shown, how many there are, and by when the rest has settled."""

    shown: tuple[SinkRecord, ...]
    total: int
    rest: float | None


class PaceRecord(NamedTuple):
    """When a design settles. `between_registers` is its slowest trail from a clock pin to a register pin."""

    subject: Subject
    outputs: SinksRecord
    register_pins: SinksRecord
    limiting: TrailRecord | None
    between_registers: TrailRecord | None
    assumptions: tuple[tuple[str, int], ...]
    warnings: tuple[Diagnostic, ...]


class TrailsRecord(NamedTuple):
    """The slowest or fastest trails, in order; `from_names`, `to_names` as asked for."""

    subject: Subject
    slowest: bool
    from_names: tuple[str, ...]
    to_names: tuple[str, ...]
    trails: tuple[TrailRecord, ...]
    assumptions: tuple[tuple[str, int], ...]
    warnings: tuple[Diagnostic, ...]


class KindRecord(NamedTuple):
    """A kind in use: how many instances it has and where its delays come from; `words` names the place."""

    name: str
    group: str
    inputs: int
    origin: str
    words: str
    register: bool
    instances: int


class ScopeRecord(NamedTuple):
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


class ClockRecord(NamedTuple):
    """A net that clocks registers."""

    net: str
    registers: int


class SurveyRecord(NamedTuple):
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
