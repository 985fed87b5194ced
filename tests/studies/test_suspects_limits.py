"""A suspect is possible only where the limits hold with it; a verdict names the limit first."""

from __future__ import annotations

import pytest

import fluxnet as fx
from fluxnet.cli.new import MODEL
from fluxnet.studies.solution import FluxSolution, SolveStatus

HEAD = "run,species,direction,rate,sd,unit\n"
RATES = """A,glucose,in,3,0.1,mmol/g/h
A,CO2,out,6,0.2,mmol/g/h
A,oxygen,in,5,0.2,mmol/g/h
A,ethanol,out,1,0.05,mmol/g/h
A,mu,,0.2,0.01,1/h
"""


def solved(more: str = "", rates: str = RATES) -> FluxSolution:
    model = fx.read_model_text(MODEL + more)
    return fx.solve(model, fx.read_rates_text(HEAD + rates, model)).result.runs[0]


def possible(run: FluxSolution) -> dict[str, bool]:
    assert run.suspects is not None
    return {s.label: s.possible for s in run.suspects.group}


def test_a_limit_that_a_measurement_passes_is_the_first_that_is_told() -> None:
    run = solved("limit glucose <= 1\n")
    assert run.status is SolveStatus.INCONSISTENT
    assert run.words.startswith(
        "Limit glucose <= 1 and glucose in as measured, 3 ± 0.1, contradict each other."
    )
    assert "z =" not in run.words
    assert "p = 0.005" in run.words


def test_no_suspect_is_possible_where_the_limits_are_passed_all_the_same() -> None:
    assert any(possible(solved()).values())
    run = solved("limit glucose <= 1\n")
    assert run.suspects is not None
    assert not any(possible(run).values())
    assert not run.suspects.explained
    assert "limit glucose <= 1" in run.suspects.passed
    assert any("still pass limit glucose <= 1" in str(s.why_not) for s in run.suspects.group)


def test_limits_that_a_suspect_keeps_leave_it_possible() -> None:
    free, wide = solved(), solved("limit glucose <= 8\nlimit ethanol <= 9\n")
    assert possible(free) == possible(wide)
    assert wide.suspects is not None
    assert not wide.suspects.passed


def test_a_suspect_falls_alone_where_it_alone_passes_a_limit() -> None:
    before = possible(solved())
    assert before["mu"]
    after = possible(solved("limit ammonia <= 1.6\n"))
    assert after["pyruvate out"]
    assert not after["mu"]


@pytest.mark.parametrize("more", ["", "limit glucose <= 1\n"])
def test_who_spends_most_is_told_only_of_a_carrier_whose_lines_are_determined(more: str) -> None:
    model = fx.read_model_text(MODEL + more)
    alone = fx.solve(model).result.runs[0]
    assert alone.words.startswith("No rate is measured: the limits alone leave this")
    assert "takes" not in alone.words
    few = "A,glucose,in,0.5,0.1,mmol/g/h\n"
    run = fx.solve(model, fx.read_rates_text(HEAD + few, model)).result.runs[0]
    assert any(line.sd is None for line in run.ledger if line.carrier == "ATP")
    assert "takes" not in run.words
    full = RATES.replace("0.2,0.01", "0.256,0.015")
    run = fx.solve(model, fx.read_rates_text(HEAD + full, model)).result.runs[0]
    assert ("takes" in run.words) == (not more)
