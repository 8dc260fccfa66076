"""The command `survey`."""

from __future__ import annotations

from typing import Any

from tardigate.cli.answer import Answer
from tardigate.cli.given import request_of, subject_of
from tardigate.cli.options import Options
from tardigate.cli.save import save
from tardigate.pipeline import FLAT_ENCODING, flat_text_of, load
from tardigate.report.looks import Look
from tardigate.report.model import SurveyRecord
from tardigate.report.survey import clock_records, hierarchy_records, kind_records, port_counts
from tardigate.report.survey_view import survey_view


def survey(options: Options, look: Look) -> Answer:
    """Tell what is in a design. Raises InputRefusedError (U106, U108: see `save`)."""
    loaded = load(request_of(options))
    if options.flat_file is not None:
        save(flat_text_of(loaded), options.flat_file, FLAT_ENCODING)
    registers, clocks = clock_records(loaded.flat, loaded.names)
    record = SurveyRecord(
        subject_of(loaded),
        loaded.modules,
        len(loaded.flat.scope_name),
        port_counts(loaded.flat),
        registers,
        clocks,
        kind_records(loaded.flat),
        hierarchy_records(loaded.flat),
        tuple((stranger.name, stranger.count) for stranger in loaded.undescribed),
        loaded.warnings,
    )
    remark = f"wrote {options.flat_file}" if options.flat_file is not None else None
    return Answer(lambda: survey_view(record, look), lambda: _body(record), loaded.warnings, remark)


def _body(record: SurveyRecord) -> dict[str, Any]:
    from tardigate.report.json_form import survey_json  # for those who ask for it

    return survey_json(record)
