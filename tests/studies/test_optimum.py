from __future__ import annotations

import re

import pytest

from fluxnet.ground.errors import MisuseError
from fluxnet.network.model import Network
from fluxnet.reading.model import read_model_text
from fluxnet.studies.solution import FluxSolution, SolveStatus
from fluxnet.studies.solve import solve_network
from fluxnet.tables.rates_table import read_rates_text

# Two products from one sugar: x costs ATP, y gives it.
TEXT = """
substrate glucose
product ethanol, lactate
exchange CO2
carrier ATP carries energy
carrier NADH
inside pyruvate
compartment a
    g : glucose -> 2 pyruvate + 2 ATP + 2 NADH
    f : pyruvate + NADH -> ethanol + CO2
    l : pyruvate + NADH -> lactate
compartment m
    upkeep : ATP -> nothing
limit glucose <= 10
"""


@pytest.fixture(scope="module")
def network() -> Network:
    network = read_model_text(TEXT).network
    assert network is not None
    return network


def best(network: Network, **options: object) -> FluxSolution:
    (run,) = solve_network(network, **options).runs  # type: ignore[arg-type]
    return run


def flux(run: FluxSolution, name: str) -> tuple[float, float, float]:
    found = next(f for f in run.fluxes if f.reaction == name)
    return found.low, found.value, found.high


def test_at_the_optimum_every_flux_has_its_range_and_no_noise(network: Network) -> None:
    run = best(network, maximise="ethanol")

    assert run.status is SolveStatus.OPTIMAL
    assert run.optimum == 20.0
    assert flux(run, "l") == (0.0, 0.0, 0.0)
    assert [limit.name for limit in run.limits] == ["limit glucose <= 10"]
    assert run.limits[0].worth == pytest.approx(2.0)


def test_near_the_optimum_ranges_are_those_of_the_fraction(network: Network) -> None:
    run = best(network, maximise="ethanol", fraction=0.75)
    low, _, high = flux(run, "f")

    assert (low, high) == (pytest.approx(15), pytest.approx(20))
    assert flux(run, "l")[2] == pytest.approx(5)


def test_a_fraction_of_a_least_value_allows_larger_ones(network: Network) -> None:
    text = TEXT + "limit ethanol >= 6\n"
    bound = read_model_text(text).network
    assert bound is not None
    run = best(bound, minimise="glucose", fraction=0.5)
    low, _, high = flux(run, "g")

    assert run.optimum == pytest.approx(3)
    assert (low, high) == (pytest.approx(3), pytest.approx(6))


def test_the_surplus_of_a_carrier_is_what_its_spenders_leave(network: Network) -> None:
    run = best(network, maximise="ATP")

    assert run.optimum == pytest.approx(20)
    assert flux(run, "upkeep") == (0.0, 0.0, 0.0)


@pytest.mark.parametrize(
    ("limit", "spent"),
    [("upkeep = 4 ± 0.4", 4), ("upkeep >= 3", 3), ("upkeep between 2 and 6", 2)],
)
def test_a_carriers_spender_stands_at_its_limit_or_measured_value(limit: str, spent: float) -> None:
    network = read_model_text(f"{TEXT}limit {limit}\n").network
    assert network is not None
    run = best(network, maximise="ATP")

    assert run.optimum == pytest.approx(20 - spent)
    assert flux(run, "upkeep") == pytest.approx((spent, spent, spent))
    assert run.proof is not None
    assert run.proof.verified


def test_a_spender_that_is_measured_in_the_table_stands_there_too(network: Network) -> None:
    table = read_rates_text(
        "species,direction,rate,sd,unit\nupkeep,,5,1,mmol/g/h\n", network=network
    ).table
    assert table is not None
    (run,) = solve_network(network, table, maximise="ATP").runs

    assert run.optimum == pytest.approx(15)


def test_an_aim_that_is_measured_is_told_without_its_own_row_as_well(network: Network) -> None:
    table = read_rates_text(
        "species,direction,rate,sd,unit\nethanol,out,8,0.5,mmol/g/h\n", network=network
    ).table
    assert table is not None
    (run,) = solve_network(network, table, maximise="ethanol").runs

    assert run.optimum == pytest.approx(9)
    assert run.unheld == pytest.approx(20)
    assert "Without its own measurement it is 20" in run.words


def test_without_a_limit_the_aim_has_no_end_and_the_missing_limit_is_named() -> None:
    network = read_model_text(TEXT.replace("limit glucose <= 10", "")).network
    assert network is not None
    run = best(network, maximise="ethanol")

    assert run.status is SolveStatus.UNBOUNDED
    assert run.unbounded is not None
    assert run.unbounded.missing_limit == "glucose"


@pytest.mark.parametrize(
    "options",
    [
        {"maximise": "ethanol", "minimise": "lactate"},
        {"maximise": "ethanol", "fraction": 1.5},
        {"maximise": "ethanol", "within": -1.0},
    ],
)
def test_what_makes_no_question_is_refused(network: Network, options: dict[str, object]) -> None:
    with pytest.raises(MisuseError):
        best(network, **options)


def test_a_measured_ratio_over_a_rate_that_nothing_determines_is_not_trusted() -> None:
    network = read_model_text(TEXT + "limit ethanol / glucose = 1.5 ± 0.1\n").network
    assert network is not None
    rates = "species,direction,rate,sd,unit\n{}\n"
    fixed = read_rates_text(rates.format("glucose,in,4,0.1,mmol/g/h"), network=network).table
    assert fixed is not None
    (alone,) = solve_network(network, None).runs
    (held,) = solve_network(network, fixed).runs

    assert "weighed by a guess of glucose in" in alone.words
    assert "guess" not in held.words


def test_what_an_aim_gains_by_a_limit_has_a_unit(network: Network) -> None:
    run = best(network, maximise="ethanol")

    assert [limit.unit for limit in run.limits] == ["mmol ethanol per mmol glucose"]


def test_an_optimum_without_a_limit_on_the_sugar_says_so() -> None:
    text = TEXT.replace("limit glucose <= 10", "limit lactate <= 3\nlimit ethanol <= 8")
    network = read_model_text(text).network
    assert network is not None
    ethanol, glucose = best(network, maximise="ethanol"), best(network, minimise="glucose")

    assert "No limit is set on glucose in" in ethanol.words
    assert "No limit is set" not in glucose.words


def test_an_aim_without_an_end_is_mended_by_the_line_that_is_told() -> None:
    text = TEXT.replace("limit glucose <= 10", "")
    network = read_model_text(text).network
    assert network is not None
    told = best(network, maximise="ethanol").words
    (line,) = re.findall(r"`(limit [^`]+)`", told)
    mended = read_model_text(text + line + "\n").network
    assert mended is not None

    assert best(mended, maximise="ethanol").status is SolveStatus.OPTIMAL


def test_a_flux_without_an_end_is_not_determined_at_an_optimum() -> None:
    # there and back go round beside free, so that all three can be of any size
    text = TEXT.replace("inside pyruvate", "inside pyruvate, one, other").replace(
        "compartment m",
        "    there : one -> other\n    back : other -> one\n    free : one <-> other\n"
        "compartment m",
    )
    circled = read_model_text(text).network
    assert circled is not None

    found = {flux.reaction: flux for flux in best(circled, maximise="ethanol").fluxes}

    assert found["free"].kind.value == "undetermined"
    assert found["there"].kind.value == "undetermined"
    assert found["g"].kind.value == "determined"
