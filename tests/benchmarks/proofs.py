"""The exact proof of an optimum of a 60-reaction network, beside a cold solve by scipy.

Run it as a script: ``python tests/benchmarks/proofs.py``. For each of several aims it times

- one cold solve by ``scipy.optimize.linprog`` (its default method);
- the proof: the problem's rows in exact numbers from the decimals as written, the solver's basis
  taken over, factorised, and checked by itself;

in alternating repeats, and prints the ratio of the medians: below 2. Both must agree on the
optimum, and every proof must hold. Then the whole of ``solve --maximise`` on a chain of 2,000
reactions.
"""

from __future__ import annotations

import gc
import sys
from collections.abc import Callable
from pathlib import Path
from statistics import median
from time import perf_counter

import numpy as np
from scipy.optimize import linprog

from fluxnet.reading.model import read_model, read_model_text
from fluxnet.solving.build import Built, build_problem
from fluxnet.solving.linear import Programme
from fluxnet.solving.problem import Problem
from fluxnet.studies.aim_problem import aim_cost, open_carriers
from fluxnet.studies.aims import Sense, read_aim
from fluxnet.studies.optimum_proof import prove_aim
from fluxnet.studies.solve import solve_network

REPEATS = 31
MODEL = Path(__file__).with_name("sixty.flux")
AIMS = ("mu", "ethanol", "ATP", "acetate")


def cold_solve(problem: Problem, cost: np.ndarray) -> Callable[[], float]:
    """One solve by scipy, its arguments ready."""
    low, high, matrix = problem.row_low, problem.row_high, problem.matrix
    equal = low == high
    up, down = ~equal & np.isfinite(high), ~equal & np.isfinite(low)
    upper = np.vstack([matrix[up], -matrix[down]])
    ends = np.concatenate([high[up], -low[down]])
    bounds = list(zip(problem.column_low, problem.column_high, strict=True))
    return lambda: -linprog(-cost, upper, ends, matrix[equal], low[equal], bounds=bounds).fun


def ratio(built: Built, words: str) -> float | None:
    """The proof's time over that of a cold solve; None where the two do not agree."""
    aim = read_aim(words, Sense.MAXIMISE, built.network)
    problem, cost = open_carriers(built, aim), aim_cost(built, aim)
    programme = Programme(problem)
    programme.maximise(cost)
    solve = cold_solve(problem, cost)
    times: tuple[list[float], list[float]] = [], []
    for _ in range(REPEATS):
        start = perf_counter()
        value = solve()
        between = perf_counter()
        proven = prove_aim(built, problem, aim, programme, 2.0)
        times[0].append(between - start)
        times[1].append(perf_counter() - between)
    best = -float(proven.solution.objective)
    cold, proof = (1000 * median(found) for found in times)
    print(f"{words:8} linprog {cold:6.2f} ms   proof {proof:6.2f} ms   ratio {proof / cold:5.2f}")
    agree = proven.proof.verified and abs(best - value) < 1e-7 * max(1.0, abs(value))
    return proof / cold if agree else None


def chain(count: int) -> str:
    """A model of so many reactions in a row."""
    inside = (f"inside m{i} C6H12O6" for i in range(1, count))
    steps = (f"    r{i} : m{i} -> m{i + 1}" for i in range(1, count - 1))
    return "\n".join(
        (
            "substrate s C6H12O6", "product p C6H12O6", *inside, "compartment all",
            "    first : s -> m1", *steps, f"    last : m{count - 1} -> p", "limit s <= 10",
        )
    )  # fmt: skip


def main() -> int:
    """Time, compare and print; 1 where a proof fails or is too slow."""
    network = read_model(MODEL).network
    assert network is not None
    built = build_problem(network)
    gc.freeze()  # else looking through what was read falls on either side by chance
    print(f"{len(network.reactions)} reactions; below 2 is asked for")
    ratios = [ratio(built, words) for words in AIMS]
    long = read_model_text(chain(2000)).network
    assert long is not None
    start = perf_counter()
    (run,) = solve_network(long, maximise="p").runs
    print(f"a chain of 2,000 reactions: {perf_counter() - start:.1f} s (below 10)")
    sound = run.optimum == 10 and run.proof is not None and run.proof.verified
    fast = perf_counter() - start < 10
    return int(not (sound and fast and all(r is not None and r < 2 for r in ratios)))


if __name__ == "__main__":
    sys.exit(main())
