"""Numbers of a model and its rates that lie too far apart to be computed with."""

from __future__ import annotations

from collections.abc import Iterator
from fractions import Fraction

from fluxnet.ground.diagnostic import Diagnostic
from fluxnet.ground.names import Name
from fluxnet.ground.source import Span
from fluxnet.network.amounts import number_text
from fluxnet.network.model import Network
from fluxnet.rates.measured import Run

__all__ = ["find_numbers_apart", "find_sds_apart"]

_APART = 10**5


def find_numbers_apart(network: Network, run: Run | None, reason: str) -> Diagnostic | None:
    """The two numbers of a model and a run that lie farthest apart, told as the cause of a failure.

    Parameters
    ----------
    reason
        What failed, as a clause.

    Returns
    -------
    Diagnostic or None
        None where the numbers lie within five decades: the failure has another cause.
    """
    numbers = sorted((*_numbers(network), *_rates(run)), key=lambda found: found[0])
    if not numbers or numbers[-1][0] < _APART * numbers[0][0]:
        return None
    (least, what, small), (most, which, large) = numbers[0], numbers[-1]
    return Diagnostic(
        Name.BEYOND_PRECISION,
        f"{which} {number_text(most)} and {what} {number_text(least)} lie too far apart to be "
        "computed with",
        large,
        because=reason,
        mend="write them in another unit, or check them",
        also=(small,),
    )


def find_sds_apart(run: Run | None, reason: str) -> Diagnostic | None:
    """The smallest and the largest sd of a run, told as the cause of a failure; None without two.

    Parameters
    ----------
    reason
        What failed, as a clause.
    """
    sds = [(Fraction(r.sd), r) for r in (() if run is None else run.rates) if r.sd]
    if run is None or len(sds) < 2:
        return None
    (least, small), (most, large) = (pick(sds, key=lambda s: s[0]) for pick in (min, max))
    return Diagnostic(
        Name.BEYOND_PRECISION,
        f"run {run.name}: the sd of {small.quantity}, {number_text(least)}, and that of "
        f"{large.quantity}, {number_text(most)}, lie too far apart to be weighed beside each other",
        small.span,
        because=reason,
        mend=f"check these two sds and the rates' units, or leave one out: --unmeasured "
        f'"{large.quantity.name or large.quantity}"',
        also=(large.span,),
    )


def _numbers(network: Network) -> Iterator[tuple[Fraction, str, Span]]:
    """The size of every coefficient and limit that is not zero, with its name and place."""
    values = {p.name: p.value for p in network.parameters}
    for reaction in network.reactions:
        for _, term in reaction.terms:
            if term.coefficient is None:
                continue
            size = abs(term.coefficient.exact(values))
            if size:
                yield size, f"the coefficient of {term.species} in {reaction.name}", term.span
    for limit in network.limits:
        for bound in (limit.low, limit.high):
            if bound:
                yield abs(bound), f"the limit on {limit.quantity}", limit.span


def _rates(run: Run | None) -> Iterator[tuple[Fraction, str, Span]]:
    """The size of every measured rate and sd that is not zero."""
    for rate in () if run is None else run.rates:
        if rate.value:
            yield abs(Fraction(rate.value)), f"the rate of {rate.quantity}", rate.span
        if rate.sd:
            yield Fraction(rate.sd), f"the sd of {rate.quantity}", rate.span
