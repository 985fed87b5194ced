"""A solve as data: the keys that others rely on."""

from __future__ import annotations

from typing import Any

from fluxnet.presenting.heat_record import heat_record
from fluxnet.presenting.optimum_record import limits_record, prices_record, proof_record
from fluxnet.presenting.plan_record import correlated_record, plan_record, shares_record
from fluxnet.presenting.quantity_record import quantity_record
from fluxnet.presenting.records import diagnostic_record
from fluxnet.presenting.suspect_record import suspect_keys
from fluxnet.solving.words import limit_words
from fluxnet.studies.solution import FluxSolution, Solution

__all__ = ["solve_record"]

Record = dict[str, Any]


def solve_record(solution: Solution) -> Record:
    """The body of a ``solve/1`` document."""
    return {"runs": [_run(run) for run in solution.runs]}


def _run(run: FluxSolution) -> Record:
    test = run.test
    return {
        "run": run.run,
        "variant": run.variant,
        "status": run.status.value,
        "words": run.words,
        "unit": run.unit,
        "aim": None if run.aim is None else str(run.aim),
        "optimum": run.optimum,
        "optimum_low": None if run.span is None else run.span.low,
        "optimum_high": None if run.span is None else run.span.high,
        "optimum_points": None if run.span is None else run.span.points,
        "optimum_infeasible_points": None if run.span is None else run.span.infeasible,
        "optimum_without_own_row": run.unheld,
        "fraction": None if run.aim is None else run.fraction,
        "within": run.within,
        "smallest_within": run.smallest_within,
        "fluxes": [
            {
                "reaction": f.reaction,
                "compartment": f.compartment,
                "value": f.value,
                "sd": f.sd,
                "low": f.low,
                "high": f.high,
                "best_low": f.best_low,
                "best_high": f.best_high,
                "kind": f.kind.value,
                "shares": shares_record(f.shares),
            }
            for f in run.fluxes
        ],
        "rates": [
            {
                **quantity_record(r.quantity),
                "unit": r.unit,
                "measured": r.measured,
                "sd": r.sd,
                "reconciled": r.reconciled,
                "reconciled_sd": r.reconciled_sd,
                "low": r.low,
                "high": r.high,
                "z": r.z,
                "kind": r.kind.value,
                "reversed": r.reversed_,
            }
            for r in run.rates
        ],
        "test": None
        if test is None
        else {
            "h": test.h,
            "dof": test.dof,
            "p": test.p,
            "limit": test.limit,
            "closes": test.closes,
            "bound_h": test.bound_h,
            "bound_p": test.bound_p,
            "active_bounds": list(test.active),
            "pulling_bounds": list(test.pulling),
        },
        **suspect_keys(run.suspects),
        "ledger": [
            {
                "carrier": line.carrier,
                "compartment": line.compartment,
                "made": line.made,
                "spent": line.spent,
                "net": line.net,
                "sd": line.sd,
                "low": line.low,
                "high": line.high,
                "shares": shares_record(line.shares),
            }
            for line in run.ledger
        ],
        "equations": [
            {
                "compartment": equation.compartment,
                "terms": [
                    {
                        "species": term.species,
                        "coefficient": term.coefficient,
                        "implied": term.implied,
                    }
                    for term in equation.terms
                ],
                "per": equation.per,
                "per_amount": equation.per_amount,
                "base": equation.base,
            }
            for equation in run.equations
        ],
        "yields": [
            {
                "product": y.product,
                "substrate": y.substrate,
                "mol_per_mol": y.per_mole,
                "g_per_g": y.per_mass,
                "cmol_per_cmol": y.per_carbon,
            }
            for y in run.yields
        ],
        "heat": heat_record(run.heat),
        "relations": [
            {
                "words": relation.words,
                "terms": [{"reaction": name, "coefficient": c} for name, c in relation.terms],
                "value": relation.value,
                "sd": relation.sd,
                "low": relation.low,
                "high": relation.high,
            }
            for relation in run.relations
        ],
        "prices": prices_record(run),
        "limits": limits_record(run),
        "conflict": _conflict(run),
        "unbounded": None
        if run.unbounded is None
        else {
            "words": run.unbounded.words,
            "missing_limit": run.unbounded.missing_limit,
            "loop": [
                {"reaction": s.reaction, "coefficient": s.coefficient} for s in run.unbounded.loop
            ],
        },
        "violated_limits": list(run.violated_limits),
        "proof": proof_record(run),
        "left_free": list(run.left_free),
        "left_out": [limit_words(limit) for limit in run.left_out],
        "replaced": [limit_words(limit) for limit in run.replaced],
        "moved_parameters": [
            {
                "name": m.name,
                "value": m.value,
                "sd": m.sd,
                "moved": m.moved,
                "moved_sd": m.moved_sd,
            }
            for m in run.moved
        ],
        "correlated_parameters": correlated_record(run.correlated_numbers),
        "correlated_fluxes": correlated_record(run.correlated_fluxes),
        "plan": None if run.plan is None else plan_record(run.plan),
        "extras": dict(run.extras),
        "notes": [diagnostic_record(note) for note in run.notes],
    }


def _conflict(run: FluxSolution) -> Record | None:
    """Why it cannot be, where it cannot."""
    if not run.conflicts:
        return None
    from fluxnet.presenting.conflict_record import conflict_record

    return conflict_record(run)
