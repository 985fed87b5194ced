"""What the reactor has to supply: rates an hour, and per litre."""

from __future__ import annotations

import pytest

from fluxnet.ground.errors import MisuseError
from fluxnet.network.model import Basis, Network
from fluxnet.reading.model import read_model_text
from fluxnet.studies.compare import compare
from fluxnet.studies.compare_result import Supply
from fluxnet.studies.compare_supply import per_litre, read_biomass
from tests.studies.pathways import ACETATE, GLYCEROL


def read(text: str) -> Network:
    reading = read_model_text(text)
    assert reading.network is not None, reading.diagnostics
    return reading.network


def supply_of(text: str, product: str, **options: object) -> Supply | None:
    return compare(read(text), product, "glucose", **options).abilities[0].supply  # type: ignore[arg-type]


def test_rates_are_those_at_the_uptake() -> None:
    # glucose + 2 O2 -> 2 acetate + 2 CO2, and a base for each acetate
    supply = supply_of(ACETATE + "limit glucose <= 5\n", "acetate")
    assert supply is not None

    assert (supply.uptake, supply.product) == (5.0, 10.0)
    assert supply.oxygen == pytest.approx(10)
    assert supply.carbon_dioxide == pytest.approx(10)
    assert supply.base == pytest.approx(10)
    # 2803 - 2 * 874 kJ in heats of combustion, and the neutralisation
    assert supply.heat == pytest.approx(5 * (2803 - 2 * 874) / 1000, rel=0.02)


def test_without_an_uptake_there_are_no_rates() -> None:
    assert supply_of(ACETATE, "acetate") is None
    assert supply_of(ACETATE, "acetate", uptake=5) is not None


def test_a_basis_per_carbon_tells_moles() -> None:
    text = "basis C-mol/C-mol/h\n" + GLYCEROL + "limit glucose <= 0.6\n"
    supply = supply_of(text, "glycerol")
    assert supply is not None

    assert supply.uptake == pytest.approx(0.1)
    assert supply.product == pytest.approx(0.16)


@pytest.mark.parametrize(
    ("text", "grams"), [("20 g/L", 20), ("20", 20), ("500 mg/L", 0.5), ("2.5 g DW/L", 2.5), (3, 3)]
)
def test_a_concentration_of_biomass_is_read(text: str | int, grams: float) -> None:
    assert read_biomass(text, Basis.SPECIFIC) == pytest.approx(grams)


@pytest.mark.parametrize("text", ["", "much", "0 g/L", "20 mmol/L", "20 g", "-3 g/L", "5 L/g"])
def test_what_is_no_concentration_is_refused(text: str) -> None:
    with pytest.raises(MisuseError, match="concentration of biomass"):
        read_biomass(text, Basis.SPECIFIC)


def test_rates_per_litre_need_no_biomass() -> None:
    with pytest.raises(MisuseError, match="mmol/L/h"):
        read_biomass("20 g/L", Basis.VOLUMETRIC)


def test_per_litre_heat_is_power() -> None:
    litre = per_litre(Supply(1.0, 1.0, None, 1.0, 3.6, 0.0), 10.0)

    assert (litre.product, litre.oxygen, litre.heat) == (10.0, None, pytest.approx(10.0))
