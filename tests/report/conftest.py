"""Hand-made records for the views, and a small flat design with its graph for what joins names."""

from __future__ import annotations

from collections.abc import Callable

import pytest

from tardigate.parts.kind import Edge
from tardigate.report.model import (
    ClockRecord,
    EndRecord,
    FoldRecord,
    HopRecord,
    KindRecord,
    PaceRecord,
    ScopeRecord,
    SinkRecord,
    SinksRecord,
    Subject,
    SurveyRecord,
    TrailRecord,
    TrailsRecord,
)
from tardigate.source.span import span_in

NS = 1e6


@pytest.fixture
def subject() -> Subject:
    return Subject("sequencer", 213, 260, "span", "v5", True, ("board.v",), ("moss.parts",))


@pytest.fixture
def make_trail() -> Callable[..., TrailRecord]:
    return _trail


def _trail(prefix: str = "", hops: int = 7, scale: float = 1.0) -> TrailRecord:
    told: list[HopRecord | FoldRecord] = []
    at = 0.0
    delays = [6.5, 8.0, 3.25, 19.0, 6.5, 4.0, 1.35, 7.0, 9.0, 2.0][:hops]
    place = span_in("boards/sequencer.v", b"\n" * 41 + b"  MS00 u3 (y, a, b);\n", 43, 60)
    for number, delay in enumerate(delays):
        end = at + delay * NS * scale
        edge = Edge(number % 2)
        name = f"{prefix}seq.step{number}.u{number}"
        told.append(
            HopRecord(
                name,
                "MS00",
                "A",
                edge,
                "Y",
                Edge(1 - edge),
                f"{prefix}seq.n{number}",
                end - at,
                at,
                end,
                place,
            )
        )
        at = end
    source = EndRecord(f"{prefix}START", Edge.RISE, "input port")
    sink = EndRecord(f"{prefix}STROBE", Edge(hops % 2), "output port")
    return TrailRecord(source, sink, at, len(told), tuple(told))


@pytest.fixture
def folded_trail() -> TrailRecord:
    whole = _trail()
    middle = FoldRecord(3, 28.75 * NS, 14.5 * NS, 43.25 * NS)
    return TrailRecord(whole.source, whole.sink, whole.total, 7, (*whole.hops[:2], middle, *whole.hops[5:]))


def _sinks(prefix: str, what: str, count: int) -> SinksRecord:
    shown = [
        SinkRecord(
            f"{prefix}{i}", what, ((48.6 - 3 * i) * NS, (44.25 - 3 * i) * NS), ((9.5 + i) * NS, (11 + i) * NS)
        )
        for i in range(count)
    ]
    shown.append(SinkRecord(f"{prefix}TIED", what, (None, None), (None, None)))
    return SinksRecord(tuple(shown), 34, 12.5 * NS)


ASSUMPTIONS = (
    ("inputs_at_zero", 34),
    ("clock_pins_at_zero", 12),
    ("wires_at_zero", 260),
    ("minima_at_zero", 1),
)


@pytest.fixture
def make_pace(subject: Subject) -> Callable[..., PaceRecord]:
    def make(prefix: str = "") -> PaceRecord:
        return PaceRecord(
            subject,
            _sinks(f"{prefix}STEP", "output port", 4),
            _sinks(f"{prefix}seq.hold.ff", "register pin", 3),
            _trail(prefix),
            _trail(prefix, 4),
            ASSUMPTIONS,
            (),
        )

    return make


@pytest.fixture
def make_trails(subject: Subject) -> Callable[..., TrailsRecord]:
    def make(prefix: str = "", count: int = 2) -> TrailsRecord:
        trails = tuple(_trail(prefix, 7 - i) for i in range(count))
        return TrailsRecord(subject, True, (f"{prefix}START",), (), trails, ASSUMPTIONS, ())

    return make


@pytest.fixture
def make_survey(subject: Subject) -> Callable[..., SurveyRecord]:
    def make(prefix: str = "") -> SurveyRecord:
        return SurveyRecord(
            subject,
            6,
            14,
            (34, 12, 2),
            16,
            (ClockRecord(f"{prefix}CLK", 12), ClockRecord(f"{prefix}seq.slow", 4)),
            (
                KindRecord(f"{prefix}MS00", "part", 2, "parts file", "examples/moss.parts:12", False, 88),
                KindRecord(f"{prefix}MS74", "part", 4, "parts file", "examples/moss.parts:40", True, 16),
                KindRecord("nor", "gate", 2, "family default", "default of moss.parts:7", False, 11),
                KindRecord("nand", "gate", 3, "missing", "", False, 9),
            ),
            (
                ScopeRecord("", f"{prefix}sequencer", 1, 13, 213, 2, ()),
                ScopeRecord("seq", f"{prefix}counter", 1, 20, 100, 1, (False,)),
                ScopeRecord(f"{prefix}bit0 … {prefix}bit7", "stage", 8, 10, 10, 0, (False, True)),
                ScopeRecord("out", "decoder", 1, 100, 100, 0, (True,)),
            ),
            ((f"{prefix}LAMP", 3),),
            (),
        )

    return make
