"""A loop that makes one thing out of nothing: an irreducible set of reactions, exact."""

from __future__ import annotations

from collections.abc import Collection, Sequence
from fractions import Fraction
from math import gcd, lcm

import numpy as np
from numpy.typing import NDArray

from fluxnet.checks.cone import Cone, Form, FormKind
from fluxnet.checks.interior import ConeRows, cone_rows
from fluxnet.exact.sparse import null_space, point_near, product
from fluxnet.solving.linear import Outcome, Programme
from fluxnet.solving.problem import Problem

__all__ = ["exact_vertex", "find_loop", "whole_numbers"]

Vector = NDArray[np.float64]

# Fluxes below this share of the largest are what the solver leaves of zero.
_NOTHING = 1e-8
_HUGE = 10_000


def find_loop(cone: Cone, aim: Form) -> tuple[Fraction, ...] | None:
    """An irreducible set of reactions with which a cone opens one of its sides.

    The least total flux gives a short set; then every reaction is left out in turn, and stays
    out where the rest still opens the side.

    Parameters
    ----------
    aim
        One of the cone's sides.

    Returns
    -------
    tuple of Fraction or None
        One flux a reaction, in whole numbers where these are not huge; None where no vector
        was found that meets the cone exactly.
    """
    rows = cone_rows(cone)
    programme = _Search(cone, aim, rows)
    scaled = programme.least(range(len(cone.reactions)))
    if scaled is None:
        return None
    needed = _support(scaled)
    for j in tuple(needed):
        rest = [k for k in needed if k != j]
        if j in needed and rest and (shorter := programme.least(rest)) is not None:
            scaled, needed = shorter, _support(shorter)
    found = exact_vertex(cone, aim, rows, scaled)
    return None if found is None else whole_numbers(found)


def exact_vertex(
    cone: Cone, aim: Form, rows: ConeRows, scaled: Vector
) -> tuple[Fraction, ...] | None:
    """The exact vector of a cone beside a vertex in floats, times what makes the aim 1.

    Parameters
    ----------
    rows, scaled
        The cone in floats, and its unknowns (fluxes over ``rows.scale``) at the vertex.

    Returns
    -------
    tuple of Fraction or None
        None where it would leave the cone, or where the aim vanishes.
    """
    support = _support(scaled)
    place = {j: k for k, j in enumerate(support)}
    size = float(np.abs(scaled).max(initial=0.0))
    values = rows.matrix @ scaled
    magnitudes = np.abs(rows.matrix) @ np.abs(scaled)
    held = list(cone.equal)
    for k, i in rows.row_of.items():
        near_zero = abs(values[i]) <= _NOTHING * max(size, magnitudes[i])
        if cone.sides[k] is not aim and near_zero:
            held.append(cone.sides[k])
    forms = [{place[j]: a for j, a in form.row.items() if j in place} for form in held]
    fluxes = (scaled * rows.scale).tolist()
    point = point_near(null_space(forms, len(support)), [fluxes[j] for j in support])
    found = dict(zip(support, point, strict=True))
    exact = tuple(found.get(j, Fraction(0)) for j in range(len(cone.reactions)))
    amount = product(aim.row, exact)
    if amount <= 0 or any(product(side.row, exact) < 0 for side in cone.sides):
        return None
    return tuple(v / amount for v in exact)


def whole_numbers(values: Sequence[Fraction]) -> tuple[Fraction, ...]:
    """The values in smallest whole numbers of the same proportions, unless these are huge.

    Examples
    --------
    >>> from fractions import Fraction
    >>> whole_numbers([Fraction(1, 2), Fraction(3, 4)])
    (Fraction(2, 1), Fraction(3, 1))
    """
    factor = lcm(*(v.denominator for v in values))
    whole = [int(v * factor) for v in values]
    shared = gcd(*whole) or 1
    if max(map(abs, whole), default=0) // shared > _HUGE:
        return tuple(values)
    return tuple(Fraction(n // shared) for n in whole)


class _Search:
    """The least total flux that brings the aim to 1 with some of the reactions."""

    def __init__(self, cone: Cone, aim: Form, rows: ConeRows) -> None:
        self.both = [j for j in range(len(cone.reactions)) if rows.low[j] < 0]
        self.count = len(cone.reactions)
        names = (*cone.reactions, *(f"{cone.reactions[j]} backwards" for j in self.both))
        place = next(k for k, side in enumerate(cone.sides) if side is aim)
        low, high = np.zeros(len(rows.labels)), rows.high.copy()
        if aim.kind is FormKind.DIRECTION:
            raise ValueError("a reaction's direction is no aim of a loop")
        low[rows.row_of[place]] = high[rows.row_of[place]] = 1.0
        self.programme = Programme(
            Problem(
                columns=names,
                rows=rows.labels,
                matrix=np.hstack([rows.matrix, -rows.matrix[:, self.both]]),
                row_low=low,
                row_high=high,
                column_low=np.zeros(len(names)),
                column_high=np.full(len(names), np.inf),
            )
        )

    def least(self, reactions: Collection[int]) -> Vector | None:
        """The scaled fluxes, or None where these reactions cannot do it."""
        allowed = set(reactions)
        for j in range(self.count):
            self.programme.set_column_bounds(j, 0.0, np.inf if j in allowed else 0.0)
        for k, j in enumerate(self.both):
            top = np.inf if j in allowed else 0.0
            self.programme.set_column_bounds(self.count + k, 0.0, top)
        columns = self.count + len(self.both)
        solution = self.programme.minimise(np.ones(columns))
        if solution.outcome is not Outcome.OPTIMAL:
            return None
        fluxes = solution.fluxes[: self.count].copy()
        fluxes[self.both] -= solution.fluxes[self.count :]
        return fluxes


def _support(scaled: Vector) -> list[int]:
    sizes = np.abs(scaled)
    return [int(j) for j in np.flatnonzero(sizes > _NOTHING * sizes.max(initial=0.0))]
