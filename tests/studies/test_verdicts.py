"""The one sentence of a fit agrees with its status."""

from __future__ import annotations

import fluxnet as fx
from fluxnet.cli.new import MODEL
from fluxnet.studies.solution import FluxSolution, SolveStatus

HEAD = "run,species,direction,rate,sd,unit\n"


def solved(text: str, rates: str | None = None) -> FluxSolution:
    model = fx.read_model_text(text)
    (run,) = fx.solve(model, None if rates is None else fx.read_rates_text(HEAD + rates)).runs
    assert isinstance(run, FluxSolution)
    return run


def test_untested_rates_that_only_forbidden_fluxes_meet_are_not_told_to_fit() -> None:
    run = solved(MODEL, "A,glucose,in,2,0.06,mmol/g/h\nA,CO2,in,1,0.2,mmol/g/h\n")

    assert run.test is not None
    assert run.test.h is None
    assert run.status is SolveStatus.INCONSISTENT
    assert run.words.startswith("The rates balance, but only with fluxes that the limits forbid")


def test_untested_rates_that_fit_are_told_so() -> None:
    run = solved(MODEL, "A,glucose,in,2,0.06,mmol/g/h\nA,CO2,out,4,0.2,mmol/g/h\n")

    assert run.status is SolveStatus.SOLVED
    assert run.words.startswith("The rates fit the network, but none tests another")


def test_where_nothing_is_measured_no_rate_is_said_to_fit() -> None:
    run = solved(MODEL.replace("limit  upkeep = 1.0 ± 0.3", "limit upkeep >= 1"))

    assert run.words.startswith("No rate is measured")
