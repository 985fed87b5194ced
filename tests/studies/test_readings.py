"""Laboratory causes of a wrong rate, each against numbers worked out by hand."""

from __future__ import annotations

from dataclasses import replace
from fractions import Fraction
from math import exp, inf

import pytest

from fluxnet.chemistry.reader import read_formula
from fluxnet.network.model import Direction, Role, Species
from fluxnet.studies.conditions import read_conditions
from fluxnet.studies.reading_units import unit_readings
from fluxnet.studies.readings import Cause, Reading, SuspectedRate, readings_of
from fluxnet.studies.units import unusual_words
from fluxnet.tables.rates_table import read_rates_text

COLUMNS = {
    "temperature [C]": "30", "gas flow [vvm]": "1", "ethanol conc [g/L]": "12", "pH": "7",
    "dilution [1/h]": "0.1", "off-gas CO2 [%]": "4", "biomass conc [g/L]": "5",
}  # fmt: skip
X = Species("X", Role.BIOMASS, read_formula("CH1.8O0.5N0.2"))


def rate(
    name: str, formula: str, way: Direction | None, measured: float, unit: str = "mmol/g/h"
) -> SuspectedRate:
    role = Role.SUBSTRATE if way is Direction.IN else Role.PRODUCT
    return SuspectedRate(name, Species(name, role, read_formula(formula)), way, measured, unit)


GLUCOSE = rate("glucose", "C6H12O6", Direction.IN, 10.0)
ETHANOL = rate("ethanol", "C2H6O", Direction.OUT, 8.0)
CO2 = rate("CO2", "CO2", Direction.OUT, 8.0)
MU = SuspectedRate("mu", X, None, 0.1, "1/h")


def of(cause: Cause, readings: tuple[Reading, ...]) -> Reading:
    return next(r for r in readings if r.cause is cause)


def causes(readings: tuple[Reading, ...]) -> set[Cause]:
    return {r.cause for r in readings}


def test_conditions_are_read_from_the_columns_that_a_table_carries() -> None:
    text = f"run,species,direction,rate,sd,unit,{','.join(COLUMNS)}\n"
    text += f"A,glucose,in,10,0.1,mmol/g/h,{','.join(COLUMNS.values())}\n"
    table = read_rates_text(text).table
    assert table is not None
    found = read_conditions(dict(table.runs[0].extras))
    assert found == read_conditions(COLUMNS)
    assert found.kelvin == pytest.approx(303.15)
    assert found.concentration("ethanol") == pytest.approx(12e3 / 46.069)
    assert (found.biomass, found.ph, found.dilution) == (5.0, 7.0, 0.1)
    assert found.carbon_dioxide == pytest.approx(0.04 * 101_325)


@pytest.mark.parametrize(
    ("title", "cell", "litres_a_mole"),
    [
        ("gas flow [vvm]", "1", 24.055),
        ("gas flow", "1 vvm", 24.055),
        ("air flow [NL/min]", "2", 22.414),
        ("gas flow [L/min at 25 C]", "2", 24.465),
        ("gas flow [L/h]", "120", 24.055),
    ],
)
def test_a_gas_flow_has_a_unit_and_a_reference_condition(
    title: str, cell: str, litres_a_mole: float
) -> None:
    """One volume a minute on two litres of broth: 60 L of gas per litre and hour."""
    found = read_conditions({title: cell, "volume [L]": "2"})
    assert found.gas_flow == pytest.approx(60 / litres_a_mole, rel=1e-4)


def test_what_cannot_be_read_is_as_if_it_were_blank() -> None:
    found = read_conditions(
        {"temperature [C]": "warm", "gas flow [furlong]": "3", "pH": "", "gas flow": "1 L/min"}
    )
    assert found == read_conditions({})
    assert read_conditions({"temperature [C]": "30,5"}).kelvin == pytest.approx(303.65)
    assert read_conditions({"temperature [K]": "303"}).kelvin == 303
    assert read_conditions({"ethanol conc [mM]": "50"}).concentration("ethanol") == 50


def test_ethanol_in_the_gas() -> None:
    """By hand: H(30 C) 1.3335, 260.5 mol/m3, mole fraction 1.928e-3, 2.494 mol gas/L/h.

    4.81 mmol/L/h, and per 5 g/L 0.962 mmol/g/h.
    """
    found = of(Cause.STRIPPED, readings_of(ETHANOL, -0.9, 0.2, COLUMNS))
    henry = 1.9 * exp(6400 * (1 / 303.15 - 1 / 298.15))
    by_hand = 60 / 24.055 * (12e3 / 46.069) / (henry * 101_325) * 1e3 / 5
    assert found.expected == pytest.approx(0.962, abs=0.001)
    assert found.expected == pytest.approx(by_hand, rel=1e-4)
    assert found.factor_low == pytest.approx(1 + by_hand / 8 / 2, rel=1e-4)
    assert found.factor_high == pytest.approx(1 + by_hand / 8 * 2, rel=1e-4)
    assert found.weight == 1.0
    assert "about 0.96 mmol/g/h (gas flow 1 vvm at 20 °C, 30 °C)" in found.words
    per_litre = replace(ETHANOL, measured=40.0, unit="mmol/L/h")
    assert of(Cause.STRIPPED, readings_of(per_litre, -4.5, 1.0, COLUMNS)).expected == (
        pytest.approx(5 * by_hand, rel=1e-4)
    )


def test_a_loss_of_another_size_or_sign_is_no_reading() -> None:
    """2.9 of 8 are three times the loss: 1 mmol/g/h beyond twice of it, in sds of 0.2."""
    assert Cause.STRIPPED not in causes(readings_of(ETHANOL, -2.9, 0.2, COLUMNS))
    assert Cause.STRIPPED not in causes(readings_of(ETHANOL, 0.9, 0.2, COLUMNS))
    twice = 2 * of(Cause.STRIPPED, readings_of(ETHANOL, -0.9, 0.2, COLUMNS)).expected  # type: ignore[operator]
    beyond = of(Cause.STRIPPED, readings_of(ETHANOL, -(twice + 0.3), 0.2, COLUMNS))
    assert beyond.weight == pytest.approx(exp(-0.5 * 1.5**2), rel=1e-6)


def test_what_is_missing_is_asked_for_in_words() -> None:
    found = of(Cause.STRIPPED, readings_of(ETHANOL, -0.9, 0.2, {"temperature [C]": "30"}))
    assert found.expected is None
    assert found.words.endswith(
        "columns gas flow [vvm], ethanol conc [g/L] and biomass conc [g/L] would tell how much"
    )
    carbon = of(Cause.BICARBONATE, readings_of(CO2, -0.2, 0.1))
    assert "pH, off-gas CO2 [%], dilution [1/h]" in carbon.words


def test_volatile_substrates_seem_taken_up_and_acids_stay() -> None:
    taken = rate("methanol", "CH4O", Direction.IN, 8.0)
    found = of(Cause.STRIPPED, readings_of(taken, 0.9, 0.2))
    assert (found.factor_low, found.factor_high) == (pytest.approx(0.7), 1.0)
    assert Cause.STRIPPED not in causes(readings_of(taken, -0.9, 0.2))
    acetate = rate("acetate", "C2H4O2", Direction.OUT, 8.0)
    assert Cause.STRIPPED not in causes(readings_of(acetate, -0.9, 0.2))
    acetoin = rate("acetoin", "C4H8O2", Direction.OUT, 8.0)
    assert "no Henry constant" in of(Cause.STRIPPED, readings_of(acetoin, -0.9, 0.2)).words


def test_carbon_dioxide_in_the_broth() -> None:
    """By hand at 30 C: 4053 Pa x 2.890e-4 = 1.171 mM, x 5.467 at pH 7, x 0.1 / 5 = 0.128."""
    found = of(Cause.BICARBONATE, readings_of(CO2, -0.13, 0.1, COLUMNS))
    assert found.expected == pytest.approx(0.1281, abs=0.0002)
    assert found.factor_low == pytest.approx(1 + 0.1281 / 16, abs=1e-4)
    acid = {**COLUMNS, "pH": "5.0"}
    assert Cause.BICARBONATE not in causes(readings_of(CO2, -0.13, 0.1, acid))
    assert Cause.BICARBONATE not in causes(readings_of(CO2, 0.9, 0.1, COLUMNS))


def test_ash_counted_as_biomass_and_the_calibration_of_dry_weight() -> None:
    found = readings_of(MU, 0.01, 0.002)
    assert {Cause.BIOMASS_COMPOSITION, Cause.CALIBRATION} <= causes(found)
    ash = of(Cause.BIOMASS_COMPOSITION, found)
    assert (ash.factor_low, ash.factor_high, ash.weight) == (0.85, 0.95, 1.0)
    calibration = of(Cause.CALIBRATION, found)
    assert calibration.weight == pytest.approx(exp(-0.5 * ((0.92 - 0.9) / 0.02) ** 2))
    assert "all specific rates together" in calibration.words
    with_ash = replace(MU, species=replace(X, ash=Fraction(8, 100)))
    told = of(Cause.BIOMASS_COMPOSITION, readings_of(with_ash, 0.004, 0.002))
    assert (told.factor_low, told.factor_high) == (0.95, 1.05)
    too_low = readings_of(MU, -0.02, 0.002)
    assert Cause.BIOMASS_COMPOSITION not in causes(too_low)
    per_litre = SuspectedRate("X", X, Direction.OUT, 20.0, "mmol/L/h")
    assert "together" not in of(Cause.CALIBRATION, readings_of(per_litre, 1.0, 0.4)).words


@pytest.mark.parametrize(
    ("name", "formula", "factor"),
    [
        ("glucose", "C6H12O6", 180.156 / 198.171),
        ("lactose", "C12H22O11", 342.297 / 360.312),
        ("citrate", "C6H8O7", 192.123 / 210.138),
        ("trehalose", "C12H22O11", 342.297 / 378.327),
    ],
)
def test_a_hydrate_weighed_as_anhydrous(name: str, formula: str, factor: float) -> None:
    one = rate(name, formula, Direction.IN, 10.0)
    first, *_ = readings_of(one, 10 * (1 - factor), 0.1)
    assert first.cause is Cause.HYDRATE
    assert first.factor_low == first.factor_high == pytest.approx(factor, rel=1e-6)
    assert first.weight == pytest.approx(1.0)
    turned, *_ = readings_of(one, 10 * (1 - 1 / factor), 0.1)
    assert turned.factor_low == pytest.approx(1 / factor, rel=1e-6)
    released = replace(one, direction=Direction.OUT)
    assert Cause.HYDRATE not in causes(readings_of(released, 10 * (1 - factor), 0.1))


def test_a_hydrate_is_told_before_the_feed_only_where_the_size_fits() -> None:
    assert readings_of(GLUCOSE, 0.9, 0.15)[0].cause is Cause.HYDRATE
    assert readings_of(GLUCOSE, 0.4, 0.15)[0].cause is Cause.FEED
    assert Cause.HYDRATE not in causes(readings_of(GLUCOSE, 0.4, 0.15))


def test_evaporation_raises_concentrations_by_what_leaves_in_the_time() -> None:
    """10 to 20 % a week: in 84 h half of that; in a chemostat within 1/D, 0.6 to 1.2 % at 0.1."""
    product = rate("lactate", "C3H6O3", Direction.OUT, 100.0, "mmol/L")
    found = of(Cause.EVAPORATION, readings_of(product, 8.0, 2.0, {"duration [h]": "84"}))
    assert (found.factor_low, found.factor_high) == (pytest.approx(0.9), pytest.approx(0.95))
    assert "5.0 to 10.0 %" in found.words
    steady = replace(product, unit="mmol/L/h")
    told = of(Cause.EVAPORATION, readings_of(steady, 1.0, 2.0, COLUMNS))
    assert told.factor_high == pytest.approx(1 - 0.1 / 168 / 0.1)
    per_gram = replace(product, unit="mmol/g/h")
    assert Cause.EVAPORATION not in causes(readings_of(per_gram, 8.0, 2.0, COLUMNS))
    assert of(Cause.EVAPORATION, readings_of(CO2, -0.2, 0.1)).factor_low > 1


def test_a_complex_medium() -> None:
    """A product that would be taken up; or carbon beside the substrate, as much as 15 %."""
    acid = rate("lactate", "C3H6O3", Direction.OUT, 1.0)
    found = of(Cause.COMPLEX_MEDIUM, readings_of(acid, 1.5, 0.2))
    assert (found.factor_low, found.factor_high, found.weight) == (-inf, 0.0, 1.0)
    assert Cause.COMPLEX_MEDIUM not in causes(readings_of(acid, 0.4, 0.1))
    beside = of(Cause.COMPLEX_MEDIUM, readings_of(GLUCOSE, -0.8, 0.1))
    assert (beside.factor_low, beside.factor_high) == (1.02, 1.15)


def test_the_gas_analyser_is_named_for_gases_alone() -> None:
    oxygen = rate("oxygen", "O2", Direction.IN, 5.0)
    assert "gas analyser" in of(Cause.CALIBRATION, readings_of(oxygen, 0.4, 0.1)).words
    assert Cause.CALIBRATION not in causes(readings_of(GLUCOSE, 0.4, 0.1))


def test_nothing_plausible_is_no_reading() -> None:
    assert readings_of(GLUCOSE, -6.0, 0.2) == ()
    assert readings_of(replace(GLUCOSE, measured=0.0), -6.0, 0.2) == ()


def test_readings_come_by_weight_and_a_size_that_is_known_first() -> None:
    found = readings_of(CO2, -0.12, 0.05, COLUMNS)
    assert [r.weight for r in found] == sorted((r.weight for r in found), reverse=True)
    assert found[0].cause is Cause.BICARBONATE


@pytest.mark.parametrize(
    ("measured", "would_be", "words"),
    [
        (10200.0, 8.92, "mmol typed as mol"),
        (0.0102, 10.0, "mol typed as mmol"),
        (0.17, 10.1, "per minute typed as per hour"),
        (240.0, 10.1, "per day typed as per hour"),
        (1801.6, 10.0, "mg typed as mmol"),
        (60.0, 10.02, "C-mmol typed as mmol"),
    ],
)
def test_a_unit_that_was_mistaken_is_told_by_its_factor(measured, would_be, words) -> None:
    found = unit_readings(replace(GLUCOSE, measured=measured), would_be, 0.02 * would_be)
    assert found[0].cause is Cause.UNIT
    assert found[0].words.startswith(f"{words}? The rate times ")
    assert found[0].factor_low * measured == pytest.approx(would_be, rel=0.15)


def test_a_rate_that_is_off_by_no_known_factor_has_no_unit_mistaken() -> None:
    assert unit_readings(replace(GLUCOSE, measured=40.0), 10.0, 0.1) == ()
    assert unit_readings(replace(GLUCOSE, measured=10.0), -1.0, 0.1) == ()
    # an sd of a third tells nothing of a factor
    assert unit_readings(replace(GLUCOSE, measured=60.0), 10.0, 3.3) == ()
    assert [r.words[:12] for r in unit_readings(replace(MU, measured=100.0), 0.1, 0.001)] == []


def test_specific_rates_larger_than_cells_have_are_told() -> None:
    assert unusual_words([("glucose in", 8.0), ("CO2 out", 99.0)], "mmol/g/h") == ""
    assert unusual_words([("glucose in", 8920.0)], "mmol/L/h") == ""
    told = unusual_words([("glucose in", 8920.0), ("lactate out", 17000.0)], "mmol/g/h")
    assert told.startswith("glucose in, lactate out are above 100 mmol/g/h")
