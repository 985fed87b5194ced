"""Measured ratios in a model of which nothing else is measured: met where that is possible."""

from __future__ import annotations

from pathlib import Path

import numpy as np
import pytest

from fluxnet.network.variant import apply_variant
from fluxnet.reading.model import read_model_text
from fluxnet.studies.solution import FluxSolution, RateEstimate, SolveStatus
from fluxnet.studies.solve import solve_network

MODELS = Path(__file__).parents[2] / "models"
YIELD = "\nlimit mu / glucose = 0.1 ± 0.01\n"


def solved(name: str, variant: str, limit: str = YIELD, **aim: str) -> FluxSolution:
    text = (MODELS / f"{name}.flux").read_text("utf-8")
    network = read_model_text(text + limit).network
    assert network is not None
    network, _ = apply_variant(network, variant)
    assert network is not None
    (found,) = solve_network(network, **aim).runs
    return found


def rate(found: FluxSolution, words: str) -> RateEstimate:
    return next(r for r in found.rates if str(r.quantity) == words)


@pytest.mark.parametrize(
    ("name", "variant"),
    [("mixed-acid", "base"), ("amino-acid", "base"), ("yeast", "base")],
)
def test_a_ratio_that_the_network_can_nearly_make_is_nearly_met(name: str, variant: str) -> None:
    found = solved(name, variant)
    ratio = rate(found, "mu / glucose in")

    assert found.status is SolveStatus.SOLVED
    assert np.isfinite([flux.value for flux in found.fluxes]).all()
    assert found.residual is not None
    assert found.residual < 1e-9
    assert ratio.reconciled == pytest.approx(0.1, abs=2 * 0.01)
    shown = rate(found, "mu").reconciled / rate(found, "glucose in").reconciled
    assert ratio.reconciled == pytest.approx(shown)


def test_a_ratio_that_the_network_cannot_make_is_told_to_be_held_back() -> None:
    most = solved("mixed-acid", "anaerobic", "\nlimit glucose <= 100\n", maximise="mu")
    best = max(flux.value for flux in most.fluxes if flux.reaction == "growth")
    found = solved("mixed-acid", "anaerobic")
    growth = next(flux for flux in found.fluxes if flux.reaction == "growth")

    assert found.status is SolveStatus.INCONSISTENT
    assert np.isfinite([flux.value for flux in found.fluxes]).all()
    # the parameters are moved as far as they go: more than nominal, and far from the ratio
    share = growth.value / rate(found, "glucose in").reconciled
    assert best / 100 < share < 2 * best / 100
    assert rate(found, "mu / glucose in").reconciled < 0.1 - 3 * 0.01


def test_a_ratio_whose_guess_leads_to_rates_without_end_is_weighed_at_a_size() -> None:
    text = """model m
substrate glucose, ammonia, oxygen
product ethanol
exchange CO2
biomass X CH1.8O0.5N0.2
carrier ATP carries energy
carrier NADH carries 2 electrons
inside pyruvate
parameter PO = 1.4 ± 0.2 in [0.5, 2.5]
parameter K_X = 1.8 ± 0.3
compartment cell
    glycolysis : glucose -> 2 pyruvate + 2 ATP + 2 NADH
    ferment : pyruvate + NADH -> ethanol + CO2
    burn : pyruvate -> 3 CO2 + 5 NADH + ATP
    oxphos : NADH + 0.5 oxygen -> PO ATP
    growth : ? glucose + 0.2 ammonia + K_X ATP -> X + 0.1 CO2 + ? NADH
    upkeep : ATP -> nothing
limit upkeep = 1.0 ± 0.3
limit CO2 / oxygen = 1.05 ± 0.03
limit mu >= 0.1
limit ethanol >= 3
"""
    network = read_model_text(text).network
    assert network is not None

    (found,) = solve_network(network).runs

    ratio = rate(found, "CO2 out / oxygen in")
    assert ratio.measured == 1.05
    assert abs(ratio.reconciled - 1.05) < 2 * 0.03
