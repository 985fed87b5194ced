"""A model read from a file or a text: the one door to the language."""

from __future__ import annotations

from dataclasses import dataclass, replace
from pathlib import Path

from fluxnet.ground.diagnostic import Diagnostic, has_errors, in_order
from fluxnet.ground.names import Name
from fluxnet.ground.source import Source
from fluxnet.network.balance import check_balances
from fluxnet.network.model import Network
from fluxnet.network.unknown import solve_unknowns
from fluxnet.reading.blocks import place_statements
from fluxnet.reading.findings import Findings
from fluxnet.reading.lines import logical_lines
from fluxnet.reading.parsing import parse_statement
from fluxnet.reading.resolve import resolve_network
from fluxnet.reading.scope import Scope
from fluxnet.reading.source import read_source, source_of_text

__all__ = ["ModelReading", "read_model", "read_model_text"]


@dataclass(frozen=True, slots=True)
class ModelReading:
    """What became of a text: the network (None where errors forbid it), and all findings."""

    network: Network | None
    diagnostics: tuple[Diagnostic, ...]
    sources: tuple[Source, ...] = ()


def read_model(
    path: str | Path, *, large: bool = False, allow_use: tuple[Path, ...] = ()
) -> ModelReading:
    """Read a ``*.flux`` file."""
    path = Path(path)
    source, told = read_source(path, large=large)
    if source is None:
        return ModelReading(None, told)
    return _read(source, told)


def read_model_text(
    text: str, *, file: str = "model.flux", folder: Path | None = None, large: bool = False
) -> ModelReading:
    """Read a model given as text; ``folder`` is where its ``use`` lines look."""
    source, told = source_of_text(text, file, large=large)
    if source is None:
        return ModelReading(None, told)
    return _read(source, told)


def _read(source: Source, told: tuple[Diagnostic, ...]) -> ModelReading:
    findings = Findings(list(told))
    parsed = []
    for line in logical_lines(source):
        statement = parse_statement(line.text)
        if statement is None:
            findings.add(Name.UNREADABLE_LINE, "this line is no statement of the language", line)
        parsed.append((line, statement))
    placed = place_statements(parsed, findings)
    network = resolve_network(placed, Scope(findings))
    if not has_errors(findings.found):
        network, unsolved = solve_unknowns(network)
        findings.found.extend((*unsolved, *check_balances(network)))
    diagnostics = in_order(
        replace(d, source_line=source.line(d.span.line)) if d.span.line else d
        for d in findings.found
    )
    return ModelReading(
        None if has_errors(diagnostics) else network, diagnostics, (source,)
    )
