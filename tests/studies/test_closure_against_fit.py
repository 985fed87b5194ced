"""A closure and the fit of a model that only balances ask the same question: one answer."""

from __future__ import annotations

import pytest

from fluxnet.network.model import Network
from fluxnet.reading.model import read_model_text
from fluxnet.solving.least_squares import fit_fluxes
from fluxnet.studies.closure import close_rates
from fluxnet.tables.rates_table import read_rates_text

# Three reactions span all that carbon and electrons leave to five species with carbon or oxygen.
MODEL = """model burning, growing and fermenting
basis mmol/g/h
substrate glucose
exchange oxygen, CO2, ammonia, ethanol
biomass X CH1.8O0.5N0.2 ash {ash} %
compartment all
    burn: glucose + 6 oxygen <-> 6 CO2
    grow: 0.175 glucose + 0.2 ammonia <-> X + 0.05 CO2
    ferment: glucose <-> 2 ethanol + 2 CO2
"""
HEAD = "run,species,direction,rate,sd,unit\n"
CORRELATIONS = {
    "absolute": "CO2 out,oxygen in,0.7",
    "relative": "CO2 out,oxygen in,0.7\nCO2 out,glucose in,-0.3",
    "poor": "CO2 out,oxygen in,0.7",
    "ratio": "CO2 out / oxygen in,oxygen in,-0.6",
    "yields": "X out / glucose in,mu / glucose in,0.9\noxygen in,CO2 out / oxygen in,-0.6",
    "blank": "ethanol out,X out,0.4",
    "exact": "CO2 out,oxygen in,0.7",
}
TABLES = {
    "absolute": "glucose,in,2.3,0.1,mmol/g/h;CO2,out,6.9,0.3,mmol/g/h;oxygen,in,5.7,0.3,mmol/g/h;"
    "ethanol,out,0.5,0.05,mmol/g/h;mu,,0.155,0.005,1/h",
    "relative": "glucose,in,2.4,5 %,mmol/g/h;CO2,out,6.1,5 %,mmol/g/h;oxygen,in,5.7,5 %,mmol/g/h;"
    "ethanol,out,0.5,10 %,mmol/g/h;mu,,0.15,3 %,1/h",
    "ratio": "glucose,in,2.3,5 %,mmol/g/h;CO2 out / oxygen in,,1.1,3 %,;"
    "oxygen,in,5.9,5 %,mmol/g/h;ethanol,out,0.5,10 %,mmol/g/h;mu,,0.15,3 %,1/h",
    "yields": "ethanol out / glucose in,,0.055,0.005,g/g;CO2 out / oxygen in,,1.12,3 %,;"
    "oxygen,in,5.9,5 %,mmol/g/h;CO2,out,6.8,10 %,mmol/g/h;mu,,0.15,3 %,1/h;"
    "mu / glucose in,,0.066,0.005,;X out / glucose in,,2.6,0.2,",
    "blank": "glucose,in,2.3,0.1,mmol/g/h;CO2,out,,,mmol/g/h;oxygen,in,5.9,5 %,mmol/g/h;"
    "ethanol,out,0.5,10 %,mmol/g/h;X,out,6,3 %,mmol/g/h",
    "poor": "glucose,in,2.4,5 %,mmol/g/h;CO2,out,6.1,5 %,mmol/g/h;oxygen,in,6.9,5 %,mmol/g/h;"
    "ethanol,out,0.9,40 %,mmol/g/h;mu,,0.15,3 %,1/h",
    "exact": "glucose,in,2.3,0,mmol/g/h;CO2,out,6.9,0.3,mmol/g/h;oxygen,in,5.7,0.3,mmol/g/h;"
    "ethanol,out,0.5,0,mmol/g/h;mu,,0.155,0.005,1/h",
}


def network(ash: str) -> Network:
    reading = read_model_text(MODEL.format(ash=ash))
    assert reading.network is not None, [d.message for d in reading.diagnostics]
    return reading.network


@pytest.mark.parametrize("table", list(TABLES))
@pytest.mark.parametrize("before", ["", "shared error biomass 6 %\n"], ids=["", "shared"])
@pytest.mark.parametrize("correlated", [False, True], ids=["", "correlated"])
@pytest.mark.parametrize(("ash", "close"), [("0", 1e-9), ("8 ± 2", 5e-3)], ids=["", "ash"])
def test_one_answer(
    table: str, before: str, correlated: bool, ash: str, close: float
) -> None:
    """Exactly; with an uncertain ash, which the fit moves in a curve, to first order."""
    model = network(ash)
    lines = "".join(f"A,{line}\n" for line in TABLES[table].split(";"))
    pairs = f"first,second,correlation\n{CORRELATIONS[table]}\n" if correlated else None
    reading = read_rates_text(before + HEAD + lines, network=model, covariance=pairs)
    assert reading.table is not None, [d.message for d in reading.diagnostics]
    (run,) = close_rates(reading.table, network=model).runs
    fit = fit_fluxes(model, reading.table.runs[0])
    assert run.test.dof == fit.dof
    assert run.test.h == pytest.approx(float(fit.h or 0), rel=1e-9 if ash == "0" else 1e-3)
    told = {row.name: row for row in fit.rows}
    for rate in run.rates:
        name = rate.species if rate.direction is None else f"{rate.species} {rate.direction.value}"
        if name not in told:
            continue
        assert rate.reconciled == pytest.approx(told[name].value, rel=close)
        assert rate.reconciled_sd == pytest.approx(told[name].value_sd or 0, rel=close, abs=1e-9)


def test_one_answer_for_two_kinds_of_cells_with_uncertain_ash() -> None:
    text = MODEL.format(ash="8 ± 2").replace(
        "compartment all\n",
        "biomass Y CH2O0.5N0.1 ash 5 ± 3 %\ncompartment all\n"
        "    other: ? glucose + 0.1 ammonia <-> Y + ? CO2\n",
    )
    reading = read_model_text(text)
    assert reading.network is not None, [d.message for d in reading.diagnostics]
    lines = ("A,glucose,in,2.4,0.1,mmol/g/h\nA,CO2,out,5.2,0.3,mmol/g/h\nA,X,out,4,0.2,mmol/g/h\n"
             "A,oxygen,in,4.9,0.3,mmol/g/h\nA,ethanol,out,0.5,0.05,mmol/g/h\n"
             "A,Y,out,3,0.3,mmol/g/h\nA,mu,,0.19,0.004,1/h\n")  # fmt: skip
    table = read_rates_text(HEAD + lines, network=reading.network).table
    assert table is not None
    (run,) = close_rates(table, network=reading.network).runs
    fit = fit_fluxes(reading.network, table.runs[0])
    assert run.test.dof == fit.dof == 3
    assert run.test.h == pytest.approx(float(fit.h or 0), rel=1e-4)
    assert [r.species for r in run.rates] == [
        "glucose", "CO2", "X", "oxygen", "ethanol", "Y", "mu"
    ]  # fmt: skip
    told = {row.name: row for row in fit.rows}
    for name, shown in (("X", "X out"), ("Y", "Y out"), ("mu", "mu")):
        found = run.find_rate(name)
        assert found is not None
        assert found.reconciled == pytest.approx(told[shown].value, rel=1e-3)
        assert found.reconciled_sd == pytest.approx(told[shown].value_sd or 0, rel=5e-3)


FAR_OFF = (
    "A,glucose,in,2.4,5 %,mmol/g/h\nA,CO2,out,2.1,5 %,mmol/g/h\nA,oxygen,in,9,5 %,mmol/g/h\n"
    "A,ethanol,out,0.5,10 %,mmol/g/h\nA,mu,,0.15,3 %,1/h\n"
)


@pytest.mark.parametrize("before", ["", "shared error biomass 6 %\n"], ids=["", "shared"])
def test_one_answer_far_off(before: str) -> None:
    """Both leave the sds of such rates as typed."""
    model = network("0")
    table = read_rates_text(before + HEAD + FAR_OFF, network=model).table
    assert table is not None
    (run,) = close_rates(table, network=model).runs
    fit = fit_fluxes(model, table.runs[0])
    assert run.test.h == pytest.approx(float(fit.h or 0), rel=1e-9)
    assert (run.test.p or 0) < 1e-6
