"""Including files (IEEE 1364-2005, 19.5): where they are searched, and that nesting ends.

Takes the name in an `include` and puts the file on the run's stack. Does not read its text.
"""

from __future__ import annotations

import os

from tardigate.source.faults import InputRefusedError
from tardigate.source.files import SourceFile, read_file
from tardigate.syntax.expansion import Run
from tardigate.syntax.frames import Frame
from tardigate.syntax.marks import late
from tardigate.syntax.placing import Use

DEEPEST = 100
"""Files that may include one another in a chain."""
USES_OF_INCLUDE = 100
"""How many uses of a macro one more inclusion of the same file counts for."""

_REST = late(rb"[ \t\r]*(?:\n|//|/\*|\Z)")


class Inclusion:
    """Finds and opens the included files of one run; a file is read from disk once."""

    def __init__(self, run: Run, include_dirs: tuple[str, ...]) -> None:
        self._run = run
        self._include_dirs = include_dirs
        self._read: dict[str, SourceFile] = {}

    def include(self, frame: Frame, name: str, use: Use) -> None:
        """Put a file on the stack: its own folder's first, then of the include folders in order."""
        if frame.file is not None and not _REST().match(frame.data, use.stop):
            self._run.voice.tell("V124", frame, use)
            return
        open_files = [one.file for one in self._run.stack if one.file is not None]
        path = self._find(os.path.dirname(open_files[-1].path), name)
        if not path:
            folders = ", ".join([os.path.dirname(open_files[-1].path) or ".", *self._include_dirs])
            self._run.voice.tell("V121", frame, use, name=name, folders=folders)
            return
        ring = _ring([file.path for file in open_files], path)
        if ring:
            self._run.voice.tell("V122", frame, use, ring=" → ".join(ring))
            return
        self._open(frame, path, use)

    def _find(self, folder: str, name: str) -> str | None:
        places = (os.path.join(place, name) for place in (folder, *self._include_dirs))
        return next((path for path in places if os.path.isfile(path)), None)

    def _open(self, frame: Frame, path: str, use: Use) -> None:
        file = self._read.get(path)
        if file:
            self._run.budget.spend_uses(USES_OF_INCLUDE, frame, use)
            self._run.budget.spend_bytes(len(file.data), frame, use)
        else:
            try:
                file = self._read[path] = read_file(path, use.span())
            except InputRefusedError as refused:
                for diagnostic in refused.diagnostics:
                    self._run.voice.collector.add(diagnostic)
                return
        self._run.sink.traces.include(self._run.sink.length, file.path, use)
        self._run.stack.append(Frame(file.data, frame.sink, file, use))


def _ring(open_paths: list[str], path: str) -> list[str]:
    """Return the chain of files that does not end: a ring, or one that is too deep; empty when neither."""
    real = [os.path.realpath(one) for one in open_paths]
    target = os.path.realpath(path)
    if target in real:
        return [*open_paths[real.index(target) :], path]
    return [*open_paths, path] if len(real) > DEEPEST else []
