from __future__ import annotations

import pytest

from fluxnet.ground.names import Name
from fluxnet.network.balance import check_balances
from fluxnet.reading.model import read_model_text

SPECIES = {
    "ethanol": "C2H6O",
    "acetaldehyde": "C2H4O",
    "oxygen": "O2",
    "CO2": "CO2",
    "H2O": "H2O",
    "H+": "H charge +1",
    "acetate": "C2H3O2 charge -1",
    "ATP": "energy",
    "NADH": "carries H charge -1",
    "e": "2 electrons",
    "ammonia": "NH3",
    "urea": "CH4N2O",
}


def names(network):
    return [d.name for d in check_balances(network)]


def test_water_that_is_written_must_balance_in_a_line_without_carriers(build):
    assert names(build(SPECIES, "r: ethanol + 3 oxygen -> 2 CO2 + 3 H2O")) == []
    network = build(SPECIES, "r: ethanol + 3 oxygen -> 2 CO2 + 2 H2O")
    (finding,) = check_balances(network)
    assert finding.message == "reaction r uses 1 O more than it makes"
    assert finding.mend == "3 H2O closes every balance"


def test_protons_that_are_written_must_balance_where_cargos_have_a_charge(build):
    assert names(build(SPECIES, "adh: acetaldehyde + NADH + H+ -> ethanol")) == []
    network = build(SPECIES, "adh: acetaldehyde + NADH + 2 H+ -> ethanol")
    (finding,) = check_balances(network)
    assert finding.mend == "1 H+ closes every balance"


def test_protons_and_water_are_free_where_they_are_not_written(build):
    assert names(build(SPECIES, "r: acetate + 2 oxygen -> 2 CO2")) == []
    # acetate C2H3O2(-) + H+ burns to 2 H2O: with protons unwritten the water alone is checked
    assert names(build(SPECIES, "r: acetate + 2 oxygen -> 2 CO2 + 2 H2O")) == []
    wrong = build(SPECIES, "r: acetate + 2 oxygen -> 2 CO2 + 3 H2O")
    assert names(wrong) == [Name.UNBALANCED_LINE]


@pytest.mark.parametrize("carrier", ["ATP", "e"])
def test_beside_a_carrier_without_charge_water_is_not_checked_and_a_note_says_so(build, carrier):
    line = f"r: ethanol + 3 oxygen + {carrier} -> 2 CO2 + 7 H2O + {carrier}"
    (finding,) = check_balances(build(SPECIES, line))
    assert finding.name is Name.BALANCE_NOT_CHECKED
    assert carrier in finding.message


def test_free_phosphate_brings_no_oxygen_into_a_line_without_phosphorus(build):
    assert names(build(SPECIES, "r: urea + H2O -> CO2 + 2 ammonia")) == []
    assert names(build(SPECIES, "r: urea + 2 H2O -> CO2 + 2 ammonia")) == [Name.UNBALANCED_LINE]


def test_free_phosphate_takes_its_oxygen_along(build):
    species = {"G6P": "C6H13O9P", "glucose": "C6H12O6", "H2O": "H2O"}
    assert names(build(species, "r: G6P + H2O -> glucose")) == []
    assert names(build(species, "r: G6P + 2 H2O -> glucose")) == [Name.UNBALANCED_LINE]


MODEL = """
substrate glucose
product   lactate
exchange  H2O, H+, CO2
carrier   NADH
inside    pyruvate
compartment all
    {line}
"""


@pytest.mark.parametrize(
    "line",
    [
        "ldh : pyruvate + NADH + H+ -> lactate",  # both acids, or both ions
        "r : glucose -> 2 lactate + 2 H+",  # lactate as its ion at pH 7
        "r : glucose -> 2 pyruvate + 2 NADH + 2 H+",  # pyruvate as the acid
        "r : glucose -> 2 pyruvate + 2 NADH + 4 H+",  # pyruvate as its ion at pH 7
    ],
)
def test_acids_may_be_counted_as_acids_or_as_their_ions_at_ph_seven_in_one_line(line):
    assert read_model_text(MODEL.format(line=line)).diagnostics == ()


def test_protons_that_close_in_neither_form_are_an_error():
    reading = read_model_text(MODEL.format(line="r : glucose -> 2 pyruvate + 2 NADH + 3 H+"))
    assert [d.name for d in reading.diagnostics] == [Name.UNBALANCED_LINE]
