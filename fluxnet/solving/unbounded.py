"""Why an aim has no end: a circle of reactions, or an uptake that nothing limits."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
from numpy.typing import NDArray

from fluxnet.ground.errors import MisuseError
from fluxnet.ground.record import record
from fluxnet.solving.alter import with_row
from fluxnet.solving.least_flux import least_total_flux
from fluxnet.solving.linear import Outcome, Programme
from fluxnet.solving.problem import Problem, Row, RowKind

__all__ = ["LoopStep", "Unbounded", "explain_unbounded"]

Vector = NDArray[np.float64]


@record
class LoopStep:
    """A reaction of a loop, and its flux for each unit of the aim."""

    reaction: str
    coefficient: float


@record
class Unbounded:
    """What can grow for ever.

    ``loop`` are the reactions that grow together. ``taken_up`` are the boundary species that
    they take up; without any, the loop runs in a circle or makes the aim from nothing.
    ``missing`` are the uptakes whose limits would put an end to the aim (all of them are
    needed); ``missing_limit`` is the first, None where no limit on an uptake would.
    """

    loop: tuple[LoopStep, ...]
    taken_up: tuple[str, ...]
    missing: tuple[str, ...]
    words: str

    @property
    def missing_limit(self) -> str | None:
        """The uptake whose limit is missing."""
        return self.missing[0] if self.missing else None


def explain_unbounded(problem: Problem, cost: Vector) -> Unbounded:
    """Explain why ``cost @ v`` has no largest value.

    The direction is the one with the smallest total flux among those that keep every bound
    for ever (balances zero, each bounded side not approached) and gain one unit of the aim.

    Parameters
    ----------
    cost
        What is maximised, one number a column; give its negative where one minimises.

    Raises
    ------
    MisuseError
        Where the aim does have an end.
    """
    cone = _recession(problem)
    ray = _shortest_ray(cone, cost)
    if ray is None:
        raise MisuseError("the aim has an end: there is nothing to explain")
    uptakes = _uptakes(cone)
    taken = tuple(name for name, row in uptakes.items() if row @ ray > 1e-9)
    missing = _missing(cone, cost, uptakes, taken)
    size = np.abs(ray).max()
    loop = tuple(
        LoopStep(name, float(flux))
        for name, flux in zip(problem.columns, ray, strict=True)
        if abs(flux) > 1e-9 * size
    )
    return Unbounded(loop, taken, missing, _words(loop, cone, ray, missing))


def _recession(problem: Problem) -> Problem:
    """The directions that can be followed for ever: every finite bound becomes zero."""

    def zero(bounds: Vector) -> Vector:
        return np.where(np.isfinite(bounds), 0.0, bounds)

    return replace(
        problem,
        row_low=zero(problem.row_low),
        row_high=zero(problem.row_high),
        column_low=zero(problem.column_low),
        column_high=zero(problem.column_high),
    )


def _shortest_ray(cone: Problem, cost: Vector) -> Vector | None:
    held = with_row(cone, Row(RowKind.LIMIT, "aim"), cost, 1.0, 1.0)
    if not Programme(held).is_feasible():
        return None
    return least_total_flux(held)


def _uptakes(cone: Problem) -> dict[str, Vector]:
    """The uptake of each boundary species, as a row."""
    rows: dict[str, Vector] = {}
    for i, row in enumerate(cone.rows):
        quantity = row.quantity
        if row.kind is RowKind.ROLE and quantity is not None and quantity.direction is not None:
            rows[row.name] = cone.matrix[i] * -quantity.direction.sign
    return rows


def _missing(
    cone: Problem, cost: Vector, uptakes: dict[str, Vector], taken: tuple[str, ...]
) -> tuple[str, ...]:
    """An irreducible set of uptakes whose limits would end the aim; none where none would.

    Those declared last are spared first: what a model declares first is its source of carbon
    as a rule.
    """
    needed = tuple(uptakes)
    if not taken or not _ends(cone, cost, uptakes, needed):
        return ()
    for name in reversed(uptakes):
        fewer = tuple(n for n in needed if n != name)
        if _ends(cone, cost, uptakes, fewer):
            needed = fewer
    return needed


def _ends(
    cone: Problem, cost: Vector, uptakes: dict[str, Vector], limited: tuple[str, ...]
) -> bool:
    for name in limited:
        cone = with_row(cone, Row(RowKind.LIMIT, name), uptakes[name], -np.inf, 0.0)
    return Programme(cone).maximise(cost).outcome is Outcome.OPTIMAL


def _words(
    loop: tuple[LoopStep, ...], cone: Problem, ray: Vector, missing: tuple[str, ...]
) -> str:
    names = ", ".join(step.reaction for step in loop)
    if missing:
        limits = " and ".join(f"{name} in" for name in missing)
        return f"nothing limits {limits}; a limit there puts an end to it"
    crosses = any(
        abs(float(cone.matrix[i] @ ray)) > 1e-9
        for i, row in enumerate(cone.rows)
        if row.kind is RowKind.ROLE
    )
    if crosses:
        return f"these reactions grow together without an end: {names}"
    return f"these reactions can run in a circle without an end: {names}"
