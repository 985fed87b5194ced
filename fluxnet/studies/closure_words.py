"""The verdict of a closure in one plain sentence."""

from __future__ import annotations

from collections.abc import Sequence

from fluxnet.studies.closure_result import Balance, ClosureTest

__all__ = ["verdict"]

_TWO_SIDED = 1.959964  # 95 % of a normal distribution


def verdict(
    balances: Sequence[Balance], test: ClosureTest, contradictions: Sequence[Sequence[str]]
) -> str:
    """What the balances and the test say.

    Examples
    --------
    >>> carbon = Balance("carbon", "C-mmol", 60.0, 57.0, -3.0, 2.4, -1.25, 95.0, 4.0)
    >>> verdict([carbon], ClosureTest(1.5625, 1, 0.2113, 3.8415, True), ())
    'carbon closes to 95 ± 4 %; the rates are consistent (h = 1.56 on 1 degree of freedom, \
p = 0.21); a closed balance is no proof that every rate is right'
    """
    return "; ".join([*_of_balances(balances), _of_test(test, contradictions)])


def _of_balances(balances: Sequence[Balance]) -> list[str]:
    closing: list[str] = []
    failing: list[str] = []
    untold: list[str] = []
    for balance in balances:
        if balance.missing:
            untold.append(
                f"{balance.name} cannot be told alone ({_and(balance.missing)} not measured)"
            )
        elif balance.recovery is not None:
            rate = _per_cent(balance.recovery, balance.recovery_sd)
            if _closes(balance):
                verb = "" if closing else " close" if _is_plural(balance.name) else " closes"
                closing.append(f"{balance.name}{verb} to {rate}")
            else:
                verb = "do" if _is_plural(balance.name) else "does"
                failing.append(f"{balance.name} {verb} not close: {rate}")
    return [*([", ".join(closing)] if closing else []), *failing, *untold]


def _is_plural(name: str) -> bool:
    return name == "electrons"


def _closes(balance: Balance) -> bool:
    """Whether the gap is within its error, or within rounding where it has none."""
    if balance.z is not None:
        return abs(balance.z) <= _TWO_SIDED
    return abs(balance.gap) <= 1e-9 * (balance.taken + balance.released)


def _of_test(test: ClosureTest, contradictions: Sequence[Sequence[str]]) -> str:
    if contradictions:
        sets = " and ".join(_and(names) for names in contradictions)
        return f"values given as exact contradict one another: {sets}"
    if test.h is None or test.p is None or test.limit is None:
        return (
            "nothing is redundant: no measured rate can be tested against the others, and there "
            "is no h"
        )
    freedom = f"{test.dof} degree{'s' if test.dof > 1 else ''} of freedom"
    if test.closes:
        return (
            f"the rates are consistent (h = {_three(test.h)} on {freedom}, p = {_two(test.p)}); "
            "a closed balance is no proof that every rate is right"
        )
    return (
        f"the rates contradict one another (h = {_three(test.h)} on {freedom}, the limit is "
        f"{_three(test.limit)}, p = {_two(test.p)}): one of them is wrong, or something that is "
        "exchanged has no row"
    )


def _and(names: Sequence[str]) -> str:
    return names[0] if len(names) == 1 else f"{', '.join(names[:-1])} and {names[-1]}"


def _per_cent(value: float, sd: float | None) -> str:
    """A recovery with as many decimals as its sd allows."""
    if not sd:
        return f"{value:.1f} %"
    decimals = 0 if sd >= 2 else 1 if sd >= 0.2 else 2
    return f"{value:.{decimals}f} ± {sd:.{decimals}f} %"


def _three(value: float) -> str:
    return f"{value:.3g}" if 1e-3 <= abs(value) < 1e6 or value == 0 else f"{value:.1e}"


def _two(p: float) -> str:
    return f"{p:.2g}" if p >= 1e-4 else f"{p:.0e}"
