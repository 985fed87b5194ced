"""Which coefficients of a line to write as ``?``, so that it closes exactly."""

from __future__ import annotations

from fractions import Fraction
from itertools import combinations

from fluxnet.exact.linear import rank, solve
from fluxnet.network.line_balance import LineBalance
from fluxnet.network.model import Term

__all__ = ["terms_to_solve"]

_MOST_TERMS = 4


def terms_to_solve(line: LineBalance) -> tuple[Term, ...]:
    """The fewest terms that, written as ``?``, come out positive and close every balance.

    Rounded coefficients are preferred to whole numbers, later terms to earlier ones (a line is
    usually written per mole of what stands first). Terms that are ``?`` already count as such
    and are not named. Empty where no few terms do it, or where a gap holds parameters.
    """
    gaps: list[Fraction] = []
    for balance in line.balances:
        gap = balance.gap.constant_value
        if gap is None:
            return ()
        gaps.append(gap)
    numbers: list[tuple[int, Term, Fraction]] = []
    solved: list[tuple[int, Term, Fraction]] = []
    for sign, term in reversed(line.reaction.terms):
        number = None if term.coefficient is None else term.coefficient.constant_value
        holds = any(b.functional.of(line.contents[term.species]) for b in line.balances)
        if number is not None and holds:
            (solved if term.solved else numbers).append((sign, term, number))
    numbers.sort(key=lambda entry: entry[1].half_unit == 0)
    for size in range(1, _MOST_TERMS + 1):
        for chosen in combinations(numbers, size):
            if _closes(line, gaps, [*chosen, *solved]):
                return tuple(term for _, term, _ in reversed(chosen))
    return ()


def _closes(
    line: LineBalance, gaps: list[Fraction], chosen: list[tuple[int, Term, Fraction]]
) -> bool:
    """Whether these coefficients can be changed, in one way only, to close every gap."""
    rows = [
        [b.functional.of(line.contents[term.species]) * sign for sign, term, _ in chosen]
        for b in line.balances
    ]
    steps = solve(rows, [-g for g in gaps], len(chosen))
    if steps is None or rank(rows, len(chosen)) < len(chosen):
        return False
    return all(number + step > 0 for (_, _, number), step in zip(chosen, steps, strict=True))
