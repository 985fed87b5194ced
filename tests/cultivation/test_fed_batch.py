"""A fed-batch with everything that moves its volume, and what a spreadsheet would make of it."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import replace

import numpy as np
import pytest

from fluxnet.cultivation.assembling import assemble
from fluxnet.cultivation.batch import (
    PhaseFit,
    estimate_phase,
    fit_phase,
    names_of,
    propagate_phase,
    widened,
)
from fluxnet.cultivation.broth_state import RawData
from fluxnet.cultivation.errors import draw_errors, propagate
from fluxnet.cultivation.fed_batch import gas_courses
from fluxnet.cultivation.gas_reading import read_gas_line
from fluxnet.cultivation.reckoning import rates_of
from fluxnet.cultivation.result import Method
from fluxnet.rates.cultivation import Cultivation, Mode, Phase, SeriesKind, make_series

TIME = np.linspace(0.0, 12.0, 25)
WHOLE = Phase("feed", 0.0, 12.0)
EACH = 0.03 / 24
MOVES = {
    "feed": 0.15, "base": 0.05, "sample": EACH, "evaporation": 0.10,
    "glucose": 40.0, "biomass": 0.5,
}  # fmt: skip


@pytest.fixture
def fed(simulated: Callable[..., object], measured: Callable[..., Cultivation]) -> Cultivation:
    truth = simulated(TIME, **MOVES)
    found = make_series(SeriesKind.BROTH, "", "L", TIME[[0, -1]], truth.broth[[0, -1]])
    return measured(truth, None, mode=Mode.FED_BATCH, sample=EACH, extra=(found,))


def test_yields_of_a_fed_batch_hold_within_one_per_cent_and_its_broth_closes(
    fed: Cultivation,
) -> None:
    """Feed 15 %, base 5 %, samples 3 %, evaporation 10 % of the volume."""
    result = rates_of(fed, phases=[WHOLE])
    (phase,) = result.phases
    broth = result.accounts[0]

    assert phase.ratio("mu", "glucose")[0] == pytest.approx(0.30 / 3.2, rel=0.01)
    assert phase.ratio("acetate", "glucose")[0] == pytest.approx(1.1 / 3.2, rel=0.01)
    assert broth.closure == pytest.approx(1.0, abs=0.005)
    assert broth.expected[-1] == pytest.approx(1.07, abs=0.001)
    naive = phase.find("glucose").way(Method.NAIVE)
    assert abs(naive.difference) > 0.05 * abs(phase.find("glucose").value)


def test_the_yields_of_noisy_fed_batches_are_right_on_average(
    simulated: Callable[..., object], measured: Callable[..., Cultivation]
) -> None:
    truth = simulated(TIME, **MOVES)
    generator = np.random.default_rng(7)
    found = [
        rates_of(
            measured(truth, generator, mode=Mode.FED_BATCH, sample=EACH), phases=[WHOLE]
        ).phases[0].ratio("mu", "glucose")
        for _ in range(12)
    ]  # fmt: skip
    values, sds = np.array(found).T

    assert values.mean() == pytest.approx(0.30 / 3.2, rel=0.02)
    assert values.std(ddof=1) == pytest.approx(sds.mean(), rel=0.6)


def fitted(raw: Cultivation) -> tuple[RawData, PhaseFit]:
    data = assemble(raw, None, [], [])
    assert data is not None
    fit = fit_phase(data, WHOLE)
    assert fit is not None
    return widened(data, fit), replace(fit, spline=None)


def test_a_monte_carlo_of_a_fed_batch_gives_its_propagated_covariance(
    simulated: Callable[..., object], measured: Callable[..., Cultivation]
) -> None:
    truth, generator = simulated(TIME, **MOVES), np.random.default_rng(12)
    raw = measured(truth, generator, mode=Mode.FED_BATCH, sample=EACH, common=0.02)
    data, fit = fitted(raw)
    found = propagate_phase(data, fit)
    drawn = np.concatenate([
        estimate_phase(draw_errors(data.blocks, 2000, generator), data, fit) for _ in range(10)
    ])  # fmt: skip
    covariance = np.cov(drawn.T)
    scale = np.outer(*(2 * [np.sqrt(np.diag(covariance))]))

    assert np.diag(found.covariance) == pytest.approx(np.diag(covariance), rel=0.05)
    assert found.covariance / scale == pytest.approx(covariance / scale, abs=0.03)


@pytest.mark.slow
def test_intervals_of_a_thousand_fed_batches_cover_95_per_cent(
    simulated: Callable[..., object], measured: Callable[..., Cultivation]
) -> None:
    """Samples, balances, feed and start volume drawn anew; every choice made anew."""
    truth, generator = simulated(TIME, **MOVES), np.random.default_rng(13)
    scores = []
    for _ in range(1000):
        data, fit = fitted(measured(truth, generator, mode=Mode.FED_BATCH, sample=EACH))
        found = propagate_phase(data, fit)
        true = [truth.mu, *(truth.rates[n] for n in names_of(fit)[1:])]
        scores.append((found.value - true) / found.sd)
    shares = (np.abs(np.array(scores)) < 1.959964).mean(axis=0)

    assert ((shares >= 0.93) & (shares <= 0.97)).all(), shares


def test_rates_over_time_lie_within_their_bands(fed: Cultivation) -> None:
    courses = {c.name: c for c in rates_of(fed, phases=[WHOLE]).courses}
    inside = slice(3, -3)

    assert courses["mu"].value[inside] == pytest.approx(0.30, abs=0.003)
    assert courses["glucose"].value[inside] == pytest.approx(-3.2, abs=0.25)
    assert (courses["mu"].sd > 0).all()


def test_by_kilogram_the_rates_are_those_by_litre(fed: Cultivation) -> None:
    """All of density 1: the same numbers with kg for L."""
    def heavy(unit: str) -> str:
        return "kg" if unit == "L" else unit.replace("/L", "/kg")

    mass = replace(
        fed,
        series=tuple(replace(s, unit=heavy(s.unit)) for s in fed.series),
        settings=tuple(
            replace(s, unit=heavy(s.unit), kind=type(s.kind)("mass"))
            if s.kind.value == "volume" else replace(s, unit=heavy(s.unit))
            for s in fed.settings
        ),
    )  # fmt: skip
    by_litre, by_mass = (rates_of(raw, phases=[WHOLE]).phases[0] for raw in (fed, mass))

    for a, b in zip(by_litre.lines, by_mass.lines, strict=True):
        assert b.value == pytest.approx(a.value, rel=1e-9)


def test_windows_get_rates_of_their_own(fed: Cultivation) -> None:
    phases = [Phase("early", 0.0, 6.0), Phase("late", 6.0, 12.0)]
    result = rates_of(fed, phases=phases)

    assert [r.name for r in result.runs] == ["run early", "run late"]
    for phase in result.phases:
        assert phase.find("mu").value == pytest.approx(0.30, rel=1e-4)


def test_the_band_of_a_gas_rate_is_what_a_monte_carlo_of_the_readings_gives(
    simulated: Callable[..., object], measured: Callable[..., Cultivation],
    gassed: Callable[..., tuple],
) -> None:  # fmt: skip
    truth = simulated(np.linspace(0, 10, 11))
    generator = np.random.default_rng(5)
    raw = measured(truth, generator, extra=gassed(truth, generator, rows=200, noise=3e-4))
    line = read_gas_line(raw, [], [])
    assert line is not None
    courses = {c.name: c for c in gas_courses(line, np.ones(line.time.size))}
    edges = np.concatenate([[-1.0], (line.time[1:] + line.time[:-1]) / 2, [99.0]])

    from fluxnet.cultivation.gas_amounts import gas_rates

    drawn = gas_rates(draw_errors(line.blocks(edges), 4000, generator), line, edges)
    whole = propagate(lambda v: 1000 * gas_rates(v, line, edges).uptake, line.blocks(edges))

    assert courses["OUR"].sd == pytest.approx(whole.sd, rel=1e-6)
    assert courses["OUR"].sd == pytest.approx((1000 * drawn.uptake).std(axis=0), rel=0.06)
    assert courses["RQ"].time.size < courses["OUR"].time.size
