"""What to take out of a network so that only routes above a yield are left.

A cut has a reaction of every route below the yield, and leaves at least one route above it
whole. Those of which no reaction can be spared are the minimal hitting sets of the routes
below (constrained minimal cut sets: Haedicke & Klamt 2011, from memory). All of up to a size
are found by branching: of a route not yet hit one reaction has to go.
"""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from fractions import Fraction

import numpy as np
from numpy.typing import NDArray

from fluxnet.ground.progress import Progress, silent
from fluxnet.ground.record import record
from fluxnet.studies.routes_result import Cut, Cuts, Routes

__all__ = ["MOST", "find_cuts"]

MOST = 3
"""Cuts of up to so many reactions are all found."""

_LARGEST = 4
_TRIED = 30


def find_cuts(routes: Routes, above: Fraction, progress: Progress = silent) -> Cuts:
    """The cuts that leave only routes of at least a yield, among those from the substrate.

    Where none of up to three reactions does it, those of four are looked for, and then one
    irreducible cut of any size.
    """
    yields = [
        (group.product_yield, k) for group in routes.groups for k in group.members.tolist()
        if group.product_yield is not None
    ]  # fmt: skip
    good = [(y, k) for y, k in yields if y >= above]
    low = [k for y, k in yields if y < above]
    if not good or not low:
        best = max((y for y, _ in yields), default=Fraction(0))
        words = (
            f"no route reaches {_number(above)}: the best makes {_number(best)}"
            if not good
            else "nothing has to go: every route from the substrate is that good"
        )
        return Cuts(above, len(good), len(low), (), 0, True, words)
    table = _tabulate(routes, [k for _, k in good], low)
    found: list[tuple[int, ...]] = []
    most, complete = 0, True
    try:
        for size in range(1, _LARGEST + 1):
            progress("cuts of up to so many reactions", size, _LARGEST)
            if size > MOST and found:
                break
            found += [cut for cut in _hitting(table, size) if len(cut) == size]
            most = size
        words = ""
        if not found:
            words = f"no cut of up to {most} reactions does it; a larger one that does"
            found = [_shrunk(table)]
    except KeyboardInterrupt:
        complete, words = False, f"stopped: cuts of more than {most} reactions were not looked for"
    told = [_told(table, cut, [y for y, _ in good]) for cut in found]
    order = sorted(told, key=lambda cut: (len(cut.reactions), -cut.least, -cut.left))
    return Cuts(above, len(good), len(low), tuple(order), most, complete, words)


@record
class _Table:
    """Classes of reactions that run in the same routes, each with its routes as a set of bits.

    ``members`` holds for each route below the yield the classes that run in it.
    """

    names: tuple[tuple[str, ...], ...]
    low: tuple[int, ...]
    good: tuple[int, ...]
    members: tuple[tuple[int, ...], ...]
    all_low: int
    all_good: int


def _tabulate(routes: Routes, good: Sequence[int], low: Sequence[int]) -> _Table:
    names = [r.name for r in routes.system.network.reactions]
    runs = routes.values[:, : len(names)] != 0
    both = np.concatenate([runs[low], runs[good]])
    classes: dict[bytes, list[int]] = {}
    for j in np.flatnonzero(both.any(axis=0)).tolist():
        classes.setdefault(np.packbits(both[:, j]).tobytes(), []).append(j)
    first = [members[0] for members in classes.values()]
    slim = runs[low][:, first]
    return _Table(
        tuple(tuple(names[j] for j in members) for members in classes.values()),
        tuple(_bits(runs[low, j]) for j in first),
        tuple(_bits(runs[good, j]) for j in first),
        tuple(tuple(np.flatnonzero(row).tolist()) for row in slim),
        (1 << len(low)) - 1,
        (1 << len(good)) - 1,
    )


def _bits(column: NDArray[np.bool_]) -> int:
    return int.from_bytes(np.packbits(column, bitorder="little").tobytes(), "little")


def _hitting(table: _Table, most: int) -> Iterator[tuple[int, ...]]:
    """All irreducible cuts of up to ``most`` classes, each once."""

    def extend(
        chosen: tuple[int, ...], missed: int, left: int, shut: frozenset[int]
    ) -> Iterator[tuple[int, ...]]:
        if not missed:
            if _is_irreducible(table, chosen):
                yield chosen
            return
        if len(chosen) == most:
            return
        route = (missed & -missed).bit_length() - 1
        tried = set(shut)
        for one in table.members[route]:
            if one in tried:
                continue
            tried.add(one)
            still = missed & ~table.low[one]
            if left & ~table.good[one] and (not still or len(chosen) + 1 < most):
                yield from extend(
                    (*chosen, one), still, left & ~table.good[one], frozenset(tried)
                )

    yield from extend((), table.all_low, table.all_good, frozenset())


def _is_irreducible(table: _Table, cut: Sequence[int]) -> bool:
    for spared in cut:
        hit = 0
        for one in cut:
            if one != spared:
                hit |= table.low[one]
        if hit == table.all_low:
            return False
    return True


def _shrunk(table: _Table) -> tuple[int, ...]:
    """A cut of any size: what one good route does not need, less what can be spared."""
    best: tuple[int, ...] = ()
    for route in range(min(_TRIED, table.all_good.bit_length())):
        cut = [c for c in range(len(table.names)) if not table.good[c] >> route & 1]
        cut.sort(key=lambda c: table.low[c].bit_count())
        for one in list(cut):
            hit = 0
            for other in cut:
                if other != one:
                    hit |= table.low[other]
            if hit == table.all_low:
                cut.remove(one)
        if not best or len(cut) < len(best):
            best = tuple(cut)
    return best


def _told(table: _Table, cut: Sequence[int], yields: Sequence[Fraction]) -> Cut:
    left = table.all_good
    for one in cut:
        left &= ~table.good[one]
    kept = [y for k, y in enumerate(yields) if left >> k & 1]
    return Cut(
        tuple(table.names[c][0] for c in cut),
        tuple(table.names[c][1:] for c in cut),
        len(kept),
        min(kept),
        max(kept),
    )


def _number(value: Fraction) -> str:
    return f"{float(value):.4g}"
