"""Chi-squared tails and quantiles for whole degrees of freedom, as finite sums.

With a whole number of degrees of freedom the tail of the chi-squared distribution is a
finite sum (and for odd numbers the complementary error function), so no library of
special functions has to be loaded for it.
"""

from __future__ import annotations

from functools import lru_cache
from math import erfc, exp, fsum, inf, isnan, lgamma, log, sqrt

import numpy as np
from numpy.typing import NDArray

from fluxnet.ground.errors import MisuseError

__all__ = ["chi_squared_quantile", "chi_squared_tail", "chi_squared_tails"]


def chi_squared_tail(h: float, dof: int) -> float:
    """Probability that a chi-squared variable exceeds ``h``: the p of a test value.

    For even dof the tail is exp(-x) sum_{i < dof/2} x^i / i! with x = h/2; for odd dof it is
    erfc(sqrt(x)) + exp(-x) sum_{i=1}^{(dof-1)/2} x^(i-1/2) / Gamma(i+1/2) (repeated
    integration by parts of the density; formulas from memory).

    Parameters
    ----------
    h
        The test value, 0 or more; infinity gives 0.
    dof
        Degrees of freedom, at least 1.

    Raises
    ------
    MisuseError
        Where ``h`` is NaN or negative, or ``dof`` is below 1.

    Examples
    --------
    >>> round(chi_squared_tail(6.5, 2), 5), round(chi_squared_tail(3.841458820694, 1), 6)
    (0.03877, 0.05)
    """
    if isnan(h) or h < 0:
        raise MisuseError(f"a test value is 0 or more, not {h}")
    if dof < 1:
        raise MisuseError(f"a chi-squared tail needs at least 1 degree of freedom, not {dof}")
    x = h / 2
    if x == 0:
        return 1.0
    if x == inf:
        return 0.0
    half = 0.0 if dof % 2 == 0 else 0.5
    start = 0 if dof % 2 == 0 else 1
    stop = dof // 2 + start
    terms = [exp((i - half) * log(x) - x - lgamma(i - half + 1)) for i in range(start, stop)]
    return min(1.0, fsum([*terms, erfc(sqrt(x))] if half else terms))


def chi_squared_tails(h: NDArray[np.float64], dof: int) -> NDArray[np.float64]:
    """:func:`chi_squared_tail` of each of many test values with the same ``dof``.

    Parameters
    ----------
    h
        Test values, of any shape.
    dof
        Degrees of freedom, at least 1.

    Raises
    ------
    MisuseError
        As :func:`chi_squared_tail`.

    Examples
    --------
    >>> chi_squared_tails(np.array([0.0, 6.5]), 2).round(5).tolist()
    [1.0, 0.03877]
    """
    h = np.asarray(h, dtype=np.float64)
    if np.isnan(h).any() or (h < 0).any():
        raise MisuseError("test values are 0 or more and never NaN")
    if dof < 1:
        raise MisuseError(f"a chi-squared tail needs at least 1 degree of freedom, not {dof}")
    x = np.minimum(h, 1e300) / 2
    odd = dof % 2
    logarithm = np.log(np.where(x > 0, x, 1.0))
    total = np.zeros(x.shape)
    if odd:
        flat = (erfc(v) for v in np.sqrt(x).ravel().tolist())
        total += np.fromiter(flat, dtype=np.float64, count=x.size).reshape(x.shape)
    for i in range(odd, dof // 2 + odd):
        power = i - odd / 2
        total += np.exp(power * logarithm - x - lgamma(power + 1))
    return np.where(x > 0, np.minimum(total, 1.0), 1.0)


@lru_cache(maxsize=256)
def chi_squared_quantile(p: float, dof: int) -> float:
    """Find the value that a chi-squared variable stays below with probability ``p``.

    Found by bisection on :func:`chi_squared_tail` to the last digit.

    Parameters
    ----------
    p
        Probability, 0 <= p < 1; 0.95 gives the usual critical value.
    dof
        Degrees of freedom, at least 1.

    Raises
    ------
    MisuseError
        Where ``p`` is outside [0, 1) or ``dof`` is below 1.

    Examples
    --------
    >>> round(chi_squared_quantile(0.95, 1), 3), round(chi_squared_quantile(0.95, 2), 3)
    (3.841, 5.991)
    """
    if not 0 <= p < 1:
        raise MisuseError(f"a quantile needs a probability in [0, 1), not {p}")
    tail = 1 - p
    low, high = 0.0, float(max(dof, 1))
    while chi_squared_tail(high, dof) > tail:
        low, high = high, 2 * high
    while True:
        middle = (low + high) / 2
        if middle in (low, high):
            return high if p else 0.0
        if chi_squared_tail(middle, dof) > tail:
            low = middle
        else:
            high = middle
