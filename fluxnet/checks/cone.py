"""The cone of fluxes: what the signs alone allow, whatever the sizes.

Balances hold, irreversible reactions run forwards, roles and limits are reduced to their signs:
a limit that allows only zero stays, positive lower limits, fixed and measured values are lifted,
finite upper limits are taken away. What no vector of the cone does, the model can never do.
"""

from __future__ import annotations

from collections.abc import Collection
from dataclasses import replace
from enum import Enum
from fractions import Fraction

from fluxnet.chemistry.formula import EMPTY, molar_mass
from fluxnet.exact.sparse import SparseRow
from fluxnet.ground.record import record
from fluxnet.ground.source import NOWHERE, Span
from fluxnet.matrices.stoichiometry import Stoichiometry, parameter_values
from fluxnet.network.model import Limit, Network, Quantity, QuantityKind, Role
from fluxnet.solving.quantities import default_direction
from fluxnet.solving.words import limit_words

__all__ = ["Cone", "Form", "FormKind", "exact_rows", "flux_cone", "quantity_form", "without"]


class FormKind(Enum):
    """Why a linear form of the fluxes is held."""

    BALANCE = "balance"
    DIRECTION = "direction"
    ROLE = "role"
    LIMIT = "limit"


@record
class Form:
    """A linear form of the fluxes that is held at zero, or at zero or above.

    ``name`` is the species of a balance or role, the reaction of a direction, the limit as
    written. ``row`` maps the reaction's place to its exact coefficient.
    """

    kind: FormKind
    name: str
    row: SparseRow
    span: Span = NOWHERE


@record
class Cone:
    """All v with form . v = 0 for the ``equal`` forms and form . v >= 0 for the ``sides``."""

    reactions: tuple[str, ...]
    equal: tuple[Form, ...]
    sides: tuple[Form, ...]


def exact_rows(network: Network, stoich: Stoichiometry) -> tuple[dict[int, Fraction], ...]:
    """The rows of all species as {reaction: coefficient}, the parameters at their values.

    A coefficient that is zero at these values is left out.

    Examples
    --------
    >>> from fluxnet.matrices.stoichiometry import stoichiometry
    >>> from fluxnet.cli.new import MODEL
    >>> from fluxnet.reading.model import read_model_text
    >>> network = read_model_text(MODEL).network
    >>> stoich = stoichiometry(network)
    >>> atp = exact_rows(network, stoich)[stoich.row("ATP")]
    >>> {network.reactions[j].name: str(amount) for j, amount in atp.items()}
    {'glycolysis': '2', 'burn': '1', 'oxphos': '7/5', 'growth': '-9/5', 'upkeep': '-1'}
    """
    values = parameter_values(network)
    rows: list[dict[int, Fraction]] = [{} for _ in stoich.species]
    for i, j, coefficient in stoich.entries:
        number = coefficient.number
        value = coefficient.exact(values) if number is None else number
        if value:
            rows[i][j] = value
    return tuple(rows)


def flux_cone(
    network: Network, stoich: Stoichiometry, *, uptake: Collection[str] | None = None
) -> Cone:
    r"""The cone of a network's fluxes.

    Parameters
    ----------
    uptake
        The boundary species that may be taken up; None opens every uptake that the roles
        allow, an empty collection closes them all.

    Examples
    --------
    >>> from fluxnet.matrices.stoichiometry import stoichiometry
    >>> from fluxnet.cli.new import MODEL
    >>> from fluxnet.reading.model import read_model_text
    >>> more = "limit ethanol <= 0\n"
    >>> network = read_model_text(MODEL + more).network
    >>> cone = flux_cone(network, stoichiometry(network))
    >>> [form.name for form in cone.sides if form.kind is FormKind.LIMIT]
    ['limit ethanol <= 0']
    """
    rows = exact_rows(network, stoich)
    row_of = dict(zip(stoich.species, rows, strict=True))
    equal = [
        Form(FormKind.BALANCE, s.name, row_of[s.name], s.span) for s in network.balanced
    ]
    sides = [
        Form(FormKind.DIRECTION, r.name, {j: Fraction(1)}, r.span)
        for j, r in enumerate(network.reactions)
        if not r.reversible
    ]
    for species in network.boundary:
        row = row_of[species.name]
        shut = uptake is not None and species.name not in uptake
        if species.role is Role.SUBSTRATE:
            taken = Form(FormKind.ROLE, species.name, _turned(row), species.span)
            (equal if shut else sides).append(taken)
        elif species.role is not Role.EXCHANGE or shut:
            sides.append(Form(FormKind.ROLE, species.name, row, species.span))
    for limit in network.limits:
        _add_signs(network, stoich, row_of, limit, equal, sides)
    return Cone(
        stoich.reactions,
        tuple(f for f in equal if f.row),
        tuple(f for f in sides if f.row),
    )


def without(cone: Cone, *forms: Form) -> Cone:
    """The wider cone in which some forms are no longer held.

    Parameters
    ----------
    forms
        Forms of this cone, the very ones: they are told by identity.

    Examples
    --------
    >>> from fluxnet.matrices.stoichiometry import stoichiometry
    >>> from fluxnet.cli.new import MODEL
    >>> from fluxnet.reading.model import read_model_text
    >>> network = read_model_text(MODEL).network
    >>> cone = flux_cone(network, stoichiometry(network))
    >>> len(cone.sides) - len(without(cone, cone.sides[0]).sides)
    1
    """
    lifted = set(map(id, forms))
    return replace(
        cone,
        equal=tuple(f for f in cone.equal if id(f) not in lifted),
        sides=tuple(f for f in cone.sides if id(f) not in lifted),
    )


def quantity_form(
    network: Network,
    stoich: Stoichiometry,
    rows: dict[str, dict[int, Fraction]],
    quantity: Quantity,
) -> dict[int, Fraction]:
    """A quantity as a linear form of the fluxes, up to a positive factor.

    A rate stands in its own direction, in moles; mu is the release of biomass, of several
    species weighed by their mass per mole. Of a ratio the numerator is taken.

    Parameters
    ----------
    rows
        The exact row of each species by name, as of :func:`exact_rows`.
    quantity
        What is asked for.
    """
    match quantity.kind:
        case QuantityKind.RATE | QuantityKind.SURPLUS:
            species = network.find_species(quantity.name)
            role = species.role if species is not None else Role.PRODUCT
            direction = quantity.direction or default_direction(role)
            row = rows.get(quantity.name, {})
            return dict(row) if direction.sign > 0 else _turned(row)
        case QuantityKind.MU:
            total: dict[int, Fraction] = {}
            for name, weight in _weights(network):
                for j, value in rows[name].items():
                    total[j] = total.get(j, Fraction(0)) + weight * value
            return {j: v for j, v in total.items() if v}
        case QuantityKind.FLUX:
            return {stoich.column(quantity.name): Fraction(1)}
        case QuantityKind.RATIO:
            if quantity.numerator is None:
                return {}
            return quantity_form(network, stoich, rows, quantity.numerator)


def _add_signs(
    network: Network,
    stoich: Stoichiometry,
    rows: dict[str, dict[int, Fraction]],
    limit: Limit,
    equal: list[Form],
    sides: list[Form],
) -> None:
    """What is left of a limit when only its sign counts."""
    if limit.is_measured:
        return
    not_below = limit.low is not None and limit.low >= 0
    not_above = limit.high is not None and limit.high <= 0
    is_exact = limit.low is not None and limit.low == limit.high
    if limit.quantity.kind is QuantityKind.RATIO and (
        not not_above or (is_exact and limit.low)
    ):
        return  # A = r B says nothing of the sign of A where B may turn round
    form = Form(
        FormKind.LIMIT,
        limit_words(limit, network),
        quantity_form(network, stoich, rows, limit.quantity),
        limit.span,
    )
    if not_below and not_above:
        equal.append(form)
        return
    if not_above:
        form = replace(form, row=_turned(form.row))
    if (not_below or not_above) and all(form.row != held.row for held in sides):
        sides.append(form)


def _turned(row: SparseRow) -> dict[int, Fraction]:
    return {j: -v for j, v in row.items()}


def _weights(network: Network) -> tuple[tuple[str, Fraction], ...]:
    """Each biomass species with its dry mass per mole; a single one weighs 1."""
    biomass = [s for s in network.species if s.role is Role.BIOMASS]
    if len(biomass) == 1:
        return ((biomass[0].name, Fraction(1)),)
    return tuple(
        (s.name, Fraction(molar_mass(s.formula or EMPTY)) / (1 - s.ash)) for s in biomass
    )
