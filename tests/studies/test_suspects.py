"""What could be wrong in a closure: suspects against closures that leave their row blank."""

from __future__ import annotations

import sys
from pathlib import Path

import pytest

from fluxnet.network.model import Direction
from fluxnet.presenting.screen import Sentence
from fluxnet.presenting.suspect_blocks import suspect_blocks
from fluxnet.presenting.suspect_text import would_be_words
from fluxnet.rates.unmeasuring import leave_unmeasured
from fluxnet.reading.model import read_model_text
from fluxnet.studies.closure import close_rates
from fluxnet.studies.suspect_result import Standing, SuspectKind, Suspects

sys.path.insert(0, str(Path(__file__).resolve().parent))

from closing import AEROBIC, ETHANOL, close, rate, table

MIXED = """A,glucose,in,10.0,0.2,mmol/g/h
A,ethanol,out,9.6,0.3,mmol/g/h
A,acetate,out,6.1,0.2,mmol/g/h
A,formate,out,10.4,0.3,mmol/g/h
A,CO2,out,4.6,0.2,mmol/g/h
A,hydrogen,out,2.0,0.1,mmol/g/h
A,ammonia,in,1.9,0.1,mmol/g/h
A,mu,,0.30,0.01,1/h
"""
BIOMASS = "biomass X CH1.8O0.5N0.2 ash 7 %\n"
TABLES = {
    "plain": (MIXED, BIOMASS),
    "correlated": (MIXED, f"{BIOMASS}shared error biomass 4 %\n"),
    "exact": (MIXED.replace("10.0,0.2", "10.0,0"), BIOMASS),
    "blank": (MIXED.replace("4.6,0.2", ","), BIOMASS),
    "carbon": (
        "A,glucose,in,1,0.02,C-mol/C-mol/h\nA,ethanol,out,0.4,0.02,C-mol/C-mol/h\n"
        "A,CO2,out,0.3,0.01,C-mol/C-mol/h\nA,oxygen,in,0.1,0.01,mol/C-mol/h\n"
        "A,mu,,0.2,0.01,1/h\n", "biomass X CH1.8O0.5N0.2\n",
    ),
}  # fmt: skip


def look(text: str, before: str = "", **options: object) -> Suspects:
    found = close(text, before, suspects=True, **options).suspects
    assert found is not None
    return found


@pytest.mark.parametrize("name", TABLES)
def test_a_suspected_rate_leaves_the_h_of_a_closure_that_does_not_measure_it(name):
    text, before = TABLES[name]
    if name == "correlated":
        # relative errors would be taken of other reconciled rates
        text = text.replace("\nA,mu", "\nA,lactate,out,0.2,0.01,mmol/g/h\nA,mu")
        before = BIOMASS
    told = look(text, before)
    rates = [s for s in told.all if s.kind is SuspectKind.MEASURED_RATE]
    assert len(rates) >= 4
    whole = table(text, before)
    for one in rates:
        blank = close_rates(leave_unmeasured(whole, [one.name])).runs[0]
        left = one.h_left if blank.test.h is None else blank.test.h
        assert one.h_left == pytest.approx(left, rel=1e-9, abs=1e-9), one.name
        calculated = rate(blank, one.name)
        if calculated.reconciled_sd is None:
            continue
        assert one.would_be == pytest.approx(calculated.reconciled, rel=1e-8), one.name
        assert one.would_be_sd == pytest.approx(calculated.reconciled_sd, rel=1e-7), one.name
        assert one.measured - one.size == pytest.approx(one.would_be)


def test_a_suspected_ratio_leaves_the_h_of_a_closure_that_does_not_measure_it():
    name = "CO2 out / ethanol out"
    whole = table(f"{MIXED}A,{name},,0.55,0.02,\n", BIOMASS)
    one = close_rates(whole, suspects=True).runs[0].suspects.find(name)
    blank = close_rates(leave_unmeasured(whole, [name])).runs[0]
    assert one.h_left == pytest.approx(blank.test.h, rel=1e-9)
    told = rate(blank, name)
    # to first order: a ratio is the quotient of two rates
    assert one.would_be == pytest.approx(told.reconciled, rel=0.02)
    assert one.would_be_sd == pytest.approx(told.reconciled_sd, rel=0.1)


def test_a_shared_error_stays_with_the_other_rates():
    text = MIXED.replace("\nA,mu,,0.30,0.01,1/h", "")
    sds = [float(line.split(",")[4]) for line in text.splitlines()]
    values = [float(line.split(",")[3]) for line in text.splitlines()]
    whole = table(text, "shared error biomass 0.001 %\n")
    told = close_rates(whole, suspects=True).runs[0].suspects
    for one in told.all:
        if one.kind is SuspectKind.MEASURED_RATE:
            blank = close_rates(leave_unmeasured(whole, [one.name])).runs[0]
            assert one.h_left == pytest.approx(blank.test.h, rel=1e-6, abs=1e-9), one.name
    assert len(sds) == len(values)


@pytest.mark.parametrize("species", ["lactate", "succinate", "glycerol", "alanine"])
def test_a_species_without_a_row_leaves_the_h_of_a_closure_with_a_blank_one(species):
    told = look(MIXED, BIOMASS)
    blank = close(f"{MIXED}A,{species},out,,,mmol/g/h\n", BIOMASS)
    whole = look_at_all(MIXED, BIOMASS)
    assert whole[species] == pytest.approx(blank.test.h, rel=1e-9, abs=1e-9)
    one = told.find(species)
    if one is not None:
        made = rate(blank, species)
        sign = 1 if one.direction is Direction.OUT else -1
        assert sign * one.size == pytest.approx(made.reconciled, rel=1e-8)
        assert one.sd == pytest.approx(made.reconciled_sd, rel=1e-8)


def look_at_all(text: str, before: str) -> dict[str, float]:
    """The h that each suspect leaves, those outside of the first group as well."""
    sought = close(text, before, suspects=True).sought
    left = sought.judged.arrays.h_left[sought.place]
    return {h.name: x for h, x in zip(sought.judged.plan.hypotheses, left.tolist(), strict=True)}


def test_a_rate_left_out_is_not_exchanged_and_no_suspect_of_its_own():
    # the suspect asks what the rate would have to be, leaving out says that there is none
    told = look(MIXED, BIOMASS)
    without = close(MIXED, BIOMASS, without=["formate"])
    by_hand = close(MIXED.replace("A,formate,out,10.4,0.3,mmol/g/h\n", ""), BIOMASS)
    assert without.test == by_hand.test
    assert without.test.h > told.find("formate").h_left + 10


def test_the_example_that_can_be_worked_out_by_hand():
    # ethanol and CO2 are twice the glucose each: 10.0, 18.6 and 19.6 with h = 6.5 on two
    told = look(ETHANOL)
    left = {s.name: round(s.h_left, 9) for s in told.all if s.kind is SuspectKind.MEASURED_RATE}
    # without glucose (18.6 - 19.6)^2 / 0.32, without ethanol (19.6 - 20)^2 / 0.32, and so on
    assert left == {"glucose": 3.125, "ethanol": 0.5, "CO2": 6.125}
    ethanol = told.find("ethanol")
    assert ethanol.would_be == pytest.approx(19.8)  # 19.6 and 20 weigh the same
    assert ethanol.would_be_sd == pytest.approx(0.08**0.5)
    assert told.h == pytest.approx(6.5)
    assert [s.name for s in told.group if s.kind is SuspectKind.MEASURED_RATE] == [
        "ethanol", "glucose",
    ]  # fmt: skip


def test_what_these_rates_can_never_tell_apart_are_twins():
    told = look(AEROBIC.replace("5.9,0.3", "4.4,0.1"))
    oxygen = told.find("oxygen")
    assert "hydrogen out" in oxygen.twins
    hydrogen = told.find("hydrogen")
    assert hydrogen.direction_number == oxygen.direction_number
    assert hydrogen.h_left == pytest.approx(oxygen.h_left)
    # two electrons each where oxygen takes four
    assert hydrogen.size == pytest.approx(-2 * oxygen.size)


def test_a_row_of_a_species_takes_it_from_the_suspects():
    assert "lactate" in look_at_all(MIXED, BIOMASS)
    measured = look_at_all(f"{MIXED}A,lactic acid,out,1,0.1,mmol/g/h\n", BIOMASS)
    assert "lactate" not in measured
    assert "lactic acid" in measured


def test_what_would_be_below_zero_is_not_possible_and_stands_last():
    # more comes out than went in: acetate would have to be taken up, or glucose be more
    told = look("""A,glucose,in,10.0,0.02,mmol/g/h
A,ethanol,out,21.4,0.1,mmol/g/h
A,CO2,out,21.4,0.1,mmol/g/h
A,acetate,out,0.2,0.05,mmol/g/h
""")
    acetate, glucose = told.find("acetate"), told.find("glucose")
    assert acetate.direction_number == glucose.direction_number
    assert glucose.possible
    assert glucose.why_not is None
    assert not acetate.possible
    assert acetate.why_not == "it would be below zero"
    flags = [s.possible for s in told.group]
    assert flags == sorted(flags, reverse=True)
    assert told.group[-1].why_not is not None


def test_a_limit_of_the_model_makes_a_rate_impossible():
    model = """model limited
basis mmol/g/h
substrate glucose
product ethanol
exchange CO2
compartment all
    ferment: glucose -> 2 ethanol + 2 CO2
limit ethanol <= 19
"""
    network = read_model_text(model).network
    tight = ETHANOL.replace("18.6,0.4", "18.6,0.04").replace("19.6,0.4", "19.6,0.04")
    tight = tight.replace("10.0,0.2", "10.0,0.02")
    free = look(tight).find("ethanol")
    assert free.possible
    bound = look(tight, network=network).find("ethanol")
    assert not bound.possible
    assert bound.why_not == "it would be above its limit"
    assert bound.h_left == pytest.approx(free.h_left)


def test_common_by_products_come_before_rare_ones_and_rates_before_both():
    told = look(MIXED.replace("9.6,0.3", "7.6,0.3"), BIOMASS)
    order = [s.standing for s in told.group]
    places = [
        0 if s in (Standing.MEASURED, Standing.COMMON) else 1 if s is Standing.RARE else 2
        for s in order
    ]
    assert places == sorted(places)
    assert {0, 1} <= set(places)
    left = [s.h_left for s in told.group if s.standing in (Standing.MEASURED, Standing.COMMON)]
    assert left == pytest.approx(sorted(left))


def test_what_the_model_makes_comes_before_other_by_products():
    model = """model branched
basis mmol/g/h
substrate glucose
product ethanol, lactate, acetate, formate, hydrogen
exchange CO2, ammonia
biomass X CH1.8O0.5N0.2 ash 7 %
compartment all
    ferment: glucose -> 2 ethanol + 2 CO2
    acid: glucose -> 2 lactate
    split: glucose -> ethanol + acetate + 2 formate
    fhl: formate -> hydrogen + CO2
    grow: 0.175 glucose + 0.2 ammonia <-> X + 0.05 CO2
"""
    network = read_model_text(model).network
    told = look(MIXED.replace("9.6,0.3", "7.6,0.3"), BIOMASS, network=network)
    standing = {s.name: s.standing for s in told.all}
    assert Standing.MODEL not in (standing.get("glycerol"), standing.get("1,3-propanediol"))
    sought = close(MIXED, BIOMASS, network=network, suspects=True).sought.judged.plan
    released = {h.name: h.positive for h in sought.hypotheses}
    assert released["lactate"] is Standing.MODEL
    assert released["glycerol"] is Standing.COMMON


def test_oxygen_is_not_released_and_nitrogen_only_where_nitrate_is_breathed():
    sought = close(MIXED, BIOMASS, suspects=True).sought.judged.plan
    ways = {h.name: (h.positive, h.negative) for h in sought.hypotheses}
    assert ways["oxygen"] == (Standing.IMPOSSIBLE, Standing.COMMON)
    assert ways["N2O"][0] is Standing.IMPOSSIBLE if "N2O" in ways else True
    nitrate = close(f"{MIXED}A,nitrate,in,1,0.1,mmol/g/h\n", BIOMASS, suspects=True)
    breathed = {h.name: h.positive for h in nitrate.sought.judged.plan.hypotheses}
    assert breathed["N2O"] is Standing.RARE


def test_two_errors_are_found_as_a_pair_where_no_single_one_will_do():
    sound = {
        "glucose in": 10.0, "ethanol out": 8.0, "acetate out": 6.0, "formate out": 12.0,
        "CO2 out": 3.0, "hydrogen out": 2.0, "lactate out": 2.75, "ammonia in": 1.0,
        "glutamate out": 1.0,
    }  # fmt: skip
    # 60 C = 16 + 12 + 12 + 3 + 8.25 + 5, less what is left; electrons and nitrogen close as well
    text = "".join(
        f"A,{name.split()[0]},{name.split()[1]},{value},{0.01 * value},mmol/g/h\n"
        for name, value in sound.items()
    )
    closed = close(text)
    assert closed.test.dof == 3
    first = {r.species: r.reconciled for r in closed.rates}
    rows = "".join(
        f"A,{name.split()[0]},{name.split()[1]},"
        f"{first[name.split()[0]] * wrong.get(name, 1.0)!r},{0.01 * value},mmol/g/h\n"
        for name, value in sound.items()
        for wrong in ({"glutamate out": 1.3, "hydrogen out": 0.3},)
    )
    told = look(rows)
    assert not told.explained
    assert told.pairs
    pairs = [{p.first.name, p.second.name} for p in told.pairs]
    assert {"glutamate", "hydrogen"} in pairs
    found = next(p for p in told.pairs if {p.first.name, p.second.name} == pairs[0])
    assert found.h_left == pytest.approx(0, abs=1e-6) or found.h_left < told.group[0].h_left
    both = next(p for p in told.pairs if {p.first.name, p.second.name} == {"glutamate", "hydrogen"})
    for one in (both.first, both.second):
        assert one.would_be == pytest.approx(first[one.name], rel=1e-6)


def test_something_missing_is_told_by_its_electrons_per_carbon():
    # succinate holds 14 electrons and four carbons
    text = """A,glucose,in,10,0.02,mmol/g/h
A,ethanol,out,10,0.02,mmol/g/h
A,acetate,out,6,0.02,mmol/g/h
A,CO2,out,12.0,0.02,mmol/g/h
"""
    whole = look(text)
    told = whole.missing
    # C: 60 - 20 - 12 - 12 = 16; electrons: 240 - 120 - 48 = 72
    assert told.gamma == pytest.approx(72 / 16)
    assert told.carbon == pytest.approx(16)
    assert told.low < 72 / 16 < told.high


def test_without_redundancy_there_are_no_suspects():
    run = close("A,glucose,in,2,0.1,mmol/g/h\n", suspects=True)
    assert run.test.h is None or run.suspects is not None
    alone = close(
        "A,glucose,in,,,mmol/g/h\nA,ethanol,out,3,0.1,mmol/g/h\nA,CO2,out,,,mmol/g/h\n",
        suspects=True,
    )
    assert alone.test.dof == 0
    assert alone.suspects is None
    assert "nothing is redundant" in alone.words


def test_exact_rates_that_contradict_one_another_are_told_and_not_weighed():
    run = close(ETHANOL.replace(",0.2,", ",0,").replace(",0.4,", ",0,"), suspects=True)
    assert run.contradictions
    assert run.suspects is None
    assert "contradict" in run.words


def test_exact_rates_are_no_suspects_and_what_would_break_them_is_none():
    told = look(ETHANOL.replace("10.0,0.2", "10.0,0"))
    assert {s.name for s in told.all if s.kind is SuspectKind.MEASURED_RATE} == {"ethanol", "CO2"}
    # glucose and CO2 exact leave one relation among exact values, which nothing may break
    sharp = ETHANOL.replace("10.0,0.2", "10.0,0").replace("19.6,0.4", "20,0")
    left = look_at_all(sharp, "")
    assert "ethanol" in left
    assert "lactate" not in left


def test_one_relation_explains_every_suspect_fully():
    told = look(ETHANOL.replace("19.6,0.4", ","))
    assert told.dof == 1
    assert told.distinct == 1
    assert all(s.h_left == pytest.approx(0, abs=1e-9) for s in told.all)
    assert all(s.separation is None for s in told.all)


def test_runs_that_close_are_not_looked_into_unless_asked():
    whole = table(f"{ETHANOL}{ETHANOL.replace('A,', 'B,').replace('18.6', '19.8')}")
    first, second = close_rates(whole).runs
    assert first.suspects is not None
    assert second.suspects is None
    assert all(run.suspects is not None for run in close_rates(whole, suspects=True).runs)
    assert all(run.suspects is None for run in close_rates(whole, suspects=False).runs)


def test_runs_weighed_together_are_the_runs_by_themselves():
    lines = [
        ETHANOL.replace("A,", f"R{k},").replace("18.6,0.4", f"{17 + k},{0.3 + 0.1 * k}")
        for k in range(4)
    ]
    together = close_rates(table("".join(lines)), suspects=True).runs
    for run, text in zip(together, lines, strict=True):
        alone = close_rates(table(text), suspects=True).runs[0].suspects
        assert [s.name for s in run.suspects.all] == [s.name for s in alone.all]
        for a, b in zip(run.suspects.all, alone.all, strict=True):
            assert a.h_left == pytest.approx(b.h_left)
            assert a.size == pytest.approx(b.size)




FORMATE = """
basis mmol/g/h
substrate glucose
product lactate, acetate, ethanol, formate
carrier ATP carries energy
carrier NADH
inside pyruvate, acetyl-CoA
compartment all
    glycolysis : glucose -> 2 pyruvate + 2 ATP + 2 NADH
    ldh : pyruvate + NADH -> lactate
    pfl : pyruvate -> acetyl-CoA + formate
    adh : acetyl-CoA + 2 NADH -> ethanol
    ack : acetyl-CoA -> acetate + ATP
    upkeep : ATP -> nothing
"""
NO_ACETATE = """A,glucose,in,5,0.1,mmol/g/h
A,lactate,out,2,0.05,mmol/g/h
A,ethanol,out,4,0.1,mmol/g/h
A,formate,out,8,0.2,mmol/g/h
"""


def test_a_product_of_the_model_without_a_row_is_thought_of_first():
    network = read_model_text(FORMATE).network
    told = look(NO_ACETATE, network=network)
    first, *others = told.group
    assert (first.name, first.standing, first.is_declared) == ("acetate", Standing.MODEL, True)
    assert first.size == pytest.approx(4.0, abs=0.05)
    assert {s.name for s in others if s.direction_number == first.direction_number} >= {
        "glucose", "lactate",
    }
    assert not any(s.is_declared for s in others)
    advice = next(
        block.text
        for block in suspect_blocks(told, "A")
        if isinstance(block, Sentence) and block.text.startswith("To do")
    )
    assert advice == (
        f"To do: acetate is a product of the model and has no row; measure it (it would have to "
        f"be {would_be_words(first)} mmol/g/h). glucose in and lactate out explain it equally well."
    )


def test_without_a_model_no_product_is_declared():
    told = look(NO_ACETATE)
    assert not any(s.is_declared for s in told.all)
