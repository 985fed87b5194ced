"""Rates that contradict one another grossly are weighed, and told, with their sds as typed."""

from __future__ import annotations

import sys
from pathlib import Path

import numpy as np
import pytest

from fluxnet.rates.covariance import GROSS
from fluxnet.studies.closure_result import RunClosure

sys.path.insert(0, str(Path(__file__).resolve().parent))

from closing import balance, close, rate

TYPED = "A,glucose,in,1,3 %,mmol\nA,ethanol,out,2,3 %,mmol\n"


def with_sds(text: str, **sds: float) -> str:
    """The rows with the per cents of the species named replaced by sds."""
    lines = [line.split(",") for line in text.splitlines()]
    for line in lines:
        line[4] = repr(sds.get(line[1], line[4])).strip("'")
    return "".join(",".join(line) + "\n" for line in lines)


def reconciled(run: RunClosure, species: str) -> float:
    return float(rate(run, species).reconciled or 0)


def test_balances_as_measured_hold_the_sds_as_typed() -> None:
    """Carbon: 6 in, 4 out; sd of the gap sqrt(0.18^2 + 0.12^2)."""
    carbon = balance(close(TYPED), "carbon")
    assert carbon.gap == pytest.approx(-2.0)
    assert carbon.sd == pytest.approx(np.hypot(6 * 0.03, 4 * 0.03))
    assert carbon.recovery_sd == pytest.approx(100 * (4 / 6) * np.hypot(0.03, 0.03))


def test_rates_that_are_reconciled_to_nothing_keep_their_weights() -> None:
    """CO2 is not exchanged, so that both are nothing: h is that of the typed sds, 2 / 0.03^2."""
    run = close(TYPED)
    assert reconciled(run, "glucose") == pytest.approx(0.0, abs=1e-12)
    assert run.test.h == pytest.approx(2 / 0.03**2)
    assert run.test.closes is False


def test_a_sound_rate_beside_a_wrong_one_keeps_its_weight() -> None:
    """Ethanol should be 20 for 10 of glucose; 1 pulls glucose towards 0.5."""
    text = "A,glucose,in,10,3 %,mmol\nA,ethanol,out,1,3 %,mmol\nA,CO2,out,20,3 %,mmol\n"
    run = close(text)
    typed = close(with_sds(text, glucose=0.3, ethanol=0.03, CO2=0.6))
    assert reconciled(run, "glucose") < 5.0
    assert run.test.h == pytest.approx(float(typed.test.h or 0), rel=1e-9)


def test_a_poor_rate_keeps_half_of_its_sd_where_it_is_reconciled_to_less_than_half() -> None:
    """2 ± 45 % is reconciled to about 0.5 and not rejected grossly: its sd is 45 % of 1."""
    text = "A,glucose,in,2,45 %,mmol\nA,oxygen,in,3,0.1,mmol\nA,CO2,out,3,0.1,mmol\n"
    first = close(with_sds(text, glucose=0.9))
    assert reconciled(first, "glucose") < 0.6
    assert (first.test.p or 0) > GROSS
    second = close(with_sds(text, glucose=0.45))
    assert close(text).test.h == pytest.approx(float(second.test.h or 0), rel=1e-9)


def test_a_shared_error_of_rates_far_off_is_that_of_the_measured_ones() -> None:
    """Both rates times one biomass: 3 % own, 10 % shared, all of the measured values."""
    run = close(TYPED.replace("mmol", "mmol/g/h"), "shared error biomass 10 %\n")
    y = np.array([1.0, 2.0])
    whole = np.diag((0.03 * y) ** 2) + 0.01 * np.outer(y, y)
    assert run.test.h == pytest.approx(float(y @ np.linalg.solve(whole, y)), rel=1e-9)
    carbon = np.array([-6.0, 2.0])
    assert balance(run, "carbon").sd == pytest.approx(float(np.sqrt(carbon @ whole @ carbon)))


def test_one_run_far_off_changes_nothing_for_the_sound_one_beside_it() -> None:
    sound = "A,glucose,in,10,3 %,mmol\nA,ethanol,out,18.9,3 %,mmol\nA,CO2,out,20.4,3 %,mmol\n"
    wrong = sound.replace("A,", "B,").replace("18.9", "1")
    alone = close(sound)
    beside = close(sound + wrong)
    assert beside.test.h == pytest.approx(float(alone.test.h or 0), rel=1e-12)
    assert beside.rates == alone.rates
