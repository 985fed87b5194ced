"""A flux has a sign: limits below zero on a reversible reaction, from the text to the answer."""

from __future__ import annotations

import pytest

import fluxnet as fx

TEXT = """\
substrate glucose
product   ethanol, CO2
exchange  lactate
carrier   NADH
inside    pyruvate
compartment c
    gly : glucose -> 2 pyruvate + 2 NADH
    eth : pyruvate + NADH -> ethanol + CO2
    ldh : pyruvate + NADH <-> lactate
limit glucose <= 5
"""


def flux(solution: fx.Answer, name: str) -> float:
    return next(f.value for f in solution.runs[0].fluxes if f.reaction == name)


@pytest.mark.parametrize(
    ("limit", "least", "most"),
    [
        ("ldh >= -2", -2, 10),
        ("ldh between -2 and -0.5", -2, -0.5),
        ("ldh = -1.5", -1.5, -1.5),
        ("ldh / gly = -0.5", -2.5, 0),
        ("ldh between -3 and 4", -3, 4),
    ],
)
def test_a_flux_keeps_to_limits_below_zero(limit: str, least: float, most: float) -> None:
    model = fx.read_model_text(f"{TEXT}limit {limit}\n")

    assert flux(fx.solve(model, minimise="ldh"), "ldh") == pytest.approx(least, abs=1e-9)
    assert flux(fx.solve(model, maximise="ldh"), "ldh") == pytest.approx(most, abs=1e-9)


def test_a_measured_flux_below_zero_is_reconciled() -> None:
    model = fx.read_model_text(f"{TEXT}limit ldh = -1 ± 20 %\n")
    rates = fx.read_rates_text(
        "run,glucose,ethanol\n,mmol/g/h,mmol/g/h\nA,2 ± 0.1,5 ± 0.1\n", model
    )

    solution = fx.solve(model, rates)

    assert solution.runs[0].status.value == "solved"
    assert flux(solution, "ldh") == pytest.approx(-1, abs=1e-9)


def test_the_checker_knows_that_a_reaction_held_below_zero_runs_backwards() -> None:
    """Held at -1 or below, ldh takes lactate up: what makes it alone is blocked."""
    text = TEXT.replace("exchange  lactate", "product   lactate").replace(
        "limit glucose <= 5", "limit ldh <= -1"
    )

    found = fx.check(fx.read_model_text(text)).diagnostics

    assert [d.name.value for d in found] == ["blocked-reaction"]
