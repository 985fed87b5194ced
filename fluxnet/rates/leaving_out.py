"""A run without some of its rates."""

from __future__ import annotations

from collections.abc import Collection, Mapping
from dataclasses import replace

import numpy as np

from fluxnet.rates.covariance import join_errors, own_correlations
from fluxnet.rates.measured import MeasuredRate, Run

__all__ = ["leave_out"]


def leave_out(
    run: Run, places: Collection[int], own_sds: Mapping[int, float] | None = None
) -> Run:
    """The run without some rates; the errors of the others stay as correlated as they were.

    Parameters
    ----------
    places
        Indices of the rates that go.
    own_sds
        New sds of rates that stay, by their index, without their part in the shared error.
    """
    given = own_sds or {}
    kept = [i for i in range(len(run.rates)) if i not in places]
    rates = tuple(_with_sd(run.rates[i], given.get(i), run.shared_error or 0.0) for i in kept)
    if run.covariance is None:
        return replace(run, rates=rates)
    index = {id(rate): k for k, rate in enumerate(run.measured)}
    old = [index[id(run.rates[i])] for i in kept if run.rates[i].value is not None]
    correlations = own_correlations(run)[np.ix_(old, old)]
    measured = [rate for rate in rates if rate.value is not None]
    own = [(r.sd if r.own_sd is None else r.own_sd) or 0.0 for r in measured]
    share = run.shared_error or 0.0
    shared = [0.0 if r.own_sd is None else share * (r.value or 0.0) for r in measured]
    return replace(run, rates=rates, covariance=join_errors(own, shared, correlations))


def _with_sd(rate: MeasuredRate, own: float | None, share: float) -> MeasuredRate:
    if own is None or rate.value is None:
        return rate
    if rate.own_sd is None:
        return replace(rate, sd=own)
    return replace(rate, sd=float(np.hypot(own, share * rate.value)), own_sd=own)
