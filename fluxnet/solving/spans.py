"""Values, sds and ranges of any functionals of a fit."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from fluxnet.ground.errors import MisuseError
from fluxnet.ground.progress import Progress, silent
from fluxnet.solving.flux_fit import FluxFit
from fluxnet.solving.functionals import Drifting
from fluxnet.solving.intervals import Intervals, find_intervals

__all__ = ["spans_of"]

Vector = NDArray[np.float64]

_CANCELS = 1e-9
"""What is left of a sum below this part of its terms is rounding."""


def spans_of(
    fit: FluxFit,
    rows: Vector,
    drift: dict[str, Vector] | None = None,
    progress: Progress = silent,
) -> Intervals:
    """Values, sds and ranges of any rows over the fluxes, as those of the fluxes themselves.

    Parameters
    ----------
    fit
        A fit that is not infeasible.
    rows
        Functionals x fluxes, at the fitted values of parameters and ash.
    drift
        The derivatives of ``rows`` by each uncertain number, by its name; those that are not
        named have none. Rows are taken to change in proportion to the numbers.

    Returns
    -------
    Intervals
        sd is NaN where a functional is not determined.

    Raises
    ------
    MisuseError
        Where the fit is infeasible, or the shapes do not fit.
    """
    task, region = fit.task, fit.region
    if task is None or region is None:
        raise MisuseError("an infeasible fit has no values to ask for")
    rows = np.atleast_2d(np.asarray(rows, dtype=np.float64))
    if rows.shape[1] != len(fit.reactions) or np.isnan(rows).any():
        raise MisuseError("each functional needs one number for every flux")
    slopes = np.zeros((task.numbers, *rows.shape))
    for k, name in enumerate(task.rows.names):
        if drift is not None and name in drift:
            slopes[k] = drift[name]
    # What no measurement sees cancels in a determined row, up to the rounding of its terms.
    free = np.where(task.open_fluxes[:, None], region.point.tangent @ region.unseen, 0.0)
    terms = np.abs(rows) @ np.abs(free)
    determined = np.asarray(np.all(np.abs(rows @ free) <= _CANCELS * terms, axis=1), dtype=bool)
    # Multiples of a single flux are known already.
    known = (np.count_nonzero(rows, axis=1) == 1) & ~slopes.any(axis=(0, 2))
    places = np.abs(rows[known]).argmax(axis=1)
    fluxes = Intervals(
        region.point.fluxes, fit.flux_sd, fit.low, fit.high, fit.best_low, fit.best_high
    )
    asked = Drifting(rows[~known], slopes[:, ~known], region.point.numbers)
    return fluxes.times(places, rows[known, places]).among(
        find_intervals(task, region, asked, determined[~known], progress), known
    )
