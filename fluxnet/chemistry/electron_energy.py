"""The Gibbs energy with which a compound gives its electrons, at pH 7.

Each compound is taken apart into hydrogen carbonate, ammonium, protons at pH 7, water and
electrons, the reference of Heijnen & van Dijken (1992). In this frame all organic compounds
hold 25 to 50 kJ per electron, and oxygen takes an electron for 79 kJ more.
"""

from __future__ import annotations

from collections.abc import Mapping

from fluxnet.chemistry.formation import find_formation
from fluxnet.chemistry.formula import Formula, degree_of_reduction
from fluxnet.chemistry.reader import read_formula
from fluxnet.ground.record import record

__all__ = ["BIOMASS", "HalfReaction", "biomass_formation", "half_reaction", "references"]

BIOMASS = "CH1.8O0.5N0.2"
"""The biomass whose Gibbs energy of formation is -67 kJ per C-mol (Heijnen)."""

_PROTON = -39.87
"""Of a proton at pH 7 [kJ/mol], as the reference rounds it (Heijnen, Encycl. Bioprocess
Technol.)."""


@record
class HalfReaction:
    """What a compound gives when it is taken apart [kJ/mol and kJ per mole of electrons].

    ``energy`` is the Gibbs energy of the half reaction (negative: it gives off),
    ``per_electron`` what each electron holds, ``electrons`` their number.
    """

    energy: float
    per_electron: float
    electrons: float


def half_reaction(
    formula: Formula, formation: float, reference: Mapping[str, float] | None = None
) -> HalfReaction | None:
    """The half reaction that takes a compound apart.

    C_c H_h O_o N_n (charge z) + (3 c - o) H2O -> c HCO3- + n NH4+ + p H+ + g e-, with the
    degree of reduction g and p = g + z + c - n.

    Parameters
    ----------
    formation
        The Gibbs energy of formation of that form [kJ/mol].
    reference
        The Gibbs energies of formation of ``HCO3-``, ``NH4+``, ``H2O`` and ``H+``.

    Returns
    -------
    HalfReaction or None
        None where there are other elements, or no electrons.

    Examples
    --------
    >>> from fluxnet.chemistry.reader import read_formula
    >>> biomass = half_reaction(read_formula("CH1.8O0.5N0.2"), -67.0)
    >>> biomass.electrons, round(biomass.per_electron, 1)
    (4.2, 33.9)
    """
    electrons = degree_of_reduction(formula)
    if set(formula.elements) - {"C", "H", "O", "N"} or not electrons:
        return None
    known = references() if reference is None else reference
    carbon, nitrogen = formula.count("C"), formula.count("N")
    protons = electrons + formula.charge + carbon - nitrogen
    made = (
        float(carbon) * known["HCO3-"]
        + float(nitrogen) * known["NH4+"]
        + float(protons) * known["H+"]
        - float(3 * carbon - formula.count("O")) * known["H2O"]
    )
    energy = made - formation
    return HalfReaction(energy, -energy / float(electrons), float(electrons))


def references() -> dict[str, float]:
    """The Gibbs energies of formation of the reference compounds in the catalogue [kJ/mol]."""
    forms = {
        "HCO3-": find_formation("bicarbonate", -1),
        "NH4+": find_formation("ammonia", 1),
        "H2O": find_formation("water", 0),
    }
    return {name: form.gibbs for name, form in forms.items() if form} | {"H+": _PROTON}


def biomass_formation(formula: Formula) -> tuple[float | None, bool]:
    """The Gibbs energy of formation of a biomass [kJ/mol], and whether it is estimated.

    That of CH1.8O0.5N0.2 is -67 kJ per C-mol; another is taken to hold as much per electron.
    None where it holds other elements than C, H, O, N.

    Examples
    --------
    >>> from fluxnet.chemistry.reader import read_formula
    >>> biomass_formation(read_formula("C2H3.6ON0.4"))
    (-134.0, False)
    >>> value, estimated = biomass_formation(read_formula("CH1.83O0.56N0.17"))
    >>> round(value, 1), estimated
    (-80.0, True)
    """
    measured = find_formation("biomass", 0)
    carbon = formula.count("C")
    if measured is None or not carbon:
        return None, False
    standard = read_formula(BIOMASS)
    if {e: n / carbon for e, n in formula.counts} == dict(standard.counts):
        return measured.gibbs * float(carbon), False
    held = half_reaction(standard, measured.gibbs)
    apart = half_reaction(formula, 0.0)
    if held is None or apart is None:
        return None, True
    return apart.energy + held.per_electron * apart.electrons, True
