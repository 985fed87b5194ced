"""Net equations: what a compartment, or the whole cell, does altogether at given fluxes."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import replace

import numpy as np
from numpy.typing import NDArray

from fluxnet.ground.record import record
from fluxnet.matrices.stoichiometry import Stoichiometry
from fluxnet.network.implied import find_implied
from fluxnet.network.model import Network

__all__ = [
    "EquationTerm", "NetEquation", "add_implied", "find_equations", "reference_substrate",
]  # fmt: skip

Array = NDArray[np.float64]

# A coefficient this small beside the terms that make it up is rounding, not chemistry.
_ROUNDING = 1e-9
# So is one this small beside the largest turnover: what is left of a flux that is zero.
_DUST = 1e-11


@record
class EquationTerm:
    """A species and how much of it is made (negative: used), in the unit of the rates.

    ``implied`` marks water and protons, which no reaction writes.
    """

    species: str
    coefficient: float
    implied: bool = False


@record
class NetEquation:
    """What a compartment (None: the whole cell) does at the solved fluxes.

    ``per`` names the substrate whose uptake ``per_amount`` (in the unit of the rates) the
    coefficients are divided by to read "per mol substrate"; None where none is taken up.
    ``base`` is the base that the released protons need, for the whole cell only.
    """

    compartment: str | None
    terms: tuple[EquationTerm, ...]
    per: str | None
    per_amount: float | None
    base: float | None = None


def reference_substrate(network: Network, releases: Mapping[str, float]) -> str | None:
    """The first substrate declared that is taken up and holds carbon.

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
    >>> reference_substrate(network, {"glucose": -10.0, "lactate": 20.0})
    'glucose'
    """
    for species in network.boundary:
        if (
            releases.get(species.name, 0.0) < 0
            and species.formula is not None
            and species.formula.count("C") > 0
        ):
            return species.name
    return None


def find_equations(
    network: Network,
    matrix: Stoichiometry,
    coefficients: Array,
    fluxes: Array,
) -> tuple[NetEquation, ...]:
    """The net equation of each compartment, then the whole cell's (without implied terms).

    ``coefficients`` is the stoichiometric matrix, species x reactions. An inside species that
    one compartment passes to another stands in both equations; in the whole cell's only
    boundary species are left.

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
    >>> from fluxnet.matrices.stoichiometry import stoichiometry
    >>> matrix = stoichiometry(network)
    >>> for equation in find_equations(network, matrix, matrix.floats({}), np.array([10.0, 20.0])):
    ...     print(equation.compartment, {t.species: t.coefficient for t in equation.terms})
    a {'glucose': -10.0, 'lactate': 20.0, 'ATP': 20.0}
    b {'ATP': -20.0}
    None {'glucose': -10.0, 'lactate': 20.0}
    """
    parts = coefficients * fluxes
    boundary = [matrix.species[i] for i in matrix.boundary]
    dust = _DUST * float(np.abs(parts).max(initial=0.0))
    totals = _sums(parts, dust)
    releases = {name: totals[matrix.row(name)] for name in boundary}
    per = reference_substrate(network, releases)
    amount = -releases[per] if per is not None else None
    equations = [
        _equation(
            compartment.name,
            matrix,
            parts[:, [r.compartment == compartment.name for r in network.reactions]],
            range(len(matrix.species)),
            per,
            amount,
            dust,
        )
        for compartment in network.compartments
    ]
    equations.append(_equation(None, matrix, parts, matrix.boundary, per, amount, dust))
    return tuple(equations)


def add_implied(whole: NetEquation, network: Network) -> NetEquation:
    """The whole cell's equation with the water, protons and free species that it implies.

    The base is what neutralises the protons; the ammonium that the cell takes up leaves one
    each, so that ammonia fed as base is counted in it (:mod:`fluxnet.network.implied`).

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
    >>> terms = (EquationTerm("glucose", -10.0), EquationTerm("lactate", 20.0))
    >>> whole = add_implied(NetEquation(None, terms, "glucose", 10.0), network)
    >>> [(t.species, t.coefficient) for t in whole.terms if t.implied], whole.base
    ([('H+', 20.0)], 20.0)
    """
    releases = {t.species: t.coefficient for t in whole.terms if not t.implied}
    if not releases:
        return whole
    implied = find_implied(network, releases)
    size = max(map(abs, releases.values()))
    found = [*implied.free, ("H2O", implied.water), ("H+", implied.protons)]
    terms = tuple(
        EquationTerm(name, amount, implied=True)
        for name, amount in found
        if abs(amount) > _ROUNDING * size
    )
    base = implied.base if implied.base > _ROUNDING * size else 0.0
    return replace(whole, terms=(*whole.terms, *terms), base=base)


def _equation(
    compartment: str | None,
    matrix: Stoichiometry,
    parts: Array,
    rows: range | tuple[int, ...],
    per: str | None,
    amount: float | None,
    dust: float,
) -> NetEquation:
    sums = _sums(parts, dust)
    terms = tuple(EquationTerm(matrix.species[i], float(sums[i])) for i in rows if sums[i] != 0)
    return NetEquation(compartment, terms, per, amount)


def _sums(parts: Array, dust: float) -> Array:
    """Sums of rows in which what is only rounding, of the terms or of the fluxes, is zero."""
    sums: Array = parts.sum(axis=1)
    sums[np.abs(sums) <= np.maximum(_ROUNDING * np.abs(parts).sum(axis=1), dust)] = 0.0
    return sums
