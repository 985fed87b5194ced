"""The heat that a net conversion gives off, from heats of combustion, and by oxygen beside it."""

from __future__ import annotations

from collections.abc import Mapping
from enum import Enum

from fluxnet.chemistry.catalogue import find_compound
from fluxnet.chemistry.enthalpy import heat_of_combustion
from fluxnet.chemistry.formula import Formula
from fluxnet.ground.record import record
from fluxnet.network.implied import find_implied
from fluxnet.network.model import Network

__all__ = ["HEAT_PER_OXYGEN", "Heat", "HeatMethod", "heat_of"]

HEAT_PER_OXYGEN = 460.0
"""Heat of respiratory growth [kJ/mol O2] (Roels 1983, as quoted; from memory)."""

_ROUNDING = 1e-9


class HeatMethod(Enum):
    """Which enthalpies a heat is from.

    ``COMBUSTION``: heats of combustion of the pure compounds, where oxygen is taken up.
    ``AQUEOUS``: every dissolved species as it is in water at pH 7. ``PURE``: without oxygen,
    but with species whose enthalpy in water is not known.
    """

    COMBUSTION = "combustion"
    AQUEOUS = "aqueous"
    PURE = "pure"


@record
class Heat:
    """The heat of a conversion [kJ per mol as the releases are given], positive: given off.

    ``value`` is None where a species (in ``unknown``) holds an element without a reference.
    ``per_oxygen`` [kJ/mol O2] and ``by_oxygen`` (460 kJ per mole of oxygen taken up) are None
    without oxygen uptake. ``estimated`` names the species whose heat of combustion is an
    estimate from the electrons.
    """

    value: float | None
    per_oxygen: float | None
    by_oxygen: float | None
    method: HeatMethod
    estimated: tuple[str, ...] = ()
    unknown: tuple[str, ...] = ()
    words: str = ""


def heat_of(releases: Mapping[str, float], network: Network) -> Heat:
    """The heat that a net conversion gives off.

    Q = - sum of n_i H_i over all species, with n_i the release and H_i the heat of combustion
    to CO2(g), H2O(l) and N2(g). Nitrogen that the species leave open is ammonia.

    Parameters
    ----------
    releases
        Moles of boundary species (any scale, or per time), positive out of the cell.

    Examples
    --------
    >>> from fluxnet.cli.new import MODEL
    >>> from fluxnet.reading.model import read_model_text
    >>> network = read_model_text(MODEL).network
    >>> round(heat_of({"glucose": -1.0, "oxygen": -6.0, "CO2": 6.0}, network).per_oxygen, 1)
    467.1
    """
    implied = find_implied(network, releases)
    amounts = {name: float(n) for name, n in (*releases.items(), *implied.free)}
    size = max(map(abs, amounts.values()), default=0.0)
    left = dict(implied.residual).get("N", 0.0)
    if abs(left) > _ROUNDING * size:
        amounts["ammonia"] = amounts.get("ammonia", 0.0) - left
    total, oxygen = 0.0, 0.0
    estimated: list[str] = []
    unknown: list[str] = []
    for name, amount in amounts.items():
        species = network.find_species(name)
        entry = name if species is None else species.entry
        compound = find_compound(entry) if entry is not None else None
        formula = species.formula if species is not None else None
        if formula is None and compound is not None:
            formula = compound.formula
        if formula is None or not amount:
            continue
        if _is_oxygen(formula):
            oxygen -= amount
            continue
        heat = heat_of_combustion(formula, compound)
        if heat is None:
            unknown.append(name)
            continue
        if heat.estimated:
            estimated.append(name)
        total -= amount * heat.value
    breathes = oxygen > _ROUNDING * size
    value = None if unknown else total
    return Heat(
        value,
        value / oxygen if breathes and value is not None else None,
        HEAT_PER_OXYGEN * oxygen if breathes else None,
        HeatMethod.COMBUSTION if breathes else HeatMethod.PURE,
        tuple(estimated),
        tuple(unknown),
        "from heats of combustion",
    )


def _is_oxygen(formula: Formula) -> bool:
    return dict(formula.counts) == {"O": 2} and not formula.charge
