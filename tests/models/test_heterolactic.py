"""models/heterolactic.flux against numbers worked out by hand.

All answers are per mol of the sugar named, in a run in amounts. No published set of measured
rates with its errors was at hand for this kind of bacterium, so none is reproduced.
"""

from __future__ import annotations

import pytest

from fluxnet.studies.solution import SolveStatus

GLUCOSE = {"glucose in": 1, "fructose in": 0, "xylose in": 0}


def test_glucose_gives_lactate_ethanol_and_one_atp(ask):
    # glk -1, lower 2: 1 ATP. NADH: zwf 2, lower 1; ldh takes 1, adh 2.
    run = ask("heterolactic", GLUCOSE, maximise="upkeep")
    assert run.optimum == pytest.approx(1, abs=1e-9)
    for product in ("lactate", "ethanol", "CO2"):
        assert run.rate(product) == pytest.approx(1, abs=1e-9)


def test_xylose_gives_lactate_acetate_and_two_atp(ask):
    # xyk -1, lower 2, ack 1: 2 ATP; the one NADH of lower goes into lactate.
    only = {"glucose in": 0, "fructose in": 0, "xylose in": 1}
    run = ask("heterolactic", only, maximise="upkeep")
    assert run.optimum == pytest.approx(2, abs=1e-9)
    assert run.rate("acetate") == pytest.approx(1, abs=1e-9)


def test_fructose_as_electron_sink_doubles_the_atp_of_glucose(ask):
    # glucose + 2 fructose -> lactate + acetate + CO2 + 2 mannitol: glk -1, lower 2, ack 1.
    rates = {"glucose in": 1, "fructose in": 2, "xylose in": 0, "mannitol out": 2}
    run = ask("heterolactic", rates, maximise="upkeep")
    assert run.optimum == pytest.approx(2, abs=1e-9)
    assert run.rate("acetate") == pytest.approx(1, abs=1e-9)


def test_mannitol_from_fructose_alone(ask):
    # One fructose to lactate, acetate and CO2 gives 2 NADH for 2 mannitol: 2 of 3.
    only = {"glucose in": 0, "fructose in": 1, "xylose in": 0}
    run = ask("heterolactic", only | {"acetoin out": 0}, maximise="mannitol")
    assert run.optimum == pytest.approx(2 / 3, abs=1e-9)
    # Acetoin in place of lactate saves one NADH more: 3 of 4. The electrons would allow 24/26.
    run = ask("heterolactic", only, maximise="mannitol")
    assert run.optimum == pytest.approx(3 / 4, abs=1e-9)


def test_erythritol_from_glucose(ask):
    # fpk and eryt take 1 NADH a glucose; one glucose by xpk gives 2 with lactate, 3 with acetoin.
    run = ask("heterolactic", GLUCOSE | {"acetoin out": 0}, maximise="erythritol")
    assert run.optimum == pytest.approx(2 / 3, abs=1e-9)
    run = ask("heterolactic", GLUCOSE, maximise="erythritol")
    assert run.optimum == pytest.approx(3 / 4, abs=1e-9)
    # ATP: 3/4 x (-1 glk + 1 ack) + 1/4 x (-1 + 2 + 1) = 1/2
    assert run.flux("upkeep") == pytest.approx(1 / 2, abs=1e-9)


def test_air_as_electron_sink_doubles_the_atp_of_glucose(ask):
    # nox takes the 2 NADH of zwf with one O2: acetate in place of ethanol, 2 ATP.
    run = ask("heterolactic", GLUCOSE, variant="aerated", maximise="upkeep")
    assert run.optimum == pytest.approx(2, abs=1e-9)
    assert run.rate("oxygen") == pytest.approx(1, abs=1e-9)


def test_most_biomass_on_glucose(ask):
    # Growth per C-mol X: amino acids 0.2 / 0.27 = 0.74074, so hexose-P (1 - 0.74074) / 6 = 0.04321;
    # electrons 24 x 0.04321 + 3.99 x 0.74074 = 3.9926, 4.2 needed: 0.10370 NADH.
    # That NADH frees acetate from being ethanol: 0.05185. ATP: -(0.04321 + f) + 2 f + 0.05185
    # = 2.3: f = 2.29136, glucose 2.33457.
    run = ask("heterolactic", GLUCOSE, maximise="X")
    assert run.optimum == pytest.approx(1 / 2.334567901, rel=1e-8)
    assert run.rate("acetate") == pytest.approx(0.0518518519 / 2.334567901, rel=1e-6)


def test_without_an_electron_sink_glucose_cannot_be_taken_up(ask):
    # zwf leaves 2 NADH; growth takes 0.1 and needs 2.3 ATP for it, which only more zwf could pay.
    run = ask("heterolactic", GLUCOSE, variant="no-sinks", maximise="upkeep")
    assert run.status is SolveStatus.INFEASIBLE
    assert "glucose in" in {m.name for m in run.conflict.given}
