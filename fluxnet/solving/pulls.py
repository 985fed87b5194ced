"""The bounds that hold a fit back, by name, and the fluxes that they pull."""

from __future__ import annotations

import numpy as np

from fluxnet.ground.source import NOWHERE, Span
from fluxnet.solving.bound_test import find_pressures
from fluxnet.solving.build import Built
from fluxnet.solving.classify import Structure
from fluxnet.solving.flux_fit import BoundKind, PressingBound
from fluxnet.solving.problem import RowKind
from fluxnet.solving.region import Region
from fluxnet.solving.task import Task

__all__ = ["pressing_bounds"]

_LEAST = 1e-6
"""A bound that shifts the fit by less than this, in sd, is none."""


def pressing_bounds(
    built: Built, task: Task, region: Region, structure: Structure
) -> tuple[PressingBound, ...]:
    """The bounds that press on a fit, the strongest first.

    Several bounds on the same thing (the role of a product and the direction of the one
    reaction that makes it) press as one: the solver names one of them.
    """
    determined = np.flatnonzero(structure.determined)
    gradients = (region.point.tangent @ region.seen)[determined]
    sds = np.linalg.norm(gradients, axis=1)
    known = sds > 1e-12 * max(float(sds.max(initial=0.0)), 1e-300)
    determined, gradients, sds = determined[known], gradients[known], sds[known]
    found: list[tuple[float, PressingBound]] = []
    for pressure in find_pressures(region):
        size = float(np.linalg.norm(pressure.shift))
        if size < _LEAST:
            continue
        pulls = gradients @ pressure.shift / sds
        pulled, pull = None, None
        if len(pulls):
            most = int(np.argmax(np.abs(pulls)))
            pulled = built.problem.columns[int(determined[most])]
            pull = float(pulls[most])
        kind, name, value, span = _identity(built, task, region, pressure.source)
        found.append((size, PressingBound(kind, name, value, pulled, pull, span)))
    found.sort(key=lambda pair: -pair[0])
    return tuple(bound for _, bound in found)


def _identity(
    built: Built, task: Task, region: Region, source: int
) -> tuple[BoundKind, str, float, Span]:
    """What a bound is: its kind, name, value and place in the text."""
    if source >= len(task.bounded):
        k = source - len(task.bounded)
        name, here = task.rows.names[k], float(region.point.numbers[k])
        spans = {p.name: p.span for p in built.network.parameters}
        return BoundKind.RANGE, name, here, spans.get(name, NOWHERE)
    place = int(task.bounded[source])
    here = float(region.point.values[place])
    value = float(min((task.low[source], task.high[source]), key=lambda b: abs(b - here)))
    if place >= len(built.problem.rows):
        reaction = built.network.reactions[place - (len(task.rows.base) - task.rows.count)]
        return BoundKind.DIRECTION, reaction.name, value, reaction.span
    row = built.problem.rows[place]
    kind = BoundKind.ROLE if row.kind is RowKind.ROLE else BoundKind.LIMIT
    return kind, row.name, value, row.span
