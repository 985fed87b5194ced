"""An optimum over the errors of the parameters, and what measured values it is held by."""

from __future__ import annotations

import json
from math import inf

import pytest

import fluxnet as fx
from fluxnet.network.variant import apply_variant
from fluxnet.reading.model import read_model_text
from fluxnet.studies.solution import FluxSolution
from fluxnet.studies.solve import solve_network

# One glucose makes 2 ATP, and one waste spends n m of them; by hand: 2 / (n m) of waste at most.
MODEL = """
model One way
substrate glucose, ammonia
product ethanol, CO2
carrier ATP carries energy
parameter n = 2 ± 0.25
parameter m = 1 ± 0.5 in [0.8, 1.2]
compartment all
    make  : glucose -> 2 ethanol + 2 CO2 + 2 ATP
    waste : (n*m) ATP -> nothing
limit glucose <= 1
"""


def best(text: str, aim: str, rates: str | None = None, **options: float) -> FluxSolution:
    model = fx.read_model_text(text)
    table = None if rates is None else fx.read_rates_text(rates, model)
    (run,) = fx.solve(model, table, maximise=aim, **options).runs
    assert isinstance(run, FluxSolution)
    return run


def test_the_optimum_is_given_over_two_sds_of_each_parameter_within_its_range() -> None:
    run = best(MODEL, "waste")

    assert run.optimum == pytest.approx(1)
    assert run.span is not None
    assert run.span.low == pytest.approx(2 / (2.5 * 1.2))
    assert run.span.high == pytest.approx(2 / (1.5 * 0.8))
    assert run.span.parameters == ("n", "m")
    assert "Over ± 2 sd of n and m it lies between 0.6667 and 1.667 mmol/g/h (" in run.words
    assert f"(searched at {run.span.points} points)." in run.words


def test_a_least_value_has_its_span_as_well() -> None:
    text = MODEL + "limit waste >= 0.5\n"
    model = fx.read_model_text(text)

    (run,) = fx.solve(model, minimise="glucose").runs

    assert run.optimum == pytest.approx(0.5)
    assert run.span.low == pytest.approx(0.5 * 1.5 * 0.8 / 2)
    assert run.span.high == pytest.approx(0.5 * 2.5 * 1.2 / 2)


def test_many_parameters_are_moved_to_their_worst_and_best_ends_together() -> None:
    names = [f"p{k}" for k in range(6)]
    text = MODEL.replace("(n*m)", f"({'*'.join(names)})").replace(
        "compartment", "".join(f"parameter {n} = 1 ± 0.05\n" for n in names) + "compartment", 1
    )
    run = best(text, "waste")

    assert run.span is not None
    assert run.span.low == pytest.approx(2 / 1.1**6)
    assert run.span.high == pytest.approx(2 / 0.9**6)


def test_a_model_without_uncertain_numbers_has_no_span() -> None:
    run = best(MODEL.replace(" ± 0.25", "").replace(" ± 0.5", ""), "waste")

    assert run.span is None
    assert "sd" not in run.words


def test_an_optimum_that_the_parameters_do_not_touch_stays_the_same() -> None:
    run = best(MODEL, "ethanol")

    assert run.span is not None
    assert (run.span.low, run.span.high) == (2.0, 2.0)
    assert "Within ± 2 sd of n and m it stays the same (searched at 8 points)." in run.words


def test_values_at_which_nothing_is_feasible_are_told() -> None:
    run = best(MODEL + "limit waste >= 0.9\n", "waste")

    assert run.span is not None
    assert run.span.infeasible > 0
    assert f"points; {run.span.infeasible} of them infeasible)" in run.words
    # 2 / (n m) falls to 0.9, where the feasible ends.
    assert run.span.low == pytest.approx(0.9, rel=2e-3)
    assert run.span.low >= 0.9


def test_a_corner_without_an_end_is_told() -> None:
    text = """
model Circle
substrate glucose
product ethanol, CO2
inside A C6H12O6, B C6H12O6
carrier ATP carries energy
parameter n = 1.9 ± 0.1
compartment all
    start : glucose -> A
    there : A + 2 ATP -> B
    back  : B -> A + n ATP
    make  : A -> 2 ethanol + 2 CO2 + 2 ATP
    waste : ATP -> nothing
limit glucose <= 1
"""
    network = read_model_text(text).network
    assert network is not None

    (run,) = solve_network(network, maximise="waste").runs

    assert run.span is not None
    assert run.span.low == pytest.approx(2)
    assert run.span.high == inf
    assert "between 2 and no end" in run.words


def test_the_least_number_of_sds_that_measured_values_need_is_told() -> None:
    # 2 ethanol a glucose: 1 ± 0.1 and 2.6 ± 0.2 meet where 2 (1 + 0.1 k) = 2.6 - 0.2 k, k = 1.5
    rates = (
        "run,species,direction,rate,sd,unit\n"
        "1,glucose,in,1,0.1,mmol/g/h\n1,ethanol,out,2.6,0.2,mmol/g/h\n"
    )
    text = MODEL.replace("limit glucose <= 1", "")

    run = best(text, "waste", rates)

    assert run.status.value == "optimal"
    assert run.smallest_within == pytest.approx(1.5, abs=1e-6)
    shown = str(fx.solve(fx.read_model_text(text), fx.read_rates_text(rates), maximise="waste"))
    assert "held within 2 sd" in shown
    assert "can hold together is 1.5." in " ".join(shown.split())
    tight = best(text, "waste", rates, within=1)
    assert tight.status.value == "infeasible"
    assert tight.smallest_within == pytest.approx(1.5, abs=1e-6)


def test_a_ratio_that_is_met_only_by_endless_rates_hides_no_optimum() -> None:
    from fluxnet.cli.new import MODEL as RESPIRING

    text = RESPIRING + "limit ethanol >= 3\nlimit CO2 / oxygen = 1.05 ± 0.03\n"

    (run,) = fx.solve(fx.read_model_text(text), minimise="ethanol").runs

    assert run.status.value == "optimal"
    assert run.optimum == pytest.approx(3)


def test_a_fraction_of_an_optimum_is_not_told_as_the_optimum_s_yield() -> None:
    model = fx.read_model_text(MODEL)
    whole, part = (fx.solve(model, maximise="ethanol", fraction=f) for f in (1.0, 0.9))

    assert "2 mol per mol glucose" in whole.runs[0].words
    assert "mol per mol" not in part.runs[0].words
    assert "at the optimum" in str(whole)
    assert "at the optimum" not in str(part)
    assert "at 0.9 of it or better" in str(part)
    assert json.loads(part.to_json())["runs"][0]["fraction"] == 0.9


def test_an_uptake_that_comes_out_negative_is_told_without_a_yield() -> None:
    text = MODEL.replace("product ethanol, CO2", "product ethanol\nexchange CO2")

    run = best(text.replace("glucose <= 1", "glucose = 1"), "in CO2")

    assert run.optimum == pytest.approx(-2)
    assert "mol per mol" not in run.words


def test_a_variant_moves_the_span() -> None:
    network = read_model_text(MODEL + "variant sure\n    set n = 2 ± 0.125\n").network
    assert network is not None
    changed, told = apply_variant(network, "sure")
    assert changed is not None, told

    (run,) = solve_network(changed, maximise="waste").runs

    assert run.span is not None
    assert run.span.low == pytest.approx(2 / (2.25 * 1.2))


RATES = """run,species,direction,rate,sd,unit
1,glucose,in,3,0.1,mmol/g/h
1,CO2,out,6,0.2,mmol/g/h
1,oxygen,in,5,0.2,mmol/g/h
1,ethanol,out,1,0.05,mmol/g/h
1,mu,,0.2,0.01,1/h
"""


def respiring(more: str = "") -> str:
    from fluxnet.cli.new import MODEL as RESPIRING

    return RESPIRING + more


def test_an_optimum_that_falls_to_nothing_inside_the_box_is_found() -> None:
    # With PO 1.42 and K_X 2.07 hardly any ATP is left; no corner says so.
    run = best(respiring(), "ATP", RATES)

    assert run.span is not None
    assert 0 <= run.span.low < 3e-4
    assert run.span.high == pytest.approx(10.854, rel=1e-4)
    assert 0 < run.span.infeasible < run.span.points < 300


def test_a_ridge_across_the_box_is_climbed() -> None:
    run = best(respiring("limit CO2 / oxygen = 1.05 ± 0.03\nlimit glucose <= 10\n"), "mu")

    assert run.span is not None
    assert run.span.high == pytest.approx(1.0674739, rel=1e-6)
    assert run.span.infeasible == 0


def test_where_each_parameter_acts_one_way_the_corners_are_enough() -> None:
    run = best(MODEL, "waste")

    assert run.span is not None
    # the values, four corners, four middles of edges and two on the way to the centre
    assert run.span.points <= 1 + 4 + 4 + 2


@pytest.mark.parametrize("seed", range(3))
def test_no_point_of_the_box_lies_outside_the_ends(seed: int) -> None:
    import random

    dice = random.Random(seed)
    run = best(respiring(), "ATP", RATES)
    assert run.span is not None
    for _ in range(15):
        po, growth = dice.uniform(1.0, 1.8), dice.uniform(1.2, 2.4)
        text = respiring("variant there\n    set PO = {po:.6f}\n    set K_X = {growth:.6f}\n")
        network = read_model_text(text.format(po=po, growth=growth)).network
        assert network is not None
        changed, told = apply_variant(network, "there")
        assert changed is not None, told
        table = fx.read_rates_text(RATES, fx.read_model_text(respiring()))
        (other,) = solve_network(changed, table, maximise="ATP").runs
        if other.optimum is not None:
            assert run.span.low - 2e-3 <= other.optimum <= run.span.high * (1 + 1e-9)
