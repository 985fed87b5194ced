"""Pairs of errors that move together, and the matrix of correlations that they make."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import field

import numpy as np
from numpy.typing import NDArray

from fluxnet.ground.diagnostic import Diagnostic
from fluxnet.ground.names import Name
from fluxnet.ground.record import record
from fluxnet.network.model import Quantity
from fluxnet.rates.covariance import is_possible
from fluxnet.rates.measured import MeasuredRate
from fluxnet.tables.grid import Cell

__all__ = ["Correlation", "Correlations", "correlation_matrix"]


@record
class Correlation:
    """One pair of quantities whose errors move together.

    ``run`` is empty for all runs. ``is_covariance``: ``value`` is a covariance in the units
    of the rates table.
    """

    run: str
    first: Quantity
    second: Quantity
    value: float
    is_covariance: bool
    cell: Cell


@record
class Correlations:
    """All pairs of a covariance table, with what was wrong in it."""

    pairs: tuple[Correlation, ...] = ()
    diagnostics: tuple[Diagnostic, ...] = field(default=())


def correlation_matrix(
    run: str,
    measured: Sequence[MeasuredRate],
    own_sds: Sequence[float],
    factors: Sequence[float],
    correlations: Sequence[Correlation],
) -> tuple[NDArray[np.float64] | None, tuple[Diagnostic, ...]]:
    """The correlations of a run's own errors, None where all are independent."""
    place = {r.quantity: k for k, r in enumerate(measured)}
    matrix = np.eye(len(measured))
    faults: list[Diagnostic] = []
    used = False
    for pair in correlations:
        i, j = place.get(pair.first), place.get(pair.second)
        if i is None or j is None:
            if pair.run:
                faults.append(
                    _fault(pair, f"run {run} does not measure both {pair.first} and {pair.second}")
                )
            continue
        value = pair.value
        if pair.is_covariance:
            size = own_sds[i] * own_sds[j]
            value = value * factors[i] * factors[j] / size if size else 0.0 if not value else 2.0
        if i == j:
            if abs(value - 1) > 1e-6:
                faults.append(
                    _fault(
                        pair,
                        f"{pair.first} does not have this variance: its sd "
                        f"stands in the rates table",
                    )
                )
            continue
        if abs(value) > 1 + 1e-9:
            faults.append(
                _fault(
                    pair,
                    f"{pair.first} and {pair.second} have a correlation of "
                    f"{value:.4g}; it must lie between -1 and 1",
                )
            )
            continue
        if matrix[i, j] not in (0.0, value):
            faults.append(_fault(pair, f"{pair.first} and {pair.second} stand twice"))
        matrix[i, j] = matrix[j, i] = value
        used = True
    if used and not faults and not is_possible(matrix):
        faults.append(
            _fault(
                correlations[0],
                f"the correlations of run {run} together give a "
                "negative variance in some direction",
            )
        )
    return (matrix if used else None), tuple(faults)


def _fault(pair: Correlation, words: str) -> Diagnostic:
    return Diagnostic(Name.BAD_COVARIANCE, f"{pair.cell.place}: {words}", pair.cell.span)
