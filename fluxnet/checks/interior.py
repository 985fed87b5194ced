"""Which sides of a cone can open at all, by one linear programme, and its proof in whole numbers.

A vector of a cone may be scaled and added to another, so there is one vector that opens every
side that any vector opens. It is found by maximising the sum over all sides of z, where z is
held below 1 and below the side's value: every z ends at 1 or at 0. The open sides are then
proven by an exact vector of the cone, the closed ones by exact positive weights under which
they sum to nothing.
"""

from __future__ import annotations

from collections.abc import Sequence
from fractions import Fraction

import numpy as np
from numpy.typing import NDArray

from fluxnet.checks.cone import Cone, Form, FormKind
from fluxnet.exact.programme import make_programme
from fluxnet.exact.simplex import Place, solve_from
from fluxnet.exact.sparse import NullSpace, null_space, point_near, product
from fluxnet.ground.record import record
from fluxnet.solving.linear import Outcome, Programme
from fluxnet.solving.problem import Problem, Row, RowKind
from fluxnet.solving.scaling import find_scales

__all__ = [
    "ConeRows", "Interior", "Opening", "cone_rows", "exact_weights", "find_interior",
    "open_exactly", "open_most", "without_noise",
]

Vector = NDArray[np.float64]

# Far below 1, the least value of an open side, and far above what the solver leaves behind.
_OPEN = 1e-6
_NOISE = 1e-9
# Exact pivots times forms: some seconds.
_MOST_STEPS = 40_000


@record
class ConeRows:
    """A cone in floats: rows x reactions, the equal forms first, then all sides but directions.

    A cone has no sizes, so rows and columns are scaled (by powers of two) until coefficients
    are near 1: ``matrix`` is form x ``row_scale`` x ``scale``, its unknowns are fluxes over
    ``scale``. ``high`` is 0 for an equal form, infinity for a side; the lower bound is 0
    throughout. ``row_of`` gives the row of a side by its place in the cone, ``column_of`` the
    reaction of a direction. ``low`` are the lower bounds of the unknowns: 0 or minus infinity.
    """

    labels: tuple[Row, ...]
    matrix: Vector
    high: Vector
    low: Vector
    row_scale: Vector
    scale: Vector
    row_of: dict[int, int]
    column_of: dict[int, int]

    def weights(self, sides: int, row_prices: Vector, column_prices: Vector) -> Vector:
        """By side of the cone: what holding it costs a maximum, from a solution's prices."""
        found = np.zeros(sides)
        for k, i in self.row_of.items():
            found[k] = without_noise(-row_prices[i]) * self.row_scale[i]
        for k, j in self.column_of.items():
            found[k] = without_noise(-column_prices[j]) / self.scale[j]
        return found


@record
class Opening:
    """Sides that can be above zero, fluxes that open them all, and weights that prove the rest.

    ``weights`` has one number a side of the cone: the price of holding it.
    """

    open: frozenset[int]
    fluxes: Vector
    weights: Vector


@record
class Interior:
    """The smallest space that holds a cone, and what is zero throughout.

    ``closed`` are the sides that no vector of the cone opens; ``space`` is the null space of
    the equal forms and the closed sides; ``blocked`` are the reactions without flux.
    ``verified`` says that all this was proven in exact arithmetic.
    """

    closed: tuple[Form, ...]
    space: NullSpace
    blocked: tuple[str, ...]
    verified: bool


def without_noise(price: float) -> float:
    """The price of a scaled row or column, zero where the solver only nearly left it there.

    Examples
    --------
    >>> without_noise(1e-12), without_noise(0.25)
    (0.0, 0.25)
    """
    return float(price) if abs(price) > _NOISE else 0.0


def cone_rows(cone: Cone) -> ConeRows:
    """The cone's forms in floats, ready for a linear programme."""
    labels: list[Row] = []
    forms: list[Form] = []
    row_of: dict[int, int] = {}
    column_of: dict[int, int] = {}
    low = np.full(len(cone.reactions), -np.inf)
    for form in cone.equal:
        labels.append(Row(RowKind.BALANCE, form.name, span=form.span))
        forms.append(form)
    for k, side in enumerate(cone.sides):
        if side.kind is FormKind.DIRECTION:
            column_of[k] = next(iter(side.row))
            low[column_of[k]] = 0.0
        else:
            row_of[k] = len(forms)
            labels.append(Row(RowKind.ROLE, side.name, span=side.span))
            forms.append(side)
    matrix = np.zeros((len(forms), len(cone.reactions)))
    for i, form in enumerate(forms):
        for j, value in form.row.items():
            matrix[i, j] = float(value)
    high = np.array([0.0] * len(cone.equal) + [np.inf] * len(row_of))
    unscaled = Problem(
        cone.reactions, tuple(labels), matrix.copy(), np.zeros(len(high)), high.copy(),
        low.copy(), np.full(len(low), np.inf),
    )  # fmt: skip
    row_scale, scale = find_scales(unscaled, np.abs(matrix))
    scaled = matrix * row_scale[:, None] * scale
    return ConeRows(tuple(labels), scaled, high, low, row_scale, scale, row_of, column_of)


def open_most(cone: Cone, wanted: Sequence[int] | None = None) -> Opening:
    """The sides, of those wanted, that some vector of the cone opens.

    Parameters
    ----------
    wanted
        Places of sides in ``cone.sides``; all of them unless given.

    Where the floating-point solver gives up the exact one is asked (:func:`open_exactly`).
    """
    rows = cone_rows(cone)
    asked = range(len(cone.sides)) if wanted is None else wanted
    capped = np.zeros((len(rows.labels), len(asked)))
    for place, k in enumerate(asked):
        if k in rows.row_of:
            capped[rows.row_of[k], place] = -1.0
        else:
            capped[:, place] = rows.matrix[:, rows.column_of[k]]
    count, more = len(cone.reactions), len(asked)
    problem = Problem(
        columns=(*cone.reactions, *(f"{cone.sides[k].name} opens" for k in asked)),
        rows=rows.labels,
        matrix=np.hstack([rows.matrix, capped]),
        row_low=np.zeros(len(rows.labels)),
        row_high=rows.high,
        column_low=np.concatenate([rows.low, np.zeros(more)]),
        column_high=np.concatenate([np.full(count, np.inf), np.ones(more)]),
    )
    solution = Programme(problem).maximise(np.concatenate([np.zeros(count), np.ones(more)]))
    if solution.outcome is not Outcome.OPTIMAL:
        return open_exactly(cone, asked)
    fluxes, amounts = solution.fluxes[:count].copy(), solution.fluxes[count:]
    for place, k in enumerate(asked):
        if k in rows.column_of:
            fluxes[rows.column_of[k]] += amounts[place]
    opened = frozenset(k for place, k in enumerate(asked) if amounts[place] > _OPEN)
    weights = rows.weights(len(cone.sides), solution.row_prices, solution.column_prices)
    return Opening(opened, fluxes * rows.scale, weights)


def open_exactly(cone: Cone, wanted: Sequence[int] | None = None) -> Opening:
    """:func:`open_most` by exact pivots, as far as the steps that the cone's size allows lead.

    Where they end before it is known what opens, what was reached is given: no proof of it will
    stand.
    """
    asked = range(len(cone.sides)) if wanted is None else wanted
    count, zero, one = len(cone.reactions), Fraction(0), Fraction(1)
    place_of = {k: place for place, k in enumerate(asked)}
    # Every side is a row of its own here, with what opens it taken off.
    rows = [dict(form.row) for form in (*cone.equal, *cone.sides)]
    for k, place in place_of.items():
        rows[len(cone.equal) + k][count + place] = -one
    programme = make_programme(
        count + len(place_of),
        rows,
        [(zero, zero)] * len(cone.equal) + [(zero, None)] * len(cone.sides),
        [(None, None)] * count + [(zero, one)] * len(place_of),
        {count + place: -one for place in place_of.values()},
    )
    size = len(rows)
    places = [Place.FREE] * count + [Place.LOW] * len(place_of) + [Place.BASIC] * size
    found = solve_from(programme, places, _MOST_STEPS // size if size else None)
    opened = frozenset(k for k, place in place_of.items() if found.fluxes[count + place] > 0)
    prices = found.prices[len(cone.equal) :]
    return Opening(
        opened,
        np.array([float(v) for v in found.fluxes[:count]]),
        np.array([float(price) for price in prices]),
    )


def find_interior(cone: Cone) -> Interior:
    r"""What is zero throughout a cone, and the space that its vectors fill.

    Examples
    --------
    >>> from fluxnet.checks.cone import flux_cone
    >>> from fluxnet.matrices.stoichiometry import stoichiometry
    >>> from fluxnet.cli.new import MODEL
    >>> from fluxnet.reading.model import read_model_text
    >>> more = "limit ethanol <= 0\n"
    >>> network = read_model_text(MODEL + more).network
    >>> interior = find_interior(flux_cone(network, stoichiometry(network)))
    >>> interior.blocked, interior.verified
    (('ferment',), True)
    """
    found = _prove(cone, open_most(cone))
    return found if found.verified else _prove(cone, open_exactly(cone))


def _prove(cone: Cone, opening: Opening) -> Interior:
    """What an opening says of a cone, and whether that stands in exact arithmetic."""
    closed = tuple(s for k, s in enumerate(cone.sides) if k not in opening.open)
    count = len(cone.reactions)
    space = null_space([f.row for f in (*cone.equal, *closed)], count)
    point = point_near(space, opening.fluxes.tolist())
    is_open = all(product(cone.sides[k].row, point) > 0 for k in opening.open)
    weights = [float(w) for k, w in enumerate(opening.weights) if k not in opening.open]
    balanced = null_space([f.row for f in cone.equal], count) if closed else space
    is_closed = not closed or exact_weights(balanced, closed, weights) is not None
    return Interior(
        closed=closed,
        space=space,
        blocked=tuple(r for r, row in zip(cone.reactions, space.rows, strict=True) if not row),
        verified=is_open and is_closed,
    )


def exact_weights(
    space: NullSpace, forms: Sequence[Form], guess: Sequence[float]
) -> tuple[Fraction, ...] | None:
    """Positive weights under which forms sum to zero on a space, near a floating-point guess.

    They prove that forms which are never negative are always zero. None where the guess
    cannot be made exact.
    """
    images = [space.image(form.row) for form in forms]
    turned: dict[int, dict[int, Fraction]] = {}
    for k, image in enumerate(images):
        for coordinate, value in image.items():
            turned.setdefault(coordinate, {})[k] = value
    weights = point_near(null_space(list(turned.values()), len(forms)), guess)
    return weights if all(w > 0 for w in weights) else None
