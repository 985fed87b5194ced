"""Published values of the degree of reduction and of the mass of a C-mol."""

from __future__ import annotations

import pytest

from fluxnet.chemistry.catalogue import find_compound
from fluxnet.chemistry.formula import Formula, NitrogenReference, degree_of_reduction, molar_mass
from fluxnet.chemistry.reader import read_formula

CELLS = "CH1.8O0.5N0.2"


def formula(name: str) -> Formula:
    compound = find_compound(name)
    return compound.formula if compound is not None else read_formula(name)


@pytest.mark.parametrize(
    ("name", "electrons"),
    [
        ("glucose", 24), ("glycerol", 14), ("ethanol", 12), ("acetic acid", 8),
        ("lactic acid", 12), ("succinic acid", 14), ("formic acid", 2), ("butyric acid", 20),
        ("1-butanol", 24), ("acetone", 16), ("CO", 2), ("H2", 2), ("NH3", 0), ("O2", -4),
        ("propionic acid", 14), ("2,3-butanediol", 22), ("acetoin", 20), ("1,3-propanediol", 16),
        ("lysine", 28), ("glutamic acid", 18), ("citric acid", 18), ("itaconic acid", 18),
        ("fumaric acid", 12), ("malic acid", 12), ("3-HP", 12), ("pyruvic acid", 10),
        ("alanine", 12), ("palmitic acid", 92), ("methane", 8), ("methanol", 6),
        ("oxalic acid", 2), ("urea", 0), (CELLS, 4.2),
    ],
)  # fmt: skip
def test_electrons_per_mole_with_ammonia_as_reference(
    name: str, electrons: float
) -> None:
    """Definition of Roels (1983) and of Erickson, Minkevich and Eroshin (1978); values computed.

    Exact by definition, so the tolerance is that of floating point. Both the free acid and
    the ion at pH 7 must give the same.
    """
    gamma = degree_of_reduction(formula(name))
    assert gamma is not None
    assert float(gamma) == pytest.approx(electrons, abs=1e-9)
    compound = find_compound(name)
    if compound is not None:
        assert degree_of_reduction(compound.formula_ph7) == gamma


@pytest.mark.parametrize(
    ("name", "per_carbon"),
    [
        ("ammonia", 3), ("urea", 6), (CELLS, 4.80), ("formic acid", 2), ("acetic acid", 4),
        ("propionic acid", 4.67), ("butyric acid", 5.00), ("valeric acid", 5.20),
        ("palmitic acid", 5.75), ("lactic acid", 4), ("gluconic acid", 3.67),
        ("pyruvic acid", 3.33), ("oxalic acid", 1), ("succinic acid", 3.50), ("fumaric acid", 3),
        ("malic acid", 3), ("citric acid", 3), ("glucose", 4), ("ethanol", 6), ("glycerol", 4.67),
        ("acetone", 5.33),
    ],
)  # fmt: skip
def test_electrons_per_carbon_with_nitrogen_gas_as_reference(
    name: str, per_carbon: float
) -> None:
    """Villadsen, Nielsen, Liden, Bioreaction Engineering Principles, 2nd ed., Table 4.3, p. 104.

    As quoted, not opened again; printed with two decimals, hence 0.005. Ammonia holds no
    carbon: its value is per mole.
    """
    gamma = degree_of_reduction(formula(name), NitrogenReference.NITROGEN)
    assert gamma is not None
    carbon = formula(name).count("C") or 1
    assert float(gamma / carbon) == pytest.approx(per_carbon, abs=0.005)


def test_biomass_under_each_nitrogen_reference() -> None:
    """4.2 and 5.8 from a chapter by Heijnen in an encyclopedia of bioprocess technology."""
    cells = read_formula(CELLS)
    found = {r: degree_of_reduction(cells, r) for r in NitrogenReference}
    assert {r: float(g) for r, g in found.items() if g is not None} == pytest.approx(
        {
            NitrogenReference.AMMONIA: 4.2,
            NitrogenReference.NITROGEN: 4.8,
            NitrogenReference.NITRATE: 5.8,
        }
    )


def test_mass_of_a_c_mol_of_biomass() -> None:
    """24.626 g/C-mol computed from C 12.011, H 1.008, O 15.999, N 14.007; published as 24.6."""
    assert molar_mass(read_formula(CELLS)) == pytest.approx(24.626, abs=0.001)
    assert molar_mass(read_formula(CELLS)) == pytest.approx(24.6, abs=0.03)
