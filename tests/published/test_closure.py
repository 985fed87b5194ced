"""Published fermentation balances through a rates table and the closure of it.

Each published set is written as a table of rates, read as a user's file is read, and closed.
"""

from __future__ import annotations

import json
from pathlib import Path

import pytest

import fluxnet as fx
from fluxnet.cli.main import run as command
from fluxnet.solving.statistics import chi_squared_quantile
from fluxnet.studies.closure_result import RunClosure

HEAD = "run,species,direction,rate,sd,unit\n"


def close(text: str) -> RunClosure:
    return close_table(HEAD + text)


def close_table(text: str) -> RunClosure:
    closure = fx.closure(fx.read_rates_text(text)).result
    assert closure.diagnostics == ()
    (run,) = closure.runs
    return run


def amounts(taken: str, made: str, unit: str = "mmol/L") -> str:
    """A table of one run from two lists of `name amount`."""
    lines: list[str] = []
    for direction, side in (("in", taken), ("out", made)):
        for item in side.split("; "):
            name, value = item.rsplit(" ", 1)
            lines.append(f'run,"{name}",{direction},{value},,{unit}')
    return "\n".join(lines) + "\n"


def recovery(run: RunClosure, name: str) -> float:
    balance = run.find_balance(name)
    assert balance is not None
    assert balance.recovery is not None
    return balance.recovery


@pytest.mark.parametrize(
    ("dof", "printed"), [(1, 3.84), (2, 5.99), (3, 7.81), (4, 9.49), (5, 11.1)]
)
def test_limits_of_the_test_are_those_of_a_printed_table(dof: int, printed: float) -> None:
    """A textbook's Table 3.5, p. 85, column 0.95, quoted without its title; 0.01 relative."""
    assert chi_squared_quantile(0.95, dof) == pytest.approx(printed, rel=0.01)


@pytest.mark.parametrize(
    ("rows", "dof", "printed"),
    [
        ("glucose,in,1;ethanol,out,2;CO2,out,", 1, 3.84),
        ("glucose,in,1;ethanol,out,2;CO2,out,2", 2, 5.99),
        ("glucose,in,1;ethanol,out,1.8;CO2,out,2;ammonia,in,0.02;biomass,out,0.1", 3, 7.81),
        ("cysteine,in,1;sulfate,out,1;ammonia,out,1;CO2,out,3;oxygen,in,4.5", 4, 9.49),
        (
            "cysteine,in,1;sulfate,out,1;ammonia,out,1;CO2,out,3;oxygen,in,4.5;"
            "dihydroxyacetone-phosphate,in,0.1;phosphate,out,0.1",
            5, 11.1,
        ),
    ],
)  # fmt: skip
def test_a_closure_reports_the_limits_of_a_printed_table(
    rows: str, dof: int, printed: float, tmp_path: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    """The same column as the limit that ``fluxnet closure --json`` gives, one to five balances."""
    path = tmp_path / "rates.csv"
    lines = (row.split(",") for row in rows.split(";"))
    text = "".join(f"run,{n},{d},{v},{'0.1' if v else ''},mmol\n" for n, d, v in lines)
    path.write_text(HEAD + text, encoding="utf-8")
    command(["closure", str(path), "--json"])
    (run,) = json.loads(capsys.readouterr().out)["runs"]
    assert run["test"]["dof"] == dof
    assert run["test"]["limit"] == pytest.approx(printed, rel=0.01)


def test_two_constraints_in_closed_form() -> None:
    """Worked by hand: the mean of 10.0, 9.3 and 9.8 is 9.7. h = e' P^-1 e, P = E V E'.

    Formula after Wang and Stephanopoulos (1983), as quoted; numbers computed, 1e-6.
    """
    run = close(
        "run,glucose,in,10.0,0.2,mmol/g/h\n"
        "run,ethanol,out,18.6,0.4,mmol/g/h\n"
        "run,CO2,out,19.6,0.4,mmol/g/h\n"
    )
    found = {rate.species: rate.reconciled for rate in run.rates}
    assert found == pytest.approx({"glucose": 9.7, "ethanol": 19.4, "CO2": 19.4}, abs=1e-6)
    assert run.test.h == pytest.approx(6.5, abs=1e-6)
    assert run.test.dof == 2
    assert run.test.p == pytest.approx(0.03877, abs=1e-5)
    assert run.test.closes is False


def test_reconciled_yeast_rates_close() -> None:
    """The reconciled rates of a textbook's Examples 3.11 and 3.12, p. 85 f. (title not quoted).

    Carbon is off by 0.001 and electrons by 0.0046: zero to the printed digits. The sd of
    0.005 is ours, the source's are not known: equal weights, two degrees of freedom, and far
    too small an h to raise suspicion.
    """
    unit = "C-mol/L/h"
    run = close(
        f"run,glucose,in,0.142,0.005,{unit}\n"
        "run,oxygen,in,0.060,0.005,mol/L/h\n"
        "run,CO2,out,0.064,0.005,mol/L/h\n"
        f"run,biomass,out,0.077,0.005,{unit}\n"
    )
    carbon, electrons = run.find_balance("carbon"), run.find_balance("electrons")
    assert carbon is not None
    assert electrons is not None
    assert run.unit == "mmol/L/h"
    assert carbon.gap / 1000 == pytest.approx(-0.001, abs=1e-9)
    assert electrons.gap / 1000 == pytest.approx(-0.0046, abs=1e-9)
    assert run.test.dof == 2
    assert run.test.closes


@pytest.mark.parametrize(
    ("taken", "made", "carbon", "electrons", "printed", "slips"),
    [
        ("acetate 29.8; lactate 40.9", "formate 0.1; butyrate 35.6; H2 13.0; CO2 40.9",
         100.60, 101.23, (100.5, 101.3), (True, True)),
        ("acetate 26.1; lactate 38.4", "formate 0.4; butyrate 29.6; H2 15.5; CO2 38.4",
         93.91, 93.16, (93.7, 93.2), (True, False)),
        ("glucose 10.2", "formate 2.0; acetate 2.7; butyrate 8.0; H2 12.0; CO2 18.4",
         94.44, 85.62, (94.4, 85.6), (False, False)),
    ],
)  # fmt: skip
def test_butyrate_producers(
    taken: str,
    made: str,
    carbon: float,
    electrons: float,
    printed: tuple[float, float],
    slips: tuple[bool, bool],
) -> None:
    """Duncan, Louis and Flint 2004, Appl. Environ. Microbiol. 70:5810, Table 3, as quoted.

    Measured data; recoveries recomputed (0.05). ``slips`` marks printed recoveries that the
    printed amounts do not give within half a printed digit. L- and D-lactate are added up;
    the authors calculated CO2.
    """
    run = close(amounts(taken, made))
    found = (recovery(run, "carbon"), recovery(run, "electrons"))
    assert found == pytest.approx((carbon, electrons), abs=0.05)
    off = tuple(abs(f - p) for f, p in zip(found, printed, strict=True))
    assert tuple(gap > 0.055 for gap in off) == slips
    assert max(off) < 0.25


@pytest.mark.parametrize(
    ("other", "carbon", "electrons"),
    [("acetate", 99.70, 93.88), ("lactate", 96.39, 90.76)],
)
def test_butyrate_producer_with_a_second_substrate_of_unknown_name(
    other: str, carbon: float, electrons: float
) -> None:
    """The second run of the same table: A. caccae L1-92 on glucose 10.4 and 2.3 mM of another.

    The values were quoted to us without the other's name, so that no printed recovery can be
    met; what a correct balance gives for either reading is computed by hand (0.05). Out: carbon
    2.2 + 4 x 11.5 + 18.6 = 66.8, electrons 2 x 2.2 + 20 x 11.5 + 2 x 8.6 = 251.6. In: carbon
    62.4 + 2 x 2.3 or + 3 x 2.3, electrons 249.6 + 8 x 2.3 or + 12 x 2.3. Printed are 96.4 and
    95.5 %: the three-carbon acid gives the carbon, and neither gives the electrons.
    """
    run = close(amounts(
        f"glucose 10.4; {other} 2.3", "formate 2.2; butyrate 11.5; H2 8.6; CO2 18.6"
    ))  # fmt: skip
    assert recovery(run, "carbon") == pytest.approx(carbon, abs=0.05)
    assert recovery(run, "electrons") == pytest.approx(electrons, abs=0.05)
    assert abs(recovery(run, "electrons") - 95.5) > 1


def test_mixed_acid_fermentation() -> None:
    """Wood 1961, Gottschalk, Bacterial Metabolism: recalled (92 %); the arithmetic computed."""
    run = close(amounts(
        "glucose 100",
        "formate 2.4; acetate 36.5; lactate 79.5; succinate 10.7; ethanol 49.8; "
        "2,3-butanediol 0.3; CO2 88.0; H2 75.0",
        "mmol",
    ))  # fmt: skip
    assert recovery(run, "carbon") == pytest.approx(90.9, abs=0.1)
    assert recovery(run, "electrons") == pytest.approx(89.8, abs=0.1)
    assert run.or_index == pytest.approx(189.1 / 175.5, abs=0.002)


@pytest.mark.parametrize(
    ("made", "carbon", "electrons", "index"),
    [
        ("butyrate 76; acetate 42; CO2 188; H2 235", 96.0, 96.9, 0.972),
        ("butyrate 34; acetate 60; lactate 33; ethanol 26; CO2 176; H2 214", 97.2, 95.7, 1.054),
    ],
)
def test_clostridia(made: str, carbon: float, electrons: float, index: float) -> None:
    """Gottschalk, table of clostridial fermentations, per 100 glucose: recalled (90 %)."""
    run = close(amounts("glucose 100", made, "mmol"))
    assert recovery(run, "carbon") == pytest.approx(carbon, abs=0.1)
    assert recovery(run, "electrons") == pytest.approx(electrons, abs=0.1)
    assert run.or_index == pytest.approx(index, abs=0.002)


def test_glucose_equivalents_of_a_butanol_producer() -> None:
    """Engineered Escherichia coli EB216 after 72 h, mM, as quoted; shares recomputed (0.1).

    Glucose equivalents count what glycolysis split off as CO2 with each two-carbon unit: the
    product's equivalent is the carbon of the pyruvate that it is made of. So each share is
    the carbon of product and that CO2, which this table gives in its own rows.
    """
    made = {"pyruvate": (15.45, 0), "lactate": (8.64, 0), "acetate": (1.38, 1),
            "ethanol": (18.53, 1), "butyrate": (2.06, 2), "butanol": (22.84, 2)}  # fmt: skip
    expected = {"pyruvate": 16.7, "lactate": 9.3, "acetate": 1.5, "ethanol": 20.0,
                "butyrate": 4.4, "butanol": 49.2}  # fmt: skip
    for name, (value, gas) in made.items():
        alone = close(amounts("glucose 46.39", f"{name} {value}; CO2 {value * gas:.4f}"))
        assert recovery(alone, "carbon") == pytest.approx(expected[name], abs=0.1), name
    gas = sum(value * gas for value, gas in made.values())
    rows = "; ".join(f"{name} {value}" for name, (value, _) in made.items())
    text = amounts("glucose 46.39", f"{rows}; CO2 {gas:.4f}")
    whole = close(text + "run,biomass,out,15.42,,C-mmol/L\n")
    assert recovery(whole, "carbon") == pytest.approx(106.6, abs=0.1)
    cells = recovery(whole, "carbon") - recovery(close(text), "carbon")
    assert cells == pytest.approx(5.5, abs=0.1)


def test_wine_yeast_on_a_mass_basis() -> None:
    """Pasteur's classical balance, as quoted; recoveries of the four named products computed."""
    run = close(amounts(
        "glucose 100.0", "ethanol 48.4; CO2 46.6; glycerol 3.3; succinate 0.6", "g"
    ))  # fmt: skip
    assert recovery(run, "carbon") == pytest.approx(98.72, abs=0.05)
    assert recovery(run, "electrons") == pytest.approx(98.94, abs=0.05)


def test_anaerobic_yeast() -> None:
    """Schulze 1995, textbook example: recalled (85 %). Yields per C-mol of glucose.

    The gamma 4.18 is that of CH1.78O0.5N0.2; 4.238 would close the electrons exactly.
    """
    lines = [("glucose", "in", 1), ("ethanol", "out", 0.510), ("CO2", "out", 0.275),
             ("glycerol", "out", 0.077), ("X", "out", 0.137)]  # fmt: skip

    def run_with(cells: str) -> RunClosure:
        table = f"biomass X {cells}\n" + HEAD
        table += "".join(f"run,{n},{d},{v},,C-mol/C-mol\n" for n, d, v in lines)
        return close_table(table)

    run = run_with("CH1.78O0.5N0.2")
    assert recovery(run, "carbon") == pytest.approx(99.9, abs=0.01)
    assert recovery(run, "electrons") == pytest.approx(99.8, abs=0.01)
    assert recovery(run_with("CH1.838O0.5N0.2"), "electrons") == pytest.approx(100.0, abs=0.01)


def test_unmeasured_gases_of_aerobic_yeast() -> None:
    """Lindberg et al. 2013, PLoS ONE 8:e73936, Table 3, as quoted; the gases computed."""
    made = [("ethanol", 0.45), ("acetate", 0.02), ("glycerol", 0.03), ("pyruvate", 0.004),
            ("biomass", 0.15)]  # fmt: skip
    run = close(
        "run,glucose,in,1,0,C-mol/C-mol\n"
        + "".join(f"run,{name},out,{value},5 %,C-mol/C-mol\n" for name, value in made)
        + "run,CO2,out,,,mol/C-mol\nrun,oxygen,in,,,mol/C-mol\n"
    )
    gas, oxygen = run.find_rate("CO2"), run.find_rate("oxygen")
    assert gas is not None
    assert oxygen is not None
    assert gas.kind.value == oxygen.kind.value == "calculable"
    assert gas.reconciled == pytest.approx(0.346, rel=0.01)
    assert oxygen.reconciled == pytest.approx(0.1092, rel=0.01)
    assert run.test.h is None
    assert "nothing is redundant" in run.words


def test_growth_on_hexadecane_at_a_given_respiratory_quotient() -> None:
    """Doran, Bioprocess Engineering Principles, example 4.7: recalled (92 %); computed to 0.001.

    The ratio alone fixes the only freedom that four balances leave.
    """
    table = "species hexadecane C16H34\nbiomass X CH1.66O0.27N0.20\n" + HEAD
    table += "run,hexadecane,in,1,0,mmol\nrun,X,out,,,mmol\nrun,ammonia,in,,,mmol\n"
    table += "run,CO2,out,,,mmol\nrun,oxygen,in,,,mmol\nrun,CO2 out / oxygen in,,0.43,0,\n"
    run = close_table(table)
    found = {rate.species: rate.reconciled for rate in run.rates}
    expected = {"oxygen": 12.488, "ammonia": 2.126, "X": 10.630, "CO2": 5.370}
    for name, amount in expected.items():
        assert found[name] == pytest.approx(amount, abs=0.001), name
