"""Why rates of a 60-reaction network cannot hold together, from the problem to the bill.

Run it as a script: ``python tests/benchmarks/conflicts.py``. Prints the medians of the irreducible
conflict alone and of all that is told of it (the conflicts, their exact bills, what could give
way alone, the least change); each should be below 0.5 s. Beside them stands one cold solve
of the same problem through ``scipy.optimize.linprog``, and the ratio to it.
"""

from __future__ import annotations

import sys
from collections.abc import Callable
from pathlib import Path
from statistics import median
from time import perf_counter

import numpy as np
from scipy.optimize import linprog

from fluxnet.reading.model import read_model
from fluxnet.solving.build import build_problem
from fluxnet.solving.conflict import find_conflict
from fluxnet.solving.least_change import least_change
from fluxnet.solving.problem import Problem
from fluxnet.studies.conflicts import explain_conflicts
from fluxnet.tables.rates_table import read_rates_text

REPEATS = 7
LIMIT = 0.5
MODEL = Path(__file__).with_name("sixty.flux")
RATES = """run,species,direction,rate,sd,unit
first,glucose,in,4,0.2,mmol/g/h
first,xylose,in,0,0,mmol/g/h
first,oxygen,in,3,0.1,mmol/g/h
first,mu,,0.45,0.01,1/h
first,ethanol,out,1,0.1,mmol/g/h
first,acetate,out,2,0.1,mmol/g/h
first,CO2,out,8,0.5,mmol/g/h
"""


def by_linprog(problem: Problem) -> int:
    """The status of a cold solve: 2 is infeasible."""
    low, high, matrix = problem.row_low, problem.row_high, problem.matrix
    equal = low == high
    up, down = ~equal & np.isfinite(high), ~equal & np.isfinite(low)
    answer = linprog(
        np.zeros(len(problem.columns)),
        np.vstack([matrix[up], -matrix[down]]),
        np.concatenate([high[up], -low[down]]),
        matrix[equal],
        low[equal],
        bounds=list(zip(problem.column_low, problem.column_high, strict=True)),
    )
    return int(answer.status)


def main() -> int:
    """Time and print; 1 where something is not proven or takes too long."""
    network = read_model(MODEL).network
    assert network is not None
    table = read_rates_text(RATES, network=network).table
    assert table is not None
    built = build_problem(network, table.runs[0], within=2.0)
    problem = built.problem

    def tell() -> bool:
        told = explain_conflicts(built, problem, "mmol/g/h", 2.0)
        return least_change(problem).possible and all(x.bill is not None for x in told)

    ways: dict[str, Callable[[], object]] = {
        "conflict": lambda: find_conflict(problem),
        "all that is told": tell,
        "linprog": lambda: by_linprog(problem),
    }
    conflict = find_conflict(problem)
    if not (tell() and conflict.verified and by_linprog(problem) == 2):
        print("the conflict is not proven")
        return 1
    times: dict[str, list[float]] = {name: [] for name in ways}
    for _ in range(REPEATS):
        for name, way in ways.items():
            start = perf_counter()
            way()
            times[name].append(perf_counter() - start)
    middle = {name: median(values) for name, values in times.items()}
    print(f"{len(problem.columns)} reactions, a conflict of {len(conflict.members)} members")
    for name, value in middle.items():
        ratio = value / middle["linprog"]
        print(f"{name:17}{1000 * value:8.1f} ms{ratio:8.1f} linprog")
    return int(max(middle["conflict"], middle["all that is told"]) >= LIMIT)


if __name__ == "__main__":
    sys.exit(main())
