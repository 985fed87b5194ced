"""The rows of a problem as functions of its uncertain numbers.

A fit moves parameters and ashes, and asks for the rows at hundreds of places. Only a few
coefficients hold a parameter, so what a move changes has a low rank and is told as such.
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

__all__ = ["Bend", "Change", "Mass", "MovingRows", "moving_rows"]

Vector = NDArray[np.float64]


@record
class Bend:
    """A coefficient that is not linear in the numbers: its place in the core, and its value."""

    place: tuple[int, int]
    entry: Expression
    slopes: tuple[Expression, ...]
    start: float


@record
class Mass:
    """A biomass species: the places of its growth, and its weight in mu.

    ``inner`` is its place among the inner rows, ``outer`` among the outer columns (None where
    none of its coefficients moves); its weight in mu is ``organic`` over 1 - ash.
    """

    inner: int
    outer: int | None
    ash: str
    organic: float


@record
class Change:
    """How the core of moving rows differs from that at the start.

    ``core`` is outer x inner; ``slopes`` (numbers x outer x inner) are its derivatives.
    """

    core: Vector
    slopes: Vector


@record
class MovingRows:
    """Rows over the fluxes: those of the problem, then ``extra`` ones, then each flux itself.

    ``base`` are the rows at ``start``, the values of the uncertain numbers ``names``. At other
    values they are base + outer C inner with a small core C. ``outer`` (rows x columns) has one
    column for each species with a coefficient that moves, how much of its net production is in
    a row, and a last one for how much of mu is; ``inner`` (rows x fluxes) has one row for each
    flux with such a coefficient, and one for the net production of each biomass species, whose
    weight in mu moves with its ash. ``linear`` (numbers x outer x inner) are the slopes of
    coefficients that are linear in the numbers, ``bends`` the other coefficients.
    """

    names: tuple[str, ...]
    start: Vector
    values: Mapping[str, float]
    base: Vector
    outer: Vector
    inner: Vector
    linear: Vector
    bends: tuple[Bend, ...]
    masses: tuple[Mass, ...]
    problem_rows: int

    @property
    def count(self) -> int:
        """The number of fluxes."""
        return int(self.base.shape[1])

    def change(self, numbers: Vector) -> Change:
        """The core and its slopes at other values of the uncertain numbers.

        Many values (the first axis) give as many cores; slopes that are the same at all values
        are told once.

        Raises
        ------
        ZeroDivisionError
            Where a coefficient has no value there.
        """
        slopes = self.linear.copy()
        core = np.tensordot(numbers - self.start, self.linear, axes=1)
        if not self.bends and not self.masses:
            return Change(core, slopes)
        if numbers.ndim > 1:
            each = [self.change(some) for some in numbers]
            return Change(np.array([c.core for c in each]), np.array([c.slopes for c in each]))
        values = dict(self.values) | dict(zip(self.names, numbers.tolist(), strict=True))
        for bend in self.bends:
            core[bend.place] += bend.entry.at(values) - bend.start
            for k, slope in enumerate(bend.slopes):
                slopes[(k, *bend.place)] += slope.at(values)
        for mass in self.masses:
            ash = values[mass.ash]
            grown = mass.organic / (1 - ash) - mass.organic / (1 - self.values[mass.ash])
            weighed = np.zeros(len(self.inner))
            weighed[mass.inner] = 1.0
            if mass.outer is not None:
                weighed += core[mass.outer]
                slopes[:, -1] += grown * slopes[:, mass.outer]
            core[-1] += grown * weighed
            if mass.ash in self.names:
                steep = mass.organic / (1 - ash) ** 2
                slopes[self.names.index(mass.ash), -1] += steep * weighed
        return Change(core, slopes)

    def at(self, numbers: Vector) -> Vector:
        """All rows at other values of the uncertain numbers (rows x fluxes).

        Raises
        ------
        ZeroDivisionError
            Where a coefficient has no value there.
        """
        if not self.names or (numbers == self.start).all():
            return self.base
        rows: Vector = self.base + self.outer @ (self.change(numbers).core @ self.inner)
        return rows

    def slopes_at(self, numbers: Vector, fluxes: Vector) -> Vector:
        """The derivative of every row's value at fixed fluxes (rows x numbers)."""
        slopes: Vector = self.outer @ (self.change(numbers).slopes @ (self.inner @ fluxes)).T
        return slopes


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
    ashes = {i: ash for i, ash in ashes.items() if ash in names}
    touched = sorted({i for i, _, _ in moved})
    turned = sorted({j for _, j, _ in moved})
    linear = np.zeros((len(names), len(touched) + 1, len(turned) + len(ashes)))
    bends: list[Bend] = []
    for i, j, entry in moved:
        place = (touched.index(i), turned.index(j))
        slopes = tuple(entry.derivative(name) for name in names)
        sure = [slope.number for slope in slopes]
        if any(number is None for number in sure):
            bends.append(Bend(place, entry, slopes, float(species[i, j])))
        else:
            linear[(slice(None), *place)] = [float(number or 0) for number in sure]
    return MovingRows(
        names=names,
        start=np.array([u.value for u in built.uncertain]),
        values=built.values,
        base=rows,
        outer=np.column_stack([weights[:, touched], growth]),
        inner=np.vstack([np.eye(count)[turned], species[list(ashes)]]),
        linear=linear,
        bends=tuple(bends),
        masses=tuple(
            Mass(
                len(turned) + k,
                touched.index(i) if i in touched else None,
                ash,
                mass[i] * (1 - built.values[ash]),
            )
            for k, (i, ash) in enumerate(ashes.items())
        ),
        problem_rows=len(built.problem.rows),
    )
