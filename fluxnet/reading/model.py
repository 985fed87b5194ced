"""A model read from a file or a text: the one door to the language."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import replace
from pathlib import Path

from fluxnet.ground.diagnostic import Diagnostic, has_errors, in_order
from fluxnet.ground.file_kinds import find_table_instead
from fluxnet.ground.record import record
from fluxnet.ground.source import Source
from fluxnet.network.model import Network
from fluxnet.reading.balancing import balance_reading
from fluxnet.reading.findings import Findings
from fluxnet.reading.lines import LONGEST
from fluxnet.reading.loading import Place, load_statements
from fluxnet.reading.resolve import resolve_network
from fluxnet.reading.scope import Scope, names_lost, words_of
from fluxnet.reading.source import read_source, source_of_bytes, source_of_text

__all__ = ["ModelReading", "read_model", "read_model_bytes", "read_model_text"]


@record
class ModelReading:
    """What became of a text: the network (None where errors forbid it), and all findings.

    Findings come errors first. ``sources`` are the texts that were read, the model's own
    first.
    """

    network: Network | None
    diagnostics: tuple[Diagnostic, ...]
    sources: tuple[Source, ...] = ()


def read_model(
    path: str | Path, *, large: bool = False, allow_use: tuple[Path, ...] = ()
) -> ModelReading:
    """Read a ``*.flux`` file.

    Parameters
    ----------
    path
        The model; files that it uses lie in its folder or below.
    large
        Whether more than 20,000 lines are meant.
    allow_use
        Files and folders outside the model's folder that ``use`` may read.

    Returns
    -------
    ModelReading
        The network with its ``?`` solved and its lines balanced, and everything found. Faults
        of the input are returned, never raised.
    """
    path = Path(path)
    source, told = read_source(path, large=large)
    if source is None:
        return ModelReading(None, told)
    return _read(source, told, path, Place(path.parent, tuple(allow_use), large))


def read_model_text(
    text: str, *, file: str = "model.flux", folder: Path | None = None, large: bool = False,
    allow_use: tuple[Path, ...] = (),
) -> ModelReading:
    r"""Read a model given as text; ``folder`` is where its ``use`` lines look.

    Examples
    --------
    >>> reading = read_model_text(
    ...     "substrate glucose\nproduct ethanol, CO2\n"
    ...     "compartment catabolism\n    ferment : glucose -> 2 ethanol + 2 CO2\n")
    >>> reading.diagnostics, reading.network.reactions[0].name
    ((), 'ferment')
    """
    source, told = source_of_text(text, file, large=large)
    if source is None:
        return ModelReading(None, told)
    return _read(source, told, None, Place(folder, tuple(allow_use), large))


def read_model_bytes(
    data: bytes, *, file: str = "standard input", large: bool = False
) -> ModelReading:
    r"""Read a model given as bytes, in any encoding that a file may have.

    Examples
    --------
    >>> reading = read_model_bytes("product CO₂\n".encode("utf-16"))
    >>> [d.name.value for d in reading.diagnostics]
    ['no-reaction']
    """
    source, told = source_of_bytes(data, file, large=large)
    if source is None:
        return ModelReading(None, told)
    return _read(source, told, None, Place(None, (), large))


def _read(
    source: Source, told: tuple[Diagnostic, ...], path: Path | None, place: Place
) -> ModelReading:
    mistaken = find_table_instead(source.lines, source.file)
    if mistaken is not None:
        return ModelReading(None, in_order((*told, mistaken)), (source,))
    findings = Findings(list(told))
    loaded = load_statements(source, path, place, findings)
    refused = [r.line.text for r in loaded.rejected if len(r.line.text) <= LONGEST]
    drops = [text for text in refused if text.split()[:1] == ["drop"]]
    scope = Scope(
        findings, lost=names_lost(refused), named=words_of(refused), dropped=words_of(drops)
    )
    network = resolve_network(loaded, scope)
    network = balance_reading(network, scope)
    diagnostics = in_order(_with_lines(findings.found, loaded.sources))
    return ModelReading(
        None if has_errors(diagnostics) else network, diagnostics, tuple(loaded.sources)
    )


def _with_lines(
    found: Iterable[Diagnostic], sources: Iterable[Source]
) -> Iterable[Diagnostic]:
    """The findings, each with the user's own line."""
    by_file = {source.file: source for source in sources}
    for one in found:
        source = by_file.get(one.span.file)
        if source is None or not one.span.line or one.source_line is not None:
            yield one
        else:
            yield replace(one, source_line=source.line(one.span.line))
