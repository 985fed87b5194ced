"""Where errors come from, and which numbers the data tell only together."""

from __future__ import annotations

from collections.abc import Mapping

import numpy as np
from numpy.typing import NDArray

from fluxnet.ground.record import record
from fluxnet.solving.flux_fit import FluxFit
from fluxnet.solving.sources import Sources

__all__ = ["Correlated", "Share", "correlated_fluxes", "correlated_numbers", "shares_of",
           "slopes_of"]  # fmt: skip

Vector = NDArray[np.float64]

_LEAST_SHARE = 5e-4
_HIGH = 0.9
_ONE = 1 - 1e-9


@record
class Share:
    """Which part of a variance comes from which source."""

    source: str
    share: float


@record
class Correlated:
    """Numbers that are correlated above 0.9 in absolute value, each with each.

    ``members`` are pairs (name, correlation with the first of them); ``least`` is the smallest
    absolute correlation among them.
    """

    members: tuple[tuple[str, float], ...]
    least: float


def shares_of(sources: Sources, gradients: Vector) -> tuple[tuple[Share, ...], ...]:
    """The sources of each functional's variance, the largest first.

    What is less than 0.05 % is left out; nothing is told of what has no variance.

    Parameters
    ----------
    gradients
        Functionals x u, as :func:`slopes_of` gives them.
    """
    found: list[tuple[Share, ...]] = []
    for row in sources.shares(gradients):
        parts = [
            Share(member.name, float(part))
            for member, part in zip(sources.members, row, strict=True)
            if abs(part) >= _LEAST_SHARE
        ]
        found.append(tuple(sorted(parts, key=lambda share: -share.share)))
    return tuple(found)


def slopes_of(fit: FluxFit, rows: Vector, drift: Mapping[str, Vector]) -> Vector:
    """The slopes of rows over the fluxes by what the measurements see (rows x u).

    Parameters
    ----------
    rows, drift
        As :func:`fluxnet.solving.spans.spans_of` takes them.
    """
    if fit.region is None or fit.task is None:
        return np.zeros((len(rows), 0))
    point = fit.region.point
    slopes = rows @ point.tangent
    for k, name in enumerate(fit.task.rows.names):
        if name in drift:
            slopes[:, len(point.z) + k] += drift[name] @ point.fluxes
    found: Vector = slopes @ fit.region.seen
    return found


def correlated_numbers(fit: FluxFit) -> tuple[Correlated, ...]:
    """The uncertain numbers of the model that the data tell only together."""
    count = len(fit.reactions)
    return _groups([m.name for m in fit.moved], fit.covariance[count:, count:])


def correlated_fluxes(fit: FluxFit) -> tuple[Correlated, ...]:
    """The determined fluxes that go together without having to.

    Fluxes that are exactly proportional (a chain, or all told by one measurement) are told by
    their first.
    """
    known = [j for j, sd in enumerate(fit.flux_sd) if np.isfinite(sd) and sd > 0]
    names = [fit.reactions[j] for j in known]
    return _groups(names, fit.covariance[np.ix_(known, known)])


def _groups(names: list[str], covariance: Vector) -> tuple[Correlated, ...]:
    """Groups in which each is correlated with each, the first of the file leading."""
    sd = np.sqrt(np.maximum(np.diag(covariance), 0.0))
    size = np.outer(sd, sd)
    ratio = np.divide(covariance, size, out=np.zeros_like(covariance), where=size > 0)
    leaders: list[int] = []
    for j in range(len(names)):
        if sd[j] > 0 and all(abs(ratio[j, k]) < _ONE for k in leaders):
            leaders.append(j)
    left, found = list(leaders), []
    while left:
        group = [left.pop(0)]
        for j in list(left):
            if all(abs(ratio[j, k]) > _HIGH for k in group):
                group.append(j)
                left.remove(j)
        if len(group) > 1:
            least = min(abs(ratio[j, k]) for j in group for k in group)
            members = tuple((names[j], float(ratio[group[0], j])) for j in group)
            found.append(Correlated(members, float(least)))
    return tuple(found)
