"""Raw data of cultivations from a file, a workbook or a folder, as they are."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import field, replace
from pathlib import Path

from fluxnet.ground.diagnostic import Diagnostic, has_errors, in_order
from fluxnet.ground.progress import Progress, silent
from fluxnet.ground.record import record
from fluxnet.ground.source import Source
from fluxnet.network.model import Network
from fluxnet.rates.cultivation import Cultivation, Mode
from fluxnet.tables.cultivation_grids import Gathered, gather
from fluxnet.tables.cultivation_joining import join
from fluxnet.tables.mapping import ColumnMatch, Mapping, read_mapping
from fluxnet.tables.numerals import Decimal
from fluxnet.tables.raw_files import folders_of, read_raw_path
from fluxnet.tables.raw_long_times import NotOneTableError

__all__ = ["CultivationReading", "read_cultivation"]


@record
class CultivationReading:
    """Cultivations, none where errors forbid them, with all that was found.

    ``columns`` tell what every column was taken for; :func:`mapping_text` writes them as the
    mapping file ``columns.csv``.
    """

    cultivations: tuple[Cultivation, ...]
    diagnostics: tuple[Diagnostic, ...]
    sources: tuple[Source, ...] = ()
    columns: tuple[ColumnMatch, ...] = field(default=())


def read_cultivation(
    path: str | Path,
    network: Network | None = None,
    *,
    mode: Mode | None = None,
    decimal: Decimal | None = None,
    progress: Progress = silent,
) -> CultivationReading:
    """Read the raw data of one or more cultivations.

    Parameters
    ----------
    path
        A table (CSV, TSV, XLSX, XLS, ODS), or a folder with tables of one cultivation, or with
        a folder for each. A file ``columns.csv`` beside them overrules what titles say.
    network
        The model whose names of species are used.
    mode
        Overrules the mode that the data name.
    decimal
        Overrules the decimal sign that the texts show.
    progress
        Is told how much of a long file was read.
    """
    cultivations: list[Cultivation] = []
    faults: list[Diagnostic] = []
    sources: list[Source] = []
    columns: list[ColumnMatch] = []
    given = Path(path)
    folders = folders_of(given) if given.exists() else (given,)
    for folder in folders:
        files, gathered = _gather(folder, network, decimal, progress)
        faults.extend(gathered.diagnostics)
        sources.extend(files)
        columns.extend(gathered.columns)
        name = folder.name if folder.is_dir() else folder.stem
        if not has_errors(gathered.diagnostics):
            joined, more = join(gathered, name, mode)
            cultivations.extend(joined)
            faults.extend(more)
    told = _with_lines(in_order(faults), sources)
    sound = () if has_errors(told) else tuple(cultivations)
    return CultivationReading(sound, told, tuple(sources), tuple(dict.fromkeys(columns)))


def _gather(
    folder: Path, network: Network | None, decimal: Decimal | None, progress: Progress
) -> tuple[tuple[Source, ...], Gathered]:
    for whole in (False, True):
        files = read_raw_path(folder, whole=whole)
        mapping = Mapping() if files.mapping is None else read_mapping(files.mapping, network)
        faults = (*files.diagnostics, *mapping.diagnostics)
        if has_errors(faults):
            return files.sources, Gathered(diagnostics=faults)
        try:
            found = gather(files.grids, mapping, network, decimal, faults, progress)
        except NotOneTableError:
            if whole:
                raise
            continue
        return files.sources, found
    raise AssertionError("a file read whole is not read in chunks")


def _with_lines(
    faults: Sequence[Diagnostic], sources: Sequence[Source]
) -> tuple[Diagnostic, ...]:
    """Faults with the line that they are about."""
    lines = {s.file: s for s in sources}
    told: list[Diagnostic] = []
    for fault in faults:
        source = lines.get(fault.span.file)
        if fault.source_line is None and source is not None and fault.span.line:
            text = source.line(fault.span.line)
            fault = replace(fault, source_line=text or None)
        told.append(fault)
    return tuple(told)
