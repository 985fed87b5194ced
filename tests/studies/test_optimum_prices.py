"""Prices at an optimum, worked out by hand; and answers that exact arithmetic does not confirm."""

from __future__ import annotations

import pytest

from fluxnet.cli.main import run as command
from fluxnet.ground.table import Table
from fluxnet.network.model import Network
from fluxnet.presenting.solve_screen import solve_screen
from fluxnet.reading.model import read_model_text
from fluxnet.studies.bill import BillSide
from fluxnet.studies.solution import FluxSolution, SolveStatus
from fluxnet.studies.solve import solve_network
from fluxnet.tables.rates_table import read_rates_text

# Acetate makes NADH, which leaves by oxygen (two each) or by lactate. With g glucose:
# pyruvate 2 g = a + l, NADH 2 g + a = l + 2 o; so acetate equals oxygen, whatever g is.
TEXT = """
substrate glucose, oxygen
product acetate, lactate
exchange CO2
carrier ATP carries energy
carrier NADH
inside pyruvate
compartment sugar
    split : glucose -> 2 pyruvate + 2 ATP + 2 NADH
compartment acids
    ace : pyruvate -> acetate + CO2 + NADH + ATP
    lac : pyruvate + NADH -> lactate
compartment respiration
    burn : 2 NADH + oxygen -> 2 ATP
compartment upkeep
    keep : ATP -> nothing
"""
AMPLE = TEXT + "limit glucose <= 4\nlimit oxygen <= 3\n"
CORNER = TEXT + "limit glucose <= 1.5\nlimit oxygen <= 3\n"


def network(text: str) -> Network:
    found = read_model_text(text).network
    assert found is not None
    return found


def best(text: str, **options: str) -> FluxSolution:
    (run,) = solve_network(network(text), None, **options).runs  # type: ignore[arg-type]
    return run


def price(run: FluxSolution, species: str) -> tuple[float, float]:
    found = next(p for p in run.prices if p.species == species)
    assert found.price_low <= found.price <= found.price_high
    return found.price_low, found.price_high


def worth(run: FluxSolution, start: str) -> tuple[float, float]:
    found = next(x for x in run.limits if x.name.startswith(start))
    assert min(found.worth_up, found.worth_down) <= found.worth
    assert found.worth <= max(found.worth_up, found.worth_down)
    return found.worth_up, found.worth_down


def test_a_surplus_has_a_negative_price() -> None:
    run = best(AMPLE, maximise="acetate")

    assert run.optimum == 3
    # One NADH more takes half an acetate to get rid of; one pyruvate more gives half of one.
    assert price(run, "NADH") == (-0.5, -0.5)
    assert price(run, "pyruvate") == (0.5, 0.5)
    assert price(run, "ATP") == (0, 0)
    assert [limit.name for limit in run.limits] == ["limit oxygen <= 3"]
    assert worth(run, "limit oxygen") == (1, 1)


def test_where_two_limits_meet_one_more_helps_nothing_and_one_less_costs() -> None:
    run = best(CORNER, maximise="acetate")

    assert run.optimum == 3
    assert worth(run, "limit oxygen") == (0, 1)
    assert worth(run, "limit glucose") == (0, 2)
    # One more has to be got rid of; of one less there is no lack, for less oxygen is used.
    assert price(run, "NADH") == (-0.5, 0)
    assert run.bill is not None
    assert run.bill.verified


def test_of_a_minimum_a_price_is_what_one_more_spares() -> None:
    run = best(TEXT + "limit acetate >= 3\nlimit oxygen <= 5\n", minimise="in glucose")

    assert run.optimum == 1.5
    assert price(run, "pyruvate") == (0.5, 0.5)
    assert price(run, "NADH") == (0, 0)
    assert worth(run, "limit acetate") == (0.5, 0.5)
    assert run.bill is not None
    assert [(x.side, x.name, x.worth) for x in run.bill.lines] == [
        (BillSide.DEMAND, "limit acetate >= 3", 1.5),
        (BillSide.SUPPLY, "glucose in", 1.5),
    ]


@pytest.mark.parametrize("weight", ["", "2 "])
def test_a_carrier_that_is_aimed_at_is_worth_its_weight(weight: str) -> None:
    run = best(AMPLE + "limit keep >= 1\n", maximise=f"{weight}ATP")
    factor = 2 if weight else 1

    assert price(run, "ATP") == (factor, factor)
    assert worth(run, "limit keep") == (-factor, -factor)


def test_a_limit_that_cannot_move_at_all_has_no_end_there() -> None:
    run = best(AMPLE + "limit lactate >= 8\n", maximise="acetate")
    # All the glucose goes into lactate: more of it is impossible.
    assert run.optimum == 0
    assert worth(run, "limit lactate")[0] == -float("inf")


@pytest.mark.parametrize("within", [0.0, 0.5, 2.0, 50.0])
def test_measured_rates_are_held_exactly_within_so_many_sds(within: float) -> None:
    model = network(AMPLE)
    table = read_rates_text(
        "species,direction,rate,sd,unit\nacetate,out,2.1,0.3,mmol/g/h\n", network=model
    ).table
    (run,) = solve_network(model, table, maximise="acetate", within=within).runs

    assert run.proof is not None
    assert run.proof.verified
    assert run.optimum == {0.0: 2.1, 0.5: 2.25, 2.0: 2.7}.get(within, 3.0)


def notes(text: str, **options: str) -> str:
    solution = solve_network(network(text), None, **options)  # type: ignore[arg-type]
    tables = [block for block in solve_screen(solution) if isinstance(block, Table)]
    return " ".join(note for table in tables for note in table.notes)


def test_a_negative_price_is_explained_below_the_ledger() -> None:
    assert "below zero (NADH): a surplus that has to be got rid of" in notes(
        AMPLE, maximise="acetate"
    )
    assert "below zero" not in notes(AMPLE, maximise="lactate")
    assert "would lower the aim" in notes(AMPLE + "limit lactate >= 1\n", minimise="in glucose")


def test_the_bill_is_shown_when_it_is_asked_for(tmp_path, capsys) -> None:
    model = tmp_path / "model.flux"
    model.write_text(AMPLE, encoding="utf-8")

    assert command(["solve", str(model), "--maximise", "acetate"]) == 0
    plain = capsys.readouterr().out
    assert command(["solve", str(model), "--maximise", "acetate", "--proof"]) == 0
    told = " ".join(capsys.readouterr().out.split())
    assert "Proven in exact arithmetic; --proof shows the bill." in plain
    assert "Bill of the optimum" not in plain
    assert "limit oxygen <= 3 3 1 3.0000" in told
    assert "acetate out 3 1 3.0000" in told
    assert "As fractions the two sides are equal; their difference is 0." in told


def test_what_exact_arithmetic_denies_is_not_called_proven_and_fails(tmp_path, capsys) -> None:
    # The limits contradict one another in the eleventh digit, which no float solver sees.
    text = TEXT + (
        "limit glucose <= 4\nlimit oxygen = 1.00000000001\n"
        "limit acetate = 1\nlimit lactate = 1\n"
    )
    model = tmp_path / "model.flux"
    model.write_text(text, encoding="utf-8")
    run = best(text, maximise="glucose")
    status = command(["solve", str(model), "--maximise", "glucose"])
    shown = capsys.readouterr()
    assert not shown.err
    told = " ".join(shown.out.split())

    assert run.status is SolveStatus.OPTIMAL
    assert run.proof is not None
    assert not run.proof.verified
    assert run.proof.gap == pytest.approx(1e-11, rel=3)
    assert "Not proven: in exact arithmetic no fluxes meet everything (off by" in told
    assert "Proven in exact arithmetic" not in told
    assert status == 1


def test_a_limit_that_only_bars_what_nothing_wants_holds_nothing_back() -> None:
    # lactate is made in vain: allowing more of it gives nothing, less of it there cannot be
    text = """
substrate glucose
product ethanol, lactate
exchange CO2
carrier NADH carries 2 electrons
inside pyruvate
compartment a
    g : glucose -> 2 pyruvate + 2 NADH
    f : pyruvate + NADH -> ethanol + CO2
    l : pyruvate + NADH -> lactate
limit glucose <= 10
limit l <= 0
"""
    network = read_model_text(text).network
    assert network is not None

    (run,) = solve_network(network, maximise="ethanol").runs

    assert [limit.name for limit in run.limits] == ["limit glucose <= 10"]
    assert "limit l" not in run.words
