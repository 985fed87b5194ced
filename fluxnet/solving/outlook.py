"""The error that a functional of a fit would have after further measurements.

In the coordinates (u, t) of :class:`fluxnet.solving.region.Region` the fit knows u with a
covariance C and nothing of t. Of k new measurements with slopes (A, B) by (u, t) and errors s
let M = A C A' + diag(s^2). Then the best unbiased value of a functional (a, b) has the variance

    a' C a - c' M^-1 c + r' F^-1 r,   c = A C a,  r = beta - R' M^-1 c,  F = R' M^-1 R

where B = R Q' and b = Q beta: what the new measurements see of t at all, and its share in the
functional. It has no bounded variance where b is not in the span of B. (Generalised least
squares; derived here.) The formula is linear: it holds where slopes change little on the way,
and knows no bounds.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from fluxnet.ground.record import record

__all__ = ["Slopes", "sd_after"]

Vector = NDArray[np.float64]


@record
class Slopes:
    """The derivatives of functionals by u and by t, one row each."""

    seen: Vector
    unseen: Vector

    def at(self, places: list[int]) -> Slopes:
        """Those of some functionals."""
        return Slopes(self.seen[places], self.unseen[places])


def sd_after(covariance: Vector, aim: Slopes, added: Slopes, errors: Vector, rank: int) -> float:
    """The sd of one functional after adding measurements.

    Parameters
    ----------
    covariance
        That of u without them.
    aim
        The one functional; what the additions see must determine it.
    errors
        Their sds.
    rank
        That of ``added.unseen``, decided exactly.

    Examples
    --------
    Of a sum that is not known one part is measured, then the other:

    >>> aim = Slopes(np.array([[1.0]]), np.array([[1.0]]))
    >>> added = Slopes(np.array([[0.0]]), np.array([[1.0]]))
    >>> sd_after(np.eye(1), aim, added, np.array([0.75]), 1)
    1.25
    """
    a, b = aim.seen[0], aim.unseen[0]
    spread = added.seen @ covariance
    inner = spread @ added.seen.T + np.diag(errors**2)
    across = spread @ a
    solved = np.linalg.solve(inner, across)
    variance = a @ covariance @ a - across @ solved
    if rank:
        right = np.linalg.svd(added.unseen, full_matrices=False)[2][:rank].T
        narrow = added.unseen @ right
        left = right.T @ b - narrow.T @ solved
        reduced = narrow.T @ np.linalg.solve(inner, narrow)
        variance += left @ np.linalg.solve(reduced, left)
    return float(np.sqrt(max(variance, 0.0)))
