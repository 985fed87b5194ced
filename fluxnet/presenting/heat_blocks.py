"""The heat and the Gibbs energy of a run: a table, what they are from, and growth beside it."""

from __future__ import annotations

from collections.abc import Sequence

from fluxnet.ground.table import Align, Cell, Column, Table
from fluxnet.presenting.caution import CAUTION
from fluxnet.presenting.numbers import format_number, format_range
from fluxnet.presenting.screen import Block, Mood, Sentence
from fluxnet.studies.dissipation import Growth
from fluxnet.studies.heat import HEAT_PER_OXYGEN
from fluxnet.studies.heat_run import HeatRange, RunHeat
from fluxnet.studies.solution import FluxSolution, SolveStatus

__all__ = ["heat_blocks", "heat_caution"]

# A heat whose range is no wider than this part of it is as good as known.
_NEARLY = 0.1


def heat_blocks(run: FluxSolution) -> list[Block]:
    """What a run gives off; nothing where nothing is turned over."""
    if run.heat is None or not run.heat.heat.terms:
        return []
    doubt = ", not to be trusted" if run.status is SolveStatus.INCONSISTENT else ""
    blocks: list[Block] = [_table(run.heat, f"Heat and Gibbs energy given off{doubt}")]
    if run.heat.growth is not None and _is_known(run.heat.combustion):
        blocks.append(_growth(run.heat.growth, known=run.heat.is_temperature_known))
    return blocks


def heat_caution(runs: Sequence[FluxSolution]) -> list[Block]:
    """What heats are for, once, where any is shown."""
    shown = any(run.heat is not None and run.plan is None for run in runs)
    return [Sentence(CAUTION, Mood.QUIET)] if shown else []


def _table(heat: RunHeat, title: str) -> Table:
    per = heat.substrate
    columns = (
        Column("given off", "what"),
        Column(heat.unit, "value", align=Align.RIGHT),
        Column("", "", sd_of="value"),
        Column("", "sd"),
        Column("range", "", align=Align.RIGHT),
        Column("", "low"),
        Column("", "high"),
        Column(f"kJ/mol {per}" if per else "", "per_substrate", align=Align.RIGHT, digits=3),
        Column("kJ/mol O2", "per_oxygen", align=Align.RIGHT, digits=3),
        Column("", "unit"),
    )
    rows: list[tuple[Cell, ...]] = []
    if heat.combustion is not None:
        rows.append(
            (
                "heat, by enthalpies",
                *_cells(heat.combustion),
                heat.per_substrate,
                heat.heat.per_oxygen,
                heat.unit,
            )
        )
    if heat.oxygen is not None:
        rows.append(
            ("heat, by oxygen", *_cells(heat.oxygen), _share(heat), HEAT_PER_OXYGEN, heat.unit)
        )
    if heat.gibbs is not None:
        gibbs = (heat.gibbs, None, None, "", None, None)
        rows.append(("Gibbs energy, pH 7", *gibbs, heat.gibbs_per_substrate, None, heat.unit))
    return Table("heat", title, columns, tuple(rows), _notes(heat))


def _is_known(told: HeatRange | None) -> bool:
    """Whether a heat is known well enough to go on from the one that is shown."""
    if told is None or told.sd is not None:
        return told is not None
    return told.high - told.low <= _NEARLY * abs(told.value)


def _cells(told: HeatRange) -> tuple[Cell, ...]:
    known = told.sd is not None or told.low == told.high
    shown = "" if known else format_range(told.low, told.high)
    return told.value, told.sd, told.sd, shown, told.low, told.high


def _share(heat: RunHeat) -> float | None:
    """The heat by oxygen per mole of substrate."""
    if heat.oxygen is None or heat.combustion is None or heat.per_substrate is None:
        return None
    if not heat.combustion.value:
        return None
    return heat.per_substrate * heat.oxygen.value / heat.combustion.value


def _notes(heat: RunHeat) -> tuple[str, ...]:
    known = heat.combustion is not None and heat.combustion.sd is not None
    notes = [heat.heat.words + ("; ± from the rates alone" if known else "")]
    if heat.watts is not None:
        notes.append(f"{format_number(heat.watts, 3)} W/L by enthalpies")
    if heat.oxygen is not None:
        notes.append("by oxygen: holds where cells only respire")
    if heat.gibbs is None and heat.free_energy.missing:
        notes.append(f"no Gibbs energy is known of {', '.join(heat.free_energy.missing)}")
    return tuple(notes)


def _growth(growth: Growth, *, known: bool) -> Sentence:
    upkeep = ""
    if growth.maintenance is not None:
        taken = "" if known else ", taken"
        upkeep = (
            f" and {format_number(growth.maintenance, 3)} for upkeep (Tijhuis et al. 1993, "
            f"{growth.celsius:g} °C{taken})"
        )
    words = (
        f"By correlation: {format_number(growth.dissipated, 3)} kJ of Gibbs energy per C-mol of "
        f"biomass are given off; usual on {growth.carbon_source} are "
        f"{format_number(growth.expected, 3)} (Heijnen & van Dijken 1992){upkeep}, which would "
        f"allow {format_number(growth.allowed, 2)} "
        f"({format_number(growth.allowed_low, 2)} to {format_number(growth.allowed_high, 2)}) "
        f"C-mol biomass per C-mol; here {format_number(growth.biomass_yield, 2)}"
    )
    if growth.is_plausible:
        return Sentence(f"{words}. A plausibility, no bound.", Mood.QUIET)
    return Sentence(f"{words}: more than is plausible, though no bound.", Mood.DOUBTFUL)
