"""The best fit with the weights that it implies itself.

Two kinds of sd depend on the answer: a relative sd is taken of the reconciled value (one more
pass, unless the first rejects grossly: :data:`fluxnet.rates.covariance.GROSS`), and a measured
ratio A / B = r ± s weighs A - r B with s times B, so that B is needed.
"""

from __future__ import annotations

from dataclasses import replace

import numpy as np
from numpy.typing import NDArray

from fluxnet.ground.record import record
from fluxnet.network.model import Quantity
from fluxnet.rates.covariance import GROSS, covariance_at, within_reach
from fluxnet.rates.measured import Run
from fluxnet.solving.build import Built, rebuild
from fluxnet.solving.chart import Point
from fluxnet.solving.classify import Structure
from fluxnet.solving.descent import fit_equalities
from fluxnet.solving.forms import Form, exact_numbers, exact_row, exact_species, form_of
from fluxnet.solving.problem import Row, RowKind
from fluxnet.solving.statistics import chi_squared_tail
from fluxnet.solving.task import Task, task_of, whitening

__all__ = ["Weighed", "fit_weighed", "weigh_again"]

Vector = NDArray[np.float64]

_PASSES = 30
# A guess that shrinks faster runs towards nothing: the weight of a ratio over a flux that its own
# pull makes small.
_SHRINKS = 0.1

# A denominator this small beside the largest value is rounding.
_NOTHING = 1e-9


@record
class Weighed:
    """The best fit under the equalities alone, with the problem's sds as the fit used them.

    ``ratios`` are pairs (place of numerator, place of denominator) among the task's rows, by
    the place of the measured ratio's row.
    """

    built: Built
    task: Task
    best: Point
    ratios: dict[int, tuple[int, int]]


def fit_weighed(built: Built, structure: Structure, extra: tuple[Form, ...] = ()) -> Weighed:
    """Fit the equalities, and fit again until the weights agree with the fit.

    Parameters
    ----------
    extra
        Further rows for the task, behind the problem's own.
    """
    rows = built.problem.rows
    forms = list(extra)
    ratios: dict[int, tuple[int, int]] = {}
    sure: list[int] = []
    for place, row in enumerate(rows):
        if not _is_measured_ratio(row):
            continue
        over, below = _parts(built, row)
        ratios[place] = (len(rows) + len(forms), len(rows) + len(forms) + 1)
        forms += [over, below]
        if place in built.measured and _is_fixed(built, structure, below):
            sure.append(place)
    task = task_of(built, structure, tuple(forms))
    best = fit_equalities(task)
    built, task, best = _settle(built, task, best, ratios, sure)
    run = built.run
    is_gross = structure.dof > 0 and chi_squared_tail(best.h, structure.dof) < GROSS
    if run is not None and _has_relative(run) and not is_gross:
        built = _reweighed(built, run, _reconciled(built, run, best, ratios))
        task = replace(task, whitening=whitening(built.covariance))
        best = fit_equalities(task, best.numbers)
        built, task, best = _settle(built, task, best, ratios, sure)
    return Weighed(built, task, best, ratios)


def weigh_again(weighed: Weighed, point: Point) -> Weighed:
    """Fit again with the denominators of another point, where they were mere guesses.

    Of a measured ratio whose denominator nothing determines the weight cannot be settled; that
    of the point which is shown is the one that its errors are to be read with.
    """
    built, sizes = weighed.built, {}
    for place in built.estimated:
        quantity = built.problem.rows[place].quantity
        size = _size_of(point, weighed.ratios[place][1])
        least = _SHRINKS * (built.problem.rows[place].denominator or 0.0)
        if quantity is not None and quantity.denominator is not None and size > least:
            sizes[quantity.denominator] = size
    if not sizes:
        return weighed
    guessed = built.estimated
    built = replace(rebuild(built, denominators=sizes), estimated=guessed)
    task = replace(weighed.task, whitening=whitening(built.covariance))
    best = fit_equalities(task, weighed.best.numbers)
    return Weighed(built, task, best, weighed.ratios)


def _size_of(point: Point, place: int) -> float:
    """The size of a denominator; 0 where it is the rounding of the other values.

    A ratio over nothing has no value, and no error that could be worked out from one.
    """
    size = abs(float(point.values[place]))
    return size if size > _NOTHING * float(np.abs(point.values).max()) else 0.0


def _has_relative(run: Run) -> bool:
    return any(r.relative is not None or r.own_sd is not None for r in run.measured)


def _is_measured_ratio(row: Row) -> bool:
    return row.ratio is not None and row.kind in (RowKind.MEASUREMENT, RowKind.MEASURED_LIMIT)


def _parts(built: Built, row: Row) -> tuple[Form, Form]:
    """Numerator and denominator of a ratio's row, as the row weighs them."""
    if row.quantity is None or row.quantity.numerator is None or row.quantity.denominator is None:
        raise ValueError(f"{row.name} is no ratio")
    over, below = row.quantity.numerator, row.quantity.denominator
    return form_of(built, over, told_with=below), form_of(built, below, told_with=over)


def _is_fixed(built: Built, structure: Structure, form: Form) -> bool:
    numbers = exact_numbers(built)
    species = exact_species(built.stoichiometry, numbers)
    return structure.is_determined(exact_row(built, form, species, numbers))


def _settle(
    built: Built, task: Task, best: Point, ratios: dict[int, tuple[int, int]], sure: list[int]
) -> tuple[Built, Task, Point]:
    """Repeat the fit until the denominators of measured ratios stand still."""
    for _ in range(_PASSES if sure else 0):
        sizes: dict[Quantity, float] = {}
        change = 0.0
        for place in sure:
            row = built.problem.rows[place]
            if row.quantity is None or row.quantity.denominator is None:
                continue
            size = _size_of(best, ratios[place][1])
            if size and row.denominator:
                sizes[row.quantity.denominator] = size
                change = max(change, abs(size - row.denominator) / row.denominator)
        if change < 1e-10:
            break
        built = rebuild(built, denominators=sizes)
        task = replace(task, whitening=whitening(built.covariance))
        best = fit_equalities(task, best.numbers)
    return built, task, best


def _reconciled(
    built: Built, run: Run, best: Point, ratios: dict[int, tuple[int, int]]
) -> Vector:
    """The fitted values of a run's measured rates that relative errors are taken of."""
    places = [i for i, r in enumerate(built.problem.rows) if r.kind is RowKind.MEASUREMENT]
    values = best.values[places]
    for k, place in enumerate(places):
        if place in ratios:
            over, below = ratios[place]
            values[k] = best.values[over] / (best.values[below] or np.inf)
    given = np.array([rate.value or 0.0 for rate in run.measured])
    return within_reach(given, values)


def _reweighed(built: Built, run: Run, values: Vector) -> Built:
    """The problem with every relative error taken of the fitted values."""
    whole = covariance_at(run, values)
    own = [i for i, r in enumerate(built.problem.rows) if r.kind is RowKind.MEASUREMENT]
    source = {place: k for k, place in enumerate(own)}
    rows = list(built.problem.rows)
    covariance = built.covariance.copy()
    sizes = np.array([rows[i].denominator or 1.0 for i in built.measured])
    kept = [(p, source[i]) for p, i in enumerate(built.measured) if i in source]
    for p, a in kept:
        rows[built.measured[p]] = replace(
            rows[built.measured[p]], sd=float(np.sqrt(whole[a, a])) * float(sizes[p])
        )
        for q, b in kept:
            covariance[p, q] = whole[a, b] * sizes[p] * sizes[q]
    covariance.setflags(write=False)
    problem = replace(built.problem, rows=tuple(rows))
    return replace(built, problem=problem, covariance=covariance)
