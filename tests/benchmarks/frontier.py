"""All break points of trade-offs in a 60-reaction network, beside a grid of 50 programmes.

Run it as a script: ``python tests/benchmarks/frontier.py``. Both ways begin with the problem
and end with numbers; both make their solver's model, and find the least and the most x. The
grid then holds x at 50 values and solves a bare warm HiGHS model at each; ours follows the
basis (compared first: the break points' line meets the grid to 1e-7). Prints the shortest of
25 alternating repeats, for these are short enough that a busy machine doubles many of them:
grid over ours should be above 1, and the exact check of each point should take below 4 ms.
"""

from __future__ import annotations

import sys
from functools import partial
from pathlib import Path
from time import perf_counter

import highspy
import numpy as np
from numpy.typing import NDArray

from fluxnet.reading.model import read_model
from fluxnet.solving.build import Built, build_problem
from fluxnet.solving.parametric import Extreme, follow
from fluxnet.solving.parametric import Path as Traced
from fluxnet.solving.parametric_proof import ProvenPath, prove_path
from fluxnet.solving.problem import Problem
from fluxnet.solving.proof import exact_sums
from fluxnet.studies.aim_problem import aim_cost, open_carriers
from fluxnet.studies.aims import Aim, Sense
from fluxnet.studies.frontier_axis import Axis, read_axis

Array = NDArray[np.float64]
REPEATS = 25
GRID = 50
MODEL = Path(__file__).with_name("sixty.flux")
PAIRS = (
    ("mu", "ethanol"), ("mu", "2,3-butanediol"), ("in oxygen", "mu"), ("succinate", "H2"),
    ("lactate", "ATP"),
)  # fmt: skip


def by_grid(problem: Problem, along: Array, cost: Array) -> tuple[Array, Array]:
    """The most of ``cost`` at 50 values of x, on one warm model."""
    matrix = np.vstack([problem.matrix, along])
    rows, columns = matrix.shape
    place_row, place_column = np.nonzero(matrix)
    model = highspy.HighsLp()
    model.num_row_, model.num_col_ = rows, columns
    model.col_cost_ = along.copy()
    model.col_lower_, model.col_upper_ = problem.column_low, problem.column_high
    model.row_lower_ = np.append(problem.row_low, -np.inf)
    model.row_upper_ = np.append(problem.row_high, np.inf)
    model.a_matrix_.format_ = highspy.MatrixFormat.kRowwise
    model.a_matrix_.start_ = np.searchsorted(place_row, np.arange(rows + 1))
    model.a_matrix_.index_ = place_column
    model.a_matrix_.value_ = matrix[place_row, place_column]
    highs = highspy.Highs()
    for option, value in (("output_flag", False), ("presolve", "off"), ("threads", 1)):
        highs.setOptionValue(option, value)
    highs.passModel(model)
    every = np.arange(columns, dtype=np.int32)
    ends = []
    for sign in (1.0, -1.0):
        highs.changeColsCost(columns, every, sign * along)
        highs.run()
        ends.append(sign * highs.getInfo().objective_function_value)
    xs = np.linspace(ends[0], ends[1], GRID)
    ys = np.empty(GRID)
    highs.changeColsCost(columns, every, -cost)
    for k, x in enumerate(xs):
        highs.changeRowBounds(rows - 1, x, x)
        highs.run()
        ys[k] = -highs.getInfo().objective_function_value
    return xs, ys


def prove(path: Traced, built: Built, x: Axis, y: Axis, along: Array, cost: Array) -> ProvenPath:
    """The exact check, from the decimals as written."""
    rows, (exact, aim) = exact_sums(built, [x.terms, y.terms])
    return prove_path(path, rows, exact, aim, along, cost, within=2.0)


def main() -> int:
    """Compare, time and print; 1 where an answer differs or a bound is missed."""
    network = read_model(MODEL).network
    assert network is not None
    built = build_problem(network, None, within=2.0)
    failed = False
    for names in PAIRS:
        x, y = (read_axis(name, network) for name in names)
        problem = open_carriers(built, Aim(Sense.MAXIMISE, x.terms + y.terms))
        along, cost = aim_cost(built, x.aim()), aim_cost(built, y.aim())
        path = follow(problem, along, cost, Extreme.MOST)
        proven = prove(path, built, x, y, along, cost)
        xs, ys = by_grid(problem, along, cost)
        line = np.interp(xs, *zip(*path.points, strict=True))
        worst = float(np.abs(line - ys).max())
        times: dict[str, list[float]] = {"ours": [], "grid": [], "proof": []}
        for _ in range(REPEATS):
            for name, way in (
                ("ours", partial(follow, problem, along, cost, Extreme.MOST)),
                ("grid", partial(by_grid, problem, along, cost)),
                ("proof", partial(prove, path, built, x, y, along, cost)),
            ):
                start = perf_counter()
                way()
                times[name].append(1000 * (perf_counter() - start))
        ours, grid, whole = (min(times[name]) for name in ("ours", "grid", "proof"))
        each = whole / len(proven.breaks)
        print(
            f"{names[0]} and {names[1]}: {len(proven.breaks)} points, ours {ours:.1f} ms, "
            f"grid {grid:.1f} ms, grid / ours {grid / ours:.1f} (above 1); exact check "
            f"{each:.2f} ms a point (below 4); largest difference {worst:.1e}"
        )
        bad = not proven.proof.verified or worst > 1e-7 or grid <= ours or each >= 4
        failed = failed or bad
    return int(failed)


if __name__ == "__main__":
    sys.exit(main())
