"""Yields of products on substrates: mol/mol, g/g, C-mol/C-mol."""

from __future__ import annotations

from collections.abc import Mapping

from fluxnet.chemistry.formula import molar_mass
from fluxnet.ground.record import record
from fluxnet.network.biomass import biomass_mass
from fluxnet.network.model import Network, Role, Species

__all__ = ["ALL_CARBON", "Yield", "find_yields"]

ALL_CARBON = "all carbon taken up"
"""The substrate's name where a yield is per total carbon."""


@record
class Yield:
    """How much of a product is released per substrate taken up.

    ``per_mass`` is g/g (dry weight with ash for biomass); ``per_mole`` and ``per_mass`` are
    None per total carbon; ``per_carbon`` is None where either holds no carbon.
    """

    product: str
    substrate: str
    per_mole: float | None
    per_mass: float | None
    per_carbon: float | None


def find_yields(network: Network, releases: Mapping[str, float]) -> tuple[Yield, ...]:
    """The yields at given releases of the boundary species (uptakes negative) [any one unit].

    One entry for each released species on each carbon substrate that is taken up, and on all
    their carbon together where there are several.

    Examples
    --------
    >>> from fluxnet.reading.model import read_model_text
    >>> network = read_model_text('''
    ... substrate glucose
    ... product   lactate
    ... carrier   ATP  carries energy
    ... compartment a
    ...     lump   : glucose -> 2 lactate + 2 ATP
    ... compartment b
    ...     upkeep : ATP -> nothing
    ... limit glucose <= 10
    ... ''').network
    >>> (line,) = find_yields(network, {"glucose": -10.0, "lactate": 18.0})
    >>> line.product, line.substrate, line.per_mole, round(line.per_mass, 3), line.per_carbon
    ('lactate', 'glucose', 1.8, 0.9, 0.9)
    """
    taken = [s for s in network.boundary if releases.get(s.name, 0.0) < 0 and _carbon(s) > 0]
    made = [s for s in network.boundary if releases.get(s.name, 0.0) > 0]
    lines: list[Yield] = []
    for product in made:
        amount = releases[product.name]
        for substrate in taken:
            used = -releases[substrate.name]
            carbon = _carbon(product) * amount
            lines.append(
                Yield(
                    product.name,
                    substrate.name,
                    amount / used,
                    amount * _mass(product) / (used * _mass(substrate)),
                    carbon / (used * _carbon(substrate)) if carbon else None,
                )
            )
        if len(taken) > 1 and _carbon(product):
            total = sum(-releases[s.name] * _carbon(s) for s in taken)
            lines.append(
                Yield(product.name, ALL_CARBON, None, None, _carbon(product) * amount / total)
            )
    return tuple(lines)


def _carbon(species: Species) -> float:
    return float(species.formula.count("C")) if species.formula is not None else 0.0


def _mass(species: Species) -> float:
    if species.role is Role.BIOMASS:
        return biomass_mass(species)
    return molar_mass(species.formula) if species.formula is not None else 0.0
