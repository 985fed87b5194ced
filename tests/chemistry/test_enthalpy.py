"""Heats of combustion come from measurements, and an estimate says that it is one."""

from __future__ import annotations

import csv
from pathlib import Path

import pytest

from fluxnet.chemistry import enthalpy
from fluxnet.chemistry.catalogue import Compound, find_compound, load_catalogue
from fluxnet.chemistry.enthalpy import heat_in_water, heat_of_combustion
from fluxnet.chemistry.formation import Formation, State, find_formations
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


DISSOLVED = [
    (compound, form)
    for compound in load_catalogue()
    for form in find_formations(compound.name)
    if form.state is State.DISSOLVED and compound.combustion_kJ
]


def test_every_form_belongs_to_a_compound() -> None:
    path = Path(enthalpy.__file__).with_name("formation.csv")
    with path.open(encoding="utf-8", newline="") as file:
        names = {line["compound"] for line in csv.DictReader(file)}

    assert names <= set(load_catalogue().names)
    assert sum(len(find_formations(name)) for name in names) >= 130


@pytest.mark.parametrize(
    ("compound", "form"), DISSOLVED, ids=[f"{c.name} {f.charge:+d}" for c, f in DISSOLVED]
)
def test_dissolving_changes_a_heat_of_combustion_little(
    compound: Compound, form: Formation
) -> None:
    """Heats of solution and of dissociation are some 40 kJ/mol, of long chains one per cent.

    Three do not: the tables of heats of formation (CRC) and OBIGT differ on solid alanine and
    threonine by 42 and 50 kJ/mol, and ammonium is no gas.
    """
    heat = heat_in_water(compound, form.charge)

    assert heat is not None
    usual = max(42.0, 0.01 * heat.value)
    apart = {"alanine": 50, "threonine": 60, "ammonia": 90}.get(compound.name, usual)
    assert heat.value == pytest.approx(compound.combustion_kJ, abs=apart)


def test_sulfur_and_phosphorus_end_as_ions_in_water() -> None:
    """H2S to sulfate: -909.60 + 37.66 kJ/mol, by hand from its enthalpy of formation."""
    sulfide, sulfate, phosphate = (find_compound(n) for n in ("H2S", "sulfate", "phosphate"))
    assert sulfide is not None
    assert sulfate is not None
    assert phosphate is not None

    burnt = heat_of_combustion(sulfide.formula, sulfide)

    assert burnt is not None
    assert burnt.value == pytest.approx(909.60 - 37.66)
    for ion in (sulfate, phosphate):
        done = heat_of_combustion(ion.formula, ion)
        assert done is not None
        assert done.value == pytest.approx(0.0, abs=1e-9)
