"""What a conversion gives, from the catalogue's Gibbs energies of formation."""

from __future__ import annotations

from collections.abc import Sequence
from fractions import Fraction
from math import log

from fluxnet.chemistry.catalogue import find_compound
from fluxnet.chemistry.formula import Formula
from fluxnet.network.model import Network
from fluxnet.network.water import form_at_ph_seven, is_proton, is_water

__all__ = ["conversion_energy"]

_GAS_CONSTANT = 8.314462618e-3
"""kJ/(mol K), CODATA 2018 (from memory)."""
_TEMPERATURE = 298.15
_PH = 7

_GASES = (
    ({"O": 2}, 0.0),
    ({"H": 2}, 0.0),
    ({"N": 2}, 0.0),
    ({"C": 1, "O": 2}, -394.36),
    ({"C": 1, "O": 1}, -137.17),
    ({"C": 1, "H": 4}, -50.72),
)
"""Gases at 1 bar: elements zero by definition; CO2, CO, CH4 from the CRC handbook (from memory)."""


def conversion_energy(
    network: Network, conversion: Sequence[tuple[str, Fraction]]
) -> float | None:
    """The Gibbs energy that a conversion gives off [kJ], positive where it can drive work.

    At 25 °C, each species in its form at pH 7 dissolved at 1 mol/kg, gases at 1 bar; water
    closes oxygen and protons close charge. dG = sum of n dG_f, with RT ln(1e-7) for each proton.

    Parameters
    ----------
    conversion
        Boundary species released (negative: taken up) [mol].

    Returns
    -------
    float or None
        None where the catalogue has no Gibbs energy of a species, or where the elements do
        not close with water and protons alone.
    """
    total = 0.0
    left: dict[str, Fraction] = {}
    charge = Fraction(0)
    for name, amount in conversion:
        species = network.find_species(name)
        form = form_at_ph_seven(species) if species is not None else None
        if species is None or form is None or is_water(form) or is_proton(form):
            return None
        energy = _formation(species.entry, form)
        if energy is None:
            return None
        total += float(amount) * energy
        charge += amount * form.charge
        for element, count in form.counts:
            left[element] = left.get(element, Fraction(0)) + amount * count
    water, protons = -left.pop("O", Fraction(0)), -charge
    hydrogen = left.pop("H", Fraction(0)) + 2 * water + protons
    formed = _formation("water", Formula())
    if hydrogen or any(left.values()) or formed is None:
        return None
    total += float(water) * formed
    total += float(protons) * _GAS_CONSTANT * _TEMPERATURE * log(10.0**-_PH)
    return -total


def _formation(entry: str | None, form: Formula) -> float | None:
    """The Gibbs energy of formation of a catalogue entry in one of its forms [kJ/mol]."""
    for counts, energy in _GASES:
        if dict(form.counts) == counts and not form.charge:
            return energy
    compound = find_compound(entry) if entry is not None else None
    if compound is None:
        return None
    return next((g.energy for g in compound.gibbs if g.charge == form.charge), None)
