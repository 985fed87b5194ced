"""Closure of 100,000 runs against a batch written by hand in numpy.

Run it as a script: ``python tests/benchmarks/closure_batch.py``. Both compute the same arrays
(compared first): h, p, reconciled rates, gaps and recoveries with all their sds; each run has
its own sds. Prints the ratio of the medians of alternating repeats; it should be below 2.
"""

from __future__ import annotations

import sys
from statistics import median
from time import perf_counter

import numpy as np
from numpy.typing import NDArray

from fluxnet.studies.closure_batch import ClosureArrays, ClosureMatrices, close_many
from fluxnet.studies.closure_collect import collect_rows
from fluxnet.studies.closure_plan import plan_closure
from fluxnet.studies.closure_world import NitrogenSource, find_source
from fluxnet.tables.rates_table import read_rates_text

Array = NDArray[np.float64]
RUNS = 100_000
REPEATS = 9
MEASURED = {
    "glucose": 10.0, "oxygen": 4.0, "ethanol": 12.0, "CO2": 20.0, "biomass": 9.0,
    "glycerol": 2.0, "acetate": 0.8,
}  # fmt: skip
UPTAKES = ("glucose", "oxygen")


def make_matrices() -> ClosureMatrices:
    """The matrices of the species above, by the way that every closure takes."""
    rows = "".join(
        f"A,{name},{'in' if name in UPTAKES else 'out'},{value},0.1,mmol/g/h\n"
        for name, value in MEASURED.items()
    )
    table = read_rates_text("run,species,direction,rate,sd,unit\n" + rows).table
    assert table is not None
    source = find_source("ammonia", table, None)
    assert isinstance(source, NitrogenSource)
    collected = collect_rows(table.runs[0], table, None)
    return plan_closure(collected, [False] * len(MEASURED), "mmol/g/h", source).matrices


def make_runs() -> tuple[Array, Array]:
    """Values and sds of all runs."""
    random = np.random.default_rng(99_991)
    true = np.array(list(MEASURED.values()))
    sds = true * random.uniform(0.02, 0.1, (RUNS, len(true)))
    return np.maximum(true + sds * random.standard_normal(sds.shape), 0.01 * true), sds


def by_hand(matrices: ClosureMatrices, y: Array, s: Array) -> tuple[Array, ...]:
    """The same in plain numpy: einsum and a batched solve (h with two degrees of freedom)."""
    R, C = matrices.redundancy, matrices.contents
    V = s**2
    e = np.einsum("rp,np->nr", R, y)
    P = np.einsum("rp,np,qp->nrq", R, V, R)
    RV = np.einsum("rp,np->nrp", R, V)
    K = np.linalg.solve(P, RV)
    w = np.linalg.solve(P, e[:, :, None])[:, :, 0]
    h = np.einsum("nr,nr->n", e, w)
    p = np.exp(-h / 2)
    reconciled = y - np.einsum("nr,nrp->np", e, K)
    reduction = np.einsum("nrp,nrp->np", RV, K)
    reconciled_sd = np.sqrt(V - reduction)
    z = (y - reconciled) / np.sqrt(reduction)
    up = np.where(matrices.inward, np.minimum(C, 0), 0)
    out = C - up
    taken = -np.einsum("rp,np->nr", up, y)
    released = np.einsum("rp,np->nr", out, y)
    above, below = np.einsum("rp,np->nr", out**2, V), np.einsum("rp,np->nr", up**2, V)
    recovery = released / taken
    recovery_sd = np.sqrt(above + recovery**2 * below) / taken
    terms = np.einsum("rp,np->nr", np.abs(R), np.abs(reconciled))
    residual = (np.abs(np.einsum("rp,np->nr", R, reconciled)) / terms).max(axis=1)
    return (h, p, reconciled, reconciled_sd, z, taken, released, released - taken,
            np.sqrt(above + below), recovery, recovery_sd, residual)  # fmt: skip


def arrays_of(runs: ClosureArrays) -> tuple[Array, ...]:
    """The arrays of a closure in the order of :func:`by_hand`."""
    return (runs.h, runs.p, runs.reconciled, runs.reconciled_sd, runs.z, runs.taken,
            runs.released, runs.gap, runs.gap_sd, runs.recovery, runs.recovery_sd,
            runs.residual)  # fmt: skip


def main() -> int:
    """Compare, time, print; 1 where the arrays differ or the ratio is above 2."""
    matrices = make_matrices()
    y, s = make_runs()
    ours, theirs = arrays_of(close_many(matrices, y, s)), by_hand(matrices, y, s)
    same = all(np.allclose(a, b, rtol=1e-8, atol=1e-12) for a, b in zip(ours, theirs, strict=True))
    times: tuple[list[float], list[float]] = ([], [])
    for _ in range(REPEATS):
        start = perf_counter()
        close_many(matrices, y, s)
        middle = perf_counter()
        by_hand(matrices, y, s)
        times[0].append(middle - start)
        times[1].append(perf_counter() - middle)
    ratio = median(times[0]) / median(times[1])
    print(f"closure of {RUNS:,} runs x {len(MEASURED)} rates: same arrays: {same}")
    print(f"close_many {median(times[0]):.3f} s, by hand {median(times[1]):.3f} s, "
          f"ratio {ratio:.2f} (limit 2)")  # fmt: skip
    return 0 if same and ratio < 2 else 1


if __name__ == "__main__":
    sys.exit(main())
