from __future__ import annotations

from fractions import Fraction

import pytest

from fluxnet.chemistry.reader import read_formula
from fluxnet.ground.errors import MisuseError
from fluxnet.network.biomass import biomass_mass, biomass_mass_sd, growth_factor
from fluxnet.network.model import Basis, Role, Species


def biomass(ash=0, sd=0, formula="CH1.8O0.5N0.2"):
    return Species("X", Role.BIOMASS, read_formula(formula), ash=Fraction(ash), ash_sd=Fraction(sd))


def test_without_ash_the_mass_is_that_of_the_formula():
    # published check value: 24.626 g per C-mol, from C 12.011 H 1.008 O 15.999 N 14.007
    assert biomass_mass(biomass()) == pytest.approx(24.6263, abs=1e-3)


def test_ash_is_a_share_of_dry_weight():
    x = biomass("0.08")
    assert biomass_mass(x) * (1 - 0.08) == pytest.approx(biomass_mass(biomass()))


def test_mu_is_the_rate_in_millimoles_times_the_mass_over_a_thousand():
    assert growth_factor(biomass("0.08"), Basis.SPECIFIC) == pytest.approx(0.026768, abs=1e-6)


def test_per_carbon_mole_of_biomass_mu_counts_the_carbon_of_the_formula():
    x = biomass(formula="C5H9O2.5N")
    assert growth_factor(x, Basis.CARBON) == 5
    assert growth_factor(x, Basis.AMOUNT) is None
    assert growth_factor(x, Basis.VOLUMETRIC) is None


def test_the_error_of_ash_reaches_the_mass_as_its_derivative_says():
    x = biomass("0.08", "0.01")
    up, down = biomass("0.0801"), biomass("0.0799")
    slope = (biomass_mass(up) - biomass_mass(down)) / 0.0002
    assert biomass_mass_sd(x) == pytest.approx(0.01 * slope, rel=1e-6)


def test_a_species_without_formula_has_no_mass():
    with pytest.raises(MisuseError):
        biomass_mass(Species("X", Role.INSIDE))
