"""The correlations of growth: where they are told, and where they are not."""

from __future__ import annotations

from math import inf
from typing import Any

import pytest
from hypothesis import given
from hypothesis import strategies as st

import fluxnet as fx
from fluxnet.network.model import Network
from fluxnet.studies.dissipation import (
    growth_dissipation,
    judge_growth,
    maintenance_dissipation,
)

TEXT = """
substrate glucose, acetate, ammonia, oxygen, sucrose
product   ethanol
exchange  CO2
biomass   X {formula}
compartment all
    burn : glucose + 6 oxygen -> 6 CO2
    also : acetate + 2 oxygen -> 2 CO2
    wine : glucose -> 2 ethanol + 2 CO2
    cane : sucrose + 12 oxygen -> 12 CO2
    grow : glucose + ? ammonia + ? oxygen -> 3 X + 3 CO2
"""


def judged(*given: Any, **more: Any) -> Any:
    return judge_growth(*given, **more)


def network(formula: str = "CH1.8O0.5N0.2") -> Network:
    return fx.read_model_text(TEXT.format(formula=formula)).network


def aerobic(biomass: float) -> dict[str, float]:
    return {
        "glucose": -1.0, "ammonia": -0.2 * biomass, "oxygen": -(24 - 4.2 * biomass) / 4,
        "CO2": 6 - biomass, "X": biomass,
    }  # fmt: skip


def test_a_chain_of_more_than_six_counts_as_six() -> None:
    assert growth_dissipation(16, 5.75) == growth_dissipation(6, 5.75)
    assert growth_dissipation(12, 4) == growth_dissipation(6, 4)


@given(st.floats(1, 6), st.floats(0, 8))
def test_every_carbon_source_costs_at_least_two_hundred(carbons: float, reduction: float) -> None:
    assert 200 < growth_dissipation(carbons, reduction) < inf


@given(st.floats(5, 60))
def test_upkeep_rises_with_the_temperature(celsius: float) -> None:
    assert maintenance_dissipation(celsius + 1) > maintenance_dissipation(celsius)


def test_what_is_allowed_does_not_hang_on_the_yield_of_the_run() -> None:
    """Cells that only respire have one catabolism, whatever they make of it."""
    told = [judge_growth(network(), aerobic(x), mu=0.2) for x in (1.0, 2.5, 3.5)]

    values = [one.allowed for one in told if one is not None]
    assert len(values) == 3
    # but for the CO2 that stands as gas in one and as hydrogen carbonate in the other half
    assert max(values) - min(values) < 0.01


def test_slow_growth_and_warmth_cost_yield() -> None:
    fast = judged(network(), aerobic(3.0), mu=0.5)
    slow = judged(network(), aerobic(3.0), mu=0.02)
    warm = judged(network(), aerobic(3.0), mu=0.02, celsius=40)
    timeless = judged(network(), aerobic(3.0))

    assert None not in (fast, slow, warm, timeless)
    assert warm.allowed < slow.allowed < fast.allowed < timeless.allowed
    assert timeless.maintenance is None


def test_without_air_far_less_is_allowed() -> None:
    """About a tenth, as of yeast on glucose without air (0.12 to 0.14 C-mol/C-mol)."""
    made = 0.7
    ethanol = (24 - 4.2 * made) / 12
    told = judge_growth(
        network(),
        {"glucose": -1.0, "ammonia": -0.2 * made, "X": made, "ethanol": ethanol,
         "CO2": 6 - made - 2 * ethanol}, mu=0.3,
    )  # fmt: skip

    assert told is not None
    assert 0.08 < told.allowed < 0.2
    assert told.is_plausible


def test_a_yield_beyond_the_scatter_is_not_plausible() -> None:
    told = judge_growth(network(), aerobic(5.2), mu=0.3)

    assert told is not None
    assert not told.is_plausible
    assert told.biomass_yield > told.allowed_high > told.allowed > told.allowed_low


@pytest.mark.parametrize(
    "releases",
    [
        {"glucose": -1.0, "oxygen": -6.0, "CO2": 6.0},  # nothing grows
        {"ammonia": -0.2, "CO2": -1.0, "oxygen": 1.05, "X": 1.0},  # no organic carbon source
        {"glucose": -0.5, "acetate": -1.5, "ammonia": -0.2, "oxygen": -4.95, "CO2": 5.0, "X": 1.0},
        {"sucrose": -1.0, "ammonia": -0.2, "oxygen": -10.95, "CO2": 11.0, "X": 1.0},  # no energy
    ],
)
def test_where_the_correlations_do_not_speak_nothing_is_told(releases: dict[str, float]) -> None:
    assert judge_growth(network(), releases, mu=0.2) is None


def test_biomass_of_another_formula_is_taken_to_hold_as_much_per_electron() -> None:
    other = network("CH1.66O0.4N0.2")
    reduction = 4 + 1.66 - 0.8 - 0.6
    releases = {**aerobic(3.0), "oxygen": -(24 - 3 * reduction) / 4}

    told, usual = judged(other, releases, 0.2), judged(network(), aerobic(3.0), 0.2)

    assert None not in (told, usual)
    assert told.allowed == pytest.approx(usual.allowed, rel=0.03)
