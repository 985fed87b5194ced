"""The heat of a conversion: what it is from, what is told of it, and in which unit."""

from __future__ import annotations

from typing import Any

import pytest

import fluxnet as fx
from fluxnet.network.model import Network
from fluxnet.studies.heat import HeatMethod, heat_of

LINES = """
substrate glucose, ammonia, oxygen
product   lactate, acetoin, hydrogen, nitrate, oil C5H8, salt C3H7NO2Se
exchange  CO2
biomass   X CH1.8O0.5N0.2
compartment all
    lactic : glucose -> 2 lactate
    burn   : glucose + 6 oxygen -> 6 CO2
    grow   : 0.2 glucose + 0.2 ammonia + 0.15 oxygen -> X + 0.2 CO2
    diol   : glucose -> acetoin + 2 CO2 + 2 hydrogen
"""


def network(text: str = LINES) -> Network:
    return fx.read_model_text(text).network


def test_nitrogen_without_a_row_is_ammonia_with_its_own_heat() -> None:
    taken = {"glucose": -0.2, "oxygen": -0.15, "X": 1.0, "CO2": 0.2}
    told = heat_of({**taken, "ammonia": -0.2}, network())
    left_out = heat_of(taken, network())

    assert left_out.value == pytest.approx(told.value, abs=1e-9)
    assert told.value == pytest.approx(0.2 * 2802.8 + 0.2 * 382.8 - 560)
    assert {t.species: t.combustion for t in left_out.terms}["ammonia"] == 382.8


def test_an_estimate_is_named_and_said() -> None:
    told = heat_of({"oil": -1.0, "oxygen": -7.0, "CO2": 5.0}, network())

    assert told.value == 115 * 28
    assert told.estimated == ("oil",)
    assert "115 kJ per electron: oil" in told.words


def test_without_oxygen_every_species_counts_as_it_is_in_water() -> None:
    lactic = heat_of({"glucose": -1.0, "lactate": 2.0}, network())
    diol = heat_of({"glucose": -1.0, "acetoin": 1.0, "CO2": 2.0, "hydrogen": 2.0}, network())

    assert lactic.method is HeatMethod.AQUEOUS
    assert lactic.per_oxygen is None
    assert lactic.by_oxygen is None
    assert diol.method is HeatMethod.PURE
    assert "pure states for acetoin, may be off by 30 %" in diol.words
    assert "30 %" not in lactic.words


def test_nitrate_is_no_electron_donor_in_reverse() -> None:
    """An estimate from its electrons would let it take up 575 kJ/mol; it takes 64."""
    told = heat_of({"ammonia": -1.0, "oxygen": -2.0, "nitrate": 1.0}, network())
    by_term = {t.species: t.combustion for t in told.terms}

    assert by_term["nitrate"] == pytest.approx(-63.9, abs=0.1)
    # oxidation of ammonia in gas to nitrate in water: 383 - (-64)
    assert told.value == pytest.approx(446.7, abs=0.1)


def test_an_element_without_a_reference_leaves_the_heat_unknown() -> None:
    told = heat_of({"glucose": -1.0, "salt": 2.0, "oxygen": -1.0}, network())

    assert told.value is None
    assert told.unknown == ("salt",)
    assert "salt" in told.words


def test_heat_scales_with_the_releases_and_adds_up() -> None:
    one = {"glucose": -1.0, "oxygen": -6.0, "CO2": 6.0}
    other = {"glucose": -0.2, "ammonia": -0.2, "oxygen": -0.15, "X": 1.0, "CO2": 0.2}
    both = {name: one.get(name, 0.0) + 3 * other.get(name, 0.0) for name in {**one, **other}}

    assert heat_of(both, network()).value == pytest.approx(
        heat_of(one, network()).value + 3 * heat_of(other, network()).value  # type: ignore[operator]
    )


def test_nothing_turned_over_gives_nothing() -> None:
    assert heat_of({}, network()).value == 0.0
    assert heat_of({"glucose": 0.0}, network()).value == 0.0


GROWTH = """
{basis}
substrate glucose, ammonia, oxygen
exchange  CO2
biomass   X CH1.8O0.5N0.2
carrier   NADH carries 2 electrons
compartment all
    grow    : 0.2 glucose + 0.2 ammonia -> X + 0.2 CO2 + 0.3 NADH
    burn    : glucose -> 6 CO2 + 12 NADH
    breathe : NADH + 0.5 oxygen -> nothing
"""


def solved(unit: str, rates: str = "glucose,in,1,0.03\nX,out,3,0.09") -> Any:
    model = fx.read_model_text(GROWTH.format(basis=""))
    lines = "".join(f"{line},{unit}\n" for line in rates.splitlines())
    table = fx.read_rates_text("species,direction,rate,sd,unit\n" + lines, model)
    return fx.solve(model, table).runs[0]


@pytest.mark.parametrize(
    ("unit", "energy", "factor"),
    [("mmol/g/h", "kJ/g/h", 1), ("mmol/L/h", "kJ/L/h", 1), ("mol", "kJ", 1000), ("mmol", "kJ", 1)],
)
def test_a_run_tells_heat_in_its_own_unit(unit: str, energy: str, factor: float) -> None:
    heat = solved(unit).heat
    per_glucose = 2802.8 + 3 * (0.2 * 382.8) - 3 * 560

    assert heat.unit == energy
    assert heat.combustion.value == pytest.approx(factor * per_glucose / 1000)
    assert heat.per_substrate == pytest.approx(per_glucose)
    if unit == "mmol/L/h":
        assert heat.watts == pytest.approx(heat.combustion.value / 3.6)
    else:
        assert heat.watts is None


def test_per_c_mol_and_per_gram_the_heat_per_substrate_is_the_same() -> None:
    """A C-mol of these cells weighs 24.6 g."""
    gram = fx.solve(fx.read_model_text(
        GROWTH.format(basis="basis mmol/g/h") + "limit glucose = 3\nlimit X = 4\n")).runs[0]
    carbon = fx.solve(fx.read_model_text(
        GROWTH.format(basis="basis C-mol/C-mol/h") + "limit mu = 0.0985\nlimit glucose = 0.4433\n"
    )).runs[0]  # fmt: skip

    assert carbon.heat.unit == "kJ/C-mol/h"
    assert carbon.heat.per_substrate == pytest.approx(gram.heat.per_substrate, rel=1e-3)
    assert carbon.heat.combustion.value == pytest.approx(
        gram.heat.combustion.value * 24.626, rel=1e-3
    )
    assert carbon.heat.growth.maintenance == pytest.approx(
        gram.heat.growth.maintenance, rel=1e-3
    )


def test_the_sd_of_the_heat_is_that_of_the_rates_carried_over() -> None:
    run = solved("mmol/g/h")
    glucose = 2802.8 * 0.03
    biomass = (560 - 0.2 * 382.8) * 0.09

    assert run.heat.combustion.sd == pytest.approx((glucose**2 + biomass**2) ** 0.5 / 1000)
    oxygen = 460 * ((6 * 0.03) ** 2 + (4.2 / 4 * 0.09) ** 2) ** 0.5 / 1000
    assert run.heat.oxygen.sd == pytest.approx(oxygen)


def test_a_heat_that_nothing_determines_has_a_range_and_no_sd() -> None:
    heat = solved("mmol/g/h", "glucose,in,1,0").heat

    assert heat.combustion.sd is None
    assert heat.combustion.low < 1.0 < heat.combustion.high == pytest.approx(2.8028)


PART = """
substrate glucose, oxygen
product   lactate
exchange  CO2
parameter a = 0.5 ± 0.1
compartment all
    made : glucose + (6 - 3*a) oxygen -> a lactate + (6 - 3*a) CO2
limit glucose = 1
"""


def test_an_uncertain_parameter_adds_to_the_sd() -> None:
    heat = fx.solve(fx.read_model_text(PART)).runs[0].heat

    assert heat.combustion.value == pytest.approx((2802.8 - 0.5 * 1343.9) / 1000)
    assert heat.combustion.sd == pytest.approx(0.1 * 1343.9 / 1000)
    assert heat.oxygen.sd == pytest.approx(0.1 * 3 * 460 / 1000)
