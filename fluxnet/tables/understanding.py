"""From a grid to runs: layout, decimal sign, names, numbers, one basis a run."""

from __future__ import annotations

from dataclasses import field, replace

from fluxnet.ground.diagnostic import Diagnostic
from fluxnet.ground.names import Name
from fluxnet.ground.progress import Progress, silent
from fluxnet.ground.record import record
from fluxnet.ground.source import Span
from fluxnet.network.model import Network, Quantity, QuantityKind, Role, Species
from fluxnet.rates.measured import RatesTable
from fluxnet.tables.biomass_numbers import read_biomass_numbers
from fluxnet.tables.correlations import Correlations
from fluxnet.tables.covariance_table import read_covariance
from fluxnet.tables.declarations import check_declarations
from fluxnet.tables.entries import Entries
from fluxnet.tables.errors_assumed import SdRule
from fluxnet.tables.grid import Grid
from fluxnet.tables.layout import Form, Layout, find_layout
from fluxnet.tables.long_form import collect_long
from fluxnet.tables.no_header import no_header
from fluxnet.tables.numbers import decimal_faults, told_once
from fluxnet.tables.numerals import Decimal, DecimalChoice, decide_decimal
from fluxnet.tables.runs import BuiltRun, KnownFactors, build_run
from fluxnet.tables.surplus import find_surplus
from fluxnet.tables.telling import assumption_notes, tell_understood
from fluxnet.tables.values import Reading, Readings, read_entries
from fluxnet.tables.vocabulary import Vocabulary, assumed_biomass, biomass_species
from fluxnet.tables.wide_form import collect_wide

__all__ = ["Understood", "understand"]

_OFTEN = 500


@record
class Understood:
    """A table with everything that was said about it; ``table`` may be None."""

    table: RatesTable | None
    notes: tuple[str, ...]
    diagnostics: tuple[Diagnostic, ...] = field(default=())


def understand(
    grid: Grid,
    network: Network | None,
    asked: Decimal | None,
    rule: SdRule,
    covariance: Grid | None = None,
    progress: Progress = silent,
) -> Understood:
    """Read the runs of a grid, and the correlations of their errors in another."""
    layout = find_layout(grid, network)
    notes = layout.statements.notes + grid.comments
    faults = list(layout.statements.diagnostics)
    faults.extend(check_declarations(layout.statements.species, network))
    if layout.form is None:
        return Understood(None, notes, (*faults, no_header(grid, layout)))
    surplus = find_surplus(layout, grid.separator)
    faults.extend(surplus.diagnostics)
    layout = replace(layout, shifted=surplus.lines)
    entries = collect_long(layout) if layout.form is Form.LONG else collect_wide(layout)
    faults.extend(entries.diagnostics)
    if not entries.entries and not entries.diagnostics and not entries.failed:
        faults.append(_no_rows(grid, layout))
    choice = _decimal(entries, layout, grid, asked)
    faults.extend(decimal_faults(choice))
    flagged = frozenset(c.span for c in choice.refused)
    readings = read_entries(
        entries.entries, choice.decimal, layout.vocabulary, flagged, progress
    )  # fmt: skip
    faults.extend(readings.diagnostics)
    pairs = Correlations()
    if covariance is not None:
        names = [h.name for h in entries.heads]
        pairs = read_covariance(covariance, readings, names, layout.vocabulary, asked)
        faults.extend(pairs.diagnostics)
    biomass, assumed = _biomass(readings, layout.vocabulary)
    runs = _build_runs(entries, readings, layout, choice.decimal, biomass, pairs, rule, progress)
    faults.extend(told_once([d for built in runs for d in built.diagnostics], "runs"))
    told = tell_understood(grid, layout, entries, choice, covariance, surplus.untitled)
    faults.append(told.note)
    faults.extend(assumption_notes(grid, runs, rule, assumed))
    table = RatesTable(
        tuple(b.run for b in runs if b.run is not None),
        told.parts,
        _species(readings, biomass),
        layout.statements.nitrogen,
        (rule.relative, rule.floor),
    )
    return Understood(table, notes, tuple(faults))


def _build_runs(
    entries: Entries,
    readings: Readings,
    layout: Layout,
    decimal: Decimal,
    biomass: Species | None,
    pairs: Correlations,
    rule: SdRule,
    progress: Progress,
) -> list[BuiltRun]:
    mine: dict[str, list[Reading]] = {head.name: [] for head in entries.heads}
    for reading in readings.readings:
        mine[reading.entry.run].append(reading)
    network = layout.vocabulary.network
    runs: list[BuiltRun] = []
    known: KnownFactors = {}
    for count, head in enumerate(entries.heads):
        if count % _OFTEN == 0:
            progress("building runs", count, len(entries.heads))
        numbers = read_biomass_numbers(head, layout.statements, decimal)
        built = build_run(
            head,
            mine[head.name],
            biomass=biomass,
            model_basis=None if network is None else network.basis,
            concentration=numbers.concentration,
            shared_error=numbers.shared_error,
            correlations=[c for c in pairs.pairs if c.run in ("", head.name)],
            rule=rule,
            complete=head.name not in readings.failed | entries.failed,
            known=known,
        )
        runs.append(replace(built, diagnostics=(*numbers.diagnostics, *built.diagnostics)))
    return runs


def _decimal(entries: Entries, layout: Layout, grid: Grid, asked: Decimal | None) -> DecimalChoice:
    if asked is not None:
        return DecimalChoice(asked, said=True)
    cells = [c for e in entries.entries for c in (e.value, e.sd)]
    cells += [c for h in entries.heads for c in (h.shared, h.concentration, h.concentration_sd)]
    if layout.statements.concentration is not None:
        cells.append(layout.statements.concentration)
    return decide_decimal(cells, grid.separator)


def _biomass(readings: Readings, vocabulary: Vocabulary) -> tuple[Species | None, tuple[str, ...]]:
    """The biomass that specific rates refer to, and the rows that had to assume its formula."""
    known = biomass_species(vocabulary)
    if known or vocabulary.network is not None:
        return (known[0] if len(known) == 1 else None), ()
    named = [s for s in readings.species if s.role is Role.BIOMASS]
    once = {id(r.quantity): r for r in readings.readings}  # the rows of a quantity share it
    rows = [str(r.quantity) for r in once.values() if _needs_biomass(r)]
    return (named[0] if named else assumed_biomass()), tuple(dict.fromkeys(rows))


def _needs_biomass(reading: Reading) -> bool:
    if _holds_growth(reading.quantity):
        return True
    return any(s.role is Role.BIOMASS for s in reading.species)


def _holds_growth(quantity: Quantity | None) -> bool:
    """Whether it is the growth rate, or a ratio that holds it."""
    if quantity is None:
        return False
    parts = (quantity.numerator, quantity.denominator)
    return quantity.kind is QuantityKind.MU or any(_holds_growth(part) for part in parts)


def _species(readings: Readings, biomass: Species | None) -> tuple[Species, ...]:
    """The species that the rates name, and the biomass where there is a growth rate."""
    species = list(readings.species)
    grows = any(_holds_growth(r.quantity) for r in readings.readings)
    if grows and biomass is not None and all(s.name != biomass.name for s in species):
        species.append(biomass)
    return tuple(species)


def _no_rows(grid: Grid, layout: Layout) -> Diagnostic:
    row = layout.header
    span = row.span if row is not None else Span(grid.source.file, 0, 0, 0)
    return Diagnostic(
        Name.NO_MEASURED_RATE, "the table has a header and no row below it", span,
        mend="type your numbers below the units; or try the example.csv that `fluxnet new` writes",
    )
