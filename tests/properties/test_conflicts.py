"""Random questions without an answer, asked of our own models.

Whether members can hold together is asked of another solver (scipy's linprog); what a bill
proves is reckoned once more in fractions from the lines of the model.
"""

from __future__ import annotations

from dataclasses import replace
from fractions import Fraction
from pathlib import Path
from random import Random

import numpy as np
import pytest
from scipy.optimize import linprog

from fluxnet.network.model import Basis, Direction, Quantity, QuantityKind, Role
from fluxnet.rates.measured import MeasuredRate, Run
from fluxnet.reading.model import read_model
from fluxnet.solving.alter import hard_part
from fluxnet.solving.build import Built, build_problem
from fluxnet.solving.conflict import find_conflict, find_conflicts
from fluxnet.solving.farkas import find_contradiction
from fluxnet.solving.least_change import least_change
from fluxnet.solving.problem import Problem
from fluxnet.solving.proof import exact_programme, exact_sums
from fluxnet.studies.bill import BillSide
from fluxnet.studies.conflicts import explain_conflicts

MODELS = Path(__file__).resolve().parents[2] / "models"
NAMES = ("amino-acid", "heterolactic", "mixed-acid", "solvent", "yeast")
EACH = 8


def least(problem: Problem, cost, members=None):
    """The least cost under some members (or everything), by scipy; None where nothing holds."""
    rows = range(len(problem.rows)) if members is None else [i for m in members for i in m.rows]
    rows = sorted(rows)
    columns = range(len(problem.columns)) if members is None else {m.column for m in members}
    bounds = [
        (problem.column_low[j], problem.column_high[j]) if j in columns else (None, None)
        for j in range(len(problem.columns))
    ]
    matrix, low, high = problem.matrix[rows], problem.row_low[rows], problem.row_high[rows]
    upper, lower = np.isfinite(high), np.isfinite(low)
    answer = linprog(
        cost,
        A_ub=np.vstack([matrix[upper], -matrix[lower]]),
        b_ub=np.concatenate([high[upper], -low[lower]]),
        bounds=bounds,
        method="highs-ds",
        options={"presolve": False},
    )
    assert answer.status in (0, 2), answer.message
    return answer.fun if answer.status == 0 else None


def holds(problem: Problem, members=None) -> bool:
    """Whether some members (or everything) can hold together, by scipy."""
    return least(problem, np.zeros(len(problem.columns)), members) is not None


def lifted(problem: Problem, members) -> Problem:
    """The problem without the bounds of some members."""
    low, high = problem.row_low.copy(), problem.row_high.copy()
    places = [i for m in members for i in m.rows]
    low[places], high[places] = -np.inf, np.inf
    return replace(problem, row_low=low, row_high=high)


def draw(network, random: Random) -> Run:
    """A few rates of a model, at random; some are exact."""
    rates = []
    crossing = [s for s in network.boundary if s.role is not Role.BIOMASS]
    for species in random.sample(crossing, random.randint(2, min(6, len(crossing)))):
        way = Direction.IN if species.role is Role.SUBSTRATE else Direction.OUT
        value = round(random.uniform(0.05, 8), 3)
        sd = random.choice((0.02, 0.05, 0.1, 0.0)) * value
        rates.append(MeasuredRate(Quantity(QuantityKind.RATE, species.name, way), value, sd))
    if random.random() < 0.6:
        growth = round(random.uniform(0.05, 1), 3)
        rates.append(MeasuredRate(Quantity(QuantityKind.MU), growth, 0.002))
    return Run("drawn", Basis.SPECIFIC, tuple(rates))


def drawn(name: str, number: int) -> Built:
    """The first question of a seed that has no answer."""
    network = read_model(MODELS / f"{name}.flux").network
    random = Random(f"{name} {number}")
    while True:
        built = build_problem(network, draw(network, random), within=2.0)
        if not holds(built.problem):
            return built


@pytest.fixture(params=[(name, k) for name in NAMES for k in range(EACH)], ids=str)
def built(request) -> Built:
    return drawn(*request.param)


def test_every_member_is_needed_and_the_bill_proves_it(built):
    problem = built.problem
    conflict = find_conflict(problem)
    assert conflict.verified
    assert not holds(problem, conflict.members)
    for member in conflict.members:
        rest = [m for m in conflict.members if m is not member]
        assert holds(problem, rest), f"{member.words} is not needed"

    rows, _ = exact_sums(built, ())
    exact = exact_programme(problem, rows, within=2.0)
    found = find_contradiction(problem, exact, conflict.members)
    assert found is not None
    assert {w.member for w in found.weights} == set(conflict.members)
    total = [Fraction(0)] * len(problem.columns)
    for weight in found.weights:
        if weight.row is None:
            total[weight.column] += weight.factor
            ends = problem.column_low[weight.column], problem.column_high[weight.column]
        else:
            for j, value in rows[weight.row].items():
                total[j] += weight.factor * value
            ends = problem.row_low[weight.row], problem.row_high[weight.row]
        assert float(weight.end) == pytest.approx(ends[weight.factor > 0], rel=1e-12)
    assert not any(total)
    assert sum(w.worth for w in found.weights) == -found.gap < 0


def test_a_bill_is_the_sum_of_its_lines(built):
    told = explain_conflicts(built, built.problem, "mmol/g/h", 2.0)[0]
    bill = told.bill
    assert bill.verified
    for side, total in ((BillSide.SUPPLY, bill.supply), (BillSide.DEMAND, bill.demand)):
        lines = [x for x in bill.lines if x.side is side]
        assert sum(x.worth for x in lines) == pytest.approx(total, rel=1e-12, abs=1e-12)
        for line in lines:
            assert line.amount * line.price == pytest.approx(line.worth, rel=1e-12)
    assert bill.demand - bill.supply == pytest.approx(bill.shortfall, rel=1e-9)
    assert bill.shortfall > 0
    assert len(bill.lines) == len(told.conflict.given)


def test_an_alternative_mends_all_by_itself_and_less_does_not(built):
    told, *others = explain_conflicts(built, built.problem, "mmol/g/h", 2.0)
    problem = lifted(built.problem, [m for other in others for m in other.conflict.given])
    ends = {way.member.rows: way for way in told.alternatives}
    for member in told.conflict.given:
        way = ends.get(member.rows)
        if way is None:
            assert not holds(lifted(problem, [member])), f"{member.words} could give way"
            continue
        (place,) = member.rows
        for share, expected in ((1 + 1e-7, True), (1 - 1e-4, False)):
            low, high = problem.row_low.copy(), problem.row_high.copy()
            bounds = low if way.is_ceiling else high
            bounds[place] += (way.needed - bounds[place]) * share
            assert holds(replace(problem, row_low=low, row_high=high)) is expected, way


def test_conflicts_share_nothing_and_nothing_is_left_without_them(built):
    conflicts = find_conflicts(built.problem, most=20)
    given = [m for c in conflicts for m in c.given]
    assert len({(m.kind, m.rows) for m in given}) == len(given)
    assert holds(lifted(built.problem, given))


def test_no_other_values_are_a_smaller_change(built):
    # the sum of squares is convex: its slope at the least change points away from all others
    problem = built.problem
    change = least_change(problem)
    hard = hard_part(problem)
    assert change.possible is holds(hard)
    if not change.possible:
        return
    rows = [problem.matrix[i] for i in built.measured]
    sds = [problem.rows[i].sd for i in built.measured]
    moves = [c.in_sd if abs(c.in_sd) > 1e-5 else 0.0 for c in change.changes]
    slope = [2 * move / sd for move, sd in zip(moves, sds, strict=True)]
    here = sum(s * c.changed for s, c in zip(slope, change.changes, strict=True))
    size = sum(abs(s * c.changed) for s, c in zip(slope, change.changes, strict=True))
    cost = sum((s * row for s, row in zip(slope, rows, strict=True)), np.zeros(len(rows[0])))
    near = replace(  # rounding in the slope makes no difference in a box
        hard,
        column_low=np.maximum(hard.column_low, -1e2),
        column_high=np.minimum(hard.column_high, 1e2),
    )
    assert least(near, cost) == pytest.approx(here, abs=1e-6 * (1 + size))
    assert sum(c.in_sd**2 for c in change.changes) == pytest.approx(change.total, rel=1e-9)
    assert change.common_k <= max(abs(c.in_sd) for c in change.changes) * (1 + 1e-9)


def test_the_bill_lacks_what_the_easiest_way_out_gives_up_or_says_that_it_does_not(built):
    told = explain_conflicts(built, built.problem, "mmol/g/h", 2.0)
    for one in told:
        conflict = one.conflict
        assert conflict.verified
        assert not holds(built.problem, conflict.members)
        for member in conflict.members:
            rest = [m for m in conflict.members if m is not member]
            assert holds(built.problem, rest), f"{member.words} is not needed"
        ways = [w for w in one.alternatives if w.quantity.denominator is None]
        if one.bill is None or not ways:
            continue
        easiest = min(ways, key=lambda w: w.ease)
        (place,) = easiest.member.rows
        bound = (built.problem.row_low if easiest.is_ceiling else built.problem.row_high)[place]
        names = (easiest.member.name, str(easiest.quantity).removeprefix("flux "))
        line = next(x for x in one.bill.lines if x.name.startswith(names))
        moved = abs(bound - easiest.needed) * line.price
        agrees = abs(moved - one.bill.shortfall) <= 1e-6 * max(1.0, abs(moved))
        assert agrees or easiest in one.beyond
        assert agrees or conflict.is_hard or len(told) > 1
