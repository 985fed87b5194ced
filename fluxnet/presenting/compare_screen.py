"""What a comparison shows: the verdict, one ranked table, why the second is second."""

from __future__ import annotations

from collections.abc import Sequence

from fluxnet.ground.table import Align, Cell, Column, Table
from fluxnet.presenting.compare_detail import (
    MODE_TITLES,
    detail_blocks,
    fraction_text,
    interval_text,
)
from fluxnet.presenting.compare_tables import compare_data
from fluxnet.presenting.numbers import format_number
from fluxnet.presenting.screen import Block, Data, Heading, Mood, Sentence
from fluxnet.presenting.staircase_blocks import staircase_blocks
from fluxnet.studies.compare_modes import Mode
from fluxnet.studies.compare_result import Ability, Comparison
from fluxnet.studies.compare_words import holding_words

__all__ = ["CAUTION", "compare_screen"]

CAUTION = (
    "Oxygen and heat are estimates from a lumped model, good for planning only: oxygen "
    "enrichment, cooling, and off-gas that may burn or smother need the site's own safety "
    "review, local codes and licensed engineers."
)

_MOST = 40


def compare_screen(
    comparison: Comparison, *, detail: Sequence[str] = (), everything: bool = False
) -> tuple[Block, ...]:
    """Everything that is shown of a comparison.

    Parameters
    ----------
    detail
        The names of which all is told; ``all`` stands for every one.
    everything
        Show all rows of a long table.
    """
    able = bool(comparison.abilities) and bool(comparison.abilities[0].final.moles)
    mood = Mood.GOOD if able and comparison.is_sound else Mood.BAD
    blocks: list[Block] = [
        Heading(f"{comparison.product}: what each variant can make"),
        Sentence(comparison.words, mood, verdict=True),
    ]
    if able:
        blocks.append(Sentence(_supplies(comparison)))
    if comparison.second:
        blocks.append(Sentence(comparison.second))
    shown = comparison.abilities if everything else comparison.abilities[:_MOST]
    blocks.append(_ranking(comparison, shown))
    blocks += _how_sure(comparison)
    blocks += _unable(shown) if able else []
    blocks += [Sentence(f"Skipped: {s.variant}: {s.words}.", Mood.DOUBTFUL)
               for s in comparison.skipped]  # fmt: skip
    blocks += [Sentence(f"{note[:1].upper()}{note[1:]}.", Mood.QUIET) for note in comparison.notes]
    blocks += _left_out(comparison)
    for ability in comparison.abilities:
        if ability.name in detail or "all" in detail:
            blocks += detail_blocks(comparison, ability)
        if ability.staircase is not None:
            blocks += staircase_blocks(comparison.product, ability)
    blocks.append(_proofs(comparison))
    if any(a.facts is not None for a in comparison.abilities):
        blocks.append(Sentence(CAUTION, Mood.QUIET))
    blocks.append(Data(lambda: compare_data(comparison)))
    return tuple(blocks)


def _unable(shown: Sequence[Ability]) -> list[Block]:
    """Those that make nothing, each reason once."""
    reasons: dict[str, list[str]] = {}
    for ability in shown:
        if ability.reason:
            reasons.setdefault(ability.reason, []).append(ability.name)
    return [
        Sentence(f"{', '.join(names)}: no yield; {reason}.", Mood.DOUBTFUL)
        for reason, names in reasons.items()
    ]


def _ranking(comparison: Comparison, shown: Sequence[Ability]) -> Table:
    """The one table: yields of each mode, and what the last of them takes and gives off."""
    columns = (
        Column("#", ""),
        Column("variant", "", wrap=9),
        *(Column(MODE_TITLES[m], "", align=Align.RIGHT, decimals=3) for m in comparison.modes),
        Column("share", "", align=Align.RIGHT),
        Column("held back by", "", wrap=9),
        Column("O2", "", align=Align.RIGHT, digits=3),
        # A third yield takes its place.
        Column("CO2" if len(comparison.modes) < len(Mode) else "", "", align=Align.RIGHT, digits=3),
        Column("heat", "", align=Align.RIGHT, digits=3),
        Column(_left_title(comparison), "", align=Align.RIGHT, digits=3),
    )
    rows = tuple(_row(comparison, a) for a in shown)
    product = comparison.product
    notes = [_yields_note(comparison), "share: of the yield that electrons alone would allow",
             f"per mol {product} at the last yield: O2 taken up{_gas_words(comparison)} [mol], "
             f"heat [kJ], {_left_words(comparison)} that can be left over [mol]"]  # fmt: skip
    if any(a.is_best_of_all for a in shown) and len(shown) > 1:
        notes.append("*: no other is as good in yield, oxygen, heat and energy left, and better "
                     "in one")  # fmt: skip
    if any(a.tied for a in shown):
        notes.append("one rank for several: exactly the same yield, as fractions")
    if len(shown) < len(comparison.abilities):
        notes.append(f"{len(comparison.abilities) - len(shown)} more: --all shows them")
    return Table("", "", columns, rows, tuple(notes))


def _yields_note(comparison: Comparison) -> str:
    """What the yields are, and what each of them has to bear."""
    words = f"mol {comparison.product} per mol of substrate"
    if comparison.counts_carbon:
        words = f"C-mol of {comparison.product} per C-mol of substrate"
    more = {
        Mode.ALONE: "alone: nothing else is made",
        Mode.KEPT: "upkeep: with the ATP of maintenance",
        Mode.RESERVED: f"reserve: with {comparison.reserve or 'the growth that is demanded'} too",
    }
    if len(comparison.modes) == 1:
        return words
    return "; ".join((words, *(more[mode] for mode in comparison.modes)))


def _energies(comparison: Comparison) -> list[str]:
    found = {name for a in comparison.abilities if a.facts for name, _ in a.facts.surplus}
    return sorted(found)


def _left_title(comparison: Comparison) -> str:
    names = _energies(comparison)
    return names[0] if len(names) == 1 else "left"


def _gas_words(comparison: Comparison) -> str:
    return " and CO2 given off" if len(comparison.modes) < len(Mode) else ""


def _left_words(comparison: Comparison) -> str:
    return " and ".join(_energies(comparison)) or "energy"


def _row(comparison: Comparison, ability: Ability) -> tuple[Cell, ...]:
    facts, share = ability.facts, ability.final.share
    by_carbon = comparison.counts_carbon
    told = (y.carbon if by_carbon else y.moles for y in ability.yields)
    yields: list[Cell] = [None if value is None else float(value) for value in told]
    mark = "*" if ability.is_best_of_all and len(comparison.abilities) > 1 else ""
    if facts is None:
        return (f"{ability.rank}{mark}", ability.name, *yields, _percent(share), "", None, None,
                None, None)  # fmt: skip
    left = sum(amount for _, amount in facts.surplus) if facts.surplus else None
    return (
        f"{ability.rank}{mark}",
        ability.name,
        *yields,
        _percent(share),
        holding_words(facts.holding, short=True),
        facts.oxygen,
        facts.carbon_dioxide,
        None if facts.heat is None else facts.heat.value,
        left,
    )


def _percent(share: object) -> str:
    if share is None:
        return "–"
    value = 100 * float(share)  # type: ignore[arg-type]
    text = f"{value:.0f}"
    # What is not all must not look as if it were.
    return f"{'99.9' if text == '100' and value < 100 else text} %"


def _supplies(comparison: Comparison) -> str:
    """What a reactor has to supply to the best, and to carry away."""
    best = comparison.abilities[0]
    facts = best.facts
    if facts is None:
        return ""
    parts: list[str] = []
    if facts.oxygen is not None:
        parts.append("takes no oxygen" if not facts.oxygen else
                     f"takes {format_number(facts.oxygen, 3)} mol O2")  # fmt: skip
    if facts.carbon_dioxide:
        verb = "releases" if facts.carbon_dioxide > 0 else "binds"
        parts.append(f"{verb} {format_number(abs(facts.carbon_dioxide), 3)} mol CO2")
    if facts.heat is not None and facts.heat.value is not None:
        parts.append(f"gives off {format_number(facts.heat.value, 3)} kJ of heat")
    if facts.base is not None:
        parts.append(f"needs {format_number(facts.base, 3)} mol of base" if facts.base else
                     "needs no base")  # fmt: skip
    if not parts:
        return ""
    told = ", ".join(parts[:-1]) + (" and " if parts[1:] else "") + parts[-1]
    return f"Per mol of {comparison.product} the best ({best.name}) {told}{_forced(best)}."


def _forced(best: Ability) -> str:
    """The by-products that no optimum goes without, and whether growth is needed."""
    facts = best.facts
    forced = [b for b in facts.by_products if b.least > 0] if facts is not None else []
    parts = " and ".join(f"{b.least:.3g} mol {b.species}" for b in forced)
    words = f"; beside it at least {parts}" if parts else ""
    if best.without_growth is None:
        return words
    if not best.without_growth:
        return f"{words}; it makes none without growth"
    if best.forced:
        return f"{words}; growth at its most brings at least {best.forced:.3g} mol/mol with it"
    return f"{words}; growth is not needed for it, and does not force it"


def _how_sure(comparison: Comparison) -> list[Block]:
    """The interval of each yield and the chance that the best is better; where any matters."""
    if not any(_moves(a) for a in comparison.abilities):
        if not comparison.uncertain:
            return []
        names = ", ".join(comparison.uncertain)
        return [Sentence(f"The errors of {names} move no yield.", Mood.QUIET)]
    by_carbon = comparison.counts_carbon
    odds = {o.worse: o.probability for o in comparison.odds}
    columns = (
        Column("variant", "", wrap=20),
        *(Column(MODE_TITLES[m], "", wrap=14) for m in comparison.modes),
        Column("beaten", "", align=Align.RIGHT),
    )
    rows = tuple(
        (
            a.name,
            *(interval_text(y, a.carbon_per_mole if by_carbon else 1) for y in a.yields),
            f"{odds[a.name]:.2f}" if a.name in odds else "",
        )
        for a in comparison.abilities[:_MOST]
    )
    title = f"How sure: 95 % of {comparison.draws} draws of {', '.join(comparison.uncertain)}"
    notes = (
        f"the same draws for all, seed {comparison.seed}; the last column is the probability "
        f"that {comparison.abilities[0].name} yields more (a tie counts half)",
    )
    return [Table("", title, columns, rows, notes)]


def _moves(ability: Ability) -> bool:
    return any(y.low is not None and y.low != y.high for y in ability.yields)


def _left_out(comparison: Comparison) -> list[Block]:
    names = dict.fromkeys(n for a in comparison.abilities for n in a.left_out)
    if not names:
        return []
    return [
        Sentence(
            f"Taking no part: {', '.join(f'`{name}`' for name in names)}. A measured value tells "
            "what one cultivation did; a limit in absolute units needs the uptake (--uptake, or a "
            "limit on the substrate).",
            Mood.QUIET,
        )
    ]


def _proofs(comparison: Comparison) -> Sentence:
    doubtful = [
        f"{a.name} {y.mode.value}: {y.proof}"
        for a in comparison.abilities
        for y in a.yields
        if not y.proven
    ]
    if doubtful:
        return Sentence(f"Not every yield is proven: {'; '.join(doubtful[:3])}.", Mood.BAD)
    text = fraction_text(comparison.abilities[0].final.moles) if comparison.abilities else ""
    best = f" (the best is {text} mol/mol exactly)" if text else ""
    return Sentence(f"Every yield is proven in exact arithmetic{best}.", Mood.QUIET)
