"""Optima of models whose coefficients lie up to nine decades apart."""

from __future__ import annotations

from fractions import Fraction

import numpy as np
import pytest

import fluxnet as fx
from fluxnet.solving.build import build_problem
from fluxnet.solving.least_flux import least_total_flux
from fluxnet.solving.outcome import Outcome
from fluxnet.solving.proof import exact_programme
from fluxnet.solving.ranges import find_ranges
from fluxnet.studies import optimum
from fluxnet.studies.solution import FluxSolution

HEAD = "substrate A C\nproduct B C\nproduct P C\n"

# One P takes 0.37 s6 and one A. The A that up takes for 3.7 s6 is, along the chain,
# 3.7 / 3 * 0.001 / 1000 * 0.37 / 0.001 * 1e-6 / 3.
CHAIN = HEAD + """
carrier s0 carries energy
carrier s2 carries energy
carrier s3 carries energy
carrier s4 carries energy
carrier s5 carries energy
carrier s6 carries energy
compartment c
    up  : A -> B + 3 s0
    r0  : 0.001 s4 -> 3 s6
    r1  : 0.000001 s0 -> 0.001 s3
    r4  : 0.37 s3 -> 1000 s4
    r5  : 3 s6 <-> 0.37 s2 + 0.5 s5
    ds2 : s2 -> nothing
    ds5 : s5 -> nothing
    pr  : 0.37 s6 + A -> P
limit A <= 10
"""

# P takes 1e6 s6; r0 gives 2 s6: 1000 of it make 0.002 P.
RING = HEAD + """
carrier s0 carries energy
carrier s1 carries energy
carrier s2 carries energy
carrier s3 carries energy
carrier s5 carries energy
carrier s6 carries energy
compartment c
    up : A -> B + 0.000001 s0
    r0 : 2 s5 -> 0.37 s0 + 2 s6
    r3 : 0.37 s5 + 0.000001 s0 -> 3 s1
    r4 : 3 s0 + 0.000001 s1 -> 0.000001 s3
    r5 : 7.3 s3 -> 7.3 s5
    pr : 1000000 s6 + A -> P
limit r0 <= 1000
"""
NEEDED = 3.7 / 3 * 0.001 / 1000 * 0.37 / 0.001 * 1e-6 / 3


def best(text: str) -> FluxSolution:
    (run,) = fx.solve(fx.read_model_text(text), maximise="P").runs
    assert isinstance(run, FluxSolution)
    assert run.proof is not None
    assert run.proof.verified
    return run


def test_what_alone_makes_the_aim_has_no_range() -> None:
    run = best(CHAIN)
    flux = {f.reaction: (f.low, f.value, f.high) for f in run.fluxes}

    assert run.optimum == pytest.approx(10 - NEEDED, rel=1e-12)
    assert flux["pr"] == pytest.approx([run.optimum] * 3, rel=1e-12)
    assert flux["up"] == pytest.approx([NEEDED] * 3, rel=1e-9)
    assert flux["r5"] == (0, 0, 0)
    rates = {str(r.quantity): (r.low, r.reconciled, r.high) for r in run.rates}
    assert rates["P out"] == pytest.approx([run.optimum] * 3, rel=1e-12)


def test_no_flux_runs_against_its_arrow_and_no_net_is_rounding() -> None:
    for text in (CHAIN, RING):
        run = best(text)

        assert all(f.value >= 0 for f in run.fluxes)
        assert all(f.low <= f.value * (1 + 1e-12) for f in run.fluxes)
        assert all(line.net == 0 for line in run.ledger)


def test_the_least_total_is_found_where_the_solver_s_tolerance_hides_it() -> None:
    run = best(RING)

    assert run.optimum == pytest.approx(0.002, rel=1e-12)
    assert {f.reaction: f.value for f in run.fluxes}["r0"] == pytest.approx(1000)
    assert "least total" not in run.words


def test_without_a_least_total_the_proven_fluxes_are_shown_and_told(
    monkeypatch: pytest.MonkeyPatch,
) -> None:
    def gives_up(*_: object) -> None:
        raise ArithmeticError("the least total flux could not be found")

    monkeypatch.setattr(optimum, "least_total_flux", gives_up)
    run = best(CHAIN)

    assert {f.reaction: f.value for f in run.fluxes}["pr"] == pytest.approx(10 - NEEDED)
    assert "which ones have the least total flux could not be found" in run.words


def test_near_the_optimum_ranges_are_exact_as_well() -> None:
    (run,) = fx.solve(fx.read_model_text(CHAIN), maximise="P", fraction=0.5).runs
    flux = {f.reaction: (f.low, f.high) for f in run.fluxes}

    assert flux["pr"] == pytest.approx([run.optimum / 2, run.optimum], rel=1e-12)
    # What A pr leaves, up may take.
    assert flux["up"][1] == pytest.approx(10 - run.optimum / 2, rel=1e-12)


def test_exact_ends_are_those_of_the_solver_where_numbers_are_sensible() -> None:
    text = CHAIN.replace("0.000001", "2").replace("1000", "2").replace("0.001", "0.0005")
    network = fx.read_model_text(text).network
    problem = build_problem(network).problem
    exact = exact_programme(problem)

    floating, exactly = find_ranges(problem), find_ranges(problem, exact=exact)

    assert exactly.outcome is floating.outcome is Outcome.OPTIMAL
    np.testing.assert_allclose(exactly.low, floating.low, atol=1e-9)
    np.testing.assert_allclose(exactly.high, floating.high, rtol=1e-9)
    held = problem.matrix @ least_total_flux(problem, exact)
    assert np.abs(held[problem.row_low == problem.row_high]).max() < 1e-12
    assert exact.value_of(0, [Fraction(0)] * exact.columns) == 0
