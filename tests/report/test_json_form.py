"""JSON holds to its schema, says units in its keys and keeps numbers as they are."""

from __future__ import annotations

import json
from collections.abc import Callable
from importlib import resources
from typing import Any

import pytest
from jsonschema import Draft202012Validator, ValidationError

from tardigate.report.json_form import (
    SCHEMA,
    Object,
    draft_json,
    explain_json,
    json_text,
    pace_json,
    survey_json,
    trail_json,
)
from tardigate.report.model import PaceRecord, SurveyRecord, TrailRecord, TrailsRecord
from tardigate.source.code_table import look_up
from tardigate.source.diagnostic import Diagnostic, Related
from tardigate.source.span import span_in

SCHEMA_FILE = json.loads(resources.files("tardigate.report").joinpath("schema.json").read_text("utf-8"))
PLACE = span_in("board.v", b"nand u1 (y, a, b);\n", 5, 7)
TOLD = Diagnostic("N101", "warning", "it floats", PLACE, "drive it", (Related(PLACE, "here"),), 3)


@pytest.fixture(scope="session")
def validator() -> Draft202012Validator:
    Draft202012Validator.check_schema(SCHEMA_FILE)
    return Draft202012Validator(SCHEMA_FILE)


@pytest.fixture
def bodies(
    make_pace: Callable[..., PaceRecord],
    make_trails: Callable[..., TrailsRecord],
    make_survey: Callable[..., SurveyRecord],
) -> dict[str, Object]:
    return {
        "pace": pace_json(make_pace()),
        "trail": trail_json(make_trails()),
        "survey": survey_json(make_survey()),
        "draft": draft_json("family X {}", None),
        "explain": explain_json([look_up("U101"), look_up("U104")]),
    }


@pytest.mark.parametrize("command", ["pace", "trail", "survey", "draft", "explain"])
def test_each_command_holds_to_the_schema(
    validator: Draft202012Validator, bodies: dict[str, Object], command: str
) -> None:
    found: dict[str, Any] = json.loads(json_text(command, bodies[command], (TOLD,), "0.1.0"))
    validator.validate(found)
    assert (found["schema"], found["command"], found["tardigate"]) == (SCHEMA, command, "0.1.0")


@pytest.mark.parametrize("command", ["pace", "trail", "survey", "draft", "explain"])
def test_the_schema_knows_every_key(
    validator: Draft202012Validator, bodies: dict[str, Object], command: str
) -> None:
    found = json.loads(json_text(command, {**bodies[command], "settles": 1}, (), "0.1.0"))
    with pytest.raises(ValidationError):
        validator.validate(found)


def test_a_refusal_and_a_fault_hold_to_the_schema(validator: Draft202012Validator) -> None:
    refused = json.loads(json_text(None, {}, (TOLD,), "0.1.0"))
    validator.validate(refused)
    validator.validate(json.loads(json_text("pace", {"fault": "sums differ"}, (), "0.1.0")))
    place = {"file": "board.v", "line": 1, "column": 6, "end_column": 8, "length": 2}
    place |= {"byte_offset": 5, "byte_length": 2}
    assert refused["diagnostics"] == [
        {
            "code": "N101",
            "severity": "warning",
            "message": "it floats",
            "count": 3,
            "place": place,
            "related": [{"place": place, "label": "here"}],
            "hint": "drive it",
        }
    ]


def test_times_are_in_ns_and_null_where_nothing_ever_changes(make_pace: Callable[..., PaceRecord]) -> None:
    found = json.loads(json_text("pace", pace_json(make_pace()), (), "0.1.0"))
    assert found["settles_ns"] == 48.6
    assert found["outputs"][0] == {
        "name": "STEP0",
        "settles_rise_ns": 48.6,
        "settles_fall_ns": 44.25,
        "stirs_rise_ns": 9.5,
        "stirs_fall_ns": 11.0,
    }
    assert {value for key, value in found["outputs"][-1].items() if key != "name"} == {None}


def test_hops_are_told_with_edges_and_places(make_trails: Callable[..., TrailsRecord]) -> None:
    body = trail_json(make_trails(count=1))
    hop = body["trails"][0]["hops"][1]
    assert (hop["from_edge"], hop["to_edge"], hop["place"]["line"]) == ("fall", "rise", 42)
    assert (hop["delay_ns"], hop["begins_ns"], hop["over_ns"]) == (8.0, 6.5, 14.5)


def test_folded_hops_hold_to_the_schema(
    folded_trail: TrailRecord, make_trails: Callable[..., TrailsRecord], validator: Draft202012Validator
) -> None:
    body = trail_json(make_trails()._replace(trails=(folded_trail,)))
    validator.validate(json.loads(json_text("trail", body, (), "0.1.0")))
    assert [hop["folded_hops"] for hop in body["trails"][0]["hops"] if "folded_hops" in hop] == [3]


def test_the_text_is_ascii_so_that_no_encoding_breaks_it() -> None:
    assert json_text("draft", draft_json("漢字 \udc80", None), (), "0.1.0").isascii()
