"""Heats of combustion come from measurements, and an estimate says that it is one."""

from __future__ import annotations

import pytest

from fluxnet.chemistry.catalogue import find_compound
from fluxnet.chemistry.enthalpy import heat_of_combustion
from fluxnet.chemistry.reader import read_formula


def test_a_measured_heat_is_preferred() -> None:
    glucose = find_compound("glucose")
    assert glucose is not None
    heat = heat_of_combustion(glucose.formula, glucose)
    assert heat is not None
    assert heat.value == 2802.8
    assert not heat.estimated


def test_without_a_measurement_the_heat_is_estimated_from_the_electrons() -> None:
    acetoin = find_compound("acetoin")
    assert acetoin is not None
    heat = heat_of_combustion(acetoin.formula, acetoin)
    assert heat is not None
    assert heat.estimated
    assert heat.value == 115 * 20
    cells = heat_of_combustion(read_formula("CH1.8O0.5N0.2"))
    assert cells is not None
    assert cells.value == pytest.approx(115 * 4.8)


def test_an_element_without_reference_has_no_estimate() -> None:
    assert heat_of_combustion(read_formula("C3H7NO2Se")) is None


@pytest.mark.parametrize(
    ("name", "textbook"),
    [
        ("glucose", 2803), ("ethanol", 1367), ("acetate", 875), ("succinate", 1491),
        ("butyrate", 2184), ("citrate", 1961), ("palmitate", 9978), ("urea", 632),
        ("ammonia", 383), ("biomass", 560),
    ],
)  # fmt: skip
def test_heats_agree_with_a_textbook_table(name: str, textbook: float) -> None:
    """Villadsen, Nielsen, Liden, Bioreaction Engineering Principles, Table 4.3, as quoted."""
    compound = find_compound(name)
    assert compound is not None
    heat = heat_of_combustion(compound.formula, compound)
    assert heat is not None
    assert heat.value == pytest.approx(textbook, rel=3e-3)
