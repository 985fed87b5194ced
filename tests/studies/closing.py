"""Rates tables of tests, closed; and the closed formula by pseudo-inverses."""

from __future__ import annotations

import numpy as np

from fluxnet.ground.names import Name
from fluxnet.network.model import Direction
from fluxnet.rates.measured import RatesTable
from fluxnet.studies.closure import close_rates
from fluxnet.studies.closure_result import Balance, ClosedRate, Closure, RunClosure
from fluxnet.tables.rates_table import read_rates_text

HEAD = "run,species,direction,rate,sd,unit\n"
AEROBIC = """A,glucose,in,2,0.1,mmol/g/h
A,CO2,out,6,0.3,mmol/g/h
A,oxygen,in,5.9,0.3,mmol/g/h
A,ammonia,in,1.3,0.1,mmol/g/h
A,mu,,0.15,0.005,1/h
"""
ETHANOL = """A,glucose,in,10.0,0.2,mmol/g/h
A,ethanol,out,18.6,0.4,mmol/g/h
A,CO2,out,19.6,0.4,mmol/g/h
"""


def table(text: str, before: str = "") -> RatesTable:
    reading = read_rates_text(before + HEAD + text)
    assert reading.table is not None, reading.diagnostics
    return reading.table


def close(text: str, before: str = "", **options: object) -> RunClosure:
    closure = close_rates(table(text, before), **options)  # type: ignore[arg-type]
    assert closure.diagnostics == ()
    return closure.runs[0]


def balance(run: RunClosure, name: str) -> Balance:
    found = run.find_balance(name)
    assert found is not None, [b.name for b in run.balances]
    return found


def rate(run: RunClosure, species: str) -> ClosedRate:
    found = run.find_rate(species)
    assert found is not None
    return found


def names(closure: Closure) -> list[Name]:
    return [d.name for d in closure.diagnostics]


def by_hand(
    run: RunClosure, contents: dict[str, list[float]]
) -> tuple[float, np.ndarray, np.ndarray]:
    """h, reconciled values and their sds, by R = E_m - E_u E_u^+ E_m and pseudo-inverses."""
    measured = [r for r in run.rates if r.measured is not None]
    unmeasured = [r for r in run.rates if r.measured is None]

    def columns(rates: list[ClosedRate]) -> np.ndarray:
        return np.array(
            [np.multiply(-1 if r.direction is Direction.IN else 1, contents[r.species])
             for r in rates]
        ).reshape(len(rates), 3).T  # fmt: skip

    em, eu = columns(measured), columns(unmeasured)
    red = em - eu @ np.linalg.pinv(eu) @ em if unmeasured else em
    y = np.array([r.measured for r in measured])
    v = np.diag([float(r.sd or 0) ** 2 for r in measured])
    inverse = np.linalg.pinv(red @ v @ red.T, rcond=1e-10)
    e = red @ y
    left = v - v @ red.T @ inverse @ red @ v
    return float(e @ inverse @ e), y - v @ red.T @ inverse @ e, np.sqrt(np.diag(left))
