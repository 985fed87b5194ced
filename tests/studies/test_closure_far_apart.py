"""Sds many decades apart: closed as in exact arithmetic, and refused by name where they cannot."""

from __future__ import annotations

from fractions import Fraction

import numpy as np
import pytest

import fluxnet as fx
from fluxnet.exact.linear import echelon
from fluxnet.ground.errors import InputError
from fluxnet.ground.names import Name
from fluxnet.solving.suspects import TooFarApartError
from fluxnet.studies.closure_batch import ClosureMatrices, close_many
from fluxnet.studies.precision import find_sds_apart

ROWS = np.array([[-6.0, 2, 1, 3, 0], [-24.0, 12, 0, 14, -4], [-1.0, 0, 0.3, 0, 2]])
HEAD = "run,species,direction,rate,sd,unit\n"
MODEL = """basis mmol/g/h
substrate glucose
product ethanol
exchange CO2
carrier NADH carries 2 electrons
carrier ATP carries energy
inside pyruvate
compartment a
    glycolysis : glucose -> 2 pyruvate + 2 ATP + 2 NADH
    ferment : pyruvate + NADH -> ethanol + CO2
compartment b
    upkeep : ATP -> nothing
"""


def matrices() -> ClosureMatrices:
    return ClosureMatrices(
        ROWS, np.zeros((0, 5)), ROWS.copy(), np.array([True, False, False, False, True]),
        np.full(5, True), np.full(5, False),
    )  # fmt: skip


def exactly(values: list[float], sds: list[float]) -> tuple[float, list[float], list[float]]:
    """h, the reconciled values and their sds by the closed formula, in fractions."""
    R = [[Fraction(x) for x in row] for row in ROWS.tolist()]
    y, v = [Fraction(x) for x in values], [Fraction(s) ** 2 for s in sds]
    n, width = len(R), len(y)
    e = [sum((a * b for a, b in zip(row, y, strict=True)), Fraction(0)) for row in R]
    P = [
        [sum((a * b * w for a, b, w in zip(p, q, v, strict=True)), Fraction(0)) for q in R]
        for p in R
    ]
    RV = [[a * w for a, w in zip(row, v, strict=True)] for row in R]
    solved = echelon([[*P[i], e[i], *RV[i]] for i in range(n)], n).rows
    w = [row[n] for row in solved]
    K = [list(row[n + 1 :]) for row in solved]
    h = sum((a * b for a, b in zip(e, w, strict=True)), Fraction(0))
    settled = [y[j] - sum((RV[i][j] * w[i] for i in range(n)), Fraction(0)) for j in range(width)]
    left = [v[j] - sum((RV[i][j] * K[i][j] for i in range(n)), Fraction(0)) for j in range(width)]
    return float(h), [float(x) for x in settled], [float(x) ** 0.5 for x in left]


@pytest.mark.parametrize("seed", range(12))
def test_runs_whose_sds_lie_many_decades_apart_close_as_in_fractions(seed: int) -> None:
    random = np.random.default_rng(seed)
    sds = 10.0 ** random.uniform(-9, 7, (4, 5))
    values = np.array([10.0, 15, 30, 3, 1]) * 10.0 ** random.uniform(-3, 3, (4, 1))
    found = close_many(matrices(), values, sds)
    for i in range(len(values)):
        h, settled, left = exactly(values[i].tolist(), sds[i].tolist())
        assert found.h[i] == pytest.approx(h, rel=1e-9)
        assert found.reconciled[i] == pytest.approx(settled, rel=1e-9)
        assert found.reconciled_sd[i] == pytest.approx(left, rel=1e-8)
    assert found.residual.max() < 1e-12


@pytest.mark.parametrize(
    ("glucose", "ethanol", "carbon", "h"),
    [
        ("10,1e-6", "20,1e-6", "20,10", 0),
        ("1e-3,1e-5", "2e-3,1e-5", "1e4,1e3", 100),
        ("1e-9,1e-11", "2e-9,1e-11", "1e9,1e8", 100),
    ],
)
def test_a_precise_and_a_rough_rate_close_beside_each_other(
    glucose: str, ethanol: str, carbon: str, h: float
) -> None:
    text = HEAD + f"A,glucose,in,{glucose},mmol/g/h\nA,ethanol,out,{ethanol},mmol/g/h\n"
    closure = fx.closure(fx.read_rates_text(text + f"A,CO2,out,{carbon},mmol/g/h\n")).result
    assert not closure.diagnostics
    (run,) = closure.runs
    assert run.test.h == pytest.approx(h, rel=1e-4, abs=1e-9)
    sugar, alcohol, gas = run.rates
    assert gas.reconciled == pytest.approx(2 * sugar.reconciled, rel=1e-12)
    assert gas.reconciled_sd == pytest.approx(alcohol.reconciled_sd, rel=1e-9)


def test_sds_too_far_apart_for_a_fit_are_named_with_their_place() -> None:
    model = fx.read_model_text(MODEL)
    text = (
        "A,glucose,in,1e-9,1e-11,mmol/g/h\nA,ethanol,out,2e-9,1e-11,mmol/g/h\n"
        "A,CO2,out,1e9,1e8,mmol/g/h\n"
    )
    with pytest.raises(InputError) as caught:
        fx.solve(model, fx.read_rates_text(HEAD + text, model))
    (told,) = caught.value.diagnostics
    assert told.name is Name.BEYOND_PRECISION
    assert (told.span.line, told.also[0].line) == (2, 4)
    assert "run A: the sd of glucose in" in told.message
    assert "that of CO2 out, 100000000, lie too far apart" in told.message
    assert '--unmeasured "CO2"' in str(told.mend)


def test_one_sd_alone_lies_apart_from_nothing() -> None:
    run = fx.read_rates_text(HEAD + "A,glucose,in,1,0.1,mmol/g/h\n").runs[0]
    assert find_sds_apart(run, "") is None
    assert find_sds_apart(None, "") is None
    assert issubclass(TooFarApartError, fx.MisuseError)
