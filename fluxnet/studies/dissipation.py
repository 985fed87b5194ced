"""The biomass yield that a correlation of Gibbs energy dissipation would allow.

Growth gives off Gibbs energy; how much per C-mol of biomass depends mostly on the carbon source
(Heijnen & van Dijken, Biotechnol. Bioeng. 39:833, 1992) and, for maintenance, on the temperature
(Tijhuis, van Loosdrecht & Heijnen, Biotechnol. Bioeng. 42:509, 1993). Both formulas are from
memory; the first reproduces the three terms that are printed for methanol. They are correlations
over many organisms: a yield from them is a plausibility, not a bound.
"""

from __future__ import annotations

from collections.abc import Mapping
from math import exp

from fluxnet.chemistry.electron_energy import biomass_formation, half_reaction
from fluxnet.chemistry.formula import degree_of_reduction
from fluxnet.ground.record import record
from fluxnet.network.free_energy import find_free_energy, formation_energy
from fluxnet.network.model import Network, Role, Species
from fluxnet.network.water import form_at_ph_seven

__all__ = [
    "DISSIPATION_ERROR", "MAINTENANCE_ERROR", "Growth", "growth_dissipation", "judge_growth",
    "maintenance_dissipation",
]  # fmt: skip

DISSIPATION_ERROR = 0.3
MAINTENANCE_ERROR = 0.4
"""Relative scatter of the two correlations (of the authors; from memory)."""

_GAS_CONSTANT = 8.314

# A mixture of carbon sources has no correlation; beside the main one this much is let pass.
_MOSTLY = 0.9


def growth_dissipation(carbons: float, reduction: float) -> float:
    """The Gibbs energy given off in growth [kJ per C-mol biomass], from the carbon source.

    1/Y = 200 + 18 (6 - C)^1.8 + exp{[(3.8 - g)^2]^0.16 (3.6 + 0.4 C)} with C carbons and a
    degree of reduction g per carbon, ammonia as reference; longer chains count as six carbons
    (Heijnen & van Dijken 1992). Not for growth on CO2 that needs reversed electron transport.

    Examples
    --------
    >>> round(growth_dissipation(6, 4)), round(growth_dissipation(1, 6))
    (236, 698)
    """
    length = min(carbons, 6.0)
    short: float = 18.0 * (6.0 - length) ** 1.8
    away: float = ((3.8 - reduction) ** 2) ** 0.16
    return 200.0 + short + exp(away * (3.6 + 0.4 * length))


def maintenance_dissipation(celsius: float) -> float:
    """The Gibbs energy that maintenance gives off [kJ per C-mol biomass and hour].

    m_G = 4.5 exp[-(69000 / 8.314) (1/T - 1/298)] with 298 K for 25 °C (Tijhuis et al. 1993).

    Examples
    --------
    >>> round(maintenance_dissipation(25), 1), round(maintenance_dissipation(37), 1)
    (4.5, 13.2)
    """
    inverse = 1.0 / (celsius + 273.15) - 1.0 / 298.15
    return 4.5 * exp(-69000.0 / _GAS_CONSTANT * inverse)


@record
class Growth:
    """A run's growth beside the correlations.

    ``dissipated`` [kJ per C-mol biomass] is what the whole conversion gives off; ``expected``
    what growth on ``carbon_source`` usually does, ``maintenance`` what upkeep adds at that growth
    rate (None where there is none) and ``celsius``. ``biomass_yield`` [C-mol/C-mol carbon
    source] is the run's; ``allowed`` that of the correlation, from ``allowed_low`` to
    ``allowed_high`` over its scatter: with the catabolism of this run scaled to what growth
    and upkeep need.
    """

    carbon_source: str
    dissipated: float
    expected: float
    maintenance: float | None
    celsius: float
    biomass_yield: float
    allowed: float
    allowed_low: float
    allowed_high: float

    @property
    def is_plausible(self) -> bool:
        """Whether the run's yield is not above what the correlation allows at its best."""
        return self.biomass_yield <= self.allowed_high


def judge_growth(
    network: Network,
    releases: Mapping[str, float],
    mu: float | None = None,
    celsius: float = 30.0,
) -> Growth | None:
    """A run's growth beside what the correlations expect of its carbon source.

    The conversion is split: biomass from the carbon source by as many electrons as it holds
    (anabolism), and the rest (catabolism), which the yield scales. Per C-mol of biomass the
    catabolism must give the dissipation, upkeep m_G / mu, and what anabolism takes: the electrons
    of biomass, each from what it holds in the carbon source to what it holds in biomass
    (:mod:`fluxnet.chemistry.electron_energy`).

    Parameters
    ----------
    releases
        Moles of boundary species, positive out of the cell.
    mu
        The growth rate [1/h]; without one upkeep is left out.

    Returns
    -------
    Growth or None
        None where nothing grows, no single organic carbon source is taken up, a Gibbs energy is
        not known, or the catabolism would give nothing.

    Examples
    --------
    >>> from fluxnet.cli.new import MODEL
    >>> from fluxnet.reading.model import read_model_text
    >>> network = read_model_text(MODEL).network
    >>> growth = judge_growth(
    ...     network, {"glucose": -1.0, "oxygen": -2.325, "ammonia": -0.7, "CO2": 2.5, "X": 3.5})
    >>> growth.carbon_source, round(growth.expected), round(growth.allowed, 2)
    ('glucose', 236, 0.67)
    """
    cells = [s for s in network.boundary if s.role is Role.BIOMASS and releases.get(s.name, 0) > 0]
    source = _carbon_source(network, releases)
    whole = find_free_energy(network, releases).value
    if len(cells) != 1 or source is None or whole is None:
        return None
    cell, fed = _held(cells[0]), _held(source)
    if cell is None or fed is None:
        return None
    made = releases[cells[0].name] * cell.carbons
    used = -releases[source.name] * fed.carbons
    built = cell.reduction / fed.reduction
    cost = cell.reduction * (cell.per_electron - fed.per_electron)
    left = used - built * made
    # What the catabolism gives per C-mol of carbon source that is not built into biomass.
    given = (whole + cost * made) / left if left > 0 else 0.0
    if given <= 0:
        return None
    expected = growth_dissipation(fed.carbons, fed.reduction)
    upkeep = maintenance_dissipation(celsius) / mu if mu is not None and mu > 0 else None

    def allowed(growth: float, maintenance: float) -> float:
        need = growth * expected + maintenance * (upkeep or 0.0) + cost
        return 1.0 / (built + max(0.0, need) / given)

    return Growth(
        carbon_source=source.name,
        dissipated=whole / made,
        expected=expected,
        maintenance=upkeep,
        celsius=celsius,
        biomass_yield=made / used,
        allowed=allowed(1.0, 1.0),
        allowed_low=allowed(1.0 + DISSIPATION_ERROR, 1.0 + MAINTENANCE_ERROR),
        allowed_high=allowed(1.0 - DISSIPATION_ERROR, 1.0 - MAINTENANCE_ERROR),
    )


@record
class _Held:
    """Carbons in a formula, electrons per carbon, and what each holds [kJ/mol]."""

    carbons: float
    reduction: float
    per_electron: float


def _held(species: Species) -> _Held | None:
    form = form_at_ph_seven(species)
    if form is None or not form.count("C"):
        return None
    formation: float | None
    if species.role is Role.BIOMASS:
        formation, _ = biomass_formation(form)
    else:
        formation = formation_energy(species.entry, form)
    half = None if formation is None else half_reaction(form, formation)
    if half is None or half.electrons <= 0:
        return None
    carbons = float(form.count("C"))
    return _Held(carbons, half.electrons / carbons, half.per_electron)


def _carbon_source(network: Network, releases: Mapping[str, float]) -> Species | None:
    """The carbon source that brings nine tenths of the electrons in carbon, or None."""
    brought = {
        species.name: -releases[species.name] * float(electrons)
        for species in network.boundary
        if releases.get(species.name, 0.0) < 0
        and species.formula is not None
        and species.formula.count("C")
        and (electrons := degree_of_reduction(species.formula) or 0) > 0
    }
    name = max(brought, key=lambda n: brought[n], default=None)
    if name is None or brought[name] < _MOSTLY * sum(brought.values()):
        return None
    return network.find_species(name)
