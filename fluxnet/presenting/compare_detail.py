"""All that is known of one variant of a comparison, on demand."""

from __future__ import annotations

from fractions import Fraction

from fluxnet.ground.table import Align, Column, Table
from fluxnet.presenting.compare_supplies import supply_an_hour
from fluxnet.presenting.numbers import format_number, format_range
from fluxnet.presenting.screen import Block, Heading, Sentence
from fluxnet.studies.compare_modes import Mode
from fluxnet.studies.compare_result import Ability, Comparison, Facts, ModeYield

__all__ = ["MODE_TITLES", "detail_blocks", "fraction_text", "interval_text"]

MODE_TITLES = {Mode.ALONE: "alone", Mode.KEPT: "upkeep", Mode.RESERVED: "reserve"}
"""The modes in one short word each; notes tell what they mean."""

_LONGEST = 13


def detail_blocks(comparison: Comparison, ability: Ability) -> tuple[Block, ...]:
    """The yields in every unit, what holds them back, carriers, by-products, destinations."""
    blocks: list[Block] = [Heading(f"{ability.name}, in detail"), _yields(ability)]
    facts = ability.facts
    blocks += [Sentence(text) for text in _growth(comparison, ability)]
    if facts is None:
        return tuple(blocks)
    blocks.append(_holding(comparison, facts))
    if facts.prices:
        blocks.append(_carriers(comparison, facts))
    if facts.by_products:
        blocks.append(_by_products(comparison, facts))
    blocks.append(_destinations(ability, facts))
    blocks += [Sentence(text) for text in _supplies(comparison, facts)]
    if ability.supply is not None and ability is not comparison.abilities[0]:
        blocks.append(Sentence(f"{supply_an_hour(comparison, ability, ability.supply)}."))
    return tuple(blocks)


def fraction_text(value: Fraction | None) -> str:
    """An exact number, where it is short enough to be read; else empty.

    Examples
    --------
    >>> fraction_text(Fraction(12, 7)), fraction_text(Fraction(1, 10**20))
    ('12/7', '')
    """
    text = "" if value is None else str(value)
    return text if len(text) <= _LONGEST else ""


def interval_text(one: ModeYield, times: Fraction | int = 1) -> str:
    """The interval of a yield times a number; the yield alone where it does not move."""
    if one.low is None or one.high is None:
        return "" if one.moles is None else format_number(float(one.moles * times))
    return format_range(one.low * float(times), one.high * float(times))


def _yields(ability: Ability) -> Table:
    columns = (
        Column("yield", ""),
        Column("mol/mol", "", align=Align.RIGHT),
        Column("exactly", "", align=Align.RIGHT),
        Column("C-mol/C-mol", "", align=Align.RIGHT),
        Column("g/g", "", align=Align.RIGHT),
        Column("uptake", "", align=Align.RIGHT),
        Column("95 % of draws", ""),
    )
    rows = tuple(
        (
            MODE_TITLES[y.mode],
            None if y.moles is None else float(y.moles),
            fraction_text(y.moles),
            None if y.carbon is None else float(y.carbon),
            y.mass,
            float(y.uptake),
            interval_text(y) if y.low is not None else "",
        )
        for y in ability.yields
    )
    notes = ["uptake: of the substrate, in the unit of the model"]
    if any(y.is_cut for y in ability.yields):
        notes.append("below what was asked, because the limits let the cell use no more")
    return Table("", "", columns, rows, tuple(notes))


def _growth(comparison: Comparison, ability: Ability) -> list[str]:
    if ability.without_growth is None:
        return []
    product = comparison.product
    first = (
        f"Without growth it makes up to {format_number(ability.without_growth)} mol {product} "
        "per mol of substrate."
        if ability.without_growth
        else f"Without growth it makes no {product}."
    )
    if ability.most_growth is None or ability.forced is None:
        return [first]
    force = (
        f"at least {format_number(ability.forced)} mol/mol {product} come with it"
        if ability.forced
        else f"no {product} has to come with it"
    )
    return [
        first,
        f"Growing at its most, {format_number(ability.most_growth)} mol of biomass per mol of "
        f"substrate, {force}.",
    ]


def _holding(comparison: Comparison, facts: Facts) -> Table:
    columns = (
        Column("held back by", "", wrap=24),
        Column(f"one more gives [mol {comparison.product}]", "", align=Align.RIGHT),
    )
    rows = tuple(
        (h.name, "only with more substrate" if h.gain is None else format_number(h.gain))
        for h in facts.holding
    )
    return Table("", "", columns, rows)


def _carriers(comparison: Comparison, facts: Facts) -> Table:
    left = dict(facts.surplus)
    columns = (
        Column("carrier", ""),
        Column(f"one is worth [mol {comparison.product}]", "", align=Align.RIGHT),
        Column("most left over", "", align=Align.RIGHT),
    )
    rows = tuple(
        (
            p.species,
            format_number(p.price)
            if p.price_low == p.price_high
            else format_range(p.price_low, p.price_high),
            left.get(p.species),
        )
        for p in facts.prices
    )
    notes = [f"left over: per mol {comparison.product}, beyond what maintenance needs"]
    if any(p.price_low < 0 for p in facts.prices):
        notes.append("below zero: a surplus that has to be got rid of, at a cost")
    return Table("", "", columns, rows, tuple(notes))


def _by_products(comparison: Comparison, facts: Facts) -> Table:
    columns = (
        Column("by-product", ""),
        Column("least", "", align=Align.RIGHT),
        Column("most", "", align=Align.RIGHT),
    )
    rows = tuple((b.species, b.least, b.most) for b in facts.by_products)
    return Table("", "", columns, rows, (f"mol per mol {comparison.product}, at the optimum",))


def _destinations(ability: Ability, facts: Facts) -> Table:
    columns = (
        Column(f"where the {ability.substrate} goes", ""),
        Column("carbon", "", unit="%", align=Align.RIGHT, decimals=1),
        Column("electrons", "", unit="%", align=Align.RIGHT, decimals=1),
    )
    taken = dict(facts.releases)
    rows = tuple(
        (
            f"{d.name} (taken up)" if taken.get(d.name, 0.0) < 0 else d.name,
            None if d.carbon is None else 100 * d.carbon,
            None if d.electrons is None else 100 * d.electrons,
        )
        for d in facts.destinations
    )
    return Table("", "", columns, rows, ("at the optimum that takes least oxygen",))


def _supplies(comparison: Comparison, facts: Facts) -> list[str]:
    told: list[str] = []
    product = comparison.product
    if facts.oxygen is not None and facts.oxygen_most is not None:
        most = facts.oxygen_most
        wide = f" (other optima take up to {format_number(most, 3)})" if (
            most > facts.oxygen * (1 + 1e-6) + 1e-9
        ) else ""  # fmt: skip
        told.append(f"Oxygen: {format_number(facts.oxygen, 3)} mol per mol {product}{wide}.")
    if facts.base is not None:
        told.append(f"Base: {format_number(facts.base, 3)} mol per mol {product}.")
    heat = facts.heat
    if heat is not None and heat.value is not None:
        each = f", {heat.per_oxygen:.0f} kJ per mol O2" if heat.per_oxygen else ""
        told.append(
            f"Heat: {format_number(heat.value, 3)} kJ per mol {product}{each} ({heat.words})."
        )
    return told
