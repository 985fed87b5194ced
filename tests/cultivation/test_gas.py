"""The balance of the inert gases, ratios with their interval, and gases in water."""

from __future__ import annotations

import numpy as np
import pytest

from fluxnet.chemistry.carbonate import carbon_over_dissolved, carbonate_constants
from fluxnet.chemistry.gas import find_solubility, litres_to_moles, saturated_oxygen
from fluxnet.chemistry.henry import carbonate_factor, find_henry
from fluxnet.cultivation.gas import at_pressure, dry_fraction, inert_balance, ratio_interval
from fluxnet.ground.errors import MisuseError

AIR = {"oxygen": 0.2095, "CO2": 0.0004}


def test_a_worked_gas_balance_is_met_and_differs_from_one_that_leaves_out_the_inert_gases() -> None:
    """10.0 L/min (0 °C, 1 atm) of air; outlet 18.20 % O2, 2.60 % CO2, dry; 5.0 L of broth.

    Made-up readings, worked by an independent script (N2 and argon conserved): 26.769 mol/h in,
    26.705 out, OUR 149.57, CER 136.72 mmol/L/h, RQ 0.9141; without the balance OUR 147.23 and
    RQ 0.931. Tolerance 0.02, the rounding of the worked numbers.
    """
    flow = litres_to_moles(600.0, 0.0)
    outlet = {"oxygen": 0.182, "CO2": 0.026}
    rates = inert_balance(flow, AIR, outlet)
    naive = inert_balance(flow, AIR, outlet, flow_out=flow)
    per_litre = 1000 / 5.0

    assert flow == pytest.approx(26.769, abs=5e-4)
    assert float(rates.flow_out) == pytest.approx(26.705, abs=5e-4)
    assert float(rates.uptake) * per_litre == pytest.approx(149.57, abs=0.02)
    assert float(rates.released["CO2"]) * per_litre == pytest.approx(136.72, abs=0.02)
    assert float(rates.respiratory_quotient) == pytest.approx(0.9141, abs=1e-4)
    assert float(naive.uptake) * per_litre == pytest.approx(147.23, abs=0.02)
    assert float(naive.respiratory_quotient) == pytest.approx(0.931, abs=1e-3)


def test_normal_and_standard_litres_differ_by_the_7_3_per_cent_that_is_told() -> None:
    assert litres_to_moles(1, 0.0) / litres_to_moles(1, 20.0) == pytest.approx(1.0732, abs=1e-4)


def test_a_gas_that_the_broth_makes_must_be_listed() -> None:
    true_out = {"oxygen": 0.0, "CO2": 0.3, "hydrogen": 0.2}
    inlet = {"oxygen": 0.0, "CO2": 0.0, "hydrogen": 0.0}
    told = inert_balance(1.0, inlet, true_out)
    blind = inert_balance(
        1.0, {"oxygen": 0.0, "CO2": 0.0}, {k: true_out[k] for k in ("oxygen", "CO2")}
    )

    assert float(told.released["CO2"]) == pytest.approx(0.3 / 0.5)
    assert float(blind.released["CO2"]) == pytest.approx(0.3 / 0.7)
    with pytest.raises(MisuseError, match="same gases"):
        inert_balance(1.0, {"oxygen": 0.0, "CO2": 0.0}, true_out)


def test_moisture_and_pressure_are_taken_out_of_a_reading() -> None:
    assert float(dry_fraction(0.2, 0.04)) == pytest.approx(0.2 / 0.96)
    assert float(at_pressure(0.2095 * 1.0 / 1.01, 1.0, 1.01)) == pytest.approx(0.2095)


def test_an_interval_of_a_ratio_covers_as_often_as_it_says() -> None:
    generator = np.random.default_rng(8)
    covariance = np.array([[0.5, 0.3], [0.3, 1.0]])
    draws = generator.multivariate_normal([9.0, 10.0], covariance, size=4000)
    inside = [
        found.low <= 0.9 <= found.high
        for found in (ratio_interval(a, b, covariance) for a, b in draws)
    ]

    assert 0.94 <= np.mean(inside) <= 0.96


def test_a_ratio_over_what_is_not_told_from_nothing_is_unusable_and_unbounded() -> None:
    found = ratio_interval(1.0, 1.0, np.diag([0.01, 0.5]))

    assert not found.usable
    assert found.high == np.inf


@pytest.mark.parametrize(("celsius", "milligrams"), [(20, 9.09), (25, 8.26), (30, 7.56)])
def test_air_saturated_water_holds_as_much_oxygen_as_the_standard_says(
    celsius: float, milligrams: float
) -> None:
    """EN 25814 (read): mg/L at 101.325 kPa. 4 %: the constant 1.3e-5 has two digits."""
    assert saturated_oxygen(celsius) * 31.998 == pytest.approx(milligrams, rel=0.04)


def test_oxygen_at_30_degrees_is_3_per_cent_above_the_standard_as_worked_by_hand() -> None:
    """0.2434 mM by the rounded constant, against 0.2363 of EN 25814 (computed)."""
    assert saturated_oxygen(30.0) == pytest.approx(0.2434, abs=2e-4)


@pytest.mark.parametrize(
    ("name", "constant", "slope"),
    [("oxygen", 1.3e-5, 1500), ("N2", 6.4e-6, 1300), ("CO", 9.7e-6, 1300), ("ethanol", 1.9, 6400)],
)
def test_constants_are_those_of_the_published_compilation(
    name: str, constant: float, slope: float
) -> None:
    """Sander 2023, Atmos. Chem. Phys. 23, 10901 (read): mol/m3/Pa at 298.15 K."""
    henry = find_solubility(name)

    assert henry is not None
    assert (henry.constant, henry.slope) == (constant, slope)
    assert "Sander" in henry.source


def test_the_ceiling_of_oxygen_transfer_is_85_mmol_per_litre_and_hour() -> None:
    """kLa 360 1/h times 0.236 mM (EN 25814 at 30 °C), no oxygen in the broth: 85 (computed)."""
    assert pytest.approx(85.0, abs=0.1) == 360 * 7.56 / 31.998
    assert 360 * saturated_oxygen(30.0) == pytest.approx(85.0, rel=0.04)


def test_carbonic_acid_has_its_handbook_constants_at_25_degrees() -> None:
    """6.35 and 10.33 (from memory); carbonate counts below pH 8 for less than a hundredth."""
    pk1, pk2 = carbonate_constants(25.0)

    assert (pk1, pk2) == (pytest.approx(6.35, abs=0.005), pytest.approx(10.33, abs=0.005))
    assert carbon_over_dissolved(7.0, 25.0) == pytest.approx(carbonate_factor(7.0), rel=0.01)
    assert find_henry("oxygen") is None
