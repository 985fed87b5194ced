"""Plans made, and carried out: what the fit says once the planned value is really there."""

from __future__ import annotations

from dataclasses import dataclass, replace
from fractions import Fraction
from hashlib import sha256

import numpy as np

from fluxnet.network.model import Network, QuantityKind
from fluxnet.rates.covariance import join_errors
from fluxnet.rates.measured import MeasuredRate, Run
from fluxnet.solving.flux_fit import FluxFit
from fluxnet.solving.least_squares import fit_fluxes
from fluxnet.studies.plan import plan_measurements
from fluxnet.studies.plan_gauge import Gauge, gauge_at
from fluxnet.studies.plan_result import How, Option, Plan, Step
from fluxnet.studies.plan_target import read_target


def generator(name: str) -> np.random.Generator:
    """Random numbers whose seed is a name's."""
    return np.random.default_rng(int.from_bytes(sha256(name.encode()).digest()[:8], "big"))


@dataclass(frozen=True)
class Case:
    """A network, a run of it, and its fit."""

    network: Network
    run: Run
    fit: FluxFit

    @property
    def _gauge(self) -> Gauge:
        return gauge_at(self.fit, self.network, self.run)

    def plan(self, target: str, error: float = 0.05) -> Plan:
        """What to measure next."""
        wanted = read_target(target, self.network)
        return plan_measurements(
            self.fit, self.network, self.run, wanted, error, self.run.unit
        )

    def sd_of(self, target: str) -> float | None:
        """The sd of a quantity here; None where it is not determined."""
        wanted, gauge = read_target(target, self.network), self._gauge
        reading = (
            gauge.read(wanted.quantity) if wanted.quantity is not None
            else gauge.read_line(wanted.line)
        )
        return float(np.linalg.norm(reading.seen)) if reading.is_determined else None

    def after(self, option: Option, rng: np.random.Generator | None = None) -> Case:
        """The case once an option's values are there: as expected, or drawn around that."""
        case = self
        for step in option.steps:
            noise = 0.0 if rng is None else float(rng.normal())
            case = self._added(case, step, noise) if step.how is How.NEW else (
                self._better(case, step, noise)
            )
        return case_of(case.network, case.run)

    def _added(self, case: Case, step: Step, noise: float) -> Case:
        quantity = read_target(step.name, self.network).quantity
        assert quantity is not None
        reading = self._gauge.read(quantity)
        assert reading is not None
        spread = np.hypot(step.sd, np.linalg.norm(reading.seen) if reading.is_determined else 0)
        value = reading.value + float(spread) * noise
        own, sd = None, step.sd
        if self.run.shared_error and quantity.kind in (QuantityKind.RATE, QuantityKind.FLUX):
            own, sd = step.sd, float(np.hypot(step.sd, self.run.shared_error * value))
        rate = MeasuredRate(quantity, value, sd, own_sd=own)
        rates = tuple(r for r in case.run.rates if r.quantity != quantity)
        return replace(case, run=_with_errors(replace(case.run, rates=(*rates, rate))))

    def _better(self, case: Case, step: Step, noise: float) -> Case:
        """Half the error, and the value that was fitted, or one drawn around it."""
        network, run = case.network, case.run
        if step.kind == "shared error":
            shared = (run.shared_error or 0.0) / 2
            return replace(case, run=_with_errors(replace(run, shared_error=shared)))
        if step.kind == "parameter":
            moved = next(m.moved for m in self.fit.moved if m.name == step.name)
            value, sd = Fraction(moved + step.sd * noise), Fraction(step.sd)
            parameters = tuple(
                replace(p, value=value, sd=sd) if p.name == step.name else p
                for p in network.parameters
            )
            return replace(case, network=replace(network, parameters=parameters))
        fitted = next(r.value for r in self.fit.rows if str(r.quantity) == step.name)
        if step.kind == "measured limit":
            value, sd = Fraction(fitted + step.sd * noise), Fraction(step.sd)
            limits = tuple(
                replace(x, low=value, high=value, sd=sd) if str(x.quantity) == step.name else x
                for x in network.limits
            )
            return replace(case, network=replace(network, limits=limits))
        rates = tuple(
            _halved(r, fitted, noise) if str(r.quantity) == step.name else r for r in run.rates
        )
        return replace(case, run=_with_errors(replace(run, rates=rates)))


def case_of(network: Network, run: Run) -> Case:
    """A network and a run with their fit."""
    return Case(network, run, fit_fluxes(network, run))


def _halved(rate: MeasuredRate, fitted: float, noise: float) -> MeasuredRate:
    sd = (rate.sd if rate.own_sd is None else rate.own_sd) or 0.0
    return replace(
        rate,
        value=fitted + sd / 2 * noise,
        sd=sd / 2,
        own_sd=None if rate.own_sd is None else sd / 2,
        relative=None if rate.relative is None else rate.relative / 2,
    )


def _with_errors(run: Run) -> Run:
    """The run with the covariance that its rates' own errors and the shared one make."""
    assert run.covariance is None or run.shared_error is not None, "no other correlations here"
    if run.shared_error is None:
        return run
    own = [(r.sd if r.own_sd is None else r.own_sd) or 0.0 for r in run.measured]
    shift = [
        0.0 if r.own_sd is None else run.shared_error * (r.value or 0.0) for r in run.measured
    ]
    covariance = join_errors(own, shift)
    sds = iter(np.sqrt(np.diag(covariance)).tolist())
    rates = tuple(r if r.value is None else replace(r, sd=next(sds)) for r in run.rates)
    return replace(run, rates=rates, covariance=covariance)


def sound_case(case: Case, name: str) -> Case:
    """The case with values drawn around its fit: what a sound run of it would have measured."""
    rng = generator(name)
    fitted = {row.quantity: row.value for row in case.fit.rows}
    run = case.run
    shared = (run.shared_error or 0.0) * float(rng.normal())
    rates = []
    for rate in run.rates:
        if rate.value is None:
            rates.append(rate)
            continue
        own = (rate.sd if rate.own_sd is None else rate.own_sd) or 0.0
        shift = 0.0 if rate.own_sd is None else shared * fitted[rate.quantity]
        value = fitted[rate.quantity] + own * float(rng.normal()) + shift
        rates.append(replace(rate, value=value))
    parameters = tuple(
        replace(p, value=Fraction(moved + float(p.sd or 0) * float(rng.normal())))
        if (moved := next((m.moved for m in case.fit.moved if m.name == p.name), None)) else p
        for p in case.network.parameters
    )
    network = replace(case.network, parameters=parameters)
    return case_of(network, _with_errors(replace(run, rates=tuple(rates))))
