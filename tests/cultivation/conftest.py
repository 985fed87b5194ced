"""Cultivations whose truth is known: constant specific rates, integrated in small steps."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, field

import numpy as np
import pytest

from fluxnet.rates.cultivation import (
    Cultivation,
    Form,
    Mode,
    Series,
    SeriesKind,
    Setting,
    SettingKind,
    make_series,
)

MU, GLUCOSE, ACETATE = 0.30, -3.2, 1.1
# of biomass CH1.8O0.5N0.2 (24.626 g/C-mol, 4.2 electrons): carbon and electrons close
CO2 = 6 * 3.2 - 1000 * 0.30 / 24.626 - 2 * 1.1
OXYGEN = -(24 * 3.2 - 4.2 * 1000 * 0.30 / 24.626 - 8 * 1.1) / 4


@dataclass(frozen=True)
class Truth:
    """What a simulated cultivation held at its sample times, before each sample."""

    time: np.ndarray
    broth: np.ndarray
    biomass: np.ndarray
    glucose: np.ndarray
    acetate: np.ndarray
    fed: np.ndarray
    base: np.ndarray
    evaporated: np.ndarray
    mu: float = MU
    rates: dict[str, float] = field(default_factory=lambda: {
        "glucose": GLUCOSE, "acetate": ACETATE, "oxygen": OXYGEN, "CO2": CO2,
    })  # fmt: skip


def simulate(
    time: np.ndarray, *, start: float = 1.0, biomass: float = 0.3, glucose: float = 120.0,
    mu: float = MU, feed: float = 0.0, content: float = 2500.0, base: float = 0.0,
    sample: float = 0.0, evaporation: float = 0.0,
) -> Truth:
    """Integrate amounts by exact exponential growth between small steps; samples at their times.

    ``feed``, ``base`` and ``evaporation`` in L over the whole time: feed and base in step with
    the biomass, evaporation evenly; ``sample`` in L each.
    """
    steps = 400
    hours = time[-1] - time[0]
    shape = (np.exp(mu * hours) - 1) / mu
    x, s, a, v = biomass * start, glucose * start, 0.0, start
    fed = based = gone = 0.0
    rows = []
    for i, now in enumerate(time):
        rows.append((v, x / v, s / v, a / v, fed, based, gone))
        if i == time.size - 1:
            break
        keep = 1 - sample / v
        x, s, a, v = x * keep, s * keep, a * keep, v - sample
        dt = (time[i + 1] - now) / steps
        for k in range(steps):
            t0 = now + k * dt - time[0]
            part = (np.exp(mu * (t0 + dt)) - np.exp(mu * t0)) / mu / shape
            work = x * (np.exp(mu * dt) - 1) / mu
            x *= np.exp(mu * dt)
            s += GLUCOSE * work + content * feed * part
            a += ACETATE * work
            v += (feed + base) * part - evaporation * dt / hours
            fed, based = fed + feed * part, based + base * part
            gone += evaporation * dt / hours
    table = np.array(rows).T
    return Truth(time, *table, mu=mu)


def noisy(
    truth: Truth, generator: np.random.Generator | None, *, mode: Mode = Mode.BATCH,
    biomass_sd: float = 0.04, species_sd: float = 0.02, sample: float = 0.0, start: float = 1.0,
    content: float = 2500.0, extra: tuple[Series, ...] = (), settings: tuple[Setting, ...] = (),
    common: float | None = None,
) -> Cultivation:
    """The raw data of a truth with normal errors drawn from a generator; None: without errors."""
    def draw(values: np.ndarray, sd: np.ndarray | float) -> np.ndarray:
        return values if generator is None else values + sd * generator.standard_normal(values.size)

    t, kind = truth.time, SeriesKind
    glucose_sd = species_sd * truth.glucose + 0.2
    acetate_sd = species_sd * truth.acetate + 0.05
    series = [
        make_series(kind.DRY_WEIGHT, "biomass", "g/L", t,
                    draw(truth.biomass, biomass_sd * truth.biomass), biomass_sd * truth.biomass,
                    common=common),
        make_series(kind.CONCENTRATION, "glucose", "mmol/L", t, draw(truth.glucose, glucose_sd),
                    glucose_sd),
        make_series(kind.CONCENTRATION, "acetate", "mmol/L", t, draw(truth.acetate, acetate_sd),
                    acetate_sd),
    ]
    fine = np.linspace(t[0], t[-1], 400)
    for what, total in ((kind.FEED, truth.fed), (kind.BASE, truth.base),
                        (kind.EVAPORATION, truth.evaporated)):
        if total[-1]:
            shape = (np.exp(truth.mu * (fine - t[0])) - 1) / (np.exp(truth.mu * (t[-1] - t[0])) - 1)
            curve = np.interp(fine, t, total) if what is kind.EVAPORATION else total[-1] * shape
            curve = draw(curve, 0.001)
            series.append(make_series(what, what.value, "L", fine, curve, 0.001, form=Form.TOTAL))
    if sample:
        series.append(make_series(kind.SAMPLE, "sample", "L", t, np.full(t.size, sample),
                                  np.full(t.size, 1e-4), form=Form.EVENT))
    volume, strength = (
        float(draw(np.array([v]), part * v)[0]) for v, part in ((start, 0.001), (content, 0.005))
    )
    chosen = [Setting(SettingKind.VOLUME, volume, "L", sd=0.001 * start)]
    if truth.fed[-1]:
        chosen.append(Setting(SettingKind.CONTENT, strength, "mmol/L", sd=0.005 * content,
                              of="glucose", stream="feed"))
    return Cultivation("run", mode, (*series, *extra), (*chosen, *settings))


def gas_of(
    truth: Truth, generator: np.random.Generator | None, *, flow: float = 2.677, rows: int = 1200,
    before: float = 1.0, noise: float = 5e-5, offset: float = 0.0, drift: float = 0.0,
    held: float = 0.0,
) -> tuple[Series, ...]:
    """Gas fractions of a batch without samples: dry, with noise, before and after inoculation.

    ``held`` is inorganic carbon in the broth per CO2 in the gas [mmol/L per mol/mol]: then CO2
    piles up in the broth, which follows the gas at once.
    """
    end = truth.time[-1]
    t = np.linspace(-before, end, rows)
    work = np.where(t >= 0, truth.biomass[0] * truth.broth[0] * np.exp(truth.mu * t), 0.0) / 1000
    uptake, made = -OXYGEN * work, CO2 * work
    fraction = np.full(rows, 0.0004)
    if held:
        # V held dy/dt = made - F (y - y_in), with F nearly constant: an exponential filter
        capacity = truth.broth[0] * held / 1000
        rate, dt = flow / capacity, t[1] - t[0]
        decay = np.exp(-rate * dt)
        for i in range(1, rows):
            target = 0.0004 + (made[i] + made[i - 1]) / 2 / flow
            fraction[i] = target + (fraction[i - 1] - target) * decay
        given = flow * (fraction - 0.0004)
    else:
        given = made
    out = flow - uptake + given
    oxygen = (flow * 0.2095 - uptake) / out
    carbon = (flow * 0.0004 + given) / out
    shift = offset + drift * (t + before)
    if generator is not None:
        oxygen = oxygen + noise * generator.standard_normal(rows)
        carbon = carbon + noise * generator.standard_normal(rows)
    return (
        make_series(SeriesKind.GAS_OUT, "O2", "mol/mol", t, oxygen + shift),
        make_series(SeriesKind.GAS_OUT, "CO2", "mol/mol", t, carbon),
        make_series(SeriesKind.GAS_FLOW, "", "mol/h", t, np.full(rows, flow), common=0.01),
    )


@pytest.fixture
def gassed() -> Callable[..., tuple[Series, ...]]:
    return gas_of


@pytest.fixture
def simulated() -> Callable[..., Truth]:
    return simulate


@pytest.fixture
def measured() -> Callable[..., Cultivation]:
    return noisy
