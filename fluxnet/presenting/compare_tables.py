"""The tables of a comparison as data: for files and frames, at full precision."""

from __future__ import annotations

from collections.abc import Iterable

from fluxnet.ground.table import Cell, Column, Table
from fluxnet.studies.compare_result import Ability, Comparison, Supply
from fluxnet.studies.compare_words import holding_words

__all__ = ["compare_data"]


def compare_data(comparison: Comparison) -> tuple[Table, ...]:
    """One table for variants, yields, what holds back, carriers, by-products, destinations."""
    abilities = comparison.abilities
    return tuple(
        table
        for table in (
            _table("variants", _VARIANTS, (_variant(a) for a in abilities)),
            _table("mode_yields", _YIELDS, (row for a in abilities for row in _yields(a))),
            _table("holding", ("variant", "kind", "name", "gain"), (
                (a.name, h.kind.value, h.name, h.gain)
                for a in abilities if a.facts for h in a.facts.holding
            )),
            _table("carriers", _CARRIERS, (
                (a.name, p.species, p.price, p.price_low, p.price_high,
                 dict(a.facts.surplus).get(p.species))
                for a in abilities if a.facts for p in a.facts.prices
            )),
            _table("by_products", ("variant", "species", "least", "most"), (
                (a.name, b.species, b.least, b.most)
                for a in abilities if a.facts for b in a.facts.by_products
            )),
            _table("destinations", ("variant", "name", "carbon", "electrons"), (
                (a.name, d.name, d.carbon, d.electrons)
                for a in abilities if a.facts for d in a.facts.destinations
            )),
            _table("odds", ("better", "worse", "probability"), (
                (o.better, o.worse, o.probability) for o in comparison.odds
            )),
            _table("staircase", _STAIRS, (row for a in abilities for row in _stairs(a))),
        )
        if table.rows or table.key == "variants"
    )  # fmt: skip


_VARIANTS = (
    "rank", "name", "variant", "substrate", "per_mole", "per_carbon", "per_mass", "share",
    "ceiling", "held_back_by", "oxygen", "oxygen_most", "carbon_dioxide", "heat_kJ", "base",
    "without_growth", "most_growth", "forced", "best_of_all", "tied", "reason", "uptake_rate",
    "product_rate", "oxygen_rate", "carbon_dioxide_rate", "base_rate", "heat_rate",
)  # fmt: skip
_CARRIERS = ("variant", "carrier", "price", "price_low", "price_high", "surplus")
_YIELDS = (
    "variant", "mode", "outcome", "per_mole", "exactly", "per_carbon", "per_mass", "share",
    "uptake", "low", "high", "proven",
)  # fmt: skip
_STAIRS = ("variant", "step", "words", "left", "lost", "lost_carbon", "lost_electrons")


def _table(key: str, names: Iterable[str], rows: Iterable[tuple[Cell, ...]]) -> Table:
    return Table(key, "", tuple(Column("", name) for name in names), tuple(rows))


def _float(value: object) -> float | None:
    return None if value is None else float(value)  # type: ignore[arg-type]


def _variant(a: Ability) -> tuple[Cell, ...]:
    facts, final = a.facts, a.final
    heat = facts.heat.value if facts is not None and facts.heat is not None else None
    return (
        a.rank, a.name, a.variant, a.substrate, _float(final.moles), _float(final.carbon),
        final.mass, _float(final.share), _float(a.ceiling),
        holding_words(facts.holding) if facts is not None else None,
        facts.oxygen if facts is not None else None,
        facts.oxygen_most if facts is not None else None,
        facts.carbon_dioxide if facts is not None else None,
        heat,
        facts.base if facts is not None else None,
        a.without_growth, a.most_growth, a.forced, a.is_best_of_all, ", ".join(a.tied), a.reason,
        *_supply(a.supply),
    )  # fmt: skip


def _supply(s: Supply | None) -> tuple[Cell, ...]:
    if s is None:
        return (None,) * 6
    return s.uptake, s.product, s.oxygen, s.carbon_dioxide, s.base, s.heat


def _yields(a: Ability) -> Iterable[tuple[Cell, ...]]:
    for y in a.yields:
        yield (
            a.name, y.mode.value, y.outcome.value, _float(y.moles),
            None if y.moles is None else str(y.moles), _float(y.carbon), y.mass, _float(y.share),
            float(y.uptake), y.low, y.high, y.proven,
        )  # fmt: skip


def _stairs(a: Ability) -> Iterable[tuple[Cell, ...]]:
    if a.staircase is None:
        return
    for s in a.staircase.steps:
        yield (
            a.name, s.kind.value, s.words, float(s.left), float(s.lost), _float(s.carbon),
            float(s.electrons),
        )  # fmt: skip
