"""Suspects as data."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from fluxnet.studies.suspect_result import Suspect, Suspects

__all__ = ["suspect_keys"]

Record = dict[str, Any]


def suspect_keys(suspects: Suspects | None) -> Record:
    """The keys of a run that tell of its suspects: empty lists where none were looked for."""
    if suspects is None:
        return {"suspects": [], "suspect_pairs": [], "suspect_search": None}
    missing = suspects.missing
    return {
        "suspects": [_suspect(s) for s in suspects.all],
        "suspect_pairs": [
            {"members": [_suspect(p.first), _suspect(p.second)], "h_left": p.h_left}
            for p in suspects.pairs
        ],
        "suspect_search": {
            "h": suspects.h,
            "dof": suspects.dof,
            "tried": suspects.tried,
            "distinct": suspects.distinct,
            "explained": suspects.explained,
            "not_listed": suspects.tried - len(suspects.all),
            "pairs_not_listed": suspects.pairs_left,
            "missing": None
            if missing is None
            else {"gamma": missing.gamma, "low": missing.low, "high": missing.high},
        },
    }


def _suspect(suspect: Suspect) -> Record:
    from fluxnet.presenting.suspect_text import suspect_words

    return {
        "kind": suspect.kind.value,
        "species": suspect.name,
        "direction": suspect.direction.value if suspect.direction else None,
        "size": suspect.size,
        "unit": suspect.unit,
        "sd": suspect.sd,
        "measured": suspect.measured,
        "would_be": suspect.would_be,
        "would_be_sd": suspect.would_be_sd,
        "h_left": suspect.h_left,
        "p": suspect.p,
        "separation": suspect.separation,
        "possible": suspect.possible,
        "why_not": suspect.why_not,
        "standing": suspect.standing.value,
        "group": suspect.group,
        "twins": list(suspect.twins),
        "readings": [
            {
                "cause": reading.cause.value,
                "words": reading.words,
                "factor_low": reading.factor_low,
                "factor_high": reading.factor_high,
                "weight": reading.weight,
                "expected": reading.expected,
                "unit": reading.unit,
            }
            for reading in suspect.readings
        ],
        "words": suspect_words(suspect),
    }
