"""Runs with the same rows closed as one batch, again until their errors agree with the answer.

Two kinds of sd depend on the answer: a relative sd is taken of the reconciled value (one more
pass), and a ratio A / B = r ± s weighs A - r B with s times B, so that B is needed.
"""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray

from fluxnet.ground.record import record
from fluxnet.rates.covariance import covariance_at, run_covariance
from fluxnet.rates.measured import Run
from fluxnet.studies.closure_batch import ClosureArrays, close_many
from fluxnet.studies.closure_plan import ClosurePlan
from fluxnet.studies.closure_rows import ClosureRows

__all__ = ["PreparedRun", "close_prepared", "prepare_run"]

Array = NDArray[np.float64]
_PASSES = 30
_LEAST = 0.1
"""A rate that is reconciled to nothing keeps this part of its relative sd."""


@record
class PreparedRun:
    """A run with its rows, and values and covariance over the measured ones.

    ``given`` are the values as measured; of a ratio ``values`` holds t of A - r B = t, 0.
    """

    run: Run
    rows: ClosureRows
    given: Array
    values: Array
    covariance: Array

    @property
    def exact(self) -> tuple[bool, ...]:
        """Which values have no error."""
        return tuple(bool(v == 0) for v in np.diag(self.covariance))

    @property
    def is_independent(self) -> bool:
        """Whether the errors know nothing of one another."""
        return not np.any(self.covariance - np.diag(np.diag(self.covariance)))

    @property
    def signature(self) -> tuple[object, ...]:
        """What runs of one batch have in common."""
        return self.rows, self.exact, self.run.unit, self.is_independent


def prepare_run(run: Run, rows: ClosureRows) -> PreparedRun:
    """The values and covariance of a run's measured rows."""
    given = np.array([
        0.0 if r.place is None else float(run.measured[r.place].value or 0.0)
        for r in rows.measured
    ])  # fmt: skip
    values = given.copy()
    values[_ratio_places(rows)] = 0.0
    return PreparedRun(run, rows, given, values, _covariance(rows, run_covariance(run)))


def close_prepared(
    plan: ClosurePlan, batch: Sequence[PreparedRun]
) -> tuple[ClosureArrays, Array]:
    """Close runs with the same rows.

    Returns
    -------
    The arrays, and the sds that were used: runs x values, those of ratios in their own unit.

    Raises
    ------
    NoVarianceError
        Where the covariance of a run gives a tested relation no variance.
    """
    covariances = np.array([one.covariance for one in batch])
    sizes = np.array([_first_sizes(one) for one in batch])
    arrays, sizes = _settle(plan, batch, covariances, sizes)
    if any(_is_relative(one.run) for one in batch):
        covariances = np.array([_at_answer(one, arrays, i) for i, one in enumerate(batch)])
        arrays, sizes = _settle(plan, batch, covariances, sizes)
    return arrays, np.sqrt(np.einsum("nii->ni", covariances))


def _settle(
    plan: ClosurePlan, batch: Sequence[PreparedRun], covariances: Array, sizes: Array
) -> tuple[ClosureArrays, Array]:
    """Close with the values t of ratios scaled by the denominators, until these stand still."""
    places = [(k, r.row) for k, r in enumerate(plan.ratios) if r.row is not None and plan.known[k]]
    arrays = _close(plan, batch, covariances, sizes)
    for _ in range(_PASSES if places else 0):
        before = sizes.copy()
        for k, row in places:
            size = arrays.denominator[:, k]
            sizes[:, row] = np.where(size != 0, size, sizes[:, row])
        if (np.abs(sizes - before) <= 1e-10 * np.abs(before)).all():
            break
        arrays = _close(plan, batch, covariances, sizes)
    return arrays, sizes


def _close(
    plan: ClosurePlan, batch: Sequence[PreparedRun], covariances: Array, sizes: Array
) -> ClosureArrays:
    values = np.array([one.values for one in batch])
    if batch[0].is_independent:
        sds = np.sqrt(np.einsum("nii->ni", covariances)) * np.abs(sizes)
        return close_many(plan.matrices, values, sds)
    scaled = covariances * sizes[:, :, None] * sizes[:, None, :]
    return close_many(plan.matrices, values, covariances=scaled)


def _ratio_places(rows: ClosureRows) -> list[int]:
    return [ratio.row for ratio in rows.ratios if ratio.row is not None]


def _covariance(rows: ClosureRows, whole: Array) -> Array:
    """The covariance of the rows used, with what an uncertain ash content adds."""
    own = len(whole)
    places = [own if r.place is None else r.place for r in rows.measured]
    spread = np.array([r.spread for r in rows.measured])
    padded = np.pad(whole, (0, 1))
    return np.asarray(padded[np.ix_(places, places)] + np.diag(np.square(spread)))


def _first_sizes(one: PreparedRun) -> Array:
    """What t of each value counts: 1, of a ratio the denominator as far as it was measured.

    A guess stands for one that was not: its numerator over the ratio, else the largest rate.
    """
    sizes = np.ones(len(one.values))
    largest = float(np.abs(one.values).max(initial=0.0)) or 1.0
    for ratio in one.rows.ratios:
        if ratio.row is None:
            continue
        over, below = (
            float(np.array([float(w) for w in part.measured]) @ one.values)
            for part in (ratio.over, ratio.below)
        )
        value = float(ratio.value or 0)
        sizes[ratio.row] = below or (over / value if value else 0.0) or largest
    return sizes


def _is_relative(run: Run) -> bool:
    return bool(run.shared_error) or any(r.relative is not None for r in run.measured)


def _at_answer(one: PreparedRun, arrays: ClosureArrays, place: int) -> Array:
    """The covariance with relative errors taken of the reconciled values.

    Kept away from zero: a variance would vanish with its value, and only a typed 0 is exact.
    """
    answer = arrays.reconciled[place].copy()
    for k, ratio in enumerate(one.rows.ratios):
        if ratio.row is not None:
            found = arrays.ratio[place, k]
            answer[ratio.row] = found if np.isfinite(found) else one.given[ratio.row]
    least = _LEAST * np.abs(one.given)
    answer = np.where(np.abs(answer) < least, np.copysign(least, answer), answer)
    values = np.array([float(r.value or 0.0) for r in one.run.measured])
    for row, value in zip(one.rows.measured, answer, strict=True):
        if row.place is not None:
            values[row.place] = value
    return _covariance(one.rows, covariance_at(one.run, values))
