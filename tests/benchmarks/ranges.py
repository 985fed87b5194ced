"""The range scan of all fluxes of a 60-reaction network, beside two other ways to do it.

Run it as a script: ``python tests/benchmarks/ranges.py``. All three give the same answers
(compared first, to 1e-8): ours, which builds its model and checks every answer; a loop over
``scipy.optimize.linprog``; and a bare highspy loop on a model that stands ready, with cost
changes and runs only. Prints the ratios of the medians of alternating repeats: linprog over
ours should be above 6, ours over the bare loop below 1.5.
"""

from __future__ import annotations

import sys
from pathlib import Path
from statistics import median
from time import perf_counter

import highspy
import numpy as np
from numpy.typing import NDArray
from scipy.optimize import linprog

from fluxnet.reading.model import read_model
from fluxnet.solving.build import build_problem
from fluxnet.solving.problem import Problem
from fluxnet.solving.ranges import find_ranges

Array = NDArray[np.float64]
REPEATS = 7
MODEL = Path(__file__).with_name("sixty.flux")


def by_linprog(problem: Problem) -> Array:
    """Low and high of every flux, one call each."""
    low, high, matrix = problem.row_low, problem.row_high, problem.matrix
    equal = low == high
    up, down = ~equal & np.isfinite(high), ~equal & np.isfinite(low)
    upper = np.vstack([matrix[up], -matrix[down]])
    ends = np.concatenate([high[up], -low[down]])
    bounds = list(zip(problem.column_low, problem.column_high, strict=True))
    found = np.empty((len(problem.columns), 2))
    for j in range(len(found)):
        for k, sign in enumerate((1.0, -1.0)):
            cost = np.zeros(len(found))
            cost[j] = sign
            answer = linprog(cost, upper, ends, matrix[equal], low[equal], bounds=bounds)
            found[j, k] = sign * answer.fun if answer.status == 0 else -sign * np.inf
    return found


def make_bare(problem: Problem) -> highspy.Highs:
    """A model that stands ready, as one would set it up by hand."""
    rows, columns = problem.matrix.shape
    place_row, place_column = np.nonzero(problem.matrix)
    model = highspy.HighsLp()
    model.num_row_, model.num_col_ = rows, columns
    model.col_cost_ = np.zeros(columns)
    model.col_lower_, model.col_upper_ = problem.column_low, problem.column_high
    model.row_lower_, model.row_upper_ = problem.row_low, problem.row_high
    model.a_matrix_.format_ = highspy.MatrixFormat.kRowwise
    model.a_matrix_.start_ = np.searchsorted(place_row, np.arange(rows + 1))
    model.a_matrix_.index_ = place_column
    model.a_matrix_.value_ = problem.matrix[place_row, place_column]
    highs = highspy.Highs()
    for option, value in (
        ("output_flag", False), ("presolve", "off"), ("threads", 1), ("simplex_strategy", 0),
    ):  # fmt: skip
        highs.setOptionValue(option, value)
    highs.passModel(model)
    highs.run()
    return highs


def by_bare(highs: highspy.Highs, columns: int) -> Array:
    """Low and high of every flux: cost changes and runs, nothing checked."""
    found = np.empty((columns, 2))
    for j in range(columns):
        for k, sign in enumerate((1.0, -1.0)):
            highs.changeColCost(j, sign)
            highs.run()
            optimal = highs.getModelStatus() == highspy.HighsModelStatus.kOptimal
            value = highs.getInfo().objective_function_value
            found[j, k] = sign * value if optimal else -sign * np.inf
        highs.changeColCost(j, 0.0)
    return found


def main() -> int:
    """Compare, time and print; 1 where an answer differs or a bound is missed."""
    network = read_model(MODEL).network
    assert network is not None
    problem = build_problem(network).problem
    ready = make_bare(problem)
    ours = find_ranges(problem)
    answer = np.column_stack([ours.low, ours.high])
    worst = 0.0
    for other in (by_linprog(problem), by_bare(ready, len(problem.columns))):
        finite = np.isfinite(answer)
        if (finite != np.isfinite(other)).any():
            print("the answers differ in what is unbounded")
            return 1
        worst = max(worst, float(np.abs(answer[finite] - other[finite]).max()))
    print(f"{len(problem.columns)} reactions, {int((~np.isfinite(answer)).sum())} open ends;")
    print(f"largest difference between answers {worst:.1e}, our own residual {ours.residual:.1e}")
    times: dict[str, list[float]] = {"ours": [], "linprog": [], "bare": []}
    for _ in range(REPEATS):
        for name, ways in (
            ("ours", lambda: find_ranges(problem)),
            ("linprog", lambda: by_linprog(problem)),
            ("bare", lambda: by_bare(ready, len(problem.columns))),
        ):
            start = perf_counter()
            ways()
            times[name].append(perf_counter() - start)
    middle = {name: median(values) for name, values in times.items()}
    for name, value in middle.items():
        print(f"{name:8} {1000 * value:8.1f} ms")
    faster, slower = middle["linprog"] / middle["ours"], middle["ours"] / middle["bare"]
    print(f"linprog / ours {faster:6.1f}   (above 6)")
    print(f"ours / bare    {slower:6.2f}   (below 1.5)")
    return int(not (worst < 1e-8 and faster > 6 and slower < 1.5))


if __name__ == "__main__":
    sys.exit(main())
