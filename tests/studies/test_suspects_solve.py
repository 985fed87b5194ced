"""What could be wrong with rates by their network: suspects against fits that leave it free."""

from __future__ import annotations

from dataclasses import replace
from hashlib import sha256

import numpy as np
import pytest

import fluxnet as fx
from fluxnet.network.model import Direction
from fluxnet.rates.measured import Run
from fluxnet.solving.least_squares import fit_fluxes
from fluxnet.studies.suspect_result import Standing, SuspectKind, Suspects
from fluxnet.studies.suspects_solve import seek_flux_suspects

MODEL = """\
model      Fermenting and burning
basis      mmol/g/h
substrate  glucose, ammonia, oxygen
product    ethanol, acetate, lactate
exchange   CO2
biomass    X  CH1.8O0.5N0.2  ash {ash} %
carrier    ATP   carries energy
carrier    NADH  carries 2 electrons
inside     pyruvate, acetyl-CoA
parameter  PO  = 1.2 {po}
parameter  K_X = 2.0 {kx}
compartment all
    glycolysis : glucose -> 2 pyruvate + 2 ATP + 2 NADH
    pdh        : pyruvate -> acetyl-CoA + CO2 + NADH
    cycle      : acetyl-CoA -> 2 CO2 + 4 NADH + ATP
    oxphos     : NADH + 0.5 oxygen -> PO ATP
    adh        : acetyl-CoA + 2 NADH -> ethanol
    ack        : acetyl-CoA -> acetate + ATP
    ldh        : pyruvate + NADH -> lactate
    growth     : ? glucose + 0.2 ammonia + K_X ATP -> X + ? CO2 + 0.1 NADH
    upkeep     : ATP -> nothing
{more}
"""
HEAD = "run,species,direction,rate,sd,unit\n"
RATES = """A,glucose,in,6.575,0.15,mmol/g/h
A,oxygen,in,{oxygen},{oxygen_sd},mmol/g/h
A,CO2,out,13.537,0.3,mmol/g/h
A,ethanol,out,4.6,0.1,mmol/g/h
A,acetate,out,{acetate},0.1,mmol/g/h
A,lactate,out,1.066,0.05,mmol/g/h
A,mu,,0.25,0.005,1/h
A,flux upkeep,,14.5,0.5,mmol/g/h
"""


def model(po: str = "", kx: str = "", more: str = "", ash: str = "5") -> fx.Model:
    return fx.read_model_text(MODEL.format(po=po, kx=kx, more=more, ash=ash))


def run_of(which: fx.Model, **values: object) -> Run:
    text = HEAD + RATES.format(**{"oxygen": 9.2, "oxygen_sd": 0.2, "acetate": 2.07} | values)
    return fx.read_rates_text(text, which).runs[0]


def look(which: fx.Model, run: Run) -> Suspects:
    found = seek_flux_suspects(fit_fluxes(which.network, run), "mmol/g/h")
    assert found is not None
    return found


def blanked(run: Run, name: str) -> Run:
    return replace(run, rates=tuple(
        replace(r, value=None, sd=None) if name in (r.quantity.name, str(r.quantity)) else r
        for r in run.rates
    ))  # fmt: skip


def test_h_is_that_of_the_fit():
    for which in (model(), model("± 0.2", "± 0.3")):
        run = run_of(which)
        assert look(which, run).h == pytest.approx(fit_fluxes(which.network, run).h, rel=1e-9)


def test_a_suspected_rate_leaves_the_h_of_a_fit_that_does_not_measure_it():
    which = model()
    run = run_of(which)
    told = look(which, run)
    rates = [s for s in told.all if s.kind is SuspectKind.MEASURED_RATE]
    assert len(rates) == 8
    for one in rates:
        fit = fit_fluxes(which.network, blanked(run, one.name))
        assert one.h_left == pytest.approx(fit.h or 0.0, rel=1e-8, abs=1e-9), one.name
        if one.name not in ("mu", "flux upkeep"):
            value = next(r for r in (*fit.rates, *fit.rows) if r.quantity.name == one.name)
            assert one.would_be == pytest.approx(value.value, rel=1e-7), one.name
            assert one.would_be_sd == pytest.approx(value.value_sd, rel=1e-6), one.name


def test_a_suspected_parameter_leaves_the_h_of_a_fit_that_knows_nothing_of_it():
    # the slopes are those at the fit, so a parameter that enters nonlinearly agrees to first order
    known, unknown = model("± 0.1", "± 0.1"), model("± 100 in [0, 1000]", "± 0.1")
    told = look(known, run_of(known)).find("PO")
    free = fit_fluxes(unknown.network, run_of(unknown))
    assert told.kind is SuspectKind.PARAMETER
    assert told.h_left == pytest.approx(free.h, rel=0.02)
    moved = next(m for m in free.moved if m.name == "PO")
    assert told.would_be == pytest.approx(moved.moved, rel=0.05)


@pytest.mark.parametrize("carrier", ["ATP", "NADH"])
def test_a_carrier_spent_beside_leaves_the_h_of_a_model_with_a_line_that_spends_it(carrier):
    which = model()
    text = MODEL.format(po="", kx="", ash="5", more="    waste : ATP <-> nothing")
    if carrier == "NADH":  # its electrons go to a compound of their own
        text = text.replace("waste : ATP <-> nothing", "waste : NADH <-> sink")
        text = text.replace("exchange   CO2\n", "exchange   CO2\nexchange   sink H2\n")
    wider = fx.read_model_text(text)
    fit = fit_fluxes(wider.network, run_of(wider))
    left, size = left_by(which, run_of(which), carrier)
    assert left == pytest.approx(fit.h, rel=1e-8)
    assert size == pytest.approx(fit.fluxes[list(fit.reactions).index("waste")], rel=1e-7)


def left_by(which: fx.Model, run: Run, name: str) -> tuple[float, float]:
    """h left and size of a suspect, also of one outside of the first group."""
    from fluxnet.studies import suspects_solve

    seen: list[tuple[float, float]] = []
    told = suspects_solve.tell_suspects

    def spy(judged, place):
        for i, one in enumerate(judged.plan.hypotheses):
            if one.name == name:
                arrays = judged.arrays
                seen.append((float(arrays.h_left[place, i]), float(arrays.sizes[place, i])))
        return told(judged, place)

    suspects_solve.tell_suspects = spy
    try:
        look(which, run)
    finally:
        suspects_solve.tell_suspects = told
    return seen[0]


def test_the_truth_of_a_wrong_rate_is_found():
    which = model("± 0.2", "± 0.3")
    told = look(which, run_of(which, oxygen=8.55, acetate=4.0))
    best = told.group[0]
    assert best.name == "acetate"
    assert best.measured == 4.0
    assert abs(best.would_be - 2.07) < 3 * best.would_be_sd


def test_numbers_that_act_on_one_balance_alone_are_exact_twins():
    which = model("± 0.2", "± 0.3")
    told = look(which, run_of(which))
    upkeep = told.find("flux upkeep")
    assert {"PO", "K_X", "ATP"} <= set(upkeep.twins)
    assert len({told.find(n).direction_number for n in ("flux upkeep", "PO", "K_X")}) == 1


def test_a_value_out_of_a_parameters_range_is_not_possible():
    narrow = model("± 0.01 in [1.19, 1.21]", "± 0.01 in [1.99, 2.01]")
    told = look(narrow, run_of(narrow, oxygen=7.0))
    for name in ("PO", "K_X"):
        one = told.find(name)
        assert not one.possible
        assert one.why_not in ("it would be above its limit", "it would be below its limit")


def test_what_a_limit_closes_is_suspected_to_leak():
    # without air no electrons are left over: the run asks for some oxygen all the same
    text = MODEL.format(po="", kx="", ash="5", more="\nlimit oxygen <= 0")
    which, open_model = fx.read_model_text(text), model()
    rows = (
        "A,glucose,in,10,0.2,mmol/g/h\nA,CO2,out,17,0.2,mmol/g/h\nA,ethanol,out,15.5,0.2,mmol/g/h\n"
        "A,lactate,out,2,0.1,mmol/g/h\nA,acetate,out,0.4,0.1,mmol/g/h\nA,mu,,0.02,0.01,1/h\n"
    )
    run = fx.read_rates_text(HEAD + rows, which).runs[0]
    left, size = left_by(which, run, "oxygen")
    fit = fit_fluxes(open_model.network, fx.read_rates_text(HEAD + rows, open_model).runs[0])
    assert fit.h is not None
    assert left == pytest.approx(fit.h, rel=1e-8)
    taken = next(r for r in fit.rates if r.quantity.name == "oxygen")
    assert -size == pytest.approx(taken.value, rel=1e-7)


def test_oxygen_that_leaks_in_is_told_as_taken_up():
    text = MODEL.format(po="", kx="", ash="5", more="\nlimit oxygen <= 0")
    which = fx.read_model_text(text)
    rows = "A,glucose,in,10,0.2,mmol/g/h\nA,CO2,out,19,0.2,mmol/g/h\n"
    rows += "A,ethanol,out,15.5,0.2,mmol/g/h\nA,lactate,out,2,0.1,mmol/g/h\n"
    rows += "A,acetate,out,1.4,0.1,mmol/g/h\n"
    leak = look(which, fx.read_rates_text(HEAD + rows, which).runs[0]).find("oxygen")
    assert leak.kind is SuspectKind.UNMEASURED_SPECIES
    assert leak.direction is Direction.IN
    assert leak.possible


def test_a_sound_run_is_not_looked_into_unless_asked():
    which = model()
    sound = "".join(
        f"A,{name},{way},{value},{sd},{unit}\n"
        for name, way, value, sd, unit in (
            ("glucose", "in", 10, 1, "mmol/g/h"), ("ethanol", "out", 18, 3, "mmol/g/h"),
            ("oxygen", "in", 2, 3, "mmol/g/h"), ("CO2", "out", 20, 3, "mmol/g/h"),
            ("mu", "", 0.01, 0.05, "1/h"),
        )
    )  # fmt: skip
    rates = fx.read_rates_text(HEAD + sound, which)
    plain = fx.solve(which, rates).runs[0]
    asked = fx.solve(which, rates, suspects=True).runs[0]
    assert plain.test.closes
    assert plain.suspects is None
    assert asked.suspects is not None
    assert "no sign of an error" in str(fx.solve(which, rates, suspects=True))


def test_without_redundancy_nothing_is_suspected():
    which = model()
    rates = fx.read_rates_text(f"{HEAD}A,glucose,in,10,0.2,mmol/g/h\n", which)
    assert fx.solve(which, rates, suspects=True).runs[0].suspects is None


def test_a_carrier_stands_with_the_model_where_it_is_spent():
    which = model("± 0.2", "± 0.3")
    told = look(which, run_of(which, oxygen=12.0))
    for one in told.all:
        if one.kind is SuspectKind.CARRIER and one.name in ("ATP", "NADH"):
            assert one.standing is (Standing.MODEL if one.size >= 0 else Standing.RARE)


@pytest.mark.parametrize(
    "count", [40, pytest.param(300, marks=pytest.mark.slow)], ids=["small", "large"]
)
def test_the_truth_is_among_the_suspects_of_a_network(count, request):
    random = np.random.default_rng(int(sha256(request.node.name.encode()).hexdigest()[:15], 16))
    which = model("± 0.1", "± 0.15")
    point = fit_fluxes(which.network, run_of(which))
    truth = {row.name: row.value for row in point.rows}
    held: list[bool] = []
    run = run_of(which)
    for _ in range(count):
        names = [str(r.quantity) for r in run.rates]
        wrong = int(random.integers(len(names)))
        rates = []
        for k, rate in enumerate(run.rates):
            value = truth[names[k]] + rate.sd * random.standard_normal()
            if k == wrong:
                value += rate.sd * random.uniform(4, 8) * random.choice([-1, 1])
            rates.append(replace(rate, value=float(value)))
        parameters = tuple(
            replace(p, value=type(p.value)(repr(float(
                next(m.moved for m in point.moved if m.name == p.name)
                + float(p.sd) * random.standard_normal()
            ))))
            for p in which.network.parameters
        )  # fmt: skip
        network = replace(which.network, parameters=parameters)
        told = seek_flux_suspects(fit_fluxes(network, replace(run, rates=tuple(rates))), "")
        number = told.find(run.rates[wrong].quantity.name or names[wrong])
        number = number or told.find(names[wrong])
        held.append(any(s.direction_number == number.direction_number for s in told.group))
    assert np.mean(held) >= (0.92 if count > 100 else 0.85)
