"""A lumped model, and overall reactions, as data."""

from __future__ import annotations

from typing import Any

from fluxnet.network.amounts import coefficient_text
from fluxnet.presenting.lump_screen import equation_of
from fluxnet.studies.lump_overall import Overall, Overalls
from fluxnet.studies.lump_result import Lump, Lumped, Weights

__all__ = ["lump_record", "overall_record"]

Record = dict[str, Any]


def lump_record(lumped: Lumped) -> Record:
    """The body of ``lump/1`` for a lumped model; weights are texts, exact."""
    long, short = lumped.original, lumped.network
    return {
        "model": long.title,
        "keep": list(lumped.keep),
        "counts": {
            "reactions": len(long.reactions),
            "lumped_reactions": len(short.reactions),
            "species": len(long.species),
            "lumped_species": len(short.species),
        },
        "eliminated": list(lumped.eliminated),
        "kept": [{"species": k.species, "why": k.why.value, "words": k.words}
                 for k in lumped.kept],
        "lumped": [_lump(lump) for lump in lumped.lumps],
        "loops": [_weights(loop) for loop in lumped.loops],
        "spared": [{"ways": _weights(s.weights), "same_as": _weights(s.same_as)}
                   for s in lumped.spared],
        "gone": [{"reaction": g.reaction, "why": g.fate.value} for g in lumped.gone],
        "proof": {
            "method": "double description",
            "verified": lumped.proof.verified,
            "steps": lumped.proof.steps,
            "sums": lumped.proof.sums,
            "lines": lumped.proof.lines,
            "fault": lumped.proof.fault or None,
        },
        "text": lumped.text,
    }  # fmt: skip


def _lump(lump: Lump) -> Record:
    return {
        "reaction": lump.reaction.name,
        "compartment": lump.reaction.compartment,
        "reversible": lump.reaction.reversible,
        "equation": equation_of(lump),
        "stands_for": _weights(lump.weights),
        "or": [_weights(other) for other in lump.others],
    }


def _weights(weights: Weights) -> list[Record]:
    return [{"reaction": name, "times": coefficient_text(w).strip("()")} for name, w in weights]


def overall_record(overalls: Overalls) -> Record:
    """The body of ``lump/1`` for overall reactions."""
    return {
        "compartment": overalls.compartment,
        "runs": [_overall(run) for run in overalls.runs],
    }


def _overall(run: Overall) -> Record:
    terms = () if run.line is None else run.line.terms
    return {
        "run": run.run,
        "status": run.status.value,
        "per": run.per,
        "line": run.text or None,
        "terms": [
            {"species": t.species, "coefficient": sign * number, "exact": str(sign * number)}
            for sign, t in terms
            if t.coefficient is not None and (number := t.coefficient.number) is not None
        ],
        "sum_of": [
            {"reaction": name, "times": weight, "exact": str(weight)}
            for name, weight in run.weights
        ],
        "balances": run.balances,
        "undetermined": list(run.free),
    }
