"""Where the errors of a fit come from, and what better sources would make of them."""

from __future__ import annotations

from dataclasses import replace
from fractions import Fraction

import numpy as np
import pytest

from fluxnet.rates.covariance import join_errors
from fluxnet.solving.least_squares import fit_fluxes
from fluxnet.solving.sources import SourceKind, find_sources

YEAST = """
substrate glucose, oxygen
product ethanol, glycerol
exchange CO2
biomass X
carrier ATP, NADH
inside pyruvate
parameter PO 1.4 0.15
parameter K_X 2 0.2
glycolysis : glucose -> 2 pyruvate + 2 ATP + 2 NADH
reduce : glucose + 2 ATP + 2 NADH -> 2 glycerol
adh : pyruvate + NADH -> ethanol + CO2
burn : pyruvate -> 3 CO2 + 5 NADH + ATP
oxphos : NADH + 0.5 oxygen -> PO ATP
growth : 0.2 glucose + K_X ATP -> X + 0.2 CO2 + 0.1 NADH
upkeep : ATP -> nothing
"""
RATES = ("glucose in 13.4 ± 0.3", "ethanol out 12 ± 0.3", "CO2 out 22.5 ± 0.5",
         "oxygen in 6.3 ± 0.3", "X out 12 ± 0.3", "upkeep 9 ± 1.5")


@pytest.fixture
def fitted(make_network, make_run):
    network = make_network(YEAST)
    run = make_run(network, *RATES)
    return network, run, fit_fluxes(network, run)


def shared(run, size=0.04):
    """The run with an error that its rates share."""
    own = [rate.sd for rate in run.rates]
    shift = [size * rate.value for rate in run.rates]
    covariance = join_errors(own, shift)
    sds = np.sqrt(np.diag(covariance)).tolist()
    rates = tuple(
        replace(rate, sd=sd, own_sd=rate.sd) for rate, sd in zip(run.rates, sds, strict=True)
    )
    return replace(run, rates=rates, covariance=covariance, shared_error=size)


def at_the_fit(network, run, fit):
    """The same with every measured value where the fit has it: nothing is left to explain."""
    values = {str(row.quantity): row.value for row in fit.rows}
    moved = {m.name: Fraction(m.moved) for m in fit.moved}
    rates = tuple(replace(r, value=values[str(r.quantity)]) for r in run.rates)
    parameters = tuple(replace(p, value=moved[p.name]) for p in network.parameters)
    return replace(network, parameters=parameters), replace(run, rates=rates)


def gradients(fit):
    return fit.region.point.tangent @ fit.region.seen


def test_the_shares_are_those_of_the_fit(fitted):
    _, _, fit = fitted
    sources = find_sources(fit)
    assert tuple(m.name for m in sources.members[-2:]) == ("PO", "K_X")
    assert sources.shares(gradients(fit)) == pytest.approx(fit.shares, abs=1e-9)


def test_shares_add_up_to_one_with_a_shared_error_too(fitted):
    network, run, _ = fitted
    fit = fit_fluxes(network, shared(run))
    found = find_sources(fit)
    assert [m.kind for m in found.members].count(SourceKind.SHARED) == 1
    assert found.shares(gradients(fit)).sum(axis=1) == pytest.approx(1)


def test_the_share_of_a_source_is_what_its_error_alone_brings(fitted):
    """Moving one measured value by its sd moves the fluxes: the squares add up to the variance."""
    network, run = at_the_fit(*fitted)
    fit = fit_fluxes(network, run)
    shares = find_sources(fit).shares(gradients(fit))
    for k, rate in enumerate(run.rates):
        step = 1e-4 * rate.sd
        rates = tuple(
            replace(r, value=r.value + step) if r is rate else r for r in run.rates
        )
        moved = fit_fluxes(network, replace(run, rates=rates))
        brought = ((moved.fluxes - fit.fluxes) / 1e-4) ** 2
        assert brought == pytest.approx(shares[:, k] * fit.flux_sd**2, rel=2e-3, abs=1e-6)


def test_the_covariance_with_nothing_better_is_that_of_the_fit(fitted):
    _, _, fit = fitted
    covariance = find_sources(fit).covariance()
    assert covariance == pytest.approx(np.eye(len(covariance)))


@pytest.mark.parametrize("is_shared", [False, True])
@pytest.mark.parametrize("name", ["CO2 out", "PO", "shared error"])
def test_half_an_error_is_what_the_fit_makes_of_it(fitted, name, is_shared):
    network, run, fit = fitted
    if is_shared:
        run = shared(run)
        fit = fit_fluxes(network, run)
    sources = find_sources(fit)
    place = next((i for i, m in enumerate(sources.members) if m.name == name), None)
    if place is None:
        assert (name, is_shared) == ("shared error", False)
        return
    network, run = at_the_fit(network, run, fit)
    parameters = tuple(
        replace(p, sd=p.sd / 2 if p.name == name else p.sd) for p in network.parameters
    )
    rates = tuple(
        replace(r, sd=(r.own_sd or r.sd) * (0.5 if str(r.quantity) == name else 1), own_sd=None)
        for r in run.rates
    )
    run = replace(run, rates=rates, covariance=None, shared_error=None)
    if is_shared:
        run = shared(run, 0.02 if name == "shared error" else 0.04)
    expected = fit_fluxes(replace(network, parameters=parameters), run)
    covariance = sources.covariance((place,))
    sd = np.sqrt(np.einsum("ij,jk,ik->i", g := _padded(fit, covariance), covariance, g))
    assert sd == pytest.approx(expected.flux_sd, rel=5e-3)


def _padded(fit, covariance):
    """The fluxes' slopes, with none by the shared error itself."""
    slopes = gradients(fit)
    return np.pad(slopes, ((0, 0), (0, len(covariance) - slopes.shape[1])))
