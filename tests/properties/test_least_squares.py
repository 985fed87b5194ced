"""Invariants of fitted fluxes: scaling, order, balance, ranges, and that a fit always answers."""

from __future__ import annotations

from dataclasses import replace
from functools import lru_cache

import numpy as np
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from fluxnet.network.expression import Expression, constant
from fluxnet.network.model import Direction, Network, Quantity, QuantityKind
from fluxnet.rates.measured import MeasuredRate, Run
from fluxnet.reading.model import read_model_text
from fluxnet.solving.flux_fit import FitStatus, FluxKind
from fluxnet.solving.least_squares import fit_fluxes

MODEL = """
substrate glucose, oxygen, ammonia
product ethanol, glycerol, lactate
exchange CO2
biomass X CH1.8O0.5N0.2 ash 8 ± 1 %
carrier ATP carries energy
carrier NADH carries 2 electrons
inside pyruvate, acetyl-CoA
parameter PO = 1.4 ± 0.2 in [0.5, 2.5]
parameter K_X = 2.1 ± 0.3
compartment catabolism
    glycolysis : glucose -> 2 pyruvate + 2 ATP + 2 NADH
    reduce : glucose + 2 ATP + 2 NADH -> 2 glycerol
    ldh : pyruvate + NADH -> lactate
    pdh : pyruvate -> acetyl-CoA + CO2 + NADH
    adh : acetyl-CoA + 2 NADH <-> ethanol
    tca : acetyl-CoA -> 2 CO2 + 4 NADH + ATP
    oxphos : NADH + 0.5 oxygen -> PO ATP
compartment anabolism
    growth : ? glucose + 0.2 ammonia + K_X ATP -> X + 0.1 CO2 + ? NADH
compartment maintenance
    upkeep : ATP -> nothing
limit oxygen <= 20
limit upkeep = 2 ± 1
"""
RATES = {
    "glucose": (Direction.IN, 10.0), "oxygen": (Direction.IN, 6.0),
    "ethanol": (Direction.OUT, 12.0), "glycerol": (Direction.OUT, 2.0),
    "lactate": (Direction.OUT, 1.0), "CO2": (Direction.OUT, 16.0), "X": (Direction.OUT, 8.0),
}


@lru_cache(maxsize=1)
def network() -> Network:
    reading = read_model_text(MODEL)
    assert reading.network is not None, [d.message for d in reading.diagnostics]
    return reading.network


@st.composite
def runs(draw: st.DrawFn) -> Run:
    """Some of the rates, each off by up to 30 %, some exact; the values may contradict."""
    names = draw(st.lists(st.sampled_from(sorted(RATES)), min_size=1, unique=True))
    rates = []
    for name in names:
        direction, value = RATES[name]
        off = draw(st.floats(-0.3, 0.3))
        sd = draw(st.sampled_from([0.02, 0.05, 0.1]))
        if len(rates) < 2 and draw(st.booleans()) and draw(st.booleans()):
            sd = 0.0
        quantity = Quantity(QuantityKind.RATE, name, direction)
        rates.append(MeasuredRate(quantity, value * (1 + off), value * sd))
    return Run("drawn", network().basis, tuple(rates))


few = settings(
    max_examples=20, deadline=None, derandomize=True,
    suppress_health_check=[HealthCheck.too_slow],
)


def scaled(expression: Expression | None, factor: int) -> Expression | None:
    return None if expression is None else expression * constant(factor)


def with_reaction_times(net: Network, name: str, factor: int) -> Network:
    """The network with one reaction written ``factor`` times as large."""
    return replace(net, reactions=tuple(
        r if r.name != name else replace(
            r,
            left=tuple(replace(t, coefficient=scaled(t.coefficient, factor)) for t in r.left),
            right=tuple(replace(t, coefficient=scaled(t.coefficient, factor)) for t in r.right),
        )
        for r in net.reactions
    ))


def with_species_times(net: Network, name: str, factor: int) -> Network:
    """The network with one balanced species counted in units ``factor`` times smaller."""

    def told(terms):
        return tuple(
            t if t.species != name else replace(t, coefficient=scaled(t.coefficient, factor))
            for t in terms
        )

    return replace(net, reactions=tuple(
        replace(r, left=told(r.left), right=told(r.right)) for r in net.reactions
    ))


@few
@given(runs())
def test_what_is_fitted_balances_and_lies_within_its_ranges(run):
    fit = fit_fluxes(network(), run)
    if fit.status is FitStatus.INFEASIBLE:
        return
    assert fit.residual <= 1e-9
    stoich = fit.built.stoichiometry
    species = stoich.floats(fit.built.values)[list(stoich.balanced)]
    scale = np.abs(fit.fluxes).max()
    assert np.abs(species @ fit.fluxes).max() <= 1e-9 * scale
    slack = 1e-7 * scale
    assert (fit.low <= fit.best_low + slack).all()
    assert (fit.best_low <= fit.fluxes + slack).all()
    assert (fit.fluxes <= fit.best_high + slack).all()
    assert (fit.best_high <= fit.high + slack).all()
    problem = fit.built.problem
    assert (problem.column_low - slack <= fit.fluxes).all()
    reach = problem.matrix @ fit.fluxes
    assert (problem.row_low - slack <= reach).all()
    assert (reach <= problem.row_high + slack).all()
    assert fit.bound_h >= 0
    assert fit.h is None or fit.h >= 0


@few
@given(runs())
def test_kinds_tell_what_has_an_sd(run):
    fit = fit_fluxes(network(), run)
    if fit.status is FitStatus.INFEASIBLE:
        return
    fixed = np.array([kind is FluxKind.DETERMINED for kind in fit.kinds])
    assert (np.isnan(fit.flux_sd) == ~fixed).all()
    assert fit.best_low[fixed].tolist() == fit.best_high[fixed].tolist()
    assert fit.is_unique == fixed.all()
    shared = fixed & (fit.flux_sd > 0)
    assert np.allclose(fit.shares[shared].sum(axis=1), 1)
    assert np.isnan(fit.shares[~fixed]).all()


@few
@given(runs(), st.sampled_from(["pdh", "oxphos", "growth"]), st.sampled_from([2, 7, 1000]))
def test_a_reaction_written_k_times_as_large_has_a_flux_k_times_as_small(run, name, factor):
    plain = fit_fluxes(network(), run)
    other = fit_fluxes(with_reaction_times(network(), name, factor), run)
    assert plain.status is other.status
    if plain.status is FitStatus.INFEASIBLE:
        return
    scale = np.array([factor if r == name else 1.0 for r in plain.reactions])
    size = np.abs(plain.fluxes).max()
    fixed = np.array([kind is FluxKind.DETERMINED for kind in plain.kinds])
    assert np.allclose((other.fluxes * scale)[fixed], plain.fluxes[fixed], atol=1e-6 * size)
    assert np.allclose(other.low * scale, plain.low, atol=2e-4 * size)
    assert np.allclose(other.high * scale, plain.high, atol=2e-4 * size)
    assert (other.h is None) == (plain.h is None)
    assert plain.h is None or np.isclose(other.h, plain.h, rtol=1e-6, atol=1e-8)
    assert np.isclose(other.bound_h, plain.bound_h, rtol=1e-5, atol=1e-7)


@few
@given(runs(), st.sampled_from(["NADH", "pyruvate", "ATP"]), st.sampled_from([3, 1000]))
def test_h_does_not_change_when_a_balance_is_scaled(run, name, factor):
    plain = fit_fluxes(network(), run)
    other = fit_fluxes(with_species_times(network(), name, factor), run)
    assert plain.status is other.status
    assert plain.dof == other.dof
    if plain.h is not None and other.h is not None:
        assert np.isclose(other.h, plain.h, rtol=1e-6, atol=1e-8)


@few
@given(runs())
def test_the_order_of_lines_and_rates_changes_no_value(run):
    net = network()
    turned = replace(
        net, reactions=net.reactions[::-1], species=net.species[::-1],
        parameters=net.parameters[::-1],
    )
    plain = fit_fluxes(net, run)
    other = fit_fluxes(turned, replace(run, rates=run.rates[::-1]))
    assert plain.status is other.status
    if plain.status is FitStatus.INFEASIBLE:
        return
    size = np.abs(plain.fluxes).max()
    fixed = np.array([kind is FluxKind.DETERMINED for kind in plain.kinds])
    assert other.kinds[::-1] == plain.kinds
    assert np.allclose(other.fluxes[::-1][fixed], plain.fluxes[fixed], atol=1e-6 * size)
    assert np.allclose(other.low[::-1], plain.low, atol=2e-4 * size)
    assert np.allclose(other.high[::-1], plain.high, atol=2e-4 * size)
    assert plain.h is None or np.isclose(other.h, plain.h, rtol=1e-6, atol=1e-8)


@few
@given(runs())
def test_one_more_rate_that_agrees_adds_nothing_to_h(run):
    plain = fit_fluxes(network(), run)
    if plain.status is FitStatus.INFEASIBLE:
        return
    name = next((n for n in sorted(RATES) if n not in {r.quantity.name for r in run.rates}), None)
    if name is None or plain.bound_h:
        return
    row = next(r for r in plain.rates if r.quantity.name == name)
    direction, size = RATES[name]
    value = row.value if row.quantity.direction is direction else -row.value
    more = MeasuredRate(Quantity(QuantityKind.RATE, name, direction), value, 0.05 * size)
    other = fit_fluxes(network(), replace(run, rates=(*run.rates, more)))
    before, after = plain.h or 0.0, other.h or 0.0
    assert np.isclose(before, after, rtol=1e-5, atol=1e-7)
    assert other.dof == plain.dof + (row.value_sd is not None)
