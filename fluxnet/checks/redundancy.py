"""Which measured values others test, and what to measure so that each of them is tested.

A gross error shows itself only in a value that the others contradict: one that takes part in
a dependency. With a single dependency it shows, and fits each of the values alike; two are
needed to tell which one is wrong.
"""

from __future__ import annotations

from collections.abc import Sequence
from itertools import combinations, islice
from math import comb

from fluxnet.exact.sparse import SparseRow, dependent_forms, independent_forms
from fluxnet.ground.record import record

__all__ = ["Addition", "find_addition"]

ENOUGH = 2
"""Dependencies that it takes to tell which value is wrong."""

_TRIALS = 300
"""So many smaller additions are tried at most, the usual rates first."""


@record
class Addition:
    """What to measure beside some values, so that an error in each of them shows.

    Places: ``untested`` are the values that none of the others tests, ``added`` the offered
    ones of a smallest addition that tests them all, with two dependencies in it; ``never``
    the values that nothing offered can test. ``redundancy`` counts the dependencies then.
    """

    untested: tuple[int, ...]
    added: tuple[int, ...]
    never: tuple[int, ...]
    redundancy: int


def find_addition(
    measured: Sequence[SparseRow], offered: Sequence[SparseRow], wanted: Sequence[int]
) -> Addition:
    """The smallest addition after which all that can be tested is.

    More values never make a tested one untested, so what can be spared is left out one by one,
    the most unusual first; then smaller additions are tried.

    Parameters
    ----------
    measured
        The forms of the values, in the coordinates of what the balances allow.
    offered
        Those of what could be measured besides, the usual ones first.
    wanted
        The places of the measured ones that are to be tested.
    """

    def state(chosen: Sequence[int]) -> tuple[set[int], int]:
        forms = [*measured, *(offered[i] for i in chosen)]
        marks = dependent_forms(forms)
        return {i for i in wanted if marks[i]}, len(forms) - len(independent_forms(forms))

    now, _ = state(())
    everything = list(range(len(offered)))
    most, most_redundancy = state(everything)
    least = min(ENOUGH, most_redundancy)

    def serves(chosen: Sequence[int]) -> bool:
        tested, redundancy = state(chosen)
        return redundancy >= least and tested == most

    chosen = everything
    for i in reversed(everything):
        without = [k for k in chosen if k != i]
        if serves(without):
            chosen = without
    smaller = _smaller(len(offered), len(chosen))
    chosen = next((list(trial) for trial in smaller if serves(trial)), chosen)
    return Addition(
        untested=tuple(i for i in wanted if i not in now),
        added=tuple(chosen),
        never=tuple(i for i in wanted if i not in most),
        redundancy=state(chosen)[1],
    )


def _smaller(count: int, size: int) -> list[tuple[int, ...]]:
    """Smaller sets, the smallest first, as long as there are not too many of one size."""
    sizes = [k for k in range(size) if comb(count, k) <= _TRIALS]
    return [t for k in sizes for t in islice(combinations(range(count), k), _TRIALS)]
