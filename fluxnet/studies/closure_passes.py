"""Runs with the same rows closed as one batch, again until their errors agree with the answer.

Two kinds of sd depend on the answer: a relative sd is taken of the reconciled value (one more
pass, unless the first rejects grossly: :data:`fluxnet.rates.covariance.GROSS`), and a ratio
A / B = r ± s weighs A - r B with s times B, so that B is needed.
"""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import replace
from typing import Any

import numpy as np
from numpy.typing import NDArray

from fluxnet.ground.record import record
from fluxnet.rates.covariance import GROSS, within_reach
from fluxnet.rates.measured import Run
from fluxnet.rates.stacking import StackedErrors, covariances_at, sds_at, stack_errors
from fluxnet.studies.closure_batch import ClosureArrays, balances_of, close_with
from fluxnet.studies.closure_errors import Errors, Independent, Joint
from fluxnet.studies.closure_plan import ClosurePlan
from fluxnet.studies.closure_rows import ClosureRows

__all__ = ["PreparedRuns", "close_prepared", "prepare_runs"]

Array = NDArray[np.float64]
_PASSES = 30


@record
class PreparedRuns:
    """Runs with the same rows: values and errors over the measured ones, runs x rows.

    ``given`` are the values as measured; of a ratio ``values`` holds t of A - r B = t, 0, and
    ``errors`` that of the ratio. ``exact`` tells which values have no error.
    """

    runs: tuple[Run, ...]
    rows: ClosureRows
    given: Array
    values: Array
    stacked: StackedErrors
    errors: Errors
    exact: tuple[bool, ...]

    def each(self) -> Iterator[PreparedRuns]:
        """The runs, each by itself."""
        for run in self.runs:
            yield prepare_runs((run,), self.rows)


def prepare_runs(runs: Sequence[Run], rows: ClosureRows) -> PreparedRuns:
    """The values and errors of runs with the same rows, of which the same are exact."""
    stacked = stack_errors(runs)
    given = _by_rows(rows, stacked.values)
    values = given.copy()
    values[:, [ratio.row for ratio in rows.ratios if ratio.row is not None]] = 0.0
    errors = _errors(rows, stacked, stacked.values, typed=True)
    exact = tuple(bool(v == 0) for v in errors.variances[0])
    return PreparedRuns(tuple(runs), rows, given, values, stacked, errors, exact)


def close_prepared(plan: ClosurePlan, batch: PreparedRuns) -> ClosureArrays:
    """Close runs with the same rows.

    The balances are those of the values and errors as measured, whatever the passes make of
    the errors.

    Raises
    ------
    NoVarianceError
        Where the covariance of a run gives a tested relation no variance.
    """
    first = _first_sizes(batch)
    arrays, sizes = _settle(plan, batch, batch.errors, first)
    as_measured = batch.errors.scaled(_measured_sizes(batch.rows, first, sizes))
    balances: dict[str, Any] = balances_of(plan.matrices, batch.values, as_measured)
    if batch.stacked.is_relative and plan.matrices.redundancy.size:
        errors = _at_answer(batch, arrays)
        arrays, _ = _settle(plan, batch, errors, sizes)
    return replace(arrays, **balances)


def _settle(
    plan: ClosurePlan, batch: PreparedRuns, errors: Errors, sizes: Array
) -> tuple[ClosureArrays, Array]:
    """Close with the values t of ratios scaled by the denominators, until these stand still."""
    places = [(k, r.row) for k, r in enumerate(plan.ratios) if r.row is not None and plan.known[k]]
    sizes = sizes.copy()
    arrays = close_with(plan.matrices, batch.values, errors.scaled(sizes))
    for _ in range(_PASSES if places else 0):
        before = sizes.copy()
        for k, row in places:
            size = arrays.denominator[:, k]
            sizes[:, row] = np.where(size != 0, size, sizes[:, row])
        if (np.abs(sizes - before) <= 1e-10 * np.abs(before)).all():
            break
        arrays = close_with(plan.matrices, batch.values, errors.scaled(sizes))
    return arrays, sizes


def _by_rows(rows: ClosureRows, of_rates: Array) -> Array:
    """What is known of each measured rate as what is known of each row: 0 where it is none."""
    padded = np.pad(of_rates, ((0, 0), (0, 1)))
    return np.asarray(padded[:, _places(rows)])


def _places(rows: ClosureRows) -> list[int]:
    """The place of each row among the measured rates, the last where it is none of them."""
    return [-1 if row.place is None else row.place for row in rows.measured]


def _errors(rows: ClosureRows, stacked: StackedErrors, values: Array, *, typed: bool) -> Errors:
    """The errors of the rows at some values, with what an uncertain ash content adds."""
    spread = np.square([row.spread for row in rows.measured])
    if stacked.covariances is None:
        sds = stacked.own if typed else sds_at(stacked, values)
        return Independent(np.square(_by_rows(rows, sds)) + spread)
    whole = stacked.covariances if typed else covariances_at(stacked, values)
    padded = np.pad(whole, ((0, 0), (0, 1), (0, 1)))
    places = _places(rows)
    return Joint(padded[:, places][:, :, places] + np.diag(spread))


def _first_sizes(batch: PreparedRuns) -> Array:
    """What t of each value counts: 1, of a ratio the denominator as far as it was measured.

    A guess stands for one that was not: its numerator over the ratio, else the largest rate.
    """
    values = batch.values
    sizes = np.ones_like(values)
    largest = np.abs(values).max(axis=1, initial=0.0)
    largest[largest == 0] = 1.0
    for ratio in batch.rows.ratios:
        if ratio.row is None:
            continue
        over, below = (
            values @ np.array([float(w) for w in part.measured])
            for part in (ratio.over, ratio.below)
        )
        guess = over / float(ratio.value) if ratio.value else np.zeros_like(over)
        guess = np.where(guess != 0, guess, largest)
        sizes[:, ratio.row] = np.where(below != 0, below, guess)
    return sizes


def _measured_sizes(rows: ClosureRows, first: Array, settled: Array) -> Array:
    """The sizes as measured, and as found where a denominator was not measured."""
    sizes = first.copy()
    for ratio in rows.ratios:
        if ratio.row is not None and any(ratio.below.unmeasured):
            sizes[:, ratio.row] = settled[:, ratio.row]
    return sizes


def _at_answer(batch: PreparedRuns, arrays: ClosureArrays) -> Errors:
    """The errors with relative ones taken of the reconciled values, where these are believed."""
    answer = arrays.reconciled.copy()
    for k, ratio in enumerate(batch.rows.ratios):
        if ratio.row is not None:
            found = arrays.ratio[:, k]
            answer[:, ratio.row] = np.where(np.isfinite(found), found, batch.given[:, ratio.row])
    answer = within_reach(batch.given, answer)
    answer[arrays.p < GROSS] = batch.given[arrays.p < GROSS]
    values = batch.stacked.values.copy()
    for j, row in enumerate(batch.rows.measured):
        if row.place is not None:
            values[:, row.place] = answer[:, j]
    return _errors(batch.rows, batch.stacked, values, typed=False)
