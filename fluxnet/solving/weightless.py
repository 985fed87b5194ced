"""Measured rates whose sd is so large that they tell nothing."""

from __future__ import annotations

from dataclasses import replace

import numpy as np

from fluxnet.rates.measured import Run

__all__ = ["without_weightless"]

_MOST = 30.0
"""Times the largest rate: what a measured value with a larger sd adds to h is about 0.001."""


def without_weightless(run: Run) -> Run:
    """The run with each rate whose sd is above 30 times the largest rate as not measured.

    Such a value weighs nothing; but where one sd is that far the bounds of all fluxes lie so
    close together that no solver tells them apart.
    """
    measured = run.measured
    largest = max((abs(rate.value or 0.0) for rate in measured), default=0.0)
    told = [not largest or (rate.sd or 0.0) <= _MOST * largest for rate in measured]
    if all(told):
        return run
    weightless = [rate for rate, kept in zip(measured, told, strict=True) if not kept]
    covariance = run.covariance
    if covariance is not None:
        covariance = covariance[np.ix_(told, told)]
        covariance.setflags(write=False)
    rates = tuple(
        replace(r, value=None, sd=None, relative=None, own_sd=None) if r in weightless else r
        for r in run.rates
    )
    return replace(run, rates=rates, covariance=covariance)
