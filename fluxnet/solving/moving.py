"""The rows of a problem as functions of its uncertain numbers.

A fit moves parameters and ashes, and asks for the rows at hundreds of places. Only the few
coefficients that hold a parameter are computed again there.
"""

from __future__ import annotations

from collections.abc import Mapping

import numpy as np
from numpy.typing import NDArray

from fluxnet.ground.record import record
from fluxnet.network.expression import Expression
from fluxnet.network.model import Basis
from fluxnet.solving.build import Built
from fluxnet.solving.forms import Form, exact_numbers, form_of_row, growth_weights
from fluxnet.solving.quantities import ash_key

__all__ = ["MovingRows", "moving_rows"]

Vector = NDArray[np.float64]


@record
class MovingRows:
    """Rows over the fluxes: those of the problem, then ``extra`` ones, then each flux itself.

    ``base`` are the rows at ``start``, the values of the uncertain numbers ``names``.
    ``places`` are the coefficients (species, reaction) that depend on them, ``entries`` their
    expressions and ``slopes`` the derivatives by each number that is a parameter. ``weights``
    (rows x species) says how much of a species' net production is in a row; ``growth`` (rows)
    how much of mu, whose weights per biomass species, ``organic`` over 1 - ash, move with ash.
    """

    names: tuple[str, ...]
    start: Vector
    values: Mapping[str, float]
    base: Vector
    places: tuple[tuple[int, int], ...]
    entries: tuple[Expression, ...]
    slopes: tuple[tuple[Expression, ...], ...]
    weights: Vector
    growth: Vector
    organic: tuple[tuple[int, str, float], ...]
    species: Vector
    problem_rows: int

    @property
    def count(self) -> int:
        """The number of fluxes."""
        return int(self.base.shape[1])

    @property
    def flux_rows(self) -> slice:
        """The rows that are the fluxes themselves."""
        return slice(len(self.base) - self.count, len(self.base))

    def at(self, numbers: Vector) -> Vector:
        """All rows at other values of the uncertain numbers (rows x fluxes).

        Raises
        ------
        ZeroDivisionError
            Where a coefficient has no value there.
        """
        if not self.names or (numbers == self.start).all():
            return self.base
        values = self._values(numbers)
        rows = self.base.copy()
        species = self.species.copy()
        for (i, j), entry in zip(self.places, self.entries, strict=True):
            change = entry.at(values) - self.species[i, j]
            species[i, j] += change
            rows[:, j] += self.weights[:, i] * change
        for i, name, organic in self.organic:
            change = organic / (1 - values[name]) - organic / (1 - self.values[name])
            if change:
                rows += self.growth[:, None] * (change * species[i])
        return rows

    def slopes_at(self, numbers: Vector, fluxes: Vector) -> Vector:
        """The derivative of every row's value at fixed fluxes (rows x numbers)."""
        out = np.zeros((len(self.base), len(self.names)))
        if not self.names:
            return out
        values = self._values(numbers)
        weights = self.weights.copy()
        for i, name, organic in self.organic:
            change = organic / (1 - values[name]) - organic / (1 - self.values[name])
            weights[:, i] += change * self.growth
        for (i, j), by_name in zip(self.places, self.slopes, strict=True):
            for k, slope in enumerate(by_name):
                if not slope.is_zero:
                    out[:, k] += weights[:, i] * (slope.at(values) * fluxes[j])
        for i, name, organic in self.organic:
            if name not in self.names:
                continue
            made = float(self.species[i] @ fluxes)
            for (row, j), entry in zip(self.places, self.entries, strict=True):
                if row == i:
                    made += (entry.at(values) - self.species[i, j]) * float(fluxes[j])
            slope_of_mass = organic / (1 - values[name]) ** 2
            out[:, self.names.index(name)] += (slope_of_mass * made) * self.growth
        return out

    def _values(self, numbers: Vector) -> dict[str, float]:
        return dict(self.values) | dict(zip(self.names, numbers.tolist(), strict=True))


def moving_rows(built: Built, extra: tuple[Form, ...] = ()) -> MovingRows:
    """The rows of a problem, and some extra ones, ready to be moved."""
    stoich, network = built.stoichiometry, built.network
    names = tuple(u.name for u in built.uncertain)
    forms = [form_of_row(built, row) for row in built.problem.rows] + list(extra)
    count = len(stoich.reactions)
    weights = np.zeros((len(forms) + count, len(stoich.species)))
    growth = np.zeros(len(forms) + count)
    species = stoich.floats(built.values)
    rows = np.zeros((len(forms) + count, count))
    rows[: len(built.problem.rows)] = built.problem.matrix
    rows[len(forms) :] = np.eye(count)
    for r, form in enumerate(forms):
        for i, weight in form.species:
            weights[r, i] = float(weight)
        growth[r] = float(form.growth)
    mass = {i: float(w) for i, w in growth_weights(built, exact_numbers(built)).items()}
    for i, per_mole in mass.items():
        weights[:, i] += per_mole * growth
    for r in range(len(built.problem.rows), len(forms)):
        rows[r] = weights[r] @ species
        for j, factor in forms[r].fluxes:
            rows[r, j] += float(factor)
    moved = [(i, j, e) for i, j, e in stoich.entries if e.number is None]
    moved = [(i, j, e) for i, j, e in moved if not e.parameters.isdisjoint(names)]
    ashes = {i: ash_key(network.species[i].name) for i in mass if built.basis is not Basis.CARBON}
    return MovingRows(
        names=names,
        start=np.array([u.value for u in built.uncertain]),
        values=built.values,
        base=rows,
        places=tuple((i, j) for i, j, _ in moved),
        entries=tuple(e for _, _, e in moved),
        slopes=tuple(tuple(e.derivative(n) for n in names) for _, _, e in moved),
        weights=weights,
        growth=growth,
        organic=tuple(
            (i, ash, mass[i] * (1 - built.values[ash])) for i, ash in ashes.items()
        ),
        species=species,
        problem_rows=len(built.problem.rows),
    )
