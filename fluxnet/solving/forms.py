"""The rows of a problem in exact numbers: what each quantity is made of.

Ranks are decided on these, from the decimals as written; the floating-point rows of
:mod:`fluxnet.solving.build` say the same, and a test holds the two together.
"""

from __future__ import annotations

from collections.abc import Mapping
from fractions import Fraction

from fluxnet.chemistry.formula import molar_mass
from fluxnet.exact.sparse import SparseRow
from fluxnet.ground.errors import MisuseError
from fluxnet.ground.record import record
from fluxnet.matrices.stoichiometry import Stoichiometry
from fluxnet.network.model import Basis, Network, Quantity, QuantityKind, Role
from fluxnet.solving.build import Built
from fluxnet.solving.problem import Row
from fluxnet.solving.quantities import ash_key, default_direction

__all__ = [
    "Form", "as_fraction", "exact_numbers", "exact_row", "exact_species", "form_of",
    "form_of_row", "growth_weights",
]


@record
class Form:
    """A row as a weighted sum: of net productions, of fluxes, and of mu.

    ``species`` and ``fluxes`` are pairs (place, weight): of a species in the stoichiometric
    matrix, of a reaction. ``growth`` is the weight of mu, whose own weights depend on ash.
    """

    species: tuple[tuple[int, Fraction], ...] = ()
    fluxes: tuple[tuple[int, Fraction], ...] = ()
    growth: Fraction = Fraction(0)

    def minus(self, factor: Fraction, other: Form) -> Form:
        """The form less ``factor`` times another one."""
        return Form(
            _added(self.species, -factor, other.species),
            _added(self.fluxes, -factor, other.fluxes),
            self.growth - factor * other.growth,
        )


def as_fraction(value: float) -> Fraction:
    """The number that a decimal stands for: the shortest that reads back as this float.

    Examples
    --------
    >>> as_fraction(0.1), as_fraction(2.0)
    (Fraction(1, 10), Fraction(2, 1))
    """
    return Fraction(repr(float(value)))


def exact_numbers(built: Built) -> dict[str, Fraction]:
    """The parameters and ashes of a problem as they are written."""
    written = {p.name: p.value for p in built.network.parameters}
    written |= {
        ash_key(s.name): s.ash for s in built.network.species if s.role is Role.BIOMASS
    }
    return {
        name: written[name] if float(written[name]) == value else as_fraction(value)
        for name, value in built.values.items()
    }


def exact_species(
    stoich: Stoichiometry, numbers: Mapping[str, Fraction]
) -> tuple[dict[int, Fraction], ...]:
    """The net production of every species as {reaction: coefficient}, zeros left out."""
    rows: list[dict[int, Fraction]] = [{} for _ in stoich.species]
    for i, j, coefficient in stoich.entries:
        number = coefficient.number
        value = coefficient.exact(numbers) if number is None else number
        if value:
            rows[i][j] = value
    return tuple(rows)


def form_of_row(built: Built, row: Row) -> Form:
    """What a row of a problem is made of."""
    if row.quantity is None:
        return Form(((built.stoichiometry.row(row.name), Fraction(1)),))
    ratio = None if row.ratio is None else as_fraction(row.ratio)
    return form_of(built, row.quantity, ratio)


def form_of(
    built: Built,
    quantity: Quantity,
    ratio: Fraction | None = None,
    *,
    told_with: Quantity | None = None,
) -> Form:
    """What a quantity is made of, in the unit of the problem's basis; A - ratio B for A / B.

    Parameters
    ----------
    told_with
        The other part of a ratio that this quantity is a part of: ratios count moles.

    Raises
    ------
    MisuseError
        Where a ratio comes without its value.
    """
    basis = built.basis
    if told_with is not None:
        basis = _ratio_basis(basis, quantity, told_with)
    return _form(built.network, built.stoichiometry, basis, quantity, ratio)


def _ratio_basis(basis: Basis, over: Quantity, below: Quantity) -> Basis:
    """The basis that the parts of a ratio are told in: moles, unless one of them is mu."""
    return basis if QuantityKind.MU in (over.kind, below.kind) else Basis.SPECIFIC


def _form(
    network: Network, stoich: Stoichiometry, basis: Basis, quantity: Quantity,
    ratio: Fraction | None,
) -> Form:
    match quantity.kind:
        case QuantityKind.RATE | QuantityKind.SURPLUS:
            i = stoich.row(quantity.name)
            species = network.species[i]
            direction = quantity.direction or default_direction(species.role)
            weight = Fraction(direction.sign) * moles(network, i, basis)
            return Form(((i, weight),))
        case QuantityKind.MU:
            return Form(growth=Fraction(1))
        case QuantityKind.FLUX:
            return Form(fluxes=((stoich.column(quantity.name), Fraction(1)),))
        case QuantityKind.RATIO:
            over, below = quantity.numerator, quantity.denominator
            if ratio is None or over is None or below is None:
                raise MisuseError("a ratio is a row only at a given value")
            told = _ratio_basis(basis, over, below)
            first = _form(network, stoich, told, over, None)
            return first.minus(ratio, _form(network, stoich, told, below, None))


def moles(network: Network, place: int, basis: Basis) -> Fraction:
    """The units of the basis in one mole of a boundary species: its carbon, or 1."""
    species = network.species[place]
    if basis is not Basis.CARBON or not species.role.is_boundary or species.formula is None:
        return Fraction(1)
    return species.formula.count("C") or Fraction(1)


def growth_weights(built: Built, ashes: Mapping[str, Fraction]) -> dict[int, Fraction]:
    """The weight of each biomass species in mu, by its place."""
    weights: dict[int, Fraction] = {}
    for i, species in enumerate(built.network.species):
        if species.role is not Role.BIOMASS:
            continue
        if built.basis is Basis.CARBON:
            weights[i] = moles(built.network, i, built.basis)
        elif species.formula is not None:
            mass = as_fraction(molar_mass(species.formula))
            weights[i] = mass / (1 - ashes[ash_key(species.name)]) / 1000
    return weights


def exact_row(
    built: Built,
    form: Form,
    species: tuple[SparseRow, ...],
    numbers: Mapping[str, Fraction],
) -> dict[int, Fraction]:
    """A form as a row over the fluxes, given :func:`exact_species`."""
    parts = list(form.species)
    if form.growth:
        weights = growth_weights(built, numbers)
        parts += [(i, form.growth * w) for i, w in weights.items()]
    total: dict[int, Fraction] = {}
    for i, weight in parts:
        for j, value in species[i].items():
            total[j] = total.get(j, Fraction(0)) + weight * value
    for j, weight in form.fluxes:
        total[j] = total.get(j, Fraction(0)) + weight
    return {j: v for j, v in total.items() if v}


def _added(
    pairs: tuple[tuple[int, Fraction], ...],
    factor: Fraction,
    others: tuple[tuple[int, Fraction], ...],
) -> tuple[tuple[int, Fraction], ...]:
    total = dict(pairs)
    for place, weight in others:
        total[place] = total.get(place, Fraction(0)) + factor * weight
    return tuple((place, weight) for place, weight in total.items() if weight)
