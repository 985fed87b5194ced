"""The Gibbs energy that a conversion gives off, from those of formation."""

from __future__ import annotations

from collections.abc import Mapping
from fractions import Fraction
from math import log

from fluxnet.chemistry.catalogue import find_compound
from fluxnet.chemistry.electron_energy import biomass_formation
from fluxnet.chemistry.formation import find_formation
from fluxnet.chemistry.formula import Formula
from fluxnet.ground.record import record
from fluxnet.network.implied import find_implied
from fluxnet.network.model import Network, Role, Species
from fluxnet.network.water import form_at_ph_seven, is_proton, is_water

__all__ = ["PROTON_ENERGY", "FreeEnergy", "find_free_energy", "formation_energy"]

_GAS_CONSTANT = 8.314462618e-3
"""kJ/(mol K), CODATA 2018 (from memory)."""
_TEMPERATURE = 298.15
_PH = 7

PROTON_ENERGY = _GAS_CONSTANT * _TEMPERATURE * log(10.0**-_PH)
"""The Gibbs energy of a proton at pH 7 and 25 °C [kJ/mol]: RT ln(1e-7) = -39.95."""

# So much of the largest amount may be left of an element: coefficients are rounded.
_LEFT = 1e-3


@record
class FreeEnergy:
    """The Gibbs energy of a conversion [kJ, of moles as given], positive: given off.

    ``value`` is None where a Gibbs energy of formation is ``missing`` or where the elements do
    not close. ``estimated`` names biomass whose formula is not that of the measured one.
    """

    value: float | None
    missing: tuple[str, ...] = ()
    estimated: tuple[str, ...] = ()


def find_free_energy(network: Network, releases: Mapping[str, float | Fraction]) -> FreeEnergy:
    """The Gibbs energy that a conversion gives off: positive where it can drive work.

    dG = sum of n dG_f at 25 °C, each species in its form at pH 7 dissolved at 1 mol/kg, gases
    at 1 bar, RT ln(1e-7) for each proton. Water closes oxygen, protons close charge, free
    species the elements that are left (:mod:`fluxnet.network.implied`).

    Parameters
    ----------
    releases
        Boundary species released (negative: taken up) [mol].

    Examples
    --------
    >>> from fluxnet.cli.new import MODEL
    >>> from fluxnet.reading.model import read_model_text
    >>> network = read_model_text(MODEL).network
    >>> round(find_free_energy(network, {"glucose": -1.0, "ethanol": 2.0, "CO2": 2.0}).value, 1)
    238.0
    """
    written = {
        name: float(n) for name, n in releases.items() if n and not _is_medium(network, name)
    }
    if not written:
        return FreeEnergy(0.0)
    implied = find_implied(network, written)
    missing: list[str] = []
    estimated: list[str] = []
    total = implied.protons * PROTON_ENERGY
    for name, amount in (*written.items(), *implied.free, ("water", implied.water)):
        energy, is_estimate = _formation(network.find_species(name), name)
        if energy is None:
            missing.append(name)
        else:
            total += amount * energy
        if is_estimate:
            estimated.append(name)
    most = max(map(abs, written.values()))
    closes = all(abs(n) <= _LEFT * most for _, n in implied.residual)
    value = -total if closes and not missing else None
    return FreeEnergy(value, tuple(missing), tuple(estimated))


def _is_medium(network: Network, name: str) -> bool:
    species = network.find_species(name)
    return species is not None and (is_water(species.formula) or is_proton(species.formula))


def _formation(species: Species | None, name: str) -> tuple[float | None, bool]:
    """The Gibbs energy of formation of a species in its form at pH 7, and if it is estimated."""
    form = _form(species, name)
    if form is None:
        return None, False
    if species is not None and species.role is Role.BIOMASS:
        return biomass_formation(form)
    return formation_energy(name if species is None else species.entry, form), False


def formation_energy(entry: str | None, form: Formula) -> float | None:
    """The Gibbs energy of formation of a catalogue entry in a form of just that composition.

    Examples
    --------
    >>> from fluxnet.chemistry.reader import read_formula
    >>> formation_energy("acetate", read_formula("C2H3O2(-)"))
    -369.32
    >>> formation_energy("acetate", read_formula("C2H6O3")) is None  # with water in it
    True
    """
    compound = find_compound(entry) if entry is not None else None
    if compound is None:
        return None
    known = (compound.formula, compound.formula_ph7)
    if all(dict(form.counts) != dict(k.counts) or form.charge != k.charge for k in known):
        return None
    found = find_formation(compound.name, int(form.charge))
    return None if found is None else found.gibbs


def _form(species: Species | None, name: str) -> Formula | None:
    if species is not None:
        return form_at_ph_seven(species)
    compound = find_compound(name)
    return None if compound is None else compound.formula_ph7
