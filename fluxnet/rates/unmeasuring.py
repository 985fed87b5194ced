"""Rates taken as exchanged but not measured: what the others say of them then."""

from __future__ import annotations

from collections.abc import Collection
from dataclasses import replace

import numpy as np

from fluxnet.rates.measured import RatesTable, Run

__all__ = ["leave_unmeasured", "measured_names"]


def measured_names(table: RatesTable) -> tuple[str, ...]:
    """How the measured quantities of a table can be named, each once: ``oxygen``, ``mu``."""
    return tuple(
        dict.fromkeys(
            rate.quantity.name or str(rate.quantity) for run in table.runs for rate in run.measured
        )
    )


def leave_unmeasured(table: RatesTable, names: Collection[str]) -> RatesTable:
    """The table in which the values of some quantities are blank.

    Parameters
    ----------
    names
        Species, ``mu``, or quantities in full (``CO2 out``, ``CO2 out / oxygen in``).
    """
    return replace(table, runs=tuple(_blanked(run, names) for run in table.runs))


def _blanked(run: Run, names: Collection[str]) -> Run:
    hit = [rate.quantity.name in names or str(rate.quantity) in names for rate in run.rates]
    if not any(hit):
        return run
    kept = [not gone for gone, rate in zip(hit, run.rates, strict=True) if rate.value is not None]
    covariance = run.covariance
    if covariance is not None:
        covariance = covariance[np.ix_(kept, kept)].copy()
        covariance.setflags(write=False)
    rates = tuple(
        replace(rate, value=None, sd=None, own_sd=None, relative=None) if gone else rate
        for gone, rate in zip(hit, run.rates, strict=True)
    )
    return replace(run, rates=rates, covariance=covariance)
