"""The preprocessor (IEEE 1364-2005, 19): from a file to one text without comments and directives.

Takes a file, gives its expanded text with the place of every byte and the states that directives set.
Does not check what the text says, nor where in a module a directive stands.
"""

from __future__ import annotations

from collections.abc import Mapping
from types import MappingProxyType
from typing import NamedTuple

from tardigate.source.collector import Collector
from tardigate.source.files import SourceFile
from tardigate.source.placed import PlacedText
from tardigate.syntax.conditions import condition_handlers
from tardigate.syntax.directives import Directives, Settings, Timescale
from tardigate.syntax.expansion import Run
from tardigate.syntax.frames import Frame
from tardigate.syntax.illegal import check_bytes
from tardigate.syntax.inclusion import Inclusion
from tardigate.syntax.macros import Macro
from tardigate.syntax.placing import Use

_BYTE_ORDER_MARK = b"\xef\xbb\xbf"


class PreprocessOptions(NamedTuple):
    """Folders that `include` searches after the including file's own, in order; macros defined beforehand."""

    include_dirs: tuple[str, ...] = ()
    defines: Mapping[str, str] = MappingProxyType({})


class Preprocessed(NamedTuple):
    """The expanded text and the states along it, each sorted by the offset from which it is in force.

    The first offset of each is 0. `timescales`: unit and precision in fs, both None where no `timescale` is
    in force. `default_nettypes`: a net type or `none`. `cells`: whether modules are marked by `celldefine`.
    `drives`: `pull0`, `pull1` or `none`, for unconnected inputs. `macros`: those defined at the end.
    """

    text: PlacedText
    timescales: tuple[tuple[int, Timescale], ...]
    default_nettypes: tuple[tuple[int, str], ...]
    cells: tuple[tuple[int, bool], ...]
    drives: tuple[tuple[int, str], ...]
    macros: Mapping[bytes, Macro]


def preprocess(
    file: SourceFile, options: PreprocessOptions, collector: Collector, after: Preprocessed | None = None
) -> Preprocessed:
    """Preprocess a file; macros and states of `after`, the file before it in the same run, still hold.

    Comments and directives become spaces, line ends are kept; without any, the text is the file's very bytes.
    Faults go to the collector (V101 to V144, U101, U102). Raises InputRefusedError only when the expansion
    grows past its limits (V105) or faults of one code pass 100,000.
    """
    macros = dict(after.macros) if after else _given(options, collector)
    settings = _settings(after)
    run = _read(file, macros, settings, options, collector)
    text = run.sink.placed(file)
    check_bytes(text, collector)
    return Preprocessed(
        text,
        settings.timescales.all(),
        settings.nettypes.all(),
        settings.cells.all(),
        settings.drives.all(),
        macros,
    )


def _read(
    file: SourceFile,
    macros: dict[bytes, Macro],
    settings: Settings,
    options: PreprocessOptions,
    collector: Collector,
) -> Run:
    run = Run(macros, collector, len(file.data))
    directives = Directives(run, settings, Inclusion(run, options.include_dirs))
    run.handlers = directives.handlers() | condition_handlers(run)
    frame = Frame(file.data, run.sink, file, Use(file, 0, 0))
    if file.data.startswith(_BYTE_ORDER_MARK):
        run.blank_to(frame, len(_BYTE_ORDER_MARK))
    run.read(frame)
    return run


def _given(options: PreprocessOptions, collector: Collector) -> dict[bytes, Macro]:
    """Return the macros of the options, read as if each were a line of a file."""
    macros: dict[bytes, Macro] = {}
    if options.defines:
        lines = [f"`define {name} {text}".replace("\n", "\\\n") for name, text in options.defines.items()]
        file = SourceFile("defines given", "\n".join(lines).encode() + b"\n")
        _read(file, macros, _settings(None), PreprocessOptions(), collector)
    return macros


def _settings(after: Preprocessed | None) -> Settings:
    if not after:
        return Settings((None, None), "wire", False, "none")
    timescale = after.timescales[-1][1]
    return Settings(timescale, after.default_nettypes[-1][1], after.cells[-1][1], after.drives[-1][1])
