"""Aims without an end, and what would end them."""

from __future__ import annotations

import numpy as np
import pytest

from fluxnet.ground.errors import MisuseError
from fluxnet.solving.build import build_problem
from fluxnet.solving.unbounded import explain_unbounded

CELL = """
substrate glucose, xylose, ammonia, oxygen
product ethanol
exchange CO2
carrier ATP
inside pyruvate, G6P, F6P
pts : glucose -> G6P
xyl : xylose -> 0.8 G6P
lower : F6P -> 2 pyruvate + 3 ATP
pgi : G6P <-> F6P
pdc : pyruvate -> ethanol + CO2
kinase : F6P + ATP -> G6P
idle : ATP -> nothing
"""


def aim(problem, reaction):
    cost = np.zeros(len(problem.columns))
    cost[problem.column(reaction)] = 1.0
    return cost


def test_a_missing_limit_is_named(make_network):
    problem = build_problem(make_network(CELL, ("xylose <= 1",))).problem
    found = explain_unbounded(problem, aim(problem, "pdc"))
    assert found.taken_up == ("glucose",)
    assert found.missing == ("glucose",)
    assert found.missing_limit == "glucose"
    assert "glucose in" in found.words


def test_all_limits_that_are_needed_are_named(make_network):
    problem = build_problem(make_network(CELL)).problem
    found = explain_unbounded(problem, aim(problem, "pdc"))
    assert found.missing == ("glucose", "xylose")


def test_a_circle_of_reactions_is_shown_with_its_proportions(make_network):
    network = make_network(
        CELL.replace("idle : ATP -> nothing", "idle : ATP -> nothing\nfree : nothing -> ATP"),
        ("glucose <= 1", "xylose <= 1"),
    )
    problem = build_problem(network).problem
    found = explain_unbounded(problem, aim(problem, "kinase"))
    loop = {step.reaction: step.coefficient for step in found.loop}
    assert loop == pytest.approx({"pgi": 1.0, "kinase": 1.0, "free": 1.0})
    assert found.missing_limit is None
    assert found.taken_up == ()
    assert "circle" in found.words


def test_the_loop_keeps_every_balance(make_network):
    problem = build_problem(make_network(CELL)).problem
    cost = aim(problem, "lower")
    found = explain_unbounded(problem, cost)
    ray = np.zeros(len(problem.columns))
    for step in found.loop:
        ray[problem.column(step.reaction)] = step.coefficient
    balanced = [i for i, row in enumerate(problem.rows) if row.quantity is None]
    assert problem.matrix[balanced] @ ray == pytest.approx(np.zeros(4), abs=1e-9)
    assert cost @ ray == pytest.approx(1)


def test_an_aim_with_an_end_has_nothing_to_explain(make_network):
    problem = build_problem(make_network(CELL, ("glucose <= 1", "xylose <= 1"))).problem
    with pytest.raises(MisuseError, match="end"):
        explain_unbounded(problem, aim(problem, "pdc"))
