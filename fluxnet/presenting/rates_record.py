"""Raw data and the rates that they give, as data."""

from __future__ import annotations

from typing import Any

from fluxnet.cultivation.result import Course, CultivationRates, PhaseRates, RateLine
from fluxnet.cultivation.volumes import Account
from fluxnet.network.model import QuantityKind
from fluxnet.rates.cultivation import Cultivation
from fluxnet.studies.rates import FoundRates

__all__ = ["rates_record"]

Record = dict[str, Any]


def rates_record(result: FoundRates) -> Record:
    """The body of the document ``rates/1``; rates are magnitudes in their directions."""
    pairs = zip(result.raw, result.found, strict=True)
    return {"cultivations": [_cultivation(raw, found) for raw, found in pairs]}


def _cultivation(raw: Cultivation, found: CultivationRates) -> Record:
    return {
        "name": found.name,
        "mode": found.mode.value,
        "understood": list(raw.understood),
        "doubtful": [
            {"place": d.place, "text": d.text, "what_was_done": d.what_was_done}
            for d in raw.doubtful
        ],
        "phases": [_phase(phase) for phase in found.phases],
        "accounts": [_account(account) for account in found.accounts],
        "courses": [_course(course) for course in found.courses],
        "assumptions": [
            {"what": a.what, "value": a.value, "basis": a.basis.value, "why": a.why}
            for a in found.assumptions
        ],
        "caution": found.caution or None,
    }


def _phase(phase: PhaseRates) -> Record:
    rq = phase.rq
    covariance = phase.run.covariance
    return {
        "run": phase.run.name,
        "phase": phase.phase.name,
        "start": phase.phase.start,
        "end": phase.phase.end,
        "samples": phase.samples,
        "curve": phase.curve,
        "shared_biomass_error": phase.run.shared_error,
        "rates": [_rate(line) for line in phase.lines],
        "covariance": [] if covariance is None else covariance.tolist(),
        "rq": None
        if rq is None
        else {"value": rq.value, "low": rq.low, "high": rq.high, "usable": rq.usable},
        "steadiness": [
            {"name": s.name, "change": s.change, "sd": s.sd, "p": s.p, "steady": s.steady}
            for s in phase.steadiness
        ],
    }


def _rate(line: RateLine) -> Record:
    direction = line.quantity.direction
    sign = 1 if direction is None else direction.sign
    is_mu = line.quantity.kind is QuantityKind.MU
    return {
        "species": "mu" if is_mu else line.quantity.name,
        "direction": None if direction is None else direction.value,
        "rate": sign * line.value,
        "sd": line.sd,
        "unit": "1/h" if is_mu else "mmol/g/h",
        "total": None if is_mu else sign * line.total,
        "h": line.h,
        "dof": line.dof,
        "widened": line.widened,
        "shares": [{"source": name, "share": share} for name, share in line.shares],
        "ways": [
            {
                "method": way.method.value,
                "rate": sign * way.value,
                "sd": way.sd,
                "difference": sign * way.difference,
                "difference_sd": way.difference_sd,
            }
            for way in line.ways
        ],
    }


def _account(account: Account) -> Record:
    return {
        "title": account.title,
        "unit": account.unit,
        "time": account.time.tolist(),
        "lines": [{"name": x.name, "amount": x.amount.tolist()} for x in account.lines],
        "expected": account.expected.tolist(),
        "expected_sd": account.expected_sd.tolist(),
        "found_time": account.found_time.tolist(),
        "found": account.found.tolist(),
        "closure": account.closure,
    }


def _course(course: Course) -> Record:
    return {
        "name": course.name,
        "unit": course.unit,
        "time": course.time.tolist(),
        "value": course.value.tolist(),
        "sd": course.sd.tolist(),
    }
