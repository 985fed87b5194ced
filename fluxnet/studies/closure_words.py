"""The verdict of a closure in one plain sentence."""

from __future__ import annotations

from collections.abc import Sequence
from math import floor, log10

from fluxnet.studies.closure_result import Balance, ClosureTest

__all__ = ["verdict"]

_TWO_SIDED = 1.959964  # 95 % of a normal distribution


def verdict(
    balances: Sequence[Balance],
    test: ClosureTest,
    contradictions: Sequence[Sequence[str]],
    *,
    exact: bool = False,
) -> str:
    """What the balances and the test say; ``exact``: values without an error fix one another.

    Examples
    --------
    >>> carbon = Balance("carbon", "C-mmol", 60.0, 57.0, -3.0, 2.4, -1.25, 95.0, 4.0)
    >>> verdict([carbon], ClosureTest(1.5625, 1, 0.2113, 3.8415, True), ())
    'Carbon closes to 95 ± 4 %; the rates agree (h = 1.56 on 1 degree of freedom, p = 0.21).'
    """
    closing = [b for b in balances if b.recovery is not None and _closes(b)]
    failing = [b for b in balances if b.recovery is not None and not _closes(b)]
    parts = [
        _of_closing(closing),
        _of_failing(failing),
        _of_sourceless([b for b in balances if not b.taken and b.released > 0]),
        _of_missing([b for b in balances if b.missing]),
        _of_test(
            test, contradictions, is_surprise=bool(closing) and not failing, exact=exact
        ),
    ]
    text = "; ".join(part for part in parts if part)
    return f"{text[0].upper()}{text[1:]}."


def _of_closing(balances: Sequence[Balance]) -> str:
    told = [f"{b.name} to {_per_cent(b)}" for b in balances]
    if not told:
        return ""
    told[0] = f"{balances[0].name} {_verb(balances[0], 'close')} to {_per_cent(balances[0])}"
    return ", ".join(told)


def _of_failing(balances: Sequence[Balance]) -> str:
    if not balances:
        return ""
    verb = "do" if len(balances) > 1 else _verb(balances[0], "do", "does")
    return f"{_and([f'{b.name} ({_per_cent(b)})' for b in balances])} {verb} not close"


def _of_sourceless(balances: Sequence[Balance]) -> str:
    if not balances:
        return ""
    verb = "are" if len(balances) > 1 else _verb(balances[0], "are", "is")
    return f"no {' and no '.join(b.name for b in balances)} {verb} taken up"


def _of_missing(balances: Sequence[Balance]) -> str:
    """Balances without a recovery, those that lack the same species together."""
    groups: dict[tuple[str, ...], list[str]] = {}
    for balance in balances:
        groups.setdefault(balance.missing, []).append(balance.name)
    told = [f"{_and(n)} none ({_and(lacked)} not measured)" for lacked, n in groups.items()]
    if told:
        many = len(next(iter(groups.values()))) > 1
        verb = "have" if many else _verb(balances[0], "have", "has")
        told[0] = told[0].replace(" none (", f" {verb} no recovery (", 1)
    return ", ".join(told)


def _of_test(
    test: ClosureTest, contradictions: Sequence[Sequence[str]], *, is_surprise: bool, exact: bool
) -> str:
    if contradictions:
        return _of_exact(contradictions)
    if test.h is None and exact:
        return "the exact values agree, and without errors nothing is tested"
    if test.h is None or test.p is None or test.limit is None:
        return "no rate can be tested, since nothing is redundant"
    freedom = f"on {test.dof} degree{'s' if test.dof > 1 else ''} of freedom"
    if test.closes:
        return f"the rates agree (h = {_three(test.h)} {freedom}, {_p(test.p)})"
    return (
        f"{'yet ' if is_surprise else ''}the rates contradict one another (h = {_three(test.h)} "
        f"{freedom}, limit {_three(test.limit)}, {_p(test.p)}): one is wrong, or something "
        "exchanged has no row"
    )


def _of_exact(contradictions: Sequence[Sequence[str]]) -> str:
    """What is given as exact and cannot be: by itself, or beside other such values."""
    alone = [names[0] for names in contradictions if len(names) == 1]
    sets = [_and(names) for names in contradictions if len(names) > 1]
    told = []
    if alone:
        verb = "are" if len(alone) > 1 else "is"
        told.append(f"{_and(alone)} {verb} given as exact, and no balance allows it")
    if sets:
        told.append(f"values given as exact contradict one another: {', and '.join(sets)}")
    return "; ".join(told)


def _closes(balance: Balance) -> bool:
    """Whether the gap is within its error, or within rounding where it has none."""
    if balance.z is not None:
        return abs(balance.z) <= _TWO_SIDED
    return abs(balance.gap) <= 1e-9 * (balance.taken + balance.released)


def _verb(balance: Balance, plural: str, singular: str | None = None) -> str:
    return plural if balance.name == "electrons" else singular or f"{plural}s"


def _and(names: Sequence[str]) -> str:
    return names[0] if len(names) == 1 else f"{', '.join(names[:-1])} and {names[-1]}"


def _per_cent(balance: Balance) -> str:
    """A recovery, as many decimals as its sd allows (two digits of an sd up to 35)."""
    value, sd = balance.recovery or 0.0, balance.recovery_sd
    if not sd:
        return f"{value:.1f} %".replace(".0 %", " %")
    exponent = floor(log10(sd))
    decimals = 1 - exponent if sd / 10.0 ** (exponent - 1) <= 35.5 else -exponent
    shown = max(0, decimals)
    return f"{round(value, decimals):.{shown}f} ± {round(sd, decimals):.{shown}f} %"


def _three(value: float) -> str:
    if 1e3 <= value < 1e7:
        return f"{value:.0f}"
    return f"{value:.3g}" if value == 0 or 1e-3 <= value < 1e3 else f"{value:.1e}"


def _p(p: float) -> str:
    return "p < 0.001" if p < 0.001 else f"p = {p:.2g}"
