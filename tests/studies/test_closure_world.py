"""What a closure assumes: who is exchanged, and which nitrogen source."""

from __future__ import annotations

import sys
from pathlib import Path

import pytest

from fluxnet.chemistry.reader import read_formula
from fluxnet.network.model import Basis, Direction, Network, Quantity, QuantityKind, Role, Species
from fluxnet.rates.measured import MeasuredRate, RatesTable, Run
from fluxnet.studies.closure import close_rates
from fluxnet.tables.rates_table import read_rates_text

sys.path.insert(0, str(Path(__file__).resolve().parent))

from closing import AEROBIC, ETHANOL, HEAD, balance, close, rate, table


def test_nitrogen_is_balanced_only_where_its_source_has_a_row() -> None:
    assert [b.name for b in close(AEROBIC).balances] == ["carbon", "nitrogen", "electrons"]
    without_row = AEROBIC.replace("A,ammonia,in,1.3,0.1,mmol/g/h\n", "")
    run = close(without_row)
    assert [b.name for b in run.balances] == ["carbon", "electrons"]
    assert "ammonia" in run.world.free
    assert run.test.dof == 2


def test_a_species_with_sulfur_is_balanced_in_sulfur_where_sulfate_has_a_row() -> None:
    text = "A,cysteine,in,1,0.1,mmol\nA,CO2,out,3,0.2,mmol\nA,oxygen,in,4.5,0.3,mmol\n"
    assert close(text).find_balance("sulfur") is None
    run = close(text + "A,sulfate,out,0.9,0.1,mmol\n")
    assert balance(run, "sulfur").recovery == pytest.approx(90)
    assert "sulfate" not in run.world.free


def test_what_is_taken_as_not_exchanged_is_told() -> None:
    assert close(ETHANOL).world.not_exchanged == ("O2", "H2")
    network = Network(
        "m", Basis.SPECIFIC,
        (Species("glucose", Role.SUBSTRATE, read_formula("C6H12O6"), entry="glucose"),
         Species("oxygen", Role.SUBSTRATE, read_formula("O2"), entry="oxygen"),
         Species("ethanol", Role.PRODUCT, read_formula("C2H6O"), entry="ethanol"),
         Species("lactate", Role.PRODUCT, read_formula("C3H6O3"), entry="lactate"),
         Species("CO2", Role.EXCHANGE, read_formula("CO2"), entry="CO2")),
        (), (), (),
    )  # fmt: skip
    closure = close_rates(table(ETHANOL), network=network)
    assert closure.runs[0].world.not_exchanged == ("oxygen", "H2", "lactate")


def test_formulas_come_from_the_model_where_it_has_them() -> None:
    """A model's own aroma, which the catalogue does not know."""
    network = Network(
        "m", Basis.AMOUNT,
        (Species("glucose", Role.SUBSTRATE, read_formula("C6H12O6"), entry="glucose"),
         Species("aroma", Role.PRODUCT, read_formula("C8H10O"))),
        (), (), (),
    )  # fmt: skip
    reading = read_rates_text(
        HEAD + "A,glucose,in,8,0.1,mmol\nA,aroma,out,6,0.1,mmol\n", network=network
    )
    assert reading.table is not None
    run = close_rates(reading.table, network=network).runs[0]
    assert balance(run, "carbon").recovery == pytest.approx(100)


@pytest.mark.parametrize(
    ("source", "reference", "oxygen"),
    [("ammonia", "ammonia", 3.0), ("urea", "urea", 3.0), ("nitrate", "nitrate", 1.0),
     ("N2", "N2", 2.25)],
)  # fmt: skip
def test_the_nitrogen_source_moves_the_electrons(
    source: str, reference: str, oxygen: float
) -> None:
    """5 C-mol of cells with 1 N: nitrate takes 8 electrons as it is reduced, N2 takes 3."""
    text = "A,glucose,in,1.375,0.1,mmol\nA,biomass,out,5,0.1,mmol\nA,oxygen,in,,,mmol\n"
    run = close(text + "A,CO2,out,,,mmol\n", nitrogen=source)
    assert run.reference == reference
    assert rate(run, "oxygen").reconciled == pytest.approx(oxygen)
    shown = balance(run, "electrons")
    gamma = {"ammonia": 4.2, "urea": 4.2, "nitrate": 5.8, "N2": 4.8}[source]
    assert shown.released == pytest.approx(5 * gamma)


def test_the_carbon_of_urea_goes_with_its_nitrogen() -> None:
    """0.5 urea for 1 N of cells brings 0.5 C: that much more CO2."""
    text = ("A,glucose,in,1.375,0.1,mmol\nA,biomass,out,5,0.1,mmol\nA,CO2,out,,,mmol\n"
            "A,oxygen,in,,,mmol\n")  # fmt: skip
    with_urea = close(text, nitrogen="urea")
    with_ammonia = close(text)
    assert rate(with_ammonia, "CO2").reconciled == pytest.approx(3.25)
    assert rate(with_urea, "CO2").reconciled == pytest.approx(3.75)
    assert any("urea" in note for note in with_urea.notes)


def test_the_reference_of_nitrogen_changes_no_verdict_while_nitrogen_is_balanced() -> None:
    text = AEROBIC + "A,nitrate,in,0.01,0.001,mmol/g/h\n"
    one = close(text, nitrogen="ammonia")
    two = close(text, nitrogen="nitrate")
    assert two.reference == "nitrate"
    assert balance(one, "electrons").gap != pytest.approx(balance(two, "electrons").gap)
    # ammonia has a row in both, so no species is free in one and not in the other
    assert two.test.dof == one.test.dof
    assert two.test.h == pytest.approx(float(one.test.h or 0), rel=1e-9)


def test_oxygen_and_other_acceptors_are_counted_with_what_is_made_of_the_electrons() -> None:
    run = close("A,ethanol,in,1,0.1,mmol\nA,oxygen,in,1,0.1,mmol\nA,nitrate,in,1,0.1,mmol\n"
                "A,N2,out,0.5,0.1,mmol\nA,CO2,out,2,0.1,mmol\n")  # fmt: skip
    shown = balance(run, "electrons")
    assert shown.taken == pytest.approx(12)
    assert shown.released == pytest.approx(4 + 8 - 3)
    assert run.or_index is None


def test_the_or_index_is_null_where_nothing_is_more_reduced_than_sugar() -> None:
    assert close("A,glucose,in,1,0.1,mmol\nA,acetate,out,3,0.1,mmol\n").or_index is None
    index = close("A,glucose,in,1,0.1,mmol\nA,ethanol,out,2,0.1,mmol\nA,CO2,out,2,0.1,mmol\n")
    assert index.or_index == pytest.approx(1.0)


def test_an_element_without_a_reference_leaves_the_electrons_out_and_is_told() -> None:
    kinds = (
        Species("selenol", Role.EXCHANGE, read_formula("C3H7NO2Se")),
        Species("selenite", Role.EXCHANGE, read_formula("H2SeO3")),
    )
    rates = (
        MeasuredRate(Quantity(QuantityKind.RATE, "selenol", Direction.IN), 1.0, 0.1),
        MeasuredRate(Quantity(QuantityKind.RATE, "selenite", Direction.OUT), 0.9, 0.1),
    )
    table_ = RatesTable((Run("A", Basis.AMOUNT, rates, unit="mmol"),), species=kinds)
    run = close_rates(table_).runs[0]
    assert run.find_balance("electrons") is None
    assert balance(run, "Se").recovery == pytest.approx(90)
    assert any("Se" in note for note in run.notes)
