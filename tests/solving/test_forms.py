"""Rows in exact numbers and as functions of the uncertain numbers, against the built problem."""

from __future__ import annotations

from fractions import Fraction

import numpy as np
import pytest

from fluxnet.network.model import Basis, Quantity, QuantityKind
from fluxnet.solving.build import build_problem, rebuild
from fluxnet.solving.forms import (
    as_fraction,
    exact_numbers,
    exact_row,
    exact_species,
    form_of,
    form_of_row,
)
from fluxnet.solving.moving import moving_rows

MODEL = """
substrate glucose, oxygen
product ethanol
exchange CO2
biomass X
carrier ATP, NADH
inside pyruvate
parameter PO 1.4 0.2
parameter K_X 2 0.3
glycolysis : glucose -> 2 pyruvate + 2 ATP + 2 NADH
adh : pyruvate + NADH <-> ethanol + CO2
oxphos : NADH + 0.5 oxygen -> PO ATP
growth : 0.2 glucose + K_X ATP -> X + 0.2 CO2
upkeep : ATP -> nothing
"""
LIMITS = ("upkeep = 1.2 ± 0.3", "CO2 out / oxygen in <= 2", "oxygen <= 8", "mu / glucose <= 1")
RATES = ("glucose in 2 ± 0.1", "mu 0.1 ± 0.01", "CO2 out / oxygen in 1.05 ± 0.02", "adh 0.3 ± 0.1")


@pytest.fixture(params=[Basis.SPECIFIC, Basis.CARBON])
def built(request, make_network, make_run):
    network = make_network(MODEL, LIMITS, basis=request.param, ash="0.08", ash_sd="0.01")
    return build_problem(network, make_run(network, *RATES))


def test_exact_rows_are_the_floating_point_rows(built):
    numbers = exact_numbers(built)
    species = exact_species(built.stoichiometry, numbers)
    for row, floats in zip(built.problem.rows, built.problem.matrix, strict=True):
        exact = exact_row(built, form_of_row(built, row), species, numbers)
        dense = [float(exact.get(j, 0)) for j in range(len(floats))]
        assert dense == pytest.approx(floats.tolist(), rel=1e-12, abs=1e-14)


def test_parameters_are_taken_as_they_are_written(built):
    assert exact_numbers(built)["PO"] == Fraction(7, 5)
    assert as_fraction(1e-3) == Fraction(1, 1000)


def test_moved_rows_are_those_of_a_problem_built_there(built):
    moving = moving_rows(built)
    assert {"PO", "K_X"} <= set(moving.names)
    assert ("ash X" in moving.names) == (built.basis is Basis.SPECIFIC)
    numbers = moving.start * np.array([1.3, 0.8, 1.5])[: len(moving.names)]
    there = rebuild(built, dict(zip(moving.names, numbers.tolist(), strict=True)))
    rows = moving.at(numbers)
    assert rows[: moving.problem_rows] == pytest.approx(there.problem.matrix, rel=1e-12)
    assert rows[-5:] == pytest.approx(np.eye(5))
    fluxes = np.array([2.0, 0.4, 3.0, 4.0, 1.0])
    slopes = moving.slopes_at(numbers, fluxes)[: moving.problem_rows]
    for k, name in enumerate(moving.names):
        step = 1e-5
        up, down = (
            rebuild(there, {name: there.values[name] + h}).problem.matrix for h in (step, -step)
        )
        assert slopes[:, k] == pytest.approx((up - down) @ fluxes / (2 * step), abs=1e-9)


def test_slopes_are_the_differences_of_moved_rows(built):
    extra = (form_of(built, Quantity(QuantityKind.MU)),)
    moving = moving_rows(built, extra)
    fluxes = np.array([2.0, 0.4, 3.0, 4.0, 1.0])
    slopes = moving.slopes_at(moving.start, fluxes)
    for k in range(len(moving.names)):
        step = np.zeros(len(moving.names))
        step[k] = 1e-6
        ahead, behind = moving.at(moving.start + step), moving.at(moving.start - step)
        difference = (ahead - behind) @ fluxes / 2e-6
        assert slopes[:, k] == pytest.approx(difference, rel=1e-6, abs=1e-8)
    assert moving.base[moving.problem_rows] @ fluxes > 0
