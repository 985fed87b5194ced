"""The cheapest way to let a blocked reaction run, and what else it would free.

Two linear programmes on the cone, each built once and kept warm. In the first every form may
be violated, and every blocked reaction run backwards, at a price; in the second chosen forms
are lifted and as many blocked reactions as possible opened.
"""

from __future__ import annotations

import random
from collections.abc import Collection, Sequence
from enum import Enum

import numpy as np
from numpy.typing import NDArray

from fluxnet.checks.cone import Cone, Form, FormKind
from fluxnet.checks.interior import ConeRows, cone_rows
from fluxnet.ground.record import record
from fluxnet.network.model import Network, Role
from fluxnet.solving.linear import Outcome, Programme
from fluxnet.solving.problem import Problem

__all__ = ["BlockedBy", "Lift", "Lifting", "Obstacle"]

Vector = NDArray[np.float64]
_Value = tuple[int, float]
_SOME = 1e-6


class BlockedBy(Enum):
    """What keeps a reaction from running."""

    DEAD_END = "dead end"
    CUT_OFF = "cut off"
    LIMIT = "limit"
    ROLE = "role"
    CARRIER = "carrier"
    DIRECTION = "direction"
    SPECIES = "species"


# What lifting costs, per unit of it: a limit is suspected before a role, and so on. The steps
# are larger than the spread of ordinary coefficients.
_PRICE = {
    BlockedBy.LIMIT: 1.0,
    BlockedBy.ROLE: 30.0,
    BlockedBy.CARRIER: 900.0,
    BlockedBy.DIRECTION: 27_000.0,
    BlockedBy.SPECIES: 810_000.0,
}
_LAST_RESORT = 10 * _PRICE[BlockedBy.SPECIES]


@record
class Obstacle:
    """One thing that would have to give way.

    ``name`` is the limit as written, the species, or (DIRECTION) the reaction that would have
    to run backwards. ``piles_up`` tells of a balance whether the species would pile up
    (nothing uses it) rather than run short; of the rest it is None.
    """

    by: BlockedBy
    name: str
    piles_up: bool | None = None


@record
class Lift:
    """What gives way: rows of the cone in floats, and reactions that turn round."""

    rows: tuple[int, ...]
    turned: tuple[int, ...]
    obstacles: tuple[Obstacle, ...]


class Lifting:
    """Both programmes for the blocked reactions of one cone."""

    def __init__(self, network: Network, cone: Cone, blocked: Collection[str]) -> None:
        self._network = network
        self._rows = cone_rows(cone)
        self._names = cone.reactions
        self._blocked = [j for j, name in enumerate(cone.reactions) if name in blocked]
        self._one_way = [j for j in self._blocked if self._rows.low[j] == 0]
        self._forms = [*cone.equal, *(s for s in cone.sides if s.kind is not FormKind.DIRECTION)]
        self._kinds = [_kind(network, form) for form in self._forms]
        prices = [
            _price(kind, form, set(self._blocked))
            for kind, form in zip(self._kinds, self._forms, strict=True)
        ]
        backwards = [_PRICE[BlockedBy.DIRECTION]] * len(self._one_way)
        self._costs = np.concatenate([np.zeros(len(self._names)), prices, prices, backwards])
        self._give = self._giving()
        self._open, self._order = self._opening()

    def cheapest(self, reaction: str) -> Lift:
        """What would have to give way so that a blocked reaction runs.

        Raises
        ------
        ArithmeticError
            Where the solver gives up.
        """
        place = self._names.index(reaction)
        best: tuple[float, Vector] | None = None
        for forwards, backwards in self._ends(place):
            for column, value in (forwards, *backwards):
                self._give.set_column_bounds(column, value, value)
            solution = self._give.minimise(self._costs)
            for column, _ in (forwards, *backwards):
                self._give.set_column_bounds(column, *self._free(column))
            if solution.outcome is not Outcome.OPTIMAL:
                raise ArithmeticError(f"the solver could not tell what blocks {reaction}")
            if best is None or solution.objective < best[0]:
                best = solution.objective, solution.fluxes
        assert best is not None
        count, size = len(self._names), len(self._forms)
        short, over, turned = np.split(best[1][count:], [size, 2 * size])
        rows = [k for k in range(size) if max(short[k], over[k]) > _SOME]
        back = [j for j, v in zip(self._one_way, turned, strict=True) if v > _SOME]
        return Lift(
            tuple(rows),
            tuple(back),
            (
                *(self._obstacle(k, piles_up=bool(over[k] > short[k])) for k in rows),
                *(Obstacle(BlockedBy.DIRECTION, self._names[j]) for j in back),
            ),
        )

    def freed(self, lift: Lift) -> frozenset[str]:
        """The blocked reactions that can run once that has given way."""
        for k in lift.rows:
            self._open.set_row_bounds(k, -np.inf, np.inf)
        for j in lift.turned:
            self._open.set_column_bounds(j, -np.inf, np.inf)
        count = len(self._names)
        running: set[str] = set()
        for sign in (1.0, -1.0):
            costs = np.concatenate([np.zeros(count), self._order])
            for place, j in enumerate(self._blocked):
                if j not in self._one_way:
                    costs[count + place] *= sign
            solution = self._open.maximise(costs)
            if solution.outcome is not Outcome.OPTIMAL:
                raise ArithmeticError("the solver could not tell what a cause blocks")
            total = solution.fluxes[:count].copy()
            total[self._blocked] += solution.fluxes[count:]
            running |= {self._names[j] for j in self._blocked if abs(total[j]) > _SOME}
        for k in lift.rows:
            self._open.set_row_bounds(k, 0.0, self._rows.high[k])
        for j in lift.turned:
            self._open.set_column_bounds(j, 0.0, np.inf)
        return frozenset(running)

    # --- inside ----------------------------------------------------------------------

    def _giving(self) -> Programme:
        rows, slack = self._rows, np.eye(len(self._forms))
        back = -rows.matrix[:, self._one_way]
        more = 2 * len(self._forms) + len(self._one_way)
        names = [f"{side} {f.name}" for side in ("lack of", "excess of") for f in self._forms]
        names += [f"{self._names[j]} backwards" for j in self._one_way]
        return Programme(
            _problem(rows, np.hstack([slack, -slack, back]), names, np.zeros(more), np.inf)
        )

    def _opening(self) -> tuple[Programme, Vector]:
        """The second programme, and weights that no accident of the network can cancel."""
        rows = self._rows
        names = [f"{self._names[j]} opens" for j in self._blocked]
        low = np.array([0.0 if j in self._one_way else -1.0 for j in self._blocked])
        dice = random.Random("blocked reactions")
        weights = np.array([1 + dice.random() for _ in self._blocked])
        return Programme(_problem(rows, rows.matrix[:, self._blocked], names, low, 1.0)), weights

    def _ends(self, place: int) -> list[tuple[_Value, tuple[_Value, ...]]]:
        """Values of columns of the first programme at which a reaction runs, either way.

        One that runs forwards only has a second column for the other way; the first is zero
        where that is used, and both may not cancel.
        """
        if place not in self._one_way:
            return [((place, 1.0), ()), ((place, -1.0), ())]
        first = len(self._names) + 2 * len(self._forms)
        other = first + self._one_way.index(place)
        return [((place, 1.0), ((other, 0.0),)), ((place, 0.0), ((other, 1.0),))]

    def _free(self, column: int) -> tuple[float, float]:
        return (float(self._rows.low[column]) if column < len(self._names) else 0.0, np.inf)

    def _obstacle(self, k: int, *, piles_up: bool) -> Obstacle:
        by = self._kinds[k]
        is_balance = by in (BlockedBy.CARRIER, BlockedBy.SPECIES)
        return Obstacle(by, self._forms[k].name, piles_up if is_balance else None)


def _problem(
    rows: ConeRows, more: Vector, names: Sequence[str], low: Vector, high: float
) -> Problem:
    """The cone with further columns."""
    count = len(rows.low)
    return Problem(
        columns=(*(f"column {j}" for j in range(count)), *names),
        rows=rows.labels,
        matrix=np.hstack([rows.matrix, more]),
        row_low=np.zeros(len(rows.labels)),
        row_high=rows.high.copy(),
        column_low=np.concatenate([rows.low, low]),
        column_high=np.concatenate([np.full(count, np.inf), np.full(len(names), high)]),
    )


def _kind(network: Network, form: Form) -> BlockedBy:
    if form.kind is FormKind.LIMIT:
        return BlockedBy.LIMIT
    if form.kind is FormKind.ROLE:
        return BlockedBy.ROLE
    species = network.find_species(form.name)
    is_carrier = species is not None and species.role is Role.CARRIER
    return BlockedBy.CARRIER if is_carrier else BlockedBy.SPECIES


def _price(kind: BlockedBy, form: Form, blocked: Collection[int]) -> float:
    """What lifting a form costs.

    A role is suspected only where a blocked reaction works against it; otherwise every
    by-product would do as a sink or source for a carrier that nothing balances.
    """
    against = any(j in blocked and a < 0 for j, a in form.row.items())
    return _LAST_RESORT if kind is BlockedBy.ROLE and not against else _PRICE[kind]
