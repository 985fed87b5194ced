"""Where errors come from, and what the data tell only together."""

from __future__ import annotations

import numpy as np
import pytest

import fluxnet as fx
from fluxnet.solving.least_squares import fit_fluxes
from fluxnet.solving.sources import find_sources
from fluxnet.studies.shares import correlated_fluxes, correlated_numbers, shares_of, slopes_of

MODEL = """model Breathing and growing, invented
basis mmol/g/h
substrate glucose, oxygen, ammonia
product ethanol
exchange CO2
biomass X CH1.8O0.5N0.2 ash 0 %
carrier ATP carries energy
carrier NADH carries 2 electrons
inside pyruvate C3H4O3
parameter PO = 1.2 ± 0.2
parameter K_X = 2 ± 0.3
compartment catabolism
    split : glucose -> 2 pyruvate + 2 ATP + 2 NADH
    pdc : pyruvate + NADH -> ethanol + CO2
    burn : pyruvate -> 3 CO2 + 5 NADH
    oxphos : NADH + 0.5 oxygen -> PO ATP
compartment anabolism
    grow : 0.35 pyruvate + 0.2 ammonia + K_X ATP + ? NADH -> X + ? CO2
compartment maintenance
    upkeep : ATP -> nothing
"""
HEAD = "run,species,direction,rate,sd,unit\n"
RATES = HEAD + """r,glucose,in,3,3 %,mmol/g/h
r,ethanol,out,3,3 %,mmol/g/h
r,X,out,4,3 %,mmol/g/h
"""


def fitted(rates: str = RATES, model: str = MODEL):
    read = fx.read_model_text(model)
    return fit_fluxes(read.network, fx.read_rates_text(rates, read).runs[0])


def test_a_flux_that_one_rate_tells_alone_has_its_whole_error_from_it():
    fit = fitted(HEAD + "r,glucose,in,3,3 %,mmol/g/h\n")
    j = fit.reactions.index("split")
    (shares,) = shares_of(find_sources(fit), slopes_of(fit, np.eye(len(fit.reactions))[[j]], {}))
    assert [(s.source, round(s.share, 9)) for s in shares] == [("glucose in", 1.0)]


def test_shares_are_ranked_and_add_up_to_nearly_one():
    fit = fitted()
    every = shares_of(find_sources(fit), slopes_of(fit, np.eye(len(fit.reactions)), {}))
    for shares in every:
        parts = [s.share for s in shares]
        assert parts == sorted(parts, reverse=True)
        assert sum(parts) == pytest.approx(1, abs=0.01)


def test_parameters_that_one_value_tells_only_together_are_named():
    """A measured upkeep is PO times the oxygen less K_X times the growth: one line for two."""
    rates = RATES.replace("3 %", "0.3 %")
    fit = fitted(rates, MODEL + "limit upkeep = 2 ± 0.05\n")
    (group,) = correlated_numbers(fit)
    assert [name for name, _ in group.members] == ["PO", "K_X"]
    assert group.members[1][1] > 0.9
    assert group.least == pytest.approx(group.members[1][1])


def test_parameters_that_nothing_tells_are_not_correlated():
    assert correlated_numbers(fitted()) == ()


def test_what_is_proportional_anyway_is_not_told():
    """One measured rate: all that it determines goes up and down with it, exactly."""
    chain = (
        "model Chain, invented\nsubstrate glucose\nproduct ethanol\nexchange CO2\n"
        "inside pyruvate C3H4O3\ncarrier NADH carries 2 electrons\ncompartment all\n"
        "    split : glucose -> 2 pyruvate + 2 NADH\n    pdc : pyruvate + NADH -> ethanol + CO2\n"
    )
    fit = fitted(HEAD + "r,glucose,in,3,3 %,mmol/g/h\nr,CO2,out,6,3 %,mmol/g/h\n", chain)
    assert correlated_fluxes(fit) == ()


def test_fluxes_that_go_together_are_told_as_one_group():
    """Exact glucose: what is not fermented is burnt, so that the two go against one another."""
    rates = "r,glucose,in,3,0,mmol/g/h\nr,ethanol,out,3,5 %,mmol/g/h\nr,X,out,1,1 %,mmol/g/h\n"
    (group,) = correlated_fluxes(fitted(HEAD + rates))
    assert group.least > 0.9
    ratios = dict(group.members)
    assert ratios["pdc"] * ratios["burn"] < 0
