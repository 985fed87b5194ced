"""Runs whose numbers are each sound, and that together cannot be weighed against one another."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np

from fluxnet.ground.diagnostic import Diagnostic
from fluxnet.ground.names import Name
from fluxnet.network.model import Quantity
from fluxnet.rates.measured import Run

__all__ = ["weigh_faults"]

_BOUND = 1e-12
"""A smaller part of the variance in some direction is none."""


def weigh_faults(run: Run) -> Iterator[Diagnostic]:
    """Ratios over a rate that is zero, and errors that leave none in some direction."""
    zeros = {_undirected(rate.quantity) for rate in run.rates if rate.value == 0}
    for rate in run.rates:
        below = rate.quantity.denominator
        if rate.value is not None and below is not None and _undirected(below) in zeros:
            message = f"run {run.name}: {rate.quantity} has no value, since {below} is 0"
            yield Diagnostic(Name.UNREADABLE_CELL, message, rate.span, mend="take the row out")
    if run.covariance is None:
        return
    variances = np.diag(run.covariance)
    kept = np.flatnonzero(variances > 0)
    scale = np.sqrt(variances[kept])
    correlations = run.covariance[np.ix_(kept, kept)] / np.outer(scale, scale)
    if len(kept) and np.linalg.eigvalsh(correlations)[0] < _BOUND:
        measured = [rate for rate in run.rates if rate.value is not None]
        yield Diagnostic(
            Name.BAD_COVARIANCE,
            f"run {run.name}: its errors are bound to one another so fully that some sum of "
            "rates would be exact",
            measured[int(kept[0])].span,
            mend="correlations between -1 and 1, both left out, leave every rate an error",
        )


def _undirected(quantity: Quantity) -> tuple[object, str]:
    return quantity.kind, quantity.name
