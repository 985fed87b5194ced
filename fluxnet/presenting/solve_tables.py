"""The tables of a solve: rates, fluxes, parameters, the ledger, equations, yields, limits."""

from __future__ import annotations

from fluxnet.ground.table import Align, Cell, Column, Table
from fluxnet.network.model import QuantityKind
from fluxnet.presenting.equation_text import equation_lines
from fluxnet.presenting.heat_blocks import heat_blocks
from fluxnet.presenting.numbers import format_range
from fluxnet.presenting.optimum_tables import (
    limits_table,
    price_notes,
    price_words,
    prices_table,
)
from fluxnet.presenting.screen import Block
from fluxnet.presenting.share_blocks import correlated_words, share_notes
from fluxnet.studies.ledger import LedgerLine
from fluxnet.studies.solution import FluxKind, FluxSolution, RateEstimate, SolveStatus

__all__ = ["solve_tables"]

_AT_BOUND = "without ±: a bound cuts the range short, and no sd describes it"
_MOST_RELATIONS = 6


def solve_tables(run: FluxSolution) -> list[Block]:
    """All tables of a run whose fluxes were found, what is asked for first before the rest."""
    blocks: list[Block] = []
    if run.limits:
        blocks.append(limits_table(run))
    if run.prices:
        blocks.append(prices_table(run))
    blocks.append(_rates(run))
    if run.yields:
        blocks.append(_yields(run))
    if run.ledger:
        blocks += _ledger(run)
    blocks.append(_fluxes(run))
    if run.relations:
        blocks.append(_relations(run))
    if any(equation.terms for equation in run.equations):
        blocks += _equations(run)
    blocks += heat_blocks(run)
    if run.moved:
        blocks.append(_moved(run))
    blocks += correlated_words(run)
    return blocks


def _title(run: FluxSolution, text: str) -> str:
    doubt = ", not to be trusted" if run.status is SolveStatus.INCONSISTENT else ""
    return f"{text} [{run.unit}]{doubt}"


def _at(run: FluxSolution) -> str:
    """At which part of the optimum fluxes are shown."""
    return "at the optimum" if run.fraction == 1 else f"at {run.fraction:.4g} of it or better"


def _rates(run: FluxSolution) -> Table:
    at_best = run.aim is not None
    columns = (
        Column("rate", "", wrap=17),
        Column("", "species"),
        Column("way", "direction"),
        Column("measured", "measured", align=Align.RIGHT),
        Column("", "measured_sd", sd_of="measured"),
        Column(_at(run) if at_best else "solved", "value", align=Align.RIGHT),
        Column("", "sd"),
        Column("", "", sd_of="value"),
        Column("range there" if at_best else "95 % range", "", align=Align.RIGHT),
        Column("", "low"),
        Column("", "high"),
        Column("" if at_best else "z", "z", align=Align.RIGHT, decimals=1),
        Column("" if at_best else "kind", "kind", wrap=11),
        Column("", "unit"),
    )
    notes: list[str] = []
    if any(rate.z is not None for rate in run.rates):
        notes.append("z: change over its sd, positive where the rate was raised")
    if any(_is_cut(r.reconciled, r.reconciled_sd, r.low, r.high) for r in run.rates):
        notes.append(_AT_BOUND)
    rows = tuple(_rate_row(rate, run.unit) for rate in run.rates)
    return Table("rates", _title(run, "Rates"), columns, rows, tuple(notes))


def _rate_row(rate: RateEstimate, unit: str) -> tuple[Cell, ...]:
    quantity = rate.quantity
    is_rate = quantity.kind is QuantityKind.RATE
    name = quantity.name if is_rate else str(quantity)
    way = quantity.direction.value if is_rate and quantity.direction else ""
    sd = _shown_sd(rate.reconciled, rate.reconciled_sd, rate.low, rate.high)
    known = sd is not None or rate.low == rate.high
    return (
        name if rate.unit == unit or not rate.unit else f"{name} [{rate.unit}]",
        name,
        f"{way}, reversed" if rate.reversed_ else way,
        rate.measured,
        rate.sd,
        rate.reconciled,
        rate.reconciled_sd,
        sd,
        "" if known else format_range(rate.low, rate.high),
        rate.low,
        rate.high,
        rate.z,
        rate.kind.value.replace("_", " "),
        rate.unit,
    )


def _fluxes(run: FluxSolution) -> Table:
    at_best = run.aim is not None
    columns = (
        Column("reaction", "reaction"),
        Column("compartment", "compartment"),
        Column("flux", "value", align=Align.RIGHT, even=True),
        Column("", "sd"),
        Column("", "", sd_of="value"),
        Column(f"range {_at(run)}" if at_best else "95 % range", "", align=Align.RIGHT),
        Column("kind", "kind"),
        Column("", "low"),
        Column("", "high"),
        Column("", "best_low"),
        Column("", "best_high"),
        Column("", "unit"),
    )
    rows: tuple[tuple[Cell, ...], ...] = tuple(
        (
            flux.reaction,
            flux.compartment,
            flux.value,
            flux.sd,
            _shown_sd(flux.value, flux.sd, flux.low, flux.high),
            "" if flux.low == flux.high else format_range(flux.low, flux.high),
            flux.kind.value,
            flux.low,
            flux.high,
            flux.best_low,
            flux.best_high,
            run.unit,
        )
        for flux in run.fluxes
    )
    notes: list[str] = []
    if any(flux.kind is FluxKind.UNDETERMINED for flux in run.fluxes):
        notes.append("undetermined: any value in the range fits; shown is that of least total flux")
    if any(_is_cut(f.value, f.sd, f.low, f.high) for f in run.fluxes):
        notes.append(_AT_BOUND)
    return Table("fluxes", _title(run, "Fluxes"), columns, rows, tuple(notes))


def _relations(run: FluxSolution) -> Table:
    """What is determined of undetermined fluxes: sums and differences, the plainest first."""
    columns = (
        Column("together", "words"),
        Column("flux", "value", align=Align.RIGHT),
        Column("", "sd"),
        Column("", "", sd_of="value"),
        Column("95 % range", "", align=Align.RIGHT),
        Column("", "low"),
        Column("", "high"),
    )
    rows = tuple(
        (
            r.words,
            r.value,
            r.sd,
            _shown_sd(r.value, r.sd, r.low, r.high),
            format_range(r.low, r.high),
            r.low,
            r.high,
        )
        for r in run.relations[:_MOST_RELATIONS]
    )
    more = len(run.relations) - len(rows)
    notes = (f"and {more} more, which --json gives",) if more else ()
    title = _title(run, "Undetermined fluxes of which only sums and differences are determined")
    return Table("relations", title, columns, rows, notes)


def _is_cut(value: float, sd: float | None, low: float, high: float) -> bool:
    """Whether a bound cuts the range far short of what the sd would give it."""
    return bool(sd) and (value - low < 1.5 * (sd or 0) or high - value < 1.5 * (sd or 0))


def _shown_sd(value: float, sd: float | None, low: float, high: float) -> float | None:
    """The sd, unless a bound cuts the range short: then the range alone tells."""
    return None if _is_cut(value, sd, low, high) else sd


def _moved(run: FluxSolution) -> Table:
    columns = (
        Column("parameter", "parameter"),
        Column("as written", "value", align=Align.RIGHT),
        Column("", "sd", sd_of="value"),
        Column("moved to", "moved", align=Align.RIGHT),
        Column("", "moved_sd", sd_of="moved"),
        Column("by [sd]", "in_sd", align=Align.RIGHT, decimals=1),
    )
    rows = tuple(
        (m.name, m.value, m.sd, m.moved, m.moved_sd, (m.moved - m.value) / m.sd if m.sd else None)
        for m in run.moved
    )
    return Table("parameters", "Parameters with ± take part as measured", columns, rows)


def _ledger(run: FluxSolution) -> list[Block]:
    """The ledger as shown, with the sums of each carrier, and its plain lines as data."""
    columns = (
        Column("carrier", ""),
        Column("compartment", ""),
        Column("made", "", align=Align.RIGHT, even=True),
        Column("spent", "", align=Align.RIGHT, even=True),
        Column("net", "net", align=Align.RIGHT, even=True),
        Column("", "", sd_of="net"),
        Column("range of net", "", align=Align.RIGHT),
        Column("one is worth" if run.prices else "", "", align=Align.RIGHT),
    )
    rows: list[tuple[Cell, ...]] = []
    by_carrier: dict[str, list[LedgerLine]] = {}
    for line in run.ledger:
        by_carrier.setdefault(line.carrier, []).append(line)
    for carrier, lines in by_carrier.items():
        for place, line in enumerate(lines):
            sd = _shown_sd(line.net, line.sd or None, line.low or 0.0, line.high or 0.0)
            known = line.sd is not None or line.low == line.high
            span = "" if known else format_range(line.low, line.high)
            name, worth = (carrier, price_words(run, carrier)) if place == 0 else ("", "")
            rows.append((name, line.compartment, line.made, line.spent, line.net, sd, span, worth))
        made, spent = (sum(getattr(line, side) for line in lines) for side in ("made", "spent"))
        balance = made - spent
        if abs(balance) <= 1e-6 * max(made, spent):
            balance = 0.0
        rows.append(("", "together", made, spent, balance, None, "", ""))
    notes = (
        "made and spent are sums inside a compartment; a carrier's nets add up to 0",
        *price_notes(run, tuple(by_carrier)),
        *share_notes(run),
    )
    title = _title(run, "Carrier ledger: who made and who spent")
    keys = ("carrier", "compartment", "made", "spent", "net", "sd", "low", "high", "unit")
    plain = tuple(
        (x.carrier, x.compartment, x.made, x.spent, x.net, x.sd, x.low, x.high, run.unit)
        for x in run.ledger
    )
    return [
        Table("", title, columns, tuple(rows), notes),
        Table("ledger", title, tuple(Column("", key) for key in keys), plain),
    ]


def _equations(run: FluxSolution) -> list[Block]:
    """The equations as text, that of the whole cell first, and their terms as data."""
    per = next((e.per for e in run.equations if e.per), None)
    title = f"Net equations, per mol {per} and in {run.unit}" if per else "Net equations"
    lines = tuple(
        line
        for equation in sorted(run.equations, key=lambda e: e.compartment is not None)
        if equation.terms
        for line in equation_lines(equation, run.unit)
    )
    shown = Table("", title, (Column("compartment", ""), Column("equation", "", wrap=40)), lines)
    keys = ("compartment", "species", "coefficient", "per_mol_substrate", "implied", "unit")
    rows: list[tuple[Cell, ...]] = []
    for equation in run.equations:
        place = equation.compartment or "whole cell"
        terms: list[tuple[str, float, bool]] = [
            (t.species, t.coefficient, t.implied) for t in equation.terms
        ]
        if equation.base:
            terms.append(("base needed", -equation.base, True))
        for name, amount, implied in terms:
            share = amount / equation.per_amount if equation.per_amount else None
            rows.append((place, name, amount, share, implied, run.unit))
    return [shown, Table("equations", title, tuple(Column("", k) for k in keys), tuple(rows))]


def _yields(run: FluxSolution) -> Table:
    columns = (
        Column("product", "product"),
        Column("on", "substrate"),
        Column("mol/mol", "mol_per_mol", align=Align.RIGHT, even=True),
        Column("g/g", "g_per_g", align=Align.RIGHT, even=True),
        Column("C-mol/C-mol", "cmol_per_cmol", align=Align.RIGHT, even=True),
    )
    rows = tuple((y.product, y.substrate, y.per_mole, y.per_mass, y.per_carbon) for y in run.yields)
    notes = ("g of biomass is dry weight, ash included",) if run.has_biomass else ()
    return Table("yields", "Yields", columns, rows, notes)

