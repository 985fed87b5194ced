"""Infeasible questions of our own models: each member of the conflict that is found is needed.

Whether the members can hold together, and whether they can without any one of them, is asked of
another solver (scipy's linprog) on a programme that holds the members alone.
"""

from __future__ import annotations

from dataclasses import dataclass
from pathlib import Path

import numpy as np
import pytest
from scipy.optimize import linprog

from fluxnet.network.variant import apply_variant
from fluxnet.reading.model import read_model
from fluxnet.solving.build import build_problem
from fluxnet.solving.conflict import find_conflict
from fluxnet.solving.members import Member
from fluxnet.solving.problem import Problem

MODELS = Path(__file__).resolve().parents[2] / "models"


@dataclass(frozen=True)
class Case:
    """A question without an answer, and what must be among its conflict's members."""

    model: str
    rates: dict[str, float]
    expected: set[str]
    variant: str = "base"
    unit: str = "mmol/g/h"


CASES = {
    # 2 ethanol a glucose at most: electrons
    "more ethanol than the electrons allow": Case(
        "yeast", {"glucose in": 5, "ethanol out": 13}, {"glucose in", "ethanol out"}, "anaerobic"
    ),
    # 3.594 C-mol of X a mol of glucose at most, even without upkeep; X is mu / 26.77 g/mol
    "faster growth than the sugar feeds": Case(
        "yeast", {"glucose in": 1, "mu": 0.2}, {"glucose in", "mu"}
    ),
    "growth without air and without the redox valve": Case(
        "yeast", {"mu": 0.1}, {"mu", "limit glycerol <= 0", "limit succinate <= 0"}, "no-glycerol"
    ),
    # respiration is all that can pay: 16 ATP and 6 O2 a glucose
    "oxygen that cannot pay for growth": Case(
        "yeast",
        {"glucose in": 1.5, "oxygen in": 0.5, "ethanol out": 0, "mu": 0.1},
        {"mu", "oxygen in"},
    ),
    # pts takes one of two PEP
    "more succinate than PEP": Case(
        "mixed-acid",
        {"glucose in": 5, "succinate out": 6.5},
        {"glucose in", "succinate out"},
        "anaerobic",
    ),
    # 2/3 a glucose for want of another electron sink
    "more butanediol than NADH can be put away for": Case(
        "mixed-acid",
        {"glucose in": 5, "2,3-butanediol out": 4.2},
        {"glucose in", "2,3-butanediol out", "limit oxygen <= 0"},
        "diol",
    ),
    "glucose without an electron sink": Case(
        "heterolactic",
        {"glucose in": 3, "xylose in": 0, "fructose in": 0},
        {"glucose in"},
        "no-sinks",
    ),
    # the phosphoketolase way gives one lactate a glucose
    "two lactate from a heterofermentative glucose": Case(
        "heterolactic",
        {"glucose in": 3, "lactate out": 5.9, "fructose in": 0, "xylose in": 0, "mu": 0},
        {"glucose in", "lactate out"},
    ),
    # 4 a glucose
    "more hydrogen than electrons": Case(
        "solvent", {"glucose in": 2, "hydrogen out": 10}, {"glucose in", "hydrogen out"}
    ),
    "acetate alone where hydrogen is closed": Case(
        "solvent",
        {"glucose in": 2, "acetate out": 4},
        {"glucose in", "acetate out", "limit hydrogen <= 0"},
        "no-hydrogen",
    ),
    # 3/4 a glucose without a way from NADH to NADPH
    "more lysine than NADPH": Case(
        "amino-acid", {"glucose in": 4, "lysine out": 3.5}, {"glucose in", "lysine out"}
    ),
    # electrons that must go to oxygen: 24 - 0.5 x 28 = 10 a glucose
    "lysine with too little air": Case(
        "amino-acid",
        {"glucose in": 4, "lysine out": 2, "oxygen in": 4}
        | {"acetate out": 0, "lactate out": 0, "X out": 0},
        {"glucose in", "lysine out", "oxygen in"},
        unit="mmol",
    ),
}


@pytest.fixture(params=CASES, ids=[name.replace(" ", "-") for name in CASES])
def case(request) -> Case:
    return CASES[request.param]


def _problem(case: Case, read_run) -> Problem:
    network = read_model(MODELS / f"{case.model}.flux").network
    network, _ = apply_variant(network, case.variant)
    run = read_run(network, case.rates, sd="2 %", unit=case.unit)
    return build_problem(network, run, within=2.0).problem


def _holds(problem: Problem, members: tuple[Member, ...]) -> bool:
    """Whether the members alone can hold together, by scipy."""
    rows = sorted({i for m in members for i in m.rows})
    columns = {m.column for m in members if m.column is not None}
    matrix = problem.matrix[rows]
    low, high = problem.row_low[rows], problem.row_high[rows]
    upper, lower = np.isfinite(high), np.isfinite(low)
    free = np.array([j not in columns for j in range(len(problem.columns))])
    bounds = np.column_stack(
        [np.where(free, -np.inf, problem.column_low), np.where(free, np.inf, problem.column_high)]
    )
    answer = linprog(
        np.zeros(len(problem.columns)),
        A_ub=np.vstack([matrix[upper], -matrix[lower]]),
        b_ub=np.concatenate([high[upper], -low[lower]]),
        bounds=bounds,
        method="highs-ds",
    )
    assert answer.status in (0, 2), answer.message
    return bool(answer.status == 0)


def test_no_member_of_a_conflict_can_be_left_out(case, read_run):
    problem = _problem(case, read_run)
    conflict = find_conflict(problem)
    assert conflict.members
    assert conflict.verified
    assert not _holds(problem, conflict.members)
    for member in conflict.members:
        rest = tuple(m for m in conflict.members if m is not member)
        assert _holds(problem, rest), f"{member.name} is not needed"


def test_a_conflict_names_the_measurements_and_limits_behind_it(case, read_run):
    given = {m.name for m in find_conflict(_problem(case, read_run)).given}
    assert case.expected <= given
