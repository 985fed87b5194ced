"""h, reconciled rates and what suspects leave, against a general minimiser under constraints."""

from __future__ import annotations

import sys
from pathlib import Path

import numpy as np
import pytest
from scipy.optimize import minimize

sys.path.insert(0, str(Path(__file__).resolve().parent))

from closing import ETHANOL, close, rate

# carbon, nitrogen and electrons per mole; uptakes count negative
HELD = {
    "glucose": (6, 0, 24), "ethanol": (2, 0, 12), "acetate": (2, 0, 8), "CO2": (1, 0, 0),
    "oxygen": (0, 0, -4), "ammonia": (0, 1, 0), "X": (1, 0.2, 4.2),
}  # fmt: skip
GROWING = """A,glucose,in,10,0.3,mmol/g/h
A,oxygen,in,13.1,0.5,mmol/g/h
A,ethanol,out,6.2,0.2,mmol/g/h
A,acetate,out,2.1,0.1,mmol/g/h
A,CO2,out,23.4,0.6,mmol/g/h
A,X,out,19.2,0.5,mmol/g/h
A,ammonia,in,4.4,0.2,mmol/g/h
"""


def rows_of(text):
    lines = [line.split(",") for line in text.splitlines()]
    signs = np.array([-1 if way == "in" else 1 for _, _, way, *_ in lines])
    names = [name for _, name, *_ in lines]
    values = np.array([float(line[3]) for line in lines])
    sds = np.array([float(line[4]) for line in lines])
    balances = np.array([HELD[name] for name in names]).T * signs
    return names, values, sds, balances


def search(values, sds, balances, free=None):
    """The least weighted sum of squares under the balances; ``free`` is not weighed."""
    weight = np.where(np.arange(len(values)) == free, 0.0, 1 / sds)

    def h(x):
        return np.sum(np.square(weight * (x - values)))

    found = minimize(
        h, values, method="SLSQP", options={"ftol": 1e-15, "maxiter": 500},
        constraints=[{"type": "eq", "fun": lambda x: balances @ x}],
    )  # fmt: skip
    return found.fun, found.x


@pytest.mark.parametrize("text", [ETHANOL, GROWING], ids=["ethanol", "growing"])
def test_h_and_reconciled_rates_are_those_of_a_search(text):
    names, values, sds, balances = rows_of(text)
    kept = balances[[k for k in range(3) if text is GROWING or k != 1]]
    h, reconciled = search(values, sds, kept)
    run = close(text, "biomass X CH1.8O0.5N0.2\n" if "X" in names else "")
    assert run.test.h == pytest.approx(h, rel=1e-6)
    for name, value in zip(names, reconciled, strict=True):
        assert rate(run, name).reconciled == pytest.approx(value, rel=1e-5)


def test_what_a_suspect_leaves_is_what_a_search_without_its_rate_finds():
    names, values, sds, balances = rows_of(GROWING)
    told = close(GROWING, "biomass X CH1.8O0.5N0.2\n", suspects=True).suspects
    for k, name in enumerate(names):
        left, best = search(values, sds, balances, free=k)
        assert told.find(name).h_left == pytest.approx(left, rel=1e-5, abs=1e-7)
        assert told.find(name).would_be == pytest.approx(best[k], rel=1e-4)


def test_the_order_of_the_rows_changes_no_suspect():
    before = "biomass X CH1.8O0.5N0.2\n"
    turned = "".join(reversed(GROWING.splitlines(keepends=True)))
    one = close(GROWING, before, suspects=True).suspects
    other = close(turned, before, suspects=True).suspects
    assert {s.label for s in one.group} == {s.label for s in other.group}
    for suspect in one.all:
        twin = next(s for s in other.all if s.label == suspect.label)
        assert twin.h_left == pytest.approx(suspect.h_left, abs=1e-9)
        assert twin.size == pytest.approx(suspect.size, rel=1e-8)
        assert set(twin.twins) == set(suspect.twins)
