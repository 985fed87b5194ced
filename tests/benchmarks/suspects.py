"""Suspects over the whole catalogue: one run, and a thousand runs.

Run it as a script: ``python tests/benchmarks/suspects.py``. One run that does not close is closed
and its suspects are told, the catalogue being read already; then a thousand such runs. Prints
the medians of repeats and their ratio: one run should take less than 0.2 s, a thousand runs
less than 50 times one.
"""

from __future__ import annotations

import sys
from statistics import median
from time import perf_counter

import numpy as np

from fluxnet.chemistry.catalogue import load_catalogue
from fluxnet.rates.measured import RatesTable
from fluxnet.studies.closure import close_rates
from fluxnet.tables.rates_table import read_rates_text

RUNS, REPEATS = 1000, 7
# they balance, but for the oxygen: it is a tenth too small in every run
MEASURED = {
    "glucose": ("in", 10.0), "oxygen": ("in", 0.9 * 13.7), "ethanol": ("out", 3.0),
    "acetate": ("out", 1.5), "glycerol": ("out", 2.0), "CO2": ("out", 19.0),
    "biomass": ("out", 26.0), "ammonia": ("in", 5.2),
}  # fmt: skip


def make_table(runs: int) -> RatesTable:
    """Runs around the same rates, none of which closes."""
    random = np.random.default_rng(20_000_003)
    lines = [
        f"R{k},{name},{way},{value * random.normal(1, 0.005)},{0.005 * value},mmol/g/h"
        for k in range(runs)
        for name, (way, value) in MEASURED.items()
    ]
    table = read_rates_text("run,species,direction,rate,sd,unit\n" + "\n".join(lines)).table
    assert table is not None
    return table


def seconds(table: RatesTable) -> float:
    """Median time to close all runs and tell what could be wrong in each."""
    times: list[float] = []
    for _ in range(REPEATS):
        start = perf_counter()
        told = [run.suspects for run in close_rates(table).runs]
        times.append(perf_counter() - start)
        assert all(one is not None and one.group for one in told)
    return median(times)


def main() -> int:
    """Time, print; 1 where a bound is missed."""
    start = perf_counter()
    compounds = len(load_catalogue())
    close_rates(make_table(1))
    first = perf_counter() - start
    one, many = seconds(make_table(1)), seconds(make_table(RUNS))
    ratio = many / one
    print(f"{compounds} compounds; the first run, reading them, {first:.3f} s (limit 0.2)")
    print(f"one run {one:.4f} s; {RUNS:,} runs {many:.3f} s, ratio {ratio:.1f} (limit 50)")
    return 0 if max(one, first) < 0.2 and ratio < 50 else 1


if __name__ == "__main__":
    sys.exit(main())
