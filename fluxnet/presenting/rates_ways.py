"""The other ways to the same rates: how far they are apart, what leaving something out costs."""

from __future__ import annotations

from fluxnet.cultivation.result import CultivationRates, Method, RateLine
from fluxnet.ground.table import Align, Cell, Column, Table
from fluxnet.network.model import QuantityKind

__all__ = ["ways_tables"]

_LEFT_OUT = {
    Method.NAIVE: "no base, samples, evaporation",
    Method.UNSTRIPPED: "nothing lost with the gas",
    Method.UNHELD: "no CO2 in the broth",
}
_TELLING = 0.2
"""Of its sd: what changes a rate by less is not shown."""

_SAME = 1e-6
"""Of the rate: closer than this two estimators are one."""


def ways_tables(found: CultivationRates) -> tuple[Table, ...]:
    """Regression beside spline, and rates with something left out beside the full ones."""
    return (*_estimators(found), *_left_out(found))


def _sign(line: RateLine) -> int:
    return 1 if line.quantity.direction is None else line.quantity.direction.sign


def _name(line: RateLine) -> str:
    return "mu" if line.quantity.kind is QuantityKind.MU else line.quantity.name


def _estimators(found: CultivationRates) -> tuple[Table, ...]:
    rows: list[tuple[Cell, ...]] = []
    for phase in found.phases:
        for line in phase.lines:
            way = line.way(Method.SPLINE)
            if way is None:
                continue
            sign, apart, sd = _sign(line), way.difference, way.difference_sd
            if abs(apart) < _SAME * abs(line.value):  # the spline is a straight line as well
                apart, sd = 0.0, None
            rows.append((
                phase.phase.name, _name(line), sign * line.value, line.sd, sign * way.value,
                way.sd, sign * apart + 0.0, sd, abs(apart) / sd if sd else None,
            ))  # fmt: skip
    if not rows:
        return ()
    columns = (
        Column("phase", "phase"), Column("species", "species"),
        Column("regression", "regression", align=Align.RIGHT),
        Column("", "regression_sd", sd_of="regression"),
        Column("spline", "spline", align=Align.RIGHT), Column("", "spline_sd", sd_of="spline"),
        Column("difference", "difference", align=Align.RIGHT),
        Column("", "difference_sd", sd_of="difference"),
        Column("in sds", "apart", align=Align.RIGHT, decimals=1),
    )  # fmt: skip
    notes = (
        "regression: amounts against the integral of biomass; spline: slopes of smoothed amounts",
        "more than 2 sds apart: the rate is not constant, or too few samples bend the spline",
    )
    title = "Two estimators of the same rates [mmol/g/h; mu 1/h]"
    return (Table("estimators", title, columns, tuple(rows), notes),)


def _left_out(found: CultivationRates) -> tuple[Table, ...]:
    rows: list[tuple[Cell, ...]] = []
    for phase in found.phases:
        for line in phase.lines:
            for method, words in _LEFT_OUT.items():
                way = line.way(method)
                if way is None or abs(way.difference) < _TELLING * line.sd:
                    continue
                change = 100 * way.difference / line.value if line.value else None
                rows.append((
                    phase.phase.name, _name(line), words, _sign(line) * way.value, change,
                    abs(way.difference) / line.sd if line.sd else None,
                ))  # fmt: skip
    if not rows:
        return ()
    columns = (
        Column("phase", "phase"), Column("species", "species"),
        Column("left out", "left_out", wrap=20),
        Column("rate then", "rate", align=Align.RIGHT),
        Column("change", "change", "%", Align.RIGHT, digits=2),
        Column("in sds", "apart", align=Align.RIGHT, decimals=1),
    )  # fmt: skip
    title = "What leaving something out would do [mmol/g/h; mu 1/h]"
    return (Table("left_out", title, columns, tuple(rows)),)
