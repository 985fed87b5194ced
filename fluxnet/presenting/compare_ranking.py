"""The one table of a comparison: what each variant yields, takes and gives off; and how sure."""

from __future__ import annotations

from collections.abc import Sequence

from fluxnet.ground.table import Align, Cell, Column, Table
from fluxnet.presenting.compare_detail import MODE_TITLES, interval_text
from fluxnet.presenting.screen import Block, Mood, Sentence
from fluxnet.studies.compare_modes import Mode
from fluxnet.studies.compare_result import Ability, Comparison, Facts, Limiting
from fluxnet.studies.compare_words import holding_words

__all__ = ["how_sure_blocks", "ranking_table", "shown_of"]

_FEW = 5
"""A table of more rows is a short one: each in one line."""

_MOST = 20
_SIGNS = {Limiting.OXYGEN: "O2", Limiting.ELECTRONS: "e", Limiting.CARBON: "C"}


def shown_of(comparison: Comparison, *, everything: bool) -> tuple[Ability, ...]:
    """The variants that have a row."""
    return comparison.abilities if everything else comparison.abilities[:_MOST]


def ranking_table(comparison: Comparison, *, everything: bool) -> Table:
    """Yields of each mode, and what the last of them takes and gives off.

    A short table, of many variants or of several kinds, leaves out the share of the
    electron-limited yield, carbon dioxide and the energy left.
    """
    shown = shown_of(comparison, everything=everything)
    names = _names(comparison)
    short = (len(shown) > _FEW or len(names) > 1) and not everything
    if len(names) > 1 and not short:
        names = (("variant", {a.name: a.name for a in comparison.abilities}),)
    columns = (
        Column("#", ""),
        *(Column(title, "", wrap=9) for title, _ in names),
        *(Column(MODE_TITLES[m], "", align=Align.RIGHT, decimals=3) for m in comparison.modes),
        *_besides(comparison, short=short),
    )
    rows = tuple(_row(comparison, a, names, short=short) for a in shown)
    notes = [_yields_note(comparison), *_notes(comparison, shown, short=short)]
    if len(shown) < len(comparison.abilities):
        notes.append(f"{len(comparison.abilities) - len(shown)} more: --all shows them")
    return Table("", "", columns, rows, ("; ".join(notes),) if short else tuple(notes))


def _besides(comparison: Comparison, *, short: bool) -> tuple[Column, ...]:
    held = Column("held by" if short else "held back by", "", wrap=7 if short else 9)
    oxygen = Column("O2", "", align=Align.RIGHT, digits=3)
    heat = Column("heat", "", align=Align.RIGHT, digits=3)
    if short:
        return held, oxygen, heat
    # A third yield takes the place of carbon dioxide.
    gas = (Column("CO2", "", align=Align.RIGHT, digits=3),) if _has_gas(comparison) else ()
    left = Column(_left_title(comparison), "", align=Align.RIGHT, digits=3)
    return (Column("share", "", align=Align.RIGHT), held, oxygen, *gas, heat, left)


def _row(
    comparison: Comparison, ability: Ability, names: _Names, *, short: bool
) -> tuple[Cell, ...]:
    facts = ability.facts
    by_carbon = comparison.counts_carbon
    told = (y.carbon if by_carbon else y.moles for y in ability.yields)
    yields: list[Cell] = [None if value is None else float(value) for value in told]
    mark = "*" if ability.is_best_of_all and len(comparison.abilities) > 1 else ""
    held, oxygen, gas, heat, left = _taken(facts, short=short)
    more = () if short else (_percent(ability.final.share),)
    last = () if short else (left,)
    gases = (gas,) if _has_gas(comparison) and not short else ()
    return (
        f"{ability.rank}{mark}", *(own[ability.name] for _, own in names), *yields, *more, held,
        oxygen, *gases, heat, *last,
    )  # fmt: skip


def _taken(facts: Facts | None, *, short: bool) -> tuple[Cell, ...]:
    if facts is None:
        return "", None, None, None, None
    held = _signs(facts) if short else holding_words(facts.holding, short=True)
    return (
        held,
        facts.oxygen,
        facts.carbon_dioxide,
        None if facts.heat is None else facts.heat.value,
        sum(amount for _, amount in facts.surplus) if facts.surplus else None,
    )


def _signs(facts: Facts) -> str:
    """What holds a yield back in signs."""
    return " ".join(dict.fromkeys(_SIGNS.get(h.kind, h.name) for h in facts.holding))


_Names = tuple[tuple[str, dict[str, str]], ...]


def _names(comparison: Comparison) -> _Names:
    """The columns that tell one variant from another, without those equal in all rows."""
    abilities = comparison.abilities
    parts = [a.parts for a in abilities]
    lists = range(len(parts[0])) if parts else ()
    varied = [k for k in lists if len({p[k] for p in parts}) > 1] or list(lists)[:1]
    found = [("of", {a.name: a.substrate for a in abilities})] if _several(comparison) else []
    found += [
        ("with" if n else "variant", {a.name: a.parts[k] for a in abilities})
        for n, k in enumerate(varied)
    ]
    return tuple(found)


def _several(comparison: Comparison) -> bool:
    return len({a.substrate for a in comparison.abilities}) > 1


def _has_gas(comparison: Comparison) -> bool:
    return len(comparison.modes) < len(Mode)


def _notes(comparison: Comparison, shown: Sequence[Ability], *, short: bool) -> list[str]:
    product = comparison.product
    notes: list[str] = []
    if short:
        held = "held by e: by electrons; " if any(
            h.kind is Limiting.ELECTRONS for a in shown if a.facts for h in a.facts.holding
        ) else ""  # fmt: skip
        notes.append(f"{held}O2 taken up [mol] and heat [kJ] per mol {product}")
    else:
        gas = " and CO2 given off" if _has_gas(comparison) else ""
        left = " and ".join(_energies(comparison)) or "energy"
        notes.append("share: of the yield that electrons alone would allow")
        notes.append(f"per mol {product} at the last yield: O2 taken up{gas} [mol], heat [kJ], "
                     f"{left} that can be left over [mol]")  # fmt: skip
    if any(a.is_best_of_all for a in shown) and len(shown) > 1:
        notes.append("*: no other is as good in yield, oxygen, heat and energy left, and better "
                     "in one")  # fmt: skip
    if any(a.tied for a in shown):
        notes.append("one rank for several: exactly the same yield")
    return notes


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
    return sorted({n for a in comparison.abilities if a.facts for n, _ in a.facts.surplus})


def _left_title(comparison: Comparison) -> str:
    names = _energies(comparison)
    return names[0] if len(names) == 1 else "left"


def _percent(share: object) -> str:
    if share is None:
        return "–"
    value = 100 * float(share)  # type: ignore[arg-type]
    text = f"{value:.0f}"
    # What is not all must not look as if it were.
    return f"{'99.9' if text == '100' and value < 100 else text} %"


def how_sure_blocks(comparison: Comparison, *, everything: bool) -> list[Block]:
    """The interval of each yield and the chance that the best is better; where any matters.

    Of many variants a sentence tells the best alone.
    """
    abilities = comparison.abilities
    if not any(_moves(a) for a in abilities):
        if not comparison.uncertain:
            return []
        names = ", ".join(comparison.uncertain)
        return [Sentence(f"The errors of {names} move no yield.", Mood.QUIET)]
    if len(abilities) > _FEW and not everything:
        return [_sure_sentence(comparison)]
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
        for a in abilities
    )
    title = f"How sure: 95 % of {comparison.draws} draws of {', '.join(comparison.uncertain)}"
    note = (
        f"the same draws for all, seed {comparison.seed}; the last column is the probability "
        f"that {abilities[0].name} yields more (a tie counts half)"
    )
    return [Table("", title, columns, rows, (note,))]


def _sure_sentence(comparison: Comparison) -> Sentence:
    best = comparison.abilities[0]
    each = best.carbon_per_mole if comparison.counts_carbon else 1
    words = (
        f"Of {comparison.draws} draws of {', '.join(comparison.uncertain)} 95 % give {best.name} "
        f"{interval_text(best.final, each)}"
    )
    if comparison.odds:
        first = comparison.odds[0]
        words += f"; its chance to beat {first.worse} is {first.probability:.2f}"
    return Sentence(f"{words} (--all: each).")


def _moves(ability: Ability) -> bool:
    return any(y.low is not None and y.low != y.high for y in ability.yields)
