"""All elementary modes of a cone, exact: one direction after another is imposed on all rays.

The double description method (Motzkin et al. 1953) on the null space of the balances, with the
signs of the columns dealt with as patterns of bits (Wagner 2004; Gagneur & Klamt 2004; from
memory). It starts with the rays that the free coordinates alone would allow. A further column is
imposed by joining each ray on which it is positive with each one on which it is negative, if the
two are neighbours: if no third ray runs on a part of the columns that the two run on. Of a
column that runs one way the negative rays are dropped. A column that runs both ways counts as
two, of which no mode has both.

What a stopped search holds is not lost: a ray that meets all directions is a mode, whatever was
still to be imposed.
"""

from __future__ import annotations

from enum import Enum
from fractions import Fraction

import numpy as np
from numpy.typing import NDArray

from fluxnet.ground.progress import Progress, silent
from fluxnet.ground.record import record
from fluxnet.modes.compression import SmallCone, compress
from fluxnet.modes.cone import Cone
from fluxnet.modes.pairs import room_for, small_unions
from fluxnet.modes.subsets import holds_third, plant
from fluxnet.modes.whole import Whole, combined, reduced, times, whole_rows

__all__ = ["Ending", "Modes", "Step", "find_modes"]

class Ending(Enum):
    """How a search ended."""

    COMPLETE = "complete"
    INTERRUPTED = "interrupted"
    MEMORY = "memory"


@record
class Step:
    """One column imposed: how many rays there were before, pairs looked at, and rays after."""

    column: str
    before: int
    pairs: int
    after: int


@record
class Modes:
    """Elementary modes in smallest whole numbers, shape (modes, columns of the cone).

    A mode that runs both ways stands once. ``ending`` other than COMPLETE: there are more.
    ``held`` is the number of rays in work when the search ended, ``needed`` the bytes that the
    next step would have taken where memory ended it.
    """

    columns: tuple[str, ...]
    values: Whole
    blocked: tuple[int, ...]
    ending: Ending
    steps: tuple[Step, ...]
    held: int
    needed: int = 0

    @property
    def count(self) -> int:
        """The number of modes."""
        return len(self.values)


def find_modes(
    cone: Cone, *, memory: float | None = None, beside: int = 0, progress: Progress = silent
) -> Modes:
    """All elementary modes, or, where the search is stopped, those found until then.

    Parameters
    ----------
    memory
        The most bytes that rays and modes may take; None is no bound.
    beside
        The bytes that whoever asks will need for each mode.
    progress
        Told the columns imposed, with the number of rays. Ctrl-C ends the search with what it
        has.

    Examples
    --------
    >>> from fractions import Fraction
    >>> one = Fraction(1)
    >>> rows = ({0: one, 1: -2 * one, 2: -one},)
    >>> modes = find_modes(Cone(("a", "b", "c"), (False, False, True), rows))
    >>> sorted(modes.values.tolist()), modes.ending.value
    ([[0, 1, -2], [1, 0, 1], [2, 1, 0]], 'complete')
    """
    small = compress(cone)
    rays = _Rays(cone, small, memory, beside)
    ending = Ending.COMPLETE
    try:
        while rays.waiting:
            progress(f"{len(rays.values):,} routes in work; reactions", *rays.progress())
            if not rays.impose(rays.next_column()):
                ending = Ending.MEMORY
                break
    except KeyboardInterrupt:
        ending = Ending.INTERRUPTED
    found = rays.modes()
    return Modes(
        cone.columns, _lifted(found, small, len(cone.columns)), small.blocked, ending,
        tuple(rays.steps), len(rays.values), rays.needed,
    )  # fmt: skip


class _Rays:
    """The rays of the columns imposed so far: fluxes of the groups, and patterns of bits."""

    def __init__(
        self, cone: Cone, small: SmallCone, memory: float | None, beside: int = 0
    ) -> None:
        self.names = [cone.columns[g.members[0][0]] for g in small.groups]
        self.both_ways = np.array([g.both_ways for g in small.groups], dtype=bool)
        self.memory, self.needed, self._room = memory, 0, 0
        self.steps: list[Step] = []
        self.waiting = [j for j in range(len(small.groups)) if j not in small.free]
        self._bits(small)
        self.values = _first_rays(small, self.both_ways)
        self.patterns = np.zeros((len(self.values), self.words), dtype=np.uint64)
        for j in small.free:
            self._mark(self.values, self.patterns, j)
        self._wide = 8 * (len(small.groups) + self.words)
        self._lifted = 16 * len(cone.columns) + beside

    def progress(self) -> tuple[int, int]:
        """Columns imposed, and all columns."""
        return len(self.names) - len(self.waiting), len(self.names)

    def next_column(self) -> int:
        """The column that costs least: with the fewest pairs of rays of opposite signs."""
        some = self.values[:, self.waiting]
        pairs = (some > 0).sum(axis=0) * (some < 0).sum(axis=0)
        order = np.lexsort((self.both_ways[self.waiting], pairs))
        return self.waiting[int(order[0])]

    def impose(self, j: int) -> bool:
        """Impose one column; False, with nothing changed, where memory does not allow it."""
        column = self.values[:, j]
        up, down = np.flatnonzero(column > 0), np.flatnonzero(column < 0)
        kept = np.arange(len(column)) if self.both_ways[j] else np.flatnonzero(column >= 0)
        joined = self._neighbours(up, down, len(kept))
        if joined is None:
            return False
        left, right = joined
        new = combined(self.values[left], -column[right], self.values[right], column[left])
        unions = self.patterns[left] | self.patterns[right]
        before = len(self.values)
        patterns = np.concatenate([self.patterns[kept], unions])
        values = np.concatenate([self.values[kept], new])
        self._mark(values, patterns, j)
        self.values, self.patterns = values, patterns
        self.waiting = [k for k in self.waiting if k != j]
        pairs = len(up) * len(down)
        self.steps.append(Step(self.names[j], before, pairs, len(values)))
        return True

    def modes(self) -> Whole:
        """The rays that meet every direction, those that run both ways once."""
        one_way = [j for j in self.waiting if not self.both_ways[j]]
        values = self.values[(self.values[:, one_way] >= 0).all(axis=1)]
        if not len(values):
            return values
        turning = ~(values[:, ~self.both_ways] != 0).any(axis=1)
        first = (values != 0).argmax(axis=1)
        backwards = turning & (values[np.arange(len(values)), first] < 0)
        return np.asarray(values[~backwards])

    def _neighbours(
        self, up: NDArray[np.intp], down: NDArray[np.intp], kept: int
    ) -> tuple[NDArray[np.intp], NDArray[np.intp]] | None:
        """Pairs of neighbours, as places of rays; None where there are too many to hold."""
        left, right = [np.zeros(0, dtype=np.intp)], [np.zeros(0, dtype=np.intp)]
        count = 0
        if len(up) and len(down):
            # Neighbours are zero together on all but two of the dimensions.
            most = 2 + len(self.steps)
            self._room = room_for(len(up), len(down), self.words)
            if not self._fits(kept):
                return None
            tree = plant(self.patterns)
            portions = small_unions(self.patterns[up], self.patterns[down], most, self.turning)
            for some in portions:
                good = ~holds_third(tree, some.unions)
                left.append(up[some.left[good]])
                right.append(down[some.right[good]])
                count += len(left[-1])
                if not self._fits(kept + count):
                    return None
        return np.concatenate(left), np.concatenate(right)

    def _fits(self, after: int) -> bool:
        """Whether so many rays can be held beside those at hand, and lifted at the end."""
        wide = self._wide * (5 if self.values.dtype == object else 1)
        step = wide * (len(self.values) + 2 * after) + 16 * after
        self.needed = int(max(step, (wide + self._lifted) * after) + self._room)
        return self.memory is None or self.needed <= self.memory

    def _bits(self, small: SmallCone) -> None:
        """Give each group its bit, a two-way group an even one and the next."""
        self.bit = np.zeros(len(small.groups), dtype=np.intp)
        place = 0
        for j in sorted(range(len(small.groups)), key=lambda j: not self.both_ways[j]):
            self.bit[j] = place
            place += 2 if self.both_ways[j] else 1
        self.words = -(-max(place, 1) // 64)
        self.turning = np.zeros(self.words, dtype=np.uint64)
        for j in np.flatnonzero(self.both_ways).tolist():
            self.turning[self.bit[j] // 64] |= np.uint64(1) << np.uint64(self.bit[j] % 64)

    def _mark(self, values: Whole, patterns: NDArray[np.uint64], j: int) -> None:
        """Set the bits of a column that is imposed now."""
        word, bit = divmod(int(self.bit[j]), 64)
        patterns[:, word] |= (values[:, j] > 0).astype(np.uint64) << np.uint64(bit)
        if self.both_ways[j]:
            patterns[:, word] |= (values[:, j] < 0).astype(np.uint64) << np.uint64(bit + 1)


def _first_rays(small: SmallCone, both_ways: NDArray[np.bool_]) -> Whole:
    """The rays that the free coordinates span: each one by itself, two-way ones both ways."""
    rows: list[list[Fraction]] = []
    for t, j in enumerate(small.free):
        row = [form.get(t, Fraction(0)) for form in small.forms]
        rows.append(row)
        if both_ways[j]:
            rows.append([-v for v in row])
    return whole_rows(rows, len(small.groups))


def _lifted(values: Whole, small: SmallCone, columns: int) -> Whole:
    """The fluxes of all columns of the first cone, in smallest whole numbers."""
    matrix: Whole = np.zeros((len(small.groups), columns), dtype=object)
    for k, group in enumerate(small.groups):
        for j, factor in group.members:
            matrix[k, j] = int(factor)
    if all(abs(v) < 2**31 for v in matrix.flat):
        matrix = matrix.astype(np.int64)
    return reduced(times(values, matrix))
