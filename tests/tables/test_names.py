"""The names of a table: of the model, of the table itself, of the catalogue."""

from __future__ import annotations

import pytest

from fluxnet.ground.names import Name
from fluxnet.network.model import Direction, Quantity, QuantityKind
from fluxnet.tables.rates_table import read_rates_text

LONG = "run,species,direction,rate,sd,unit\n"


@pytest.mark.parametrize(
    ("typed", "own"),
    [
        ("glucose", "glucose"),
        ("Glucose", "glucose"),
        ("dextrose", "glucose"),
        ("acetic acid", "acetate"),
        ("X", "X"),
        ("x", "X"),
        ("biomass", "X"),
        ("CO₂", "CO2"),
        ("carbon dioxide", "CO2"),
    ],
)
def test_a_species_has_the_name_of_the_model(read, network, typed, own):
    direction = "in" if own == "glucose" else "out"
    run = read(LONG + f"A,{typed},{direction},2,1,mmol/g/h\n", network=network)
    assert run.rates[0].quantity == Quantity(QuantityKind.RATE, own, Direction(direction))


def test_the_role_gives_the_direction_where_none_is_written(read, network):
    run = read(
        LONG + "A,glucose,,2,1,mmol/g/h\nA,acetate,,2,1,mmol/g/h\nA,X,,2,1,mmol/g/h\n",
        network=network,
    )
    assert [str(r.quantity) for r in run.rates] == ["glucose in", "acetate out", "X out"]


def test_an_exchange_species_needs_a_direction(fault, network):
    found = fault(LONG + "A,CO2,,2,1,mmol/g/h\n", network=network)
    assert found.name is Name.BAD_DIRECTION
    assert found.mend == "write CO2 in, or CO2 out"


@pytest.mark.parametrize(("species", "direction"), [
    ("glucose", "out"), ("acetate", "in"), ("X", "in"), ("acetic acid", "in"),
])  # fmt: skip
def test_a_direction_against_the_role_is_an_error(fault, network, species, direction):
    found = fault(LONG + f"A,{species},{direction},2,1,mmol/g/h\n", network=network)
    assert found.name is Name.RATE_AGAINST_ROLE


@pytest.mark.parametrize(("row", "mend"), [
    ("A,oxygen,in,-3.60,5 %,mmol/g/h",
     "rates are magnitudes: write 3.60 with the direction in if the minus only marks the uptake; "
     "if oxygen was really released, out"),
    ("A,CO2,out,\u22122 ± 0.1,,mmol/g/h",
     "rates are magnitudes: write 2 with the direction out if the minus is only a convention; "
     "if CO2 was really taken up, in"),
])  # fmt: skip
def test_a_negative_rate_is_most_often_a_sign_convention(fault, row, mend):
    found = fault(LONG + row + "\n")
    assert (found.name, found.mend) == (Name.NEGATIVE_RATE, mend)
    assert found.edits == ()


def test_a_negative_rate_of_a_substrate_goes_no_other_way(fault, network):
    found = fault(LONG + "A,glucose,in,-2.050,0.1,mmol/g/h\n", network=network)
    assert found.mend == "rates are magnitudes: write 2.050 with the direction in"


def test_a_negative_growth_rate_gets_a_mend_of_its_own(fault):
    found = fault(LONG + "A,mu,,-0.01,0.02,1/h\n")
    assert found.name is Name.NEGATIVE_RATE
    assert "write 0" in found.mend


def test_a_flux_is_named_with_or_without_its_word_and_may_be_negative(read, network):
    run = read(
        LONG + "A,flux upkeep,,-1.5,0.1,mmol/g/h\nA,glucose,in,2,1,mmol/g/h\n", network=network
    )
    assert run.rates[0].quantity == Quantity(QuantityKind.FLUX, "upkeep")
    assert run.rates[0].value == -1.5
    bare = read(LONG + "A,upkeep,,1.5,0.1,mmol/g/h\n", network=network)
    assert bare.rates[0].quantity == run.rates[0].quantity


@pytest.mark.parametrize(
    ("row", "name"),
    [
        ("flux upkep,,1,1,mmol/g/h", Name.UNKNOWN_QUANTITY),
        ("flux upkeep,out,1,1,mmol/g/h", Name.BAD_DIRECTION),
        ("flux upkeep,,1,1,g/g/h", Name.WRONG_UNIT),
        ("pyruvate,out,1,1,mmol/g/h", Name.UNKNOWN_QUANTITY),
        ("glucos,in,1,1,mmol/g/h", Name.UNKNOWN_QUANTITY),
        ("zzzz,in,1,1,mmol/g/h", Name.UNKNOWN_QUANTITY),
        ("NADH,out,1,1,mmol/g/h", Name.UNKNOWN_QUANTITY),
        ("CO2 / zzzz,,1,1,", Name.UNKNOWN_QUANTITY),
        ("CO2 / oxygen / glucose,,1,1,", Name.UNKNOWN_QUANTITY),
        ("mu / glucose,,1,1,g/g", Name.WRONG_UNIT),
    ],
)
def test_a_name_that_the_model_does_not_have_is_an_error(fault, network, row, name):
    assert fault(LONG + f"A,{row}\n", network=network).name is name


def test_the_nearest_name_of_the_model_is_offered(fault, network):
    assert "acetate" in fault(LONG + "A,acettate,out,1,1,mmol\n", network=network).mend


def test_a_compound_of_the_catalogue_outside_the_model_is_a_warning(network):
    reading = read_rates_text(LONG + "A,ethanol,out,1,1,mmol\n", network=network)
    (warning,) = [d for d in reading.diagnostics if d.severity.value == "warning"]
    assert (warning.name, warning.span.line) == (Name.NOT_IN_MODEL, 2)
    assert [s.name for s in reading.table.species] == ["ethanol"]


def test_a_ratio_takes_the_directions_of_the_roles(read, network):
    run = read(LONG + "A,glucose,in,2,1,mmol\nA,CO2 / oxygen,,1.05,0.03,\n", network=network)
    quantity = run.rates[1].quantity
    assert str(quantity) == "CO2 out / oxygen in"
    assert quantity.kind is QuantityKind.RATIO
    assert (run.rates[1].value, run.rates[1].sd) == (1.05, 0.03)


def test_without_a_model_oxygen_in_a_ratio_goes_in(read):
    run = read(LONG + "A,glucose,in,2,1,mmol\nA,CO2 / oxygen,,1.05,0.03,\n")
    assert str(run.rates[1].quantity) == "CO2 out / oxygen in"


def test_the_species_of_a_table_are_those_that_its_rates_name(network):
    reading = read_rates_text(
        LONG + "A,dextrose,in,2,1,mmol/g/h\nA,mu,,0.1,1 %,1/h\nA,CO2 / oxygen,,1,0.1,\n",
        network=network,
    )
    assert reading.table.species == tuple(
        network.find_species(name) for name in ("glucose", "CO2", "oxygen", "X")
    )
