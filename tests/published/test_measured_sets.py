"""Measured sets of Duncan 2004, Wood 1961, Gottschalk, Schulze 1995 and Lindberg 2013 through
the networks in models/.

Each table beside this file names its source and how the values were got. In amounts there is no
time and so no upkeep: ATP tests nothing, and what is tested are carbon and the electrons.
"""

from __future__ import annotations

from pathlib import Path

import pytest

from fluxnet.studies.solution import SolveStatus

HERE = Path(__file__).parent


@pytest.mark.parametrize("table", ["lindberg-2013.csv", "lindberg-2013-rates.csv"])
def test_aerobic_yeast_gives_the_carbon_dioxide_and_oxygen_nobody_measured(ask, table):
    # Computed: carbon 1 - 0.654 = 0.346; electrons (4 - 4.2 x 0.15 - 6 x 0.45 - 4 x 0.02
    # - 4.667 x 0.03 - 3.333 x 0.004) / 4 = 0.1092; RQ 3.17. Tolerance: the digits that are printed.
    run = ask("yeast", HERE / table)
    assert run.status is SolveStatus.SOLVED
    glucose = 6 * run.rate("glucose")  # mmol to C-mmol
    assert run.rate("CO2") / glucose == pytest.approx(0.346, abs=0.0005)
    assert run.rate("oxygen") / glucose == pytest.approx(0.1092, abs=0.0001)
    assert run.rate("CO2") / run.rate("oxygen") == pytest.approx(3.17, abs=0.005)


def test_anaerobic_yeast_fits_the_network(ask):
    # Five yields and three ways for the carbon (ethanol, glycerol, growth): two degrees of freedom.
    run = ask("yeast", HERE / "schulze-1995.csv", variant="anaerobic")
    assert run.status is SolveStatus.SOLVED
    assert run.test.dof >= 2
    assert run.test.p > 0.05
    # Glycerol for this growth, by hand (tests/models): 0.19 mol a C-mol of X, three carbons each.
    glycerol, cells = run.rate("glycerol"), run.rate("X")
    assert glycerol / cells == pytest.approx(0.19, abs=1e-9)


def test_yeast_with_sugar_in_excess_makes_more_atp_than_growth_and_upkeep_take(ask):
    # By hand, ATP per C-mol of glucose at PO = 1 and K_X = 1.45: sugar 0.2535 (hxk -0.1667, pfk
    # -0.1453, lower 2 x 0.2828), cycle 0.0269, quinol 2 x 0.1092, acs -0.0120, growth -0.15 x 1.45:
    # 0.2693 is left. Times 2.87 C-mol/C-mol/h over 26.77 g dry weight per C-mol: 28.9 mmol/g/h.
    run = ask("yeast", HERE / "lindberg-2013-rates.csv")
    assert run.flux("upkeep") == pytest.approx(28.9, abs=0.1)
    # where upkeep is held to be 1 the fit must take the oxygen away again
    tight = ask("yeast", HERE / "lindberg-2013-rates.csv", variant="sugar-limited")
    assert tight.rate("oxygen") < 0.5 * run.rate("oxygen")


def test_mixed_acids_fit_the_network_with_the_cells_that_were_left_out(ask):
    run = ask("mixed-acid", HERE / "mixed-acid.csv", variant="anaerobic")
    assert run.status is SolveStatus.SOLVED
    assert run.test.dof >= 2
    assert run.test.p > 0.05
    # the cells are the missing 9.1 % of 600 mmol carbon, within their error, and not none
    cells = next(r for r in run.rates if r.quantity.name == "X")
    assert abs(cells.reconciled - 0.091 * 600) < 2 * cells.reconciled_sd
    assert cells.reconciled > 2 * cells.reconciled_sd


@pytest.mark.parametrize("place", [0, 1], ids=["butyricum", "perfringens"])
def test_clostridia_fit_the_network_with_the_cells_that_were_left_out(ask, place):
    run = ask("solvent", HERE / "clostridia.csv", place=place)
    assert run.status is SolveStatus.SOLVED
    assert run.test.dof >= 2
    assert run.test.p > 0.05


def test_butyrate_from_lactate_and_acetate(ask):
    run = ask("solvent", HERE / "caccae-on-lactate.csv", variant="no-solvents * acids-fed")
    assert run.status is SolveStatus.SOLVED
    # one CO2 a lactate, as the authors reckoned
    assert run.rate("CO2") == pytest.approx(40.9, rel=0.03)
