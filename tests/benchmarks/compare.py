"""A hundred variants of a 60-reaction network, beside the same programmes one by one by scipy.

Run it as a script: ``python tests/benchmarks/compare.py``. Each variant drops reactions, closes
an uptake or a release, or sets a parameter. Timed, in alternating repeats, from the networks of
the variants to the most product of each:

- ours: the programme that all variants share is made, and solved for each from the one before;
- each variant's matrix and bounds built anew, and solved by ``scipy.optimize.linprog``.

The ratio of the medians is asked to be at least 6; both must agree on every optimum. Then the
exact proof of each optimum, beside one solve by linprog: at most 2.
"""

from __future__ import annotations

import gc
import sys
from collections.abc import Sequence
from pathlib import Path
from statistics import median
from time import perf_counter

import numpy as np
from scipy.optimize import linprog

from fluxnet.reading.model import read_model_text
from fluxnet.solving.build import build_problem
from fluxnet.solving.problem import RowKind
from fluxnet.studies.compare_cases import Case, find_cases
from fluxnet.studies.compare_family import gather
from fluxnet.studies.compare_modes import DEMANDS, Mode, ask, find_demands
from fluxnet.studies.compare_scan import find_best, scan

REPEATS = 15
MODEL = Path(__file__).with_name("sixty.flux")
PRODUCT = "ethanol"


def variants(reactions: Sequence[str]) -> str:
    """A hundred variants as text."""
    lines: list[str] = []
    for k in range(100):
        lines.append(f"variant v{k}")
        lines.append(f"    drop {reactions[(7 * k) % len(reactions)]}")
        if k % 3 == 0:
            lines.append(f"    limit oxygen <= {k % 7}")
        if k % 3 == 1:
            lines.append("    limit lactate <= 0")
        if k % 10 == 0:
            lines.append(f"    set PO = {1 + k / 100}")
    return "\n".join(lines) + "\n"


def ours(cases: Sequence[Case]) -> list[float]:
    """All optima on one warm programme."""
    (family,) = gather(cases)
    asked = [(m, ask(m, find_demands(m), DEMANDS[Mode.ALONE])) for m in family.members]
    return [one.solution.objective for one in scan(family, asked, PRODUCT, places=False)]


def one_by_one(cases: Sequence[Case]) -> list[float]:
    """Each variant's programme built and solved by itself."""
    found: list[float] = []
    for case in cases:
        problem = build_problem(case.network).problem
        place = {(row.kind, row.name): i for i, row in enumerate(problem.rows)}
        low, high = problem.row_low.copy(), problem.row_high.copy()
        uptake = place[RowKind.ROLE, case.substrate]
        low[uptake] = high[uptake] = float(case.uptake or 1)
        for i, row in enumerate(problem.rows):
            if row.kind is RowKind.MEASURED_LIMIT or row.name.startswith("limit upkeep"):
                low[i], high[i] = -np.inf, np.inf
        cost = problem.matrix[place[RowKind.ROLE, PRODUCT]]
        equal = low == high
        up, down = ~equal & np.isfinite(high), ~equal & np.isfinite(low)
        upper = np.vstack([problem.matrix[up], -problem.matrix[down]])
        ends = np.concatenate([high[up], -low[down]])
        bounds = list(zip(problem.column_low, problem.column_high, strict=True))
        solved = linprog(-cost, upper, ends, problem.matrix[equal], low[equal], bounds=bounds)
        found.append(-solved.fun if solved.status == 0 else float("nan"))
    return found


def main() -> int:
    """Time, compare and print; 1 where the optima differ or a ratio is not met."""
    text = MODEL.read_text(encoding="utf-8")
    first = read_model_text(text).network
    assert first is not None
    names = [r.name for r in first.reactions if not r.name.startswith("growth")]
    network = read_model_text(text + variants(names)).network
    assert network is not None
    across = ["|".join(v.name for v in network.variants)]
    cases = find_cases(network, PRODUCT, ["glucose"], across).members
    gc.freeze()  # else looking through what was read falls on either side by chance
    times: tuple[list[float], list[float]] = [], []
    for _ in range(REPEATS):
        start = perf_counter()
        mine = ours(cases)
        between = perf_counter()
        others = one_by_one(cases)
        times[0].append(between - start)
        times[1].append(perf_counter() - between)
    warm, cold = (1000 * median(found) for found in times)
    agree = all(
        (np.isinf(a) and np.isnan(b)) or abs(a - b) < 1e-6 * max(1.0, abs(b))
        for a, b in zip(mine, others, strict=True)
    )
    print(f"{len(cases)} variants of {len(network.reactions)} reactions; at least 6 is asked for")
    print(f"ours {warm:7.1f} ms   linprog one by one {cold:7.1f} ms   ratio {cold / warm:5.1f}")
    (family,) = gather(cases)
    asked = [(m, ask(m, find_demands(m), DEMANDS[Mode.ALONE])) for m in family.members]
    solved = list(scan(family, asked, PRODUCT))
    proofs: list[float] = []
    verified = True
    for (member, question), one in zip(asked, solved, strict=True):
        start = perf_counter()
        best = find_best(family, member, question, PRODUCT, one)
        proofs.append(1000 * (perf_counter() - start))
        verified &= best.proven.proof.verified
    each = cold / len(cases)
    proof = median(proofs)
    print(f"proof {proof:5.2f} ms (all hold: {verified})   one linprog {each:5.2f} ms   "
          f"ratio {proof / each:5.2f}; at most 2")  # fmt: skip
    return int(not (agree and verified and cold / warm >= 6 and proof / each <= 2))


if __name__ == "__main__":
    sys.exit(main())
