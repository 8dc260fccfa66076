"""Reports as JSON: one documented object, described by `schema.json` beside this file.

Takes records, gives text. Units stand in the names of keys; a time that does not exist is null.
"""

from __future__ import annotations

import json
from collections.abc import Sequence
from typing import Any

from tardigate.report.model import (
    EndRecord,
    FoldRecord,
    HopRecord,
    PaceRecord,
    SinkRecord,
    Subject,
    SurveyRecord,
    TrailRecord,
    TrailsRecord,
)
from tardigate.source.code_table import Entry
from tardigate.source.diagnostic import Diagnostic
from tardigate.source.span import Span

SCHEMA = 1
"""Version of the object's form: it grows by one when a key changes its meaning or goes."""

EDGES = ("rise", "fall")

Object = dict[str, Any]


def json_text(command: str | None, body: Object, diagnostics: Sequence[Diagnostic], version: str) -> str:
    """Return the whole object in one line of ASCII: `body` is what the command found.

    An unknown command is None. One line, because `json` indents ten times slower than it writes.
    """
    whole = {"tardigate": version, "schema": SCHEMA, "command": command, **body}
    whole["diagnostics"] = [_diagnostic(diagnostic) for diagnostic in diagnostics]
    return json.dumps(whole, allow_nan=False) + "\n"


def pace_json(record: PaceRecord) -> Object:
    """Return what `pace` found."""
    return {
        **_subject(record.subject),
        "settles_ns": record.limiting.total / 1e6 if record.limiting else None,
        "outputs": [_sink(sink) for sink in record.outputs.shown],
        "register_pins": [_sink(sink) for sink in record.register_pins.shown],
        "limiting_trail": _trail(record.limiting) if record.limiting else None,
        "between_registers_trail": _trail(record.between_registers) if record.between_registers else None,
        "assumptions": _assumptions(record.assumptions),
    }


def trail_json(record: TrailsRecord) -> Object:
    """Return what `trail` found."""
    return {
        **_subject(record.subject),
        "order": "slowest first" if record.slowest else "fastest first",
        "from": list(record.from_names),
        "to": list(record.to_names),
        "trails": [_trail(trail) for trail in record.trails],
        "assumptions": _assumptions(record.assumptions),
    }


def survey_json(record: SurveyRecord) -> Object:
    """Return what `survey` found."""
    inputs, outputs, inouts = record.ports
    return {
        **_subject(record.subject),
        "modules": record.modules,
        "scopes": record.scopes,
        "ports": {"input_bits": inputs, "output_bits": outputs, "inout_bits": inouts},
        "registers": record.registers,
        "clocks": [{"net": clock.net, "registers": clock.registers} for clock in record.clocks],
        "kinds": [
            {
                "name": kind.name,
                "group": kind.group,
                "inputs": kind.inputs,
                "instances": kind.instances,
                "delays_from": kind.origin,
                "place": kind.words or None,
                "register": kind.register,
            }
            for kind in record.kinds
        ],
        "hierarchy": [
            {
                "depth": len(scope.lasts),
                "name": scope.name,
                "module": scope.module,
                "alike": scope.alike,
                "own_part_instances": scope.own,
                "part_instances": scope.total,
            }
            for scope in record.hierarchy
        ],
        "undescribed_modules": [{"name": name, "instances": count} for name, count in record.undescribed],
    }


def draft_json(text: str, file: str | None) -> Object:
    """Return the drafted parts file, and the file it was written to."""
    return {"file": file, "text": text}


def explain_json(entries: Sequence[Entry]) -> Object:
    """Return entries of the table of codes."""
    return {
        "codes": [
            {
                "code": entry.code,
                "severity": entry.severity,
                "headline": entry.headline,
                "hint": entry.hint or None,
                "text": entry.text,
                "faulty": dict(entry.faulty),
                "mended": dict(entry.mended),
            }
            for entry in entries
        ]
    }


def _subject(subject: Subject) -> Object:
    return {
        "top": subject.top,
        "files": list(subject.files),
        "parts_files": list(subject.parts),
        "grade": subject.grade,
        "condition": subject.condition,
        "condition_assumed": subject.condition_assumed,
        "part_instances": subject.instances,
        "nets": subject.nets,
    }


def _sink(sink: SinkRecord) -> Object:
    record: Object = {"name": sink.name}
    for word, times in (("settles", sink.settles), ("stirs", sink.stirs)):
        for edge, time in zip(EDGES, times, strict=True):
            record[f"{word}_{edge}_ns"] = None if time is None else time / 1e6
    return record


def _trail(trail: TrailRecord) -> Object:
    return {
        "source": _end(trail.source),
        "sink": _end(trail.sink),
        "total_ns": trail.total / 1e6,
        "hop_count": trail.length,
        "hops": [_hop(hop) for hop in trail.hops],
    }


def _end(end: EndRecord) -> Object:
    return {"name": end.name, "what": end.what, "edge": EDGES[end.edge]}


def _hop(hop: HopRecord | FoldRecord) -> Object:
    times = {"delay_ns": hop.delay / 1e6, "begins_ns": hop.begins / 1e6, "over_ns": hop.over / 1e6}
    if isinstance(hop, FoldRecord):
        return {"folded_hops": hop.hops, **times}
    return {
        "instance": hop.instance,
        "kind": hop.kind,
        "from_pin": hop.from_pin,
        "from_edge": EDGES[hop.from_edge],
        "to_pin": hop.to_pin,
        "to_edge": EDGES[hop.to_edge],
        "net": hop.net,
        **times,
        "place": _place(hop.place),
    }


def _place(span: Span | None) -> Object | None:
    if span is None:
        return None
    return {
        "file": span.path,
        "line": span.line,
        "column": span.column,
        "end_column": span.end_column,
        "length": span.length,
        "byte_offset": span.start,
        "byte_length": span.stop - span.start,
    }


def _diagnostic(diagnostic: Diagnostic) -> Object:
    return {
        "code": diagnostic.code,
        "severity": diagnostic.severity,
        "message": diagnostic.message,
        "count": diagnostic.count,
        "place": _place(diagnostic.span),
        "related": [{"place": _place(r.span), "label": r.label} for r in diagnostic.related],
        "hint": diagnostic.hint or None,
    }


def _assumptions(assumptions: Sequence[tuple[str, int]]) -> list[Object]:
    return [{"key": key, "count": count} for key, count in assumptions]
