"""A trade-off as data."""

from __future__ import annotations

from typing import Any

from fluxnet.presenting.caution import CAUTION
from fluxnet.studies.frontier_result import Curve, Frontier

__all__ = ["frontier_record"]

Record = dict[str, Any]


def frontier_record(result: Frontier) -> Record:
    """The body of the document ``frontier/1``."""
    over = result.over
    return {
        "x": {"name": result.x.name, "unit": result.x.unit},
        "y": {"name": result.y.name, "unit": result.y.unit},
        "extreme": result.extreme.value,
        "over": None
        if over is None
        else {
            "kind": over.kind.value,
            "name": over.name,
            "unit": over.unit,
            "from": over.start,
            "to": over.stop,
        },
        "slope_unit": result.slope_unit,
        "words": result.words,
        "common": list(result.common),
        "best": [
            {
                "from": s.low,
                "to": s.high,
                "from_exact": s.low_exact,
                "to_exact": s.high_exact,
                "labels": list(s.labels),
                "alone": s.alone,
            }
            for s in result.stretches
        ],
        "choice": result.choice,
        "notes": list(result.notes),
        "curves": [_curve(curve) for curve in result.curves],
        "caution": CAUTION if result.sizes_oxygen else None,
        "skipped": [{"variant": name, "words": words} for name, words in result.skipped],
    }


def _curve(curve: Curve) -> Record:
    proof = curve.proof
    return {
        "variant": curve.variant,
        "label": curve.label,
        "status": curve.status.value,
        "words": curve.words,
        "points": [
            {
                "x": p.x,
                "y": p.y,
                "x_exact": p.x_exact,
                "y_exact": p.y_exact,
                "slope_before": p.slope_before,
                "slope_after": p.slope_after,
                "changes": list(p.changes),
            }
            for p in curve.points
        ],
        "drawn": [list(point) for point in curve.drawn],
        "proof": None
        if proof is None
        else {"verified": proof.verified, "gap": proof.gap, "words": proof.words},
    }
