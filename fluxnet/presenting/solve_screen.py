"""What a solve shows: the verdict, rates, fluxes, the ledger, equations, yields."""

from __future__ import annotations

from fluxnet.ground.table import Align, Cell, Column, Table
from fluxnet.network.model import QuantityKind
from fluxnet.presenting.conflict_blocks import conflict_blocks, unbounded_blocks
from fluxnet.presenting.equation_text import equation_lines
from fluxnet.presenting.numbers import format_number, format_p, format_range
from fluxnet.presenting.screen import Block, Heading, Mood, Sentence, blocks_of_run
from fluxnet.studies.ledger import LedgerLine
from fluxnet.studies.solution import FluxKind, FluxSolution, Solution, SolveStatus

__all__ = ["solve_screen"]

_MOODS = {
    SolveStatus.SOLVED: Mood.GOOD,
    SolveStatus.OPTIMAL: Mood.GOOD,
    SolveStatus.INCONSISTENT: Mood.BAD,
    SolveStatus.INFEASIBLE: Mood.BAD,
    SolveStatus.UNBOUNDED: Mood.BAD,
}


def solve_screen(solution: Solution) -> tuple[Block, ...]:
    """Everything that is shown of a solve, run by run."""
    return tuple(
        block for run in solution.runs for block in blocks_of_run(_run_blocks(run), run.run)
    )


def _run_blocks(run: FluxSolution) -> tuple[Block, ...]:
    what = f"run {run.run}" if run.run is not None else "no measured rates"
    variant = "" if run.variant == "base" else f", variant {run.variant}"
    aim = f", {run.aim}" if run.aim is not None else ""
    blocks: list[Block] = [
        Heading(f"{what}{variant}{aim}: {run.status.value}"),
        Sentence(run.words, _MOODS[run.status], verdict=True),
        *_assumptions(run),
        *conflict_blocks(run),
        *unbounded_blocks(run),
    ]
    if run.fluxes:
        blocks += [_rates(run), _fluxes(run)]
        blocks += [Sentence(f"Only together: {relation}.") for relation in run.relations]
        blocks += _moved(run)
        if run.ledger:
            blocks.append(_ledger(run))
        blocks += _equations(run)
        if run.yields:
            blocks.append(_yields(run))
        if run.limits:
            blocks.append(_limits(run))
        blocks.append(
            Sentence(
                f"Largest imbalance left by the solver: {run.residual:.1g} (relative).",
                Mood.QUIET,
            )
        )
    return tuple(blocks)


def _chance(p: float | None) -> str:
    shown = format_p(p)
    return f"p {shown}" if shown.startswith("<") else f"p = {shown}"


def _assumptions(run: FluxSolution) -> list[Block]:
    lines: list[Block] = []
    test = run.test
    if test is not None and test.h is not None:
        closing = (
            f"Test: h = {format_number(test.h, 3)} on {test.dof} degrees of freedom "
            f"(5 % limit {format_number(test.limit, 3)}), {_chance(test.p)}"
        )
        if test.active:
            closing += (
                f"; bounds add {format_number(test.bound_h, 3)} ({_chance(test.bound_p)}): "
                + ", ".join(test.active)
            )
        lines.append(Sentence(closing + "."))
    elif test is not None:
        lines.append(
            Sentence(
                "Nothing is redundant: no measured rate tests another, so h is not defined.",
                Mood.DOUBTFUL,
            )
        )
    lines += [Sentence(f"Limit against measurement: {words}.", Mood.BAD)
              for words in run.violated_limits]  # fmt: skip
    if test is not None:
        lines += [Sentence(f"Pulled by a bound: {words}.", Mood.DOUBTFUL) for words in test.pulling]
    if run.left_free and run.run is not None:
        lines.append(Sentence(f"Not measured, left free: {', '.join(run.left_free)}."))
    lines += [Sentence(f"Note: {note.message} ({note.name.value}).") for note in run.notes]
    return lines


def _rates(run: FluxSolution) -> Table:
    at_best = run.aim is not None
    columns = (
        Column("rate", "species"),
        Column("way", "direction"),
        Column("measured", "measured", align=Align.RIGHT),
        Column("", "measured_sd", sd_of="measured"),
        Column("at the optimum" if at_best else "solved", "reconciled", align=Align.RIGHT),
        Column("", "reconciled_sd", sd_of="reconciled"),
        Column("range there" if at_best else "95 % range", "range", align=Align.RIGHT),
        Column("" if at_best else "z", "z", align=Align.RIGHT, decimals=1),
        Column("kind", "kind"),
    )
    rows: list[tuple[Cell, ...]] = []
    notes: list[str] = []
    for rate in run.rates:
        quantity = rate.quantity
        is_rate = quantity.kind is QuantityKind.RATE
        way = quantity.direction.value if is_rate and quantity.direction else ""
        if rate.reversed_:
            way += ", reversed"
        sd = _shown_sd(rate.reconciled, rate.reconciled_sd, rate.low, rate.high)
        known = sd is not None or rate.low == rate.high
        unit = "" if rate.unit == run.unit or not rate.unit else f" [{rate.unit}]"
        rows.append(
            (
                (quantity.name if is_rate else str(quantity)) + unit,
                way,
                rate.measured,
                rate.sd,
                rate.reconciled,
                sd,
                "" if known else format_range(rate.low, rate.high),
                rate.z,
                rate.kind.value.replace("_", " "),
            )
        )
    if run.test is not None:
        notes.append("sd: one standard deviation; z: adjustment over its sd")
    return Table("rates", f"Rates [{run.unit}]", columns, tuple(rows), tuple(notes))


def _fluxes(run: FluxSolution) -> Table:
    at_best = run.aim is not None
    columns = (
        Column("reaction", "reaction"),
        Column("compartment", "compartment"),
        Column("flux", "value", align=Align.RIGHT),
        Column("", "sd", sd_of="value"),
        Column("range at the optimum" if at_best else "95 % range", "range", align=Align.RIGHT),
        Column("kind", "kind"),
        Column("", "low"),
        Column("", "high"),
        Column("", "best_low"),
        Column("", "best_high"),
    )
    rows: tuple[tuple[Cell, ...], ...] = tuple(
        (
            flux.reaction,
            flux.compartment,
            flux.value,
            _shown_sd(flux.value, flux.sd, flux.low, flux.high),
            "" if flux.low == flux.high else format_range(flux.low, flux.high),
            flux.kind.value,
            flux.low,
            flux.high,
            flux.best_low,
            flux.best_high,
        )
        for flux in run.fluxes
    )
    notes: tuple[str, ...] = ()
    if any(flux.kind is FluxKind.UNDETERMINED for flux in run.fluxes):
        notes = ("undetermined: any value in the range fits; shown is that of least total flux",)
    return Table("fluxes", f"Fluxes [{run.unit}]", columns, rows, notes)


def _shown_sd(value: float, sd: float | None, low: float, high: float) -> float | None:
    """The sd, unless a bound cuts the range far short of it: then the range alone tells."""
    if sd is None or value - low < 1.5 * sd or high - value < 1.5 * sd:
        return None if sd != 0 else sd
    return sd


def _moved(run: FluxSolution) -> list[Block]:
    if not run.moved:
        return []
    columns = (
        Column("parameter", "parameter"),
        Column("as written", "value", align=Align.RIGHT),
        Column("", "sd", sd_of="value"),
        Column("moved to", "moved", align=Align.RIGHT),
        Column("", "moved_sd", sd_of="moved"),
    )
    rows = tuple((m.name, m.value, m.sd, m.moved, m.moved_sd) for m in run.moved)
    return [Table("parameters", "Parameters with ± take part as measured", columns, rows)]


def _ledger(run: FluxSolution) -> Table:
    columns = (
        Column("carrier", "carrier"),
        Column("compartment", "compartment"),
        Column("made", "made", align=Align.RIGHT),
        Column("spent", "spent", align=Align.RIGHT),
        Column("net", "net", align=Align.RIGHT),
        Column("", "sd", sd_of="net"),
        Column("range of net", "range", align=Align.RIGHT),
    )
    rows: list[tuple[Cell, ...]] = []
    by_carrier: dict[str, list[LedgerLine]] = {}
    for line in run.ledger:
        by_carrier.setdefault(line.carrier, []).append(line)
    for carrier, lines in by_carrier.items():
        for place, line in enumerate(lines):
            known = line.sd is not None or line.low == line.high
            rows.append(
                (
                    carrier if place == 0 else "",
                    line.compartment,
                    line.made,
                    line.spent,
                    line.net,
                    line.sd or None,
                    "" if known else format_range(line.low, line.high),
                )
            )
        made, spent = (sum(getattr(line, side) for line in lines) for side in ("made", "spent"))
        balance = made - spent
        if abs(balance) <= 1e-6 * max(made, spent):
            balance = 0.0
        rows.append(("", "together", made, spent, balance, None, ""))
    return Table(
        "ledger",
        f"Carrier ledger [{run.unit}]: who made and who spent",
        columns,
        tuple(rows),
        ("made and spent are summed inside each compartment; the nets of a carrier add up to 0",),
    )


def _equations(run: FluxSolution) -> list[Block]:
    if not run.equations:
        return []
    rows = tuple(
        line
        for equation in run.equations
        if equation.terms
        for line in equation_lines(equation, run.unit)
    )
    columns = (
        Column("compartment", "compartment"),
        Column("", "per"),
        Column("equation", "text", wrap=56),
    )
    per = next((e.per for e in run.equations if e.per), None)
    title = f"Net equations, per mol {per} and in {run.unit}" if per else "Net equations"
    return [Table("equations", title, columns, rows)]


def _yields(run: FluxSolution) -> Table:
    columns = (
        Column("product", "product"),
        Column("on", "substrate"),
        Column("mol/mol", "mol_per_mol", align=Align.RIGHT),
        Column("g/g", "g_per_g", align=Align.RIGHT),
        Column("C-mol/C-mol", "cmol_per_cmol", align=Align.RIGHT),
    )
    rows = tuple((y.product, y.substrate, y.per_mole, y.per_mass, y.per_carbon) for y in run.yields)
    return Table("yields", "Yields", columns, rows)


def _limits(run: FluxSolution) -> Table:
    columns = (
        Column("what holds it back", "name"),
        Column("stands at", "value", align=Align.RIGHT),
        Column("gain per unit", "worth", align=Align.RIGHT),
    )
    rows = tuple((limit.name, limit.value, limit.worth) for limit in run.limits)
    notes = ("gain: change of the aim per unit by which the limit is raised (from the solver)",)
    return Table("limits", "What holds the aim back", columns, rows, notes)
