"""What could be wrong where relations fail: the size of each suspect, and how well it explains.

With e the residuals of relations that should be zero, P their covariance and g what one unit of
a suspect adds to them (a gross error, a species that nobody measured):

    b = g'P^-1 e / g'P^-1 g,  sd(b) = (g'P^-1 g)^-1/2,  h_left = h - (g'P^-1 e)^2 / g'P^-1 g

h_left is the test value with b left free: that of the run in which the suspect is not measured.
The gain h - h_left is chi-squared with one degree of freedom where nothing is wrong; its p is
corrected for having looked into m distinct directions, 1 - (1 - p)^m (Sidak 1967; from memory).
"""

from __future__ import annotations

from collections.abc import Sequence
from fractions import Fraction

import numpy as np
from numpy.typing import NDArray

from fluxnet.ground.errors import MisuseError
from fluxnet.ground.record import record
from fluxnet.solving.statistics import chi_squared_quantile, chi_squared_tails

__all__ = [
    "PairArrays", "SuspectArrays", "TooFarApartError", "Whitened", "first_group",
    "number_directions", "weigh_pairs", "weigh_suspects", "whiten_residuals",
]

Array = NDArray[np.float64]
Classes = NDArray[np.intp]
_ROUNDING = 1e-13
_CHUNK = 2_000_000
"""So many correlations of directions are held at once."""


class TooFarApartError(MisuseError):
    """The sds of what was measured lie too far apart to weigh relations beside one another."""


@record
class Whitened:
    """Residuals as independent numbers of sd 1: ``residuals`` (runs x relations).

    ``factor`` (runs x relations x relations) does this: it is the inverse of a Cholesky factor
    of the covariance.
    """

    residuals: Array
    factor: Array

    @property
    def h(self) -> Array:
        """The test value of each run."""
        return np.asarray(np.square(self.residuals).sum(axis=1))


@record
class SuspectArrays:
    """Suspects of many runs: arrays of runs x suspects.

    ``sizes`` with their ``sds`` explain the residuals best; ``h_left`` is the test value
    then; ``p`` that of the gain, corrected for the number of distinct directions.
    ``separation`` is how far the nearest suspect of another direction lies, in sds: the root
    of what h_left would be expected to rise by if that one were taken in its place. Infinite
    where there is no other.
    """

    h: Array
    sizes: Array
    sds: Array
    h_left: Array
    p: Array
    separation: Array


@record
class PairArrays:
    """Pairs of suspects of one run that explain it together, the best first.

    ``first`` and ``second`` are indices of suspects; the others have one entry a pair.
    """

    first: Classes
    second: Classes
    sizes: Array
    sds: Array
    h_left: Array


def number_directions(vectors: Sequence[Sequence[Fraction]]) -> tuple[int, ...]:
    """Number the directions of vectors, parallel ones alike; -1 where a vector is zero.

    Decided exactly: no measurement of the same relations can tell parallel ones apart.

    Examples
    --------
    >>> one = Fraction(1)
    >>> number_directions([(one, 2 * one), (0 * one, one), (-3 * one, -6 * one), (0 * one,) * 2])
    (0, 1, 0, -1)
    """
    numbers: dict[tuple[Fraction, ...], int] = {}
    found: list[int] = []
    for vector in vectors:
        lead = next((x for x in vector if x), None)
        if lead is None:
            found.append(-1)
            continue
        found.append(numbers.setdefault(tuple(x / lead for x in vector), len(numbers)))
    return tuple(found)


def whiten_residuals(residuals: Array, roots: Array) -> Whitened:
    """Make residuals independent, with sd 1.

    Parameters
    ----------
    residuals
        Runs x relations.
    roots
        Relations x sources, for all runs, or runs x relations x sources: F with P = F F', such
        as the relations times the root of the errors' covariance. P itself, which would square
        how far sds differ, is never formed: the triangle of F' = Q T is its Cholesky factor.

    Raises
    ------
    MisuseError
        Where a relation has no error of its own, or something is no number.
    TooFarApartError
        Where the errors of two relations cannot be told apart by rounding.
    """
    e = np.asarray(residuals, dtype=np.float64)
    F = np.broadcast_to(roots, (*e.shape, np.shape(roots)[-1]))
    if not (np.isfinite(e).all() and np.isfinite(F).all()):
        raise MisuseError("residuals and their errors must be finite numbers")
    scale = np.sqrt(np.square(F).sum(axis=2))
    if not (scale > 0).all():
        raise MisuseError("a relation has no error")
    triangle = np.asarray(np.linalg.qr((F / scale[:, :, None]).transpose(0, 2, 1), mode="r"))
    lower = triangle.transpose(0, 2, 1)
    if lower.shape[1] != lower.shape[2] or not (
        np.abs(np.einsum("nii->ni", lower)) > _ROUNDING
    ).all():
        raise TooFarApartError("the errors leave a combination of relations without any")
    factor = np.linalg.inv(lower) / scale[:, None, :]
    return Whitened((factor @ e[:, :, None])[:, :, 0], factor)


def weigh_suspects(whitened: Whitened, directions: Array, classes: Sequence[int]) -> SuspectArrays:
    """Weigh every suspect by itself.

    Parameters
    ----------
    directions
        Suspects x relations: what one unit of each adds to the residuals; none is zero.
    classes
        The number of each suspect's direction; see :func:`number_directions`.

    Examples
    --------
    Ethanol and CO2 should each be twice the glucose; 10.0, 18.6 and 19.6 were measured.

    >>> roots = np.array([[-2.0, 1, 0], [-2, 0, 1]]) * [0.2, 0.4, 0.4]
    >>> white = whiten_residuals(np.array([[-1.4, -0.4]]), roots)
    >>> found = weigh_suspects(white, np.array([[-2.0, -2.0], [1, 0], [0, 1]]), [0, 1, 2])
    >>> round(float(white.h[0]), 6), found.sizes.round(6).tolist()
    (6.5, [[0.45, -1.2, 0.3]])
    >>> found.h_left.round(6).tolist()
    [[3.125, 0.5, 6.125]]
    """
    f, count = whitened.residuals, len(directions)
    if len(classes) != count:
        raise MisuseError("each suspect needs the number of its direction")
    units = whitened.factor @ np.asarray(directions, dtype=np.float64).T
    norms = np.sqrt(np.square(units).sum(axis=1))
    if not (norms > 0).all():
        raise MisuseError("a suspect that changes no relation cannot be weighed")
    units /= norms[:, None, :]
    shares = (f[:, None, :] @ units)[:, 0]
    left = np.square(f[:, :, None] - units * shares[:, None, :]).sum(axis=1)
    tails = chi_squared_tails(np.square(shares), 1)
    distinct = len(set(classes))
    with np.errstate(divide="ignore"):
        p = -np.expm1(distinct * np.log1p(-tails))
    return SuspectArrays(
        h=whitened.h,
        sizes=shares / norms,
        sds=1 / norms,
        h_left=left,
        p=p,
        separation=_separations(units, shares, np.asarray(classes)),
    )


def first_group(h_left: Array, possible: NDArray[np.bool_]) -> NDArray[np.bool_]:
    """Which suspects cannot be told from the best one: h_left within 3.84 of it (95 %).

    The best is the best of those that are possible, where any is. Runs x suspects.
    """
    reach = chi_squared_quantile(0.95, 1)
    allowed = np.where(possible, h_left, np.inf).min(axis=1, initial=np.inf)
    best = np.where(np.isfinite(allowed), allowed, h_left.min(axis=1, initial=np.inf))
    return np.asarray(h_left <= best[:, None] + reach)


def weigh_pairs(
    whitened: Whitened, run: int, directions: Array, places: Sequence[int]
) -> PairArrays:
    """Weigh two suspects at once, for one run.

    With a and b the shares of two unit directions in the residuals and c their correlation, both
    together explain (a^2 + b^2 - 2 a b c) / (1 - c^2). Kept are pairs in which each is needed:
    without the other, h_left would be larger by more than 3.84.

    Parameters
    ----------
    places
        Indices of suspects of distinct directions.
    """
    f = whitened.residuals[run]
    units = whitened.factor[run] @ np.asarray(directions, dtype=np.float64)[list(places)].T
    norms = np.sqrt(np.square(units).sum(axis=0))
    units = units / norms
    shares = f @ units
    i, j = np.triu_indices(len(places), 1)
    correlation = (units.T @ units)[i, j]
    apart = np.maximum(1 - np.square(correlation), 0.0)
    kept = apart > 1e-9
    i, j, correlation, apart = i[kept], j[kept], correlation[kept], apart[kept]
    both = np.stack([
        (shares[i] - correlation * shares[j]) / apart,
        (shares[j] - correlation * shares[i]) / apart,
    ])  # fmt: skip
    # a share that the other leaves over is its own gain in h
    needed = (np.square(both) * apart > chi_squared_quantile(0.95, 1)).all(axis=0)
    i, j, both, apart = i[needed], j[needed], both[:, needed], apart[needed]
    left = f @ f - (both[0] * shares[i] + both[1] * shares[j])
    order = np.argsort(left, kind="stable")
    chosen = np.asarray(places, dtype=np.intp)
    pairs = np.stack([norms[i], norms[j]])
    return PairArrays(
        first=chosen[i[order]],
        second=chosen[j[order]],
        sizes=(both / pairs)[:, order].T,
        sds=(1 / (pairs * np.sqrt(apart)))[:, order].T,
        h_left=np.maximum(left[order], 0.0),
    )


def _separations(units: Array, shares: Array, classes: Classes) -> Array:
    """How far the nearest suspect of another direction lies: |share| sqrt(1 - largest c^2).

    Directions are compared once each, a few runs at a time.
    """
    runs, _, count = units.shape
    first = np.unique(classes, return_index=True)[1]
    place = np.searchsorted(classes[first], classes)
    if len(first) < 2:
        return np.full((runs, count), np.inf)
    sines = np.empty((runs, len(first)))
    step = max(1, _CHUNK // len(first) ** 2)
    own = np.arange(len(first))
    for start in range(0, runs, step):
        some = units[start : start + step, :, first]
        correlations = np.abs(some.transpose(0, 2, 1) @ some)
        correlations[:, own, own] = 0.0
        nearest = correlations.argmax(axis=2)
        # one less a cosine squared loses digits where directions are close; this does not
        other = np.take_along_axis(some, nearest[:, None, :], axis=2)
        cosines = (some * other).sum(axis=1)
        apart = some - other * cosines[:, None, :]
        sines[start : start + step] = np.sqrt(np.square(apart).sum(axis=1))
    return np.abs(shares) * sines[:, place]
