"""The two quantities of a trade-off, as a user names them."""

from __future__ import annotations

from fractions import Fraction

from fluxnet.ground.errors import MisuseError
from fluxnet.ground.record import record
from fluxnet.network.model import Limit, Network, Quantity, QuantityKind
from fluxnet.solving.quantities import units_per_mole
from fluxnet.solving.words import quantity_words
from fluxnet.studies.aims import Aim, Sense, name_quantity, read_aim
from fluxnet.studies.heat import is_oxygen
from fluxnet.studies.units import rate_unit

__all__ = ["Axis", "read_axis", "refuse_same", "sizes_oxygen", "slope_unit"]

Terms = tuple[tuple[Fraction, Quantity], ...]


@record
class Axis:
    """A quantity of a trade-off: a weighted sum of quantities, its name and unit.

    ``name`` is short ("ethanol", "oxygen in", "ATP surplus"); a yield has the unit mol/mol.
    ``is_oxygen`` marks one that a supply of oxygen is sized by.
    """

    terms: tuple[tuple[Fraction, Quantity], ...]
    name: str
    unit: str
    is_oxygen: bool = False

    @property
    def titled(self) -> str:
        """The name with the unit."""
        return f"{self.name} [{self.unit}]" if self.unit else self.name

    @property
    def single(self) -> Quantity | None:
        """The one quantity that it is, None of a sum or a yield."""
        is_one = len(self.terms) == 1 and self.terms[0][0] == 1
        return self.terms[0][1] if is_one else None

    def aim(self) -> Aim:
        """It as something to be made as large as possible."""
        return Aim(Sense.MAXIMISE, self.terms)


def read_axis(text: str, network: Network) -> Axis:
    """What ``--maximise`` takes, or a yield A / B whose lower part a limit fixes.

    Raises
    ------
    MisuseError
        Where a name is none of the network's, or nothing fixes the lower part of a yield.

    Examples
    --------
    >>> from fluxnet.reading.model import read_model_text
    >>> network = read_model_text('''
    ... substrate glucose
    ... product   lactate
    ... compartment a
    ...     lump   : glucose -> 2 lactate
    ... limit glucose = 4
    ... ''').network
    >>> axis = read_axis("lactate / glucose", network)
    >>> axis.titled, str(axis.terms[0][0])
    ('lactate / glucose [mol/mol]', '1/4')
    >>> read_axis("in glucose", network).titled
    'glucose in [mmol/g/h]'
    """
    if "/" in text.split():
        return _read_yield(text, network)
    terms = read_aim(text, Sense.MAXIMISE, network).terms
    units = {rate_unit(quantity, network.basis.value) for _, quantity in terms}
    unit = units.pop() if len(units) == 1 else network.basis.value
    return Axis(terms, _name(terms, network), unit, sizes_oxygen(terms, network))


def _read_yield(text: str, network: Network) -> Axis:
    above, _, below = text.partition(" / ")
    terms = read_aim(above, Sense.MAXIMISE, network).terms
    under = name_quantity(below.split(), network, "the lower part of a yield")
    fixed = next((x for x in network.limits if _fixes(x, under)), None)
    words = quantity_words(under, network)
    if fixed is None or fixed.low is None:
        raise MisuseError(
            f"{text} is no straight quantity while {words} can vary: write `limit {words} = 10` "
            f"into the model, with your own number, or trade {above} itself"
        )
    value = fixed.low
    if not value:
        raise MisuseError(f"{text} divides by {words}, which {words} = 0 leaves none")
    counted = [
        (weight * _moles(under, network) / _moles(quantity, network) / value, quantity)
        for weight, quantity in terms
    ]
    is_mu = any(q.kind is QuantityKind.MU for _, q in terms) or under.kind is QuantityKind.MU
    unit = "mol/mol" if not is_mu else f"1/h per {network.basis.value}"
    sized = sizes_oxygen((*terms, (Fraction(1), under)), network)
    return Axis(tuple(counted), f"{_name(terms, network)} / {words}", unit, sized)


def sizes_oxygen(terms: Terms, network: Network) -> bool:
    """Whether a quantity is, or holds, what crosses the boundary of molecular oxygen."""
    return any(
        quantity.kind is QuantityKind.RATE
        and is_oxygen(network.find_species(quantity.name))
        for _, quantity in terms
    )


def _fixes(limit: Limit, quantity: Quantity) -> bool:
    is_exact = limit.low is not None and limit.low == limit.high and not limit.is_measured
    return is_exact and limit.quantity == quantity


def _moles(quantity: Quantity, network: Network) -> Fraction:
    """The units of the basis in one mole of what a rate counts."""
    species = network.find_species(quantity.name)
    if quantity.kind is not QuantityKind.RATE or species is None:
        return Fraction(1)
    return Fraction(units_per_mole(species, network.basis))


def _name(terms: tuple[tuple[Fraction, Quantity], ...], network: Network) -> str:
    """The sum as it is told: a release without its direction where the role leaves no other."""
    words = ""
    for k, (weight, quantity) in enumerate(terms):
        own = quantity_words(quantity, network)
        if quantity.kind is QuantityKind.SURPLUS:
            own = f"{quantity.name} surplus"
        elif quantity.kind is QuantityKind.RATE and quantity.direction is not None:
            own = str(quantity) if quantity.direction.value == "in" else own
        sign = ("-" if weight < 0 else "") if not k else (" - " if weight < 0 else " + ")
        words += sign + (f"{abs(weight)} " if abs(weight) != 1 else "") + own
    return words


def refuse_same(x: Axis, y: Axis) -> None:
    """Refuse two names of one quantity.

    Raises
    ------
    MisuseError
        Where one is a multiple of the other: there is nothing to trade.
    """
    own = [(q.kind, q.name, abs(w) if len(x.terms) > 1 else 1) for w, q in x.terms]
    other = [(q.kind, q.name, abs(w) if len(y.terms) > 1 else 1) for w, q in y.terms]
    if own == other:
        raise MisuseError(
            f"{x.name} and {y.name} are one quantity: name two that differ, such as mu and a "
            "product"
        )


def slope_unit(y: Axis, x_name: str, x_unit: str) -> str:
    """The unit of y per x: time and biomass cancel where both have them.

    Examples
    --------
    >>> mu = Axis((), "mu", "1/h")
    >>> slope_unit(Axis((), "ethanol", "mmol/g/h"), "oxygen in", "mmol/g/h")
    'mmol ethanol per mmol oxygen in'
    >>> slope_unit(mu, "oxygen in", "mmol/g/h"), slope_unit(mu, "PO", "")
    ('1/h mu per mmol/g/h oxygen in', '1/h mu per unit of PO')
    """
    above, below = y.unit, x_unit
    if above == below and "/" in above:
        above = below = above.partition("/")[0]
    over = f"{above} {y.name}".strip()
    return f"{over} per {below} {x_name}" if below else f"{over} per unit of {x_name}"
