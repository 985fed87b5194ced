"""The bills of conflicts: in which unit, with which lines, in which words."""

from __future__ import annotations

import pytest

from fluxnet.reading.model import read_model_text
from fluxnet.solving.build import build_problem
from fluxnet.studies.bill import BillSide
from fluxnet.studies.conflicts import explain_conflicts

CELL = """
basis mmol/g/h
substrate glucose, oxygen
product ethanol, lactate, acetate
exchange CO2
carrier ATP carries energy
carrier NADH
inside pyruvate, acetyl-CoA
compartment all
    glycolysis : glucose -> 2 pyruvate + 2 ATP + 2 NADH
    pdh : pyruvate -> acetyl-CoA + CO2 + NADH
    adh : acetyl-CoA + 2 NADH -> ethanol
    ack : acetyl-CoA -> acetate + ATP
    ldh : pyruvate + NADH -> lactate
    cycle : acetyl-CoA -> 2 CO2 + 4 NADH + ATP
    oxphos : NADH + 0.5 oxygen -> 1.5 ATP
    upkeep : ATP -> nothing
"""


@pytest.fixture
def explain(read_run):
    def explain(limits: str, rates=None, *, sd="5 %", unit="mmol/g/h"):
        reading = read_model_text(CELL + limits)
        assert reading.network is not None, reading.diagnostics
        run = read_run(reading.network, rates, sd=sd, unit=unit) if rates else None
        built = build_problem(reading.network, run, within=2.0)
        return explain_conflicts(built, built.problem, unit, 2.0)

    return explain


def lines_of(bill):
    return [(x.side, x.name, x.amount, x.price) for x in bill.lines]


def test_atp_is_the_unit_where_it_has_a_price(explain):
    (told,) = explain("limit upkeep >= 5\nlimit oxygen <= 0\nlimit glucose <= 1\n")
    bill = told.bill
    assert bill.unit == "mmol ATP/g/h"
    # 2 a glucose; an oxygen burns 2 NADH for 3 ATP, and spares an ethanol for an acetate
    assert lines_of(bill) == [
        (BillSide.DEMAND, "limit upkeep >= 5", 5.0, 1.0),
        (BillSide.SUPPLY, "limit oxygen <= 0", 0.0, 4.0),
        (BillSide.SUPPLY, "limit glucose <= 1", 1.0, 2.0),
    ]
    assert (bill.demand, bill.supply, bill.shortfall) == (5, 2, 3)
    assert bill.words == (
        "The ATP that upkeep needs, 5.00, is more than the uptake of glucose as limited can "
        "bring, 2.00 mmol ATP/g/h."
    )
    assert {p.species: p.price for p in told.prices}["ATP"] == 1
    assert bill.verified


def test_electrons_are_the_unit_where_only_they_are_short(explain):
    (told,) = explain("", {"glucose in": 1, "ethanol out": 2, "oxygen in": 2})
    assert told.bill.unit == "mmol electrons/g/h"
    assert told.bill.shortfall > 0
    prices = {p.species: p.price for p in told.prices}
    assert abs(prices["NADH"]) == 2


def test_a_surplus_is_told_as_one_that_has_nowhere_to_go(explain):
    (told,) = explain("limit upkeep <= 1\nlimit glucose >= 2\nlimit oxygen <= 0\n")
    assert told.is_surplus
    assert told.bill.words.startswith("The ATP that the uptake of glucose brings, 4.00, is more")
    assert told.bill.words.endswith("than upkeep as limited can take, 1.00 mmol ATP/g/h.")


def test_a_value_against_its_own_limit_is_told_in_its_own_unit(explain):
    (told,) = explain("limit glucose <= 1\n", {"glucose in": 2})
    bill = told.bill
    assert bill.unit == "mmol/g/h"
    assert lines_of(bill) == [
        (BillSide.DEMAND, "glucose in, 2 - 2 sd", 1.8, 1.0),
        (BillSide.SUPPLY, "limit glucose <= 1", 1.0, 1.0),
    ]
    assert told.conflict.members == told.conflict.given
    assert told.prices == ()


def test_exact_values_are_told_as_exact(explain):
    (told,) = explain("limit glucose <= 1\n", {"glucose in": 2}, sd="0")
    assert told.bill.words == (
        "At least 2.00 mmol/g/h is asked for by glucose in, exactly 2; at most 1.00 is left by "
        "limit glucose <= 1."
    )


def test_conflicts_that_share_nothing_are_all_told(explain):
    told = explain(
        "limit upkeep >= 20\nlimit oxygen <= 0\nlimit lactate <= 1\n",
        {"glucose in": 1, "lactate out": 2},
    )
    given = [{m.name for m in x.conflict.given} for x in told]
    assert len(told) == 2
    assert {"lactate out", "limit lactate <= 1"} in given
    assert {"glucose in", "limit upkeep >= 20", "limit oxygen <= 0"} in given
    assert all(x.bill.verified and x.alternatives for x in told)


def test_a_ratio_is_a_line_that_is_worth_nothing_itself(explain):
    (told,) = explain(
        "limit oxygen <= 0\nlimit CO2 out / glucose = 5 ± 0.1\nlimit glucose >= 1\n"
    )
    lines = {x.name: (x.amount, x.worth) for x in told.bill.lines}
    assert lines["CO2 out / glucose in, 5 - 2 sd"] == (0, 0)
    ways = {str(a.quantity): a.needed for a in told.alternatives}
    assert ways["CO2 out / glucose in"] == pytest.approx(2)  # all of it to ethanol


def test_amounts_have_no_time_in_their_unit(explain):
    (told,) = explain(
        "", {"glucose in": 10, "ethanol out": 30, "oxygen in": 0.001}, unit="mmol"
    )
    assert told.bill.unit.startswith("mmol ")
    assert "/" not in told.bill.unit
    assert {x.unit for x in told.bill.lines} == {"mmol"}


def test_values_held_as_they_stand_are_told_without_sds(read_run):
    network = read_model_text(CELL + "limit glucose <= 1\n").network
    run = read_run(network, {"glucose in": 2}, sd="5 %", unit="mmol/g/h")
    built = build_problem(network, run, within=0.0)
    (told,) = explain_conflicts(built, built.problem, "mmol/g/h", 0.0)
    assert [x.name for x in told.bill.lines] == ["glucose in, measured 2", "limit glucose <= 1"]
