"""The standard deviation of a rate for which the table gives none."""

from __future__ import annotations

from collections.abc import Sequence

from fluxnet.ground.record import record

__all__ = ["SdRule", "assume_sds"]


@record
class SdRule:
    """An sd as a fraction of the value, and at least a fraction of the run's largest rate.

    5 % and 0.5 % unless the user says otherwise (common practice).
    """

    relative: float = 0.05
    floor: float = 0.005


def assume_sds(
    values: Sequence[float], weights: Sequence[float | None], rule: SdRule
) -> tuple[float, ...]:
    """An sd for each rate of a run.

    Parameters
    ----------
    values
        One a rate, in its own unit.
    weights
        C-mol per unit of each rate, or mol where it holds no carbon; None for what cannot be
        compared (a ratio, a flux).

    Returns
    -------
    tuple of float
        The larger of ``rule.relative`` of the value and ``rule.floor`` of the largest rate in
        C-mol, brought back to the rate's own unit.

    Examples
    --------
    >>> assume_sds([10.0, 0.1], [6.0, 2.0], SdRule())
    (0.5, 0.15)
    """
    largest = max((abs(v) * w for v, w in zip(values, weights, strict=True) if w), default=0.0)
    return tuple(
        max(rule.relative * abs(v), rule.floor * largest / w if w else 0.0)
        for v, w in zip(values, weights, strict=True)
    )
