"""What a closure tells as data."""

from __future__ import annotations

from typing import Any

from fluxnet.presenting.suspect_record import suspect_keys
from fluxnet.studies.closure_result import Closure, RunClosure

__all__ = ["closure_record"]


def closure_record(closure: Closure) -> dict[str, Any]:
    """The body of a ``closure/1`` document."""
    return {"runs": [_run_record(run) for run in closure.runs]}


def _run_record(run: RunClosure) -> dict[str, Any]:
    test = run.test
    return {
        "run": run.run,
        "words": run.words,
        "unit": run.unit,
        "balances": [
            {
                "name": b.name,
                "unit": b.unit,
                "in": b.taken,
                "out": b.released,
                "gap": b.gap,
                "sd": b.sd,
                "z": b.z,
                "recovery": b.recovery,
                "recovery_sd": b.recovery_sd,
                "missing": list(b.missing),
            }
            for b in run.balances
        ],
        "or_index": run.or_index,
        "test": {
            "h": test.h,
            "dof": test.dof,
            "p": test.p,
            "limit": test.limit,
            "closes": test.closes,
        },
        "world": {
            "free": list(run.world.free),
            "not_exchanged": list(run.world.not_exchanged),
            "nitrogen_reference": run.reference,
        },
        "rates": [
            {
                "species": r.species,
                "direction": r.direction.value if r.direction else None,
                "unit": r.unit,
                "measured": r.measured,
                "sd": r.sd,
                "reconciled": r.reconciled,
                "reconciled_sd": r.reconciled_sd,
                "z": r.z,
                "kind": r.kind.value,
                "reversed": r.is_reversed,
            }
            for r in run.rates
        ],
        **suspect_keys(run.suspects),
        "contradictions": [list(names) for names in run.contradictions],
        "left_out": list(run.left_out),
        "notes": list(run.notes),
        "residual": run.residual,
        "extras": dict(run.extras),
    }
