from __future__ import annotations

import pytest

from fluxnet.chemistry.catalogue import load_catalogue
from fluxnet.chemistry.henry import carbonate_factor, find_henry


def test_ethanol_is_the_published_constant() -> None:
    """Sander 2023: 1.9 mol/m3/Pa at 298.15 K, d ln H / d(1/T) 6400 K (read, two digits)."""
    ethanol = find_henry("ethanol")
    assert ethanol is not None
    assert ethanol.at(298.15) == 1.9
    assert (ethanol.at(298.15 + 0.01) / 1.9 - 1) / 0.01 == pytest.approx(
        -6400 / 298.15**2, rel=1e-3
    )
    assert "Sander" in ethanol.source


def test_a_constant_from_memory_says_so_and_every_name_is_one_of_the_catalogue() -> None:
    for name in ("CO2", "acetaldehyde", "acetone", "diacetyl", "methanol", "1-propanol",
                 "2-propanol", "1-butanol", "isobutanol", "ethyl-acetate"):  # fmt: skip
        henry, compound = find_henry(name), load_catalogue().find(name)
        assert henry is not None
        assert henry.source == "from memory"
        assert compound is not None
        assert compound.name == name
    assert find_henry("acetate") is None


def test_water_at_25_degrees_holds_34_mmol_of_carbon_dioxide_at_one_atmosphere() -> None:
    """33.4 mmol/L by the constant; handbooks say 33 to 34 (from memory)."""
    henry = find_henry("CO2")
    assert henry is not None
    assert henry.at(298.15) * 101_325 == pytest.approx(33.4, abs=0.1)


def test_bicarbonate_is_as_much_as_carbon_dioxide_at_the_pka() -> None:
    assert carbonate_factor(6.35) == pytest.approx(2.0)
    assert carbonate_factor(7.35) == pytest.approx(11.0)
