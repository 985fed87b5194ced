"""The heat that a net conversion gives off, from heats of combustion, and by oxygen beside it."""

from __future__ import annotations

from collections.abc import Mapping
from enum import Enum

from fluxnet.chemistry.catalogue import Compound, find_compound
from fluxnet.chemistry.enthalpy import (
    HeatOfCombustion,
    heat_in_water,
    heat_of_biomass,
    heat_of_combustion,
)
from fluxnet.chemistry.formula import Formula, degree_of_reduction
from fluxnet.ground.record import record
from fluxnet.network.implied import find_implied
from fluxnet.network.model import Network, Role, Species
from fluxnet.network.water import form_at_ph_seven

__all__ = ["HEAT_PER_OXYGEN", "Heat", "HeatMethod", "HeatTerm", "heat_of", "is_oxygen"]

HEAT_PER_OXYGEN = 460.0
"""Heat of respiratory growth [kJ/mol O2] (Roels 1983, as quoted; from memory)."""

_ROUNDING = 1e-9


class HeatMethod(Enum):
    """Which enthalpies a heat is from.

    ``COMBUSTION``: heats of combustion of the pure compounds, where oxygen is taken up.
    ``AQUEOUS``: without oxygen, every species as it stands in the culture, in water at pH 7.
    ``PURE``: without oxygen, too, but for some species only the pure compound's is known.
    """

    COMBUSTION = "combustion"
    AQUEOUS = "aqueous"
    PURE = "pure"


@record
class HeatTerm:
    """A species' heat of combustion [kJ/mol] and its source; ``pure`` where not as in water."""

    species: str
    combustion: float
    estimated: bool
    pure: bool
    source: str


@record
class Heat:
    """The heat of a conversion [kJ per mol as the releases are given], positive: given off.

    ``value`` is None where a species (in ``unknown``) holds an element without a reference.
    ``per_oxygen`` [kJ/mol O2] and ``by_oxygen`` (460 kJ per mole of oxygen taken up) are None
    without oxygen uptake. ``estimated`` names the species whose heat of combustion is an
    estimate from the electrons. ``words`` say what the heat is from.
    """

    value: float | None
    per_oxygen: float | None
    by_oxygen: float | None
    method: HeatMethod
    estimated: tuple[str, ...] = ()
    unknown: tuple[str, ...] = ()
    words: str = ""
    terms: tuple[HeatTerm, ...] = ()


def heat_of(releases: Mapping[str, float], network: Network) -> Heat:
    """The heat that a net conversion gives off.

    Q = - sum of n_i H_i over all species, with n_i the release and H_i the heat of combustion
    to CO2(g), H2O(l) and N2(g). Nitrogen that the species leave open is ammonia, with its own
    383 kJ. Without oxygen uptake the heats are small differences of large numbers: then H_i is
    that of the form in water, where it is known.

    Parameters
    ----------
    releases
        Moles of boundary species (any scale, or per time), positive out of the cell.

    Raises
    ------
    MisuseError
        If a species is unknown, or has no formula.

    Examples
    --------
    >>> from fluxnet.cli.new import MODEL
    >>> from fluxnet.reading.model import read_model_text
    >>> network = read_model_text(MODEL).network
    >>> burnt = heat_of({"glucose": -1.0, "oxygen": -6.0, "CO2": 6.0}, network)
    >>> burnt.value, round(burnt.per_oxygen, 1), burnt.by_oxygen
    (2802.8, 467.1, 2760.0)
    >>> fermented = heat_of({"glucose": -1.0, "ethanol": 2.0, "CO2": 2.0}, network)
    >>> round(fermented.value, 1), fermented.method.value
    (100.6, 'aqueous')
    """
    amounts = _complete(releases, network)
    size = max(map(abs, amounts.values()), default=0.0)
    oxygen = -sum(n for name, n in amounts.items() if is_oxygen(network.find_species(name)))
    breathes = oxygen > _ROUNDING * size
    terms: list[HeatTerm] = []
    unknown: list[str] = []
    for name, amount in amounts.items():
        if abs(amount) <= _ROUNDING * size:
            continue
        term = _term(name, network, in_water=not breathes)
        if term is None:
            unknown.append(name)
        else:
            terms.append(term)
    value = None if unknown else 0.0 - sum(amounts[t.species] * t.combustion for t in terms)
    pure = [t.species for t in terms if t.pure]
    method = HeatMethod.COMBUSTION
    if not breathes:
        method = HeatMethod.PURE if pure else HeatMethod.AQUEOUS
    estimated = tuple(t.species for t in terms if t.estimated)
    return Heat(
        value=value,
        per_oxygen=value / oxygen if breathes and value is not None else None,
        by_oxygen=HEAT_PER_OXYGEN * oxygen if breathes else None,
        method=method,
        estimated=estimated,
        unknown=tuple(unknown),
        words=_words(method, estimated, pure, unknown),
        terms=tuple(terms),
    )


def is_oxygen(species: Species | None) -> bool:
    """Whether a species is molecular oxygen."""
    return species is not None and _is_oxygen(species.formula)


def _is_oxygen(formula: Formula | None) -> bool:
    return formula is not None and dict(formula.counts) == {"O": 2} and not formula.charge


def _complete(releases: Mapping[str, float], network: Network) -> dict[str, float]:
    """The releases with the free species they imply, and the ammonia that closes nitrogen."""
    if not releases:
        return {}
    implied = find_implied(network, {name: float(n) for name, n in releases.items()})
    amounts = {name: float(n) for name, n in releases.items()}
    for name, amount in implied.free:
        amounts[name] = amounts.get(name, 0.0) + amount
    left = dict(implied.residual).get("N", 0.0)
    if abs(left) > _ROUNDING * max(map(abs, amounts.values())):
        amounts["ammonia"] = amounts.get("ammonia", 0.0) - left
    return amounts


def _term(name: str, network: Network, *, in_water: bool) -> HeatTerm | None:
    species = network.find_species(name)
    entry = name if species is None else species.entry
    compound = find_compound(entry) if entry is not None else None
    form = form_at_ph_seven(species) if species is not None else None
    if form is None:
        if compound is None:
            return None
        form = compound.formula_ph7
    if species is not None and species.role is Role.BIOMASS:
        # Cells are as they are: there is no other form in water.
        return _told(name, heat_of_biomass(form), pure=False)
    if compound is not None and not _is_same(form, compound):
        compound = None
    if in_water and compound is not None:
        dissolved = heat_in_water(compound, int(form.charge))
        if dissolved is not None:
            return _told(name, dissolved, pure=False)
    heat = heat_of_combustion(form, compound)
    return _told(name, heat, pure=heat is not None and in_water and heat.value != 0)


def _is_same(form: Formula, compound: Compound) -> bool:
    """Whether a compound's heat of combustion is that of a formula: water aside the same."""
    return (
        form.count("C") == compound.formula.count("C")
        and form.count("N") == compound.formula.count("N")
        and degree_of_reduction(form) == degree_of_reduction(compound.formula)
    )


def _told(name: str, heat: HeatOfCombustion | None, *, pure: bool) -> HeatTerm | None:
    if heat is None:
        return None
    return HeatTerm(name, heat.value, heat.estimated, pure, heat.source)


def _words(
    method: HeatMethod, estimated: tuple[str, ...], pure: list[str], unknown: list[str]
) -> str:
    if unknown:
        return f"not known: {', '.join(unknown)} holds an element without a reference"
    if method is HeatMethod.COMBUSTION:
        words = "from heats of combustion"
    else:
        words = "from enthalpies in water at pH 7, without the base that neutralises acid"
    if pure:
        words += f"; pure states for {', '.join(pure)}, may be off by 30 %"
    if estimated:
        words += f"; estimated at 115 kJ per electron: {', '.join(estimated)}"
    return words
