"""From options to a loaded design, and from a loaded design to what reports say about it."""

from __future__ import annotations

from tardigate.cli.options import Options
from tardigate.netlist.flat import CONSTANTS
from tardigate.pipeline import Loaded, Request
from tardigate.report.model import Subject


def request_of(options: Options) -> Request:
    """Return what the options ask to be loaded."""
    return Request(
        files=options.files,
        parts=options.parts,
        top=options.top,
        include_dirs=options.include_dirs,
        defines=options.defines,
        condition=options.condition,
        grade=options.grade,
    )


def subject_of(loaded: Loaded) -> Subject:
    """Return what a report of this design is about."""
    request, assumed = loaded.request, loaded.library.condition_assumed
    return Subject(
        loaded.top,
        loaded.flat.instances,
        loaded.flat.nets - CONSTANTS,
        request.grade,
        request.condition or assumed,
        assumed is not None,
        request.paths(request.files),
        request.paths(request.parts),
    )
