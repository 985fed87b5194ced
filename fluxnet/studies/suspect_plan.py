"""Suspects before the data are looked at: what each would do to the relations that are tested."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import field, replace
from fractions import Fraction
from math import inf

import numpy as np
from numpy.typing import NDArray

from fluxnet.exact.linear import Row, echelon
from fluxnet.ground.record import record
from fluxnet.network.model import Direction
from fluxnet.solving.suspects import number_directions
from fluxnet.studies.suspect_result import Standing, SuspectKind

__all__ = ["Hypothesis", "SuspectPlan", "plan_suspects"]

Array = NDArray[np.float64]


@record
class Hypothesis:
    """One suspect, of any size.

    ``effect`` is what one unit of it adds to the balances (or other equations) of the problem,
    exactly; of a measured value with ``row`` it is empty, since its column tells. ``positive``
    and ``negative`` are how it stands where its size is positive (released, spent) or negative;
    of a measured value the bounds ``low`` and ``high`` of the true value decide.
    ``is_declared``: the model itself says that it is released.
    """

    kind: SuspectKind
    name: str
    unit: str
    effect: tuple[Fraction, ...] = ()
    row: int | None = None
    direction: Direction | None = None
    positive: Standing = Standing.MEASURED
    negative: Standing = Standing.MEASURED
    low: float = -inf
    high: float = inf
    is_declared: bool = False


@record
class SuspectPlan:
    """Suspects with their effects on independent relations R y = 0 among measured values.

    ``relations`` (dof x values) is R, ``directions`` (suspects x dof) what one unit of each
    suspect adds to R y, ``classes`` the numbers of distinct directions. ``probes`` are what
    one unit of carbon, and one of electrons, add (2 x dof); None where a species with carbon
    would break what holds exactly.
    """

    hypotheses: tuple[Hypothesis, ...]
    relations: Array
    directions: Array
    classes: tuple[int, ...]
    probes: Array | None = None
    with_model: bool = False
    _twins: tuple[tuple[int, ...], ...] = field(default=(), repr=False)
    _labels: tuple[tuple[str, str], ...] = field(default=(), repr=False)

    @property
    def dof(self) -> int:
        """The number of relations."""
        return len(self.relations)

    @property
    def distinct(self) -> int:
        """The number of distinct directions."""
        return max(self.classes, default=-1) + 1

    def label(self, i: int, size: float) -> str:
        """How a suspect of some size is named: with its direction."""
        return self._labels[i][size < 0]

    def members(self, number: int) -> tuple[int, ...]:
        """The suspects of one direction."""
        return self._twins[number]


def plan_suspects(
    equations: Sequence[Row],
    exact: Sequence[bool],
    hypotheses: Sequence[Hypothesis],
    *,
    probes: int = 0,
    with_model: bool = False,
) -> SuspectPlan:
    """Reduce suspects to the relations that test them.

    Parameters
    ----------
    equations
        Equations among the measured values alone, one row each: their sum is zero. Behind the
        values each row holds what one unit of every suspect that has an ``effect`` adds.
    exact
        For each measured value whether it has no error.
    hypotheses
        In the order of those columns; the others are errors of the value in their ``row``.
    probes
        So many columns stand behind those of the suspects.

    Returns
    -------
    SuspectPlan
        Without suspects that nothing tests, and without those that would break what holds
        exactly: a relation of values without an error, or one that no measured value is in.
    """
    width = len(exact)
    extra = sum(h.row is None for h in hypotheses) + probes
    order = [*sorted(range(width), key=lambda j: exact[j]), *range(width, width + extra)]
    form = echelon([[row[j] for j in order] for row in equations], width + extra)
    place = {j: k for k, j in enumerate(order)}
    soft = width - sum(exact)
    tested = [row for row, pivot in zip(form.rows, form.pivots, strict=True) if pivot < soft]
    sharp = [row for row, pivot in zip(form.rows, form.pivots, strict=True) if pivot >= soft]
    kept: list[Hypothesis] = []
    vectors: list[tuple[Fraction, ...]] = []
    column = width
    for one in hypotheses:
        if one.row is None:
            own, column = column, column + 1
        else:
            own = one.row
        vector = tuple(row[place[own]] for row in tested)
        if any(vector) and not any(row[place[own]] for row in sharp):
            kept.append(one)
            vectors.append(vector)
    scale = [max(abs(x) for x in row[:soft]) for row in tested]
    relations = np.zeros((len(tested), width))
    for k, row in enumerate(tested):
        relations[k] = [float(row[place[j]] / scale[k]) for j in range(width)]
    probed = range(width + extra - probes, width + extra)
    is_sound = not any(row[j] for row in sharp for j in probed)
    classes = number_directions(vectors)
    twins: list[list[int]] = [[] for _ in range(max(classes, default=-1) + 1)]
    for i, number in enumerate(classes):
        twins[number].append(i)
    return SuspectPlan(
        # what an effect did is in the directions now
        tuple(replace(one, effect=()) if one.effect else one for one in kept),
        relations,
        _scaled(vectors, scale),
        classes,
        _scaled([tuple(row[j] for row in tested) for j in probed], scale) if is_sound else None,
        with_model,
        tuple(map(tuple, twins)),
        tuple(map(_labels, kept)),
    )


def _labels(one: Hypothesis) -> tuple[str, str]:
    """The names of a suspect of positive and of negative size."""
    if one.kind is SuspectKind.UNMEASURED_SPECIES:
        return f"{one.name} out", f"{one.name} in"
    name = one.name if one.direction is None else f"{one.name} {one.direction.value}"
    return name, name


def _scaled(vectors: Sequence[Sequence[Fraction]], scale: Sequence[Fraction]) -> Array:
    """Vectors over the relations as floats, each relation over its scale."""
    rows = [[float(x / s) for x, s in zip(vector, scale, strict=True)] for vector in vectors]
    return np.array(rows).reshape(len(vectors), len(scale))
