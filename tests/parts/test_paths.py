"""Module paths and timing checks to rows and checks, from trees made by hand (IEEE 1364-2005, 14 and 15)."""

from __future__ import annotations

from dataclasses import dataclass, field

import pytest

from tardigate.parts import paths as house
from tardigate.parts.cell_desk import INNER
from tardigate.parts.function import Network
from tardigate.parts.kind import Edge, Way
from tardigate.parts.model import Place, Row
from tardigate.parts.path_values import ORDERS, by_transition
from tardigate.parts.paths import build_paths
from tardigate.parts.source_delay import Triple
from tardigate.parts.timing_checks import build_checks, delayed_signals, event_edges
from tardigate.source.files import SourceFile
from tardigate.syntax import tree

PINS = {"a": (0,), "b": (1,), "v": (2, 3), "y": (4,), "z": (5,), "w": (6, 7), "io": (8,), "inner": (INNER,)}
WAYS = [Way.INPUT] * 4 + [Way.OUTPUT] * 4 + [Way.INOUT]


@dataclass
class FakeDesk:
    """A part with inputs `a`, `b`, `v[1:0]`, outputs `y`, `z`, `w[1:0]`, an `io` and a net `inner`."""

    network: Network = field(default_factory=Network)
    told: list[str] = field(default_factory=list)
    places: list[tuple[int, int, dict[str, object]]] = field(default_factory=list)

    def terminal(self, reference: tree.Reference) -> tuple[int, ...]:
        return PINS[reference.path[0]]

    def way(self, bit: int) -> Way:
        return WAYS[bit]

    def node(self, condition: tree.Expression) -> int:
        if isinstance(condition, tree.Unary):
            return self.network.add("not", self.node(condition.operand))
        if isinstance(condition, tree.Number):
            return self.network.add("const", condition.value)
        assert isinstance(condition, tree.Reference)
        return self.network.add("bit", PINS[condition.path[0]][0])

    def triple(self, value: tree.Expression, negative: bool = False) -> Triple | None:
        assert isinstance(value, tree.Number)
        if value.value < 0 and not negative:
            self.told.append("N151")
            return None
        return (float(value.value),) * 3

    def place(self, at: int, length: int = 1) -> Place:
        return Place(SourceFile("cell.v", b""), at, at + length)

    def tell(self, code: str, at: int, length: int = 1, **words: object) -> None:
        self.told.append(code)
        self.places.append((at, length, words))


def _ref(name: str) -> tree.Reference:
    return tree.Reference((name,), (), 0)


def _number(value: int) -> tree.Number:
    return tree.Number(value, None, 0, 0, True, 0)


NOT_B = tree.Unary("!", _ref("b"), 0)


def _path(
    tails: str, heads: str, *values: int, full: bool = False, edge: str = "", polarity: str = "",
    data: tree.Expression | None = None, when: tree.Expression | None = None, ifnone: bool = False,
) -> tree.Path:  # fmt: skip
    ends = [tuple(_ref(name) for name in names.split()) for names in (tails, heads)]
    numbers = tuple(_number(value) for value in values)
    return tree.Path(ends[0], ends[1], full, edge, polarity, data, when, ifnone, numbers, 0)


def _rows(*paths: tree.Path, lets_go: tuple[int, ...] = (), unknown: tuple[int, ...] = ()) -> list[Row]:
    desk = FakeDesk()
    rows = build_paths(paths, desk, lets_go, unknown)
    assert desk.told == []
    return rows


def _told(*paths: tree.Path) -> list[str]:
    desk = FakeDesk()
    build_paths(paths, desk, ())
    return desk.told


# Clause 14.3.1, table 14-2: how many values, and which of them each transition takes


@pytest.mark.parametrize(
    ("count", "rise", "fall", "to_z_from_0", "from_z_to_1", "to_z_from_1", "from_z_to_0"),
    [
        (1, 0, 0, 0, 0, 0, 0),
        (2, 0, 1, 0, 0, 1, 1),
        (3, 0, 1, 2, 0, 2, 1),
        (6, 0, 1, 2, 3, 4, 5),
        (12, 0, 1, 2, 3, 4, 5),
    ],
)  # fmt: skip
def test_table_14_2(
    count: int, rise: int, fall: int, to_z_from_0: int, from_z_to_1: int, to_z_from_1: int, from_z_to_0: int
) -> None:
    triples = [(float(i), float(i), float(i)) for i in range(count)]
    wanted = {
        "LH": rise, "HL": fall, "LZ": to_z_from_0, "ZH": from_z_to_1, "HZ": to_z_from_1, "ZL": from_z_to_0,
    }  # fmt: skip
    assert {way: int(triple[0]) for way, triple in by_transition(triples).items()} == wanted


@pytest.mark.parametrize("count", [4, 5, 7, 8, 9, 10, 11, 13])
def test_other_numbers_of_values_are_refused(count: int) -> None:
    assert count not in ORDERS
    assert _told(_path("a", "y", *range(count))) == ["N174"]


def test_a_negative_value_is_refused() -> None:
    assert _told(_path("a", "y", 1, -1)) == ["N151"]


def test_equal_values_share_a_row_and_others_do_not() -> None:
    assert [(r.symbol, r.transitions) for r in _rows(_path("a", "y", 3))] == [("tpd", ("LH", "HL"))]
    assert [(r.symbol, r.columns) for r in _rows(_path("a", "y", 3, 4))] == [
        ("tPLH", ((3.0, 3.0, 3.0),)),
        ("tPHL", ((4.0, 4.0, 4.0),)),
    ]


def test_transitions_to_z_are_rows_only_where_the_output_can_be_z() -> None:
    path = _path("a", "y z", 1, 2, 3, 4, 5, 6, full=True)
    found = {row.symbol: (row.pairs, row.columns[0][0]) for row in _rows(path, lets_go=(5,))}
    assert found == {
        "tPLH": (((0, 4), (0, 5)), 1.0), "tPHL": (((0, 4), (0, 5)), 2.0),
        "tPLZ": (((0, 5),), 3.0), "tPZH": (((0, 5),), 4.0),
        "tPHZ": (((0, 5),), 5.0), "tPZL": (((0, 5),), 6.0),
    }  # fmt: skip


def test_three_values_to_an_output_of_an_opaque_body_say_that_it_can_be_z() -> None:
    two, three = (
        build_paths([_path("a", "y", *values)], FakeDesk(), (), (4,), opaque=True)
        for values in ((1, 2), (1, 2, 3))
    )
    assert [row.symbol for row in two] == ["tPLH", "tPHL"]
    assert [row.symbol for row in three] == ["tPLH", "tPHL", "tPZH", "tPZL", "tdis"]


# Clauses 14.2.1, 14.2.5 and 14.2.6: terminals


def test_a_parallel_path_joins_bit_to_bit_and_a_full_path_each_to_each() -> None:
    assert _rows(_path("v", "w", 1))[0].pairs == ((2, 6), (3, 7))
    assert _rows(_path("v a", "w y", 1, full=True))[0].pairs == tuple(
        (tail, head) for tail in (2, 3, 0) for head in (6, 7, 4)
    )


@pytest.mark.parametrize(
    ("path", "code"),
    [
        (_path("inner", "y", 1), "N170"),
        (_path("a", "inner", 1), "N170"),
        (_path("y", "z", 1), "N171"),
        (_path("a", "b", 1), "N171"),
        (_path("v", "y", 1), "N172"),
        (_path("a b", "y", 1), "N173"),
        (_path("a", "y z", 1), "N173"),
    ],
)
def test_illegal_terminals(path: tree.Path, code: str) -> None:
    assert _told(path) == [code]


def test_an_inout_may_begin_and_end_a_path() -> None:
    assert _rows(_path("io", "y", 1))[0].pairs == ((8, 4),)
    assert _rows(_path("a", "io", 1))[0].pairs == ((0, 8),)


def test_too_many_pairs(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(house, "MOST_PAIRS", 4)
    assert _told(_path("v", "w", 1, full=True)) == []
    assert _told(_path("v", "w", 1, full=True), _path("a", "y", 1, full=True)) == ["N181"]


# Clauses 14.2.2 and 14.2.3: polarity and edges


def test_polarity_is_that_of_the_input_only_in_a_simple_path() -> None:
    assert _rows(_path("a", "y", 1, polarity="-"))[0].polarity == "-"
    (row,) = _rows(_path("a", "y", 1, edge="posedge", polarity="+", data=_ref("b")))
    assert (row.edge, row.polarity) == (Edge.RISE, "")


@pytest.mark.parametrize(
    ("edge", "polarity", "data", "wanted"),
    [
        ("negedge", "+", 0, "+"),
        ("posedge", "+", 0, "-"),
        ("posedge", "", 1, "+"),
        ("negedge", "-", 0, "-"),
    ],
)
def test_constant_data_says_where_a_set_or_clear_leads(
    edge: str, polarity: str, data: int, wanted: str
) -> None:
    path = _path("a", "y", 1, edge=edge, polarity=polarity, data=_number(data)._replace(width=1))
    assert _rows(path, unknown=(4,))[0].polarity == wanted
    assert _rows(path)[0].polarity == ""


# Clause 14.2.4: states


def test_ifnone_holds_where_no_condition_of_its_own_pair_does() -> None:
    desk = FakeDesk()
    rows = build_paths(
        [
            _path("a", "y", 1, when=_ref("b")),
            _path("a", "y z", 2, full=True, ifnone=True),
            _path("b", "y", 3, when=_ref("a")),
        ],
        desk,
        (),
    )
    by_pair = {row.pairs: row.when for row in rows if row.columns[0][0] == 2}
    assert by_pair.keys() == {((0, 4),), ((0, 5),)}
    assert by_pair[((0, 5),)] == -1  # no condition: as if it were unconditional
    assert desk.network.nodes[by_pair[((0, 4),)]] == ("not", rows[0].when, -1, -1)


def test_a_path_that_can_never_hold_is_left_out() -> None:
    both = _path("a", "y", 1, when=_ref("b")), _path("a", "y", 2, when=NOT_B)
    assert len(_rows(*both, _path("a", "y", 3, ifnone=True))) == 2
    assert _rows(_path("a", "y", 1, when=_number(0))) == []


EDGED = _path("a", "y", 1, edge="posedge", data=_ref("b"))


@pytest.mark.parametrize(
    ("paths", "codes"),
    [
        ([_path("a", "y", 1), _path("a", "y", 2, ifnone=True)], ["N176"]),
        ([EDGED, _path("a", "y", 2, ifnone=True)], []),
        ([EDGED._replace(ifnone=True)], ["N175"]),
        ([EDGED._replace(condition=_ref("b")), _path("a", "y", 2, ifnone=True)], []),
    ],
)
def test_clause_14_2_4_4_where_ifnone_may_stand(paths: list[tree.Path], codes: list[str]) -> None:
    assert _told(*paths) == codes


# Clause 15


def _check(name: str, *arguments: tree.CheckEvent | tree.Expression | None) -> tree.TimingCheck:
    return tree.TimingCheck(name, arguments, 0)


def _at(edge: str, name: str, when: tree.Expression | None = None) -> tree.CheckEvent:
    return tree.CheckEvent(edge, _ref(name), when, 0)


@pytest.mark.parametrize(
    ("edge", "wanted"),
    [
        ("posedge", (Edge.RISE,)), ("negedge", (Edge.FALL,)), ("", (None,)),
        ("01 0x x1", (Edge.RISE,)), ("10 x0 1x", (Edge.FALL,)), ("01 10", (Edge.RISE, Edge.FALL)),
        ("0z z1", (Edge.RISE,)),
    ],
)  # fmt: skip
def test_clause_15_4_edges(edge: str, wanted: tuple[Edge | None, ...]) -> None:
    assert event_edges(edge) == wanted


def test_setup_names_data_first_and_hold_the_clock() -> None:
    desk = FakeDesk()
    setup, hold = build_checks(
        [
            _check("$setup", _ref("v"), _at("posedge", "a"), _number(5), _ref("inner")),
            _check("$hold", _at("posedge", "a"), _ref("v"), _number(2)),
        ],
        desk,
    )
    assert (setup.symbol, setup.bits, setup.reference, setup.reference_edge) == ("tsu", (2, 3), 0, Edge.RISE)
    assert (hold.symbol, hold.bits, hold.reference, hold.reference_edge) == ("th", (2, 3), 0, Edge.RISE)


def test_conditions_of_both_events_hold_together() -> None:
    desk = FakeDesk()
    check = _check("$setup", _at("", "v", _ref("b")), _at("posedge", "a", _ref("io")), _number(5))
    (made,) = build_checks([check], desk)
    assert desk.network.nodes[made.when][0] == "and"
    assert desk.network.support(made.when) == {1, 8}
    never = _check("$setup", _at("", "v", _ref("b")), _at("posedge", "a", NOT_B), _number(5))
    assert build_checks([never], desk) == []


def test_only_setuphold_and_recrem_take_negative_limits() -> None:
    desk = FakeDesk()
    events = _at("posedge", "a"), _ref("b")
    both = build_checks([_check("$setuphold", *events, _number(-10), _number(20))], desk)
    assert [(check.symbol, check.columns[0][0]) for check in both] == [("tsu", -10.0), ("th", 20.0)]
    assert build_checks([_check("$hold", *events, _number(-1))], desk) == []
    assert desk.told == ["N151"]


def test_delayed_signals_follow_the_events_of_their_check() -> None:
    clock, data = _ref("dclk"), _ref("dd")
    check = _check(
        "$setuphold", _at("posedge", "a"), _ref("b"), _number(1), _number(2), None, None, None, clock, data
    )
    assert delayed_signals([check]) == [(clock, _ref("a")), (data, _ref("b"))]
    assert (
        delayed_signals([_check("$setuphold", _at("posedge", "a"), _ref("b"), _number(1), _number(2))]) == []
    )


@pytest.mark.parametrize(
    ("check", "code"),
    [
        (_check("$skew", _at("posedge", "a"), _at("posedge", "b"), _number(1)), "N177"),
        (_check("$display", _ref("a")), "N178"),
        (_check("$setup", _ref("a"), _at("posedge", "b")), "N179"),
        (_check("$setup", _ref("a"), None, _number(3)), "N179"),
        (_check("$period", _at("posedge", "a"), _number(1), _ref("inner"), _ref("b")), "N179"),
        (_check("$width", _ref("a"), _number(1)), "N182"),
        (_check("$setup", _number(1), _at("posedge", "b"), _number(3)), "N183"),
        (_check("$setup", _ref("a"), _ref("b"), _at("posedge", "b")), "N183"),
        (_check("$setup", _ref("inner"), _at("posedge", "b"), _number(3)), "N184"),
    ],
)
def test_checks_that_are_not_kept(check: tree.TimingCheck, code: str) -> None:
    desk = FakeDesk()
    assert build_checks([check], desk) == []
    assert desk.told == [code]
    assert all("name" in words for _, _, words in desk.places)
