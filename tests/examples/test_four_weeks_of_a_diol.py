"""The first example: its truth is known, and the answers must find it."""

from __future__ import annotations

import importlib.util
import sys
from pathlib import Path
from types import ModuleType

import pytest

import fluxnet as fx
from fluxnet.studies.solution import SolveStatus

FOLDER = Path(__file__).resolve().parents[2] / "examples" / "1-four-weeks-of-a-diol"
RUNS = ("W09", "W11", "W14", "W15")


@pytest.fixture(scope="module")
def script() -> ModuleType:
    # no compiled copy is left in a folder that is packed as it stands
    write, sys.dont_write_bytecode = sys.dont_write_bytecode, True
    spec = importlib.util.spec_from_file_location("make_rates", FOLDER / "make_rates.py")
    assert spec is not None
    assert spec.loader is not None
    module = importlib.util.module_from_spec(spec)
    sys.modules["make_rates"] = module
    spec.loader.exec_module(module)
    sys.dont_write_bytecode = write
    return module


@pytest.fixture(scope="module")
def model() -> fx.Model:
    return fx.read_model(FOLDER / "tw4.flux")


@pytest.fixture(scope="module")
def rates(model) -> fx.Rates:
    return fx.read_rates(FOLDER / "rates.csv", model)


def test_the_table_is_what_the_script_writes(script):
    assert (FOLDER / "rates.csv").read_text(encoding="utf-8") == script.make_table()


def test_the_model_has_neither_error_nor_warning(model):
    assert not fx.check(model).diagnostics


@pytest.mark.parametrize("place", range(4), ids=RUNS)
def test_the_truth_obeys_the_model_and_leaves_the_true_upkeep(script, place):
    text = (FOLDER / "tw4.flux").read_text(encoding="utf-8")
    for old, new in (
        ("PO  = 1.2 ± 0.15", f"PO  = {script.PO}"),
        ("K_X = 2.1 ± 0.2", f"K_X = {script.K_X}"),
        ("limit      upkeep = 4.0 ± 0.4", ""),
    ):
        assert old in text
        text = text.replace(old, new)
    true_model = fx.read_model_text(text)
    truth = script.RUNS[place]
    lines = ["run,species,direction,rate,sd,unit"]
    for name, rate in script.true_rates(truth).items():
        if name not in ("upkeep", "mu"):
            direction = "in" if name in ("glucose", "oxygen") else "out"
            lines.append(f'{truth.run},"{name}",{direction},{rate!r},0.1 %,mmol/g/h')
    lines.append(f"{truth.run},mu,,{truth.mu},0.1 %,1/h")
    run = fx.solve(true_model, fx.read_rates_text("\n".join(lines), true_model)).runs[0]
    assert run.status is SolveStatus.SOLVED
    assert run.test.h == pytest.approx(0, abs=1e-9)
    upkeep = next(f.value for f in run.fluxes if f.reaction == "upkeep")
    assert upkeep == pytest.approx(truth.upkeep, rel=1e-6)


def test_the_run_whose_oxygen_is_wrong_does_not_close(rates, model):
    # 18 % of its oxygen is missing
    closes = {run.run: run.test.closes for run in fx.closure(rates, model).runs}
    assert closes == {"W09": True, "W11": False, "W14": True, "W15": True}


def test_the_suspects_of_the_wrong_run_point_at_the_oxygen(rates, model):
    closed = next(r for r in fx.closure(rates, model).runs if r.run == "W11").suspects
    solved = next(r for r in fx.solve(model, rates).runs if r.run == "W11").suspects
    for suspects in (closed, solved):
        first = suspects.group[0]
        assert first.name == "oxygen"
        # the cell showed 18 % too little
        assert abs(first.would_be - first.measured / 0.82) < 2 * first.would_be_sd
    # two balances leave the diol under suspicion; that of the carriers clears it
    assert closed.find("2,3-butanediol").group == 1
    assert solved.find("2,3-butanediol").group == 2
    for name in ("glucose", "acetate", "lactate", "mu"):
        assert closed.find(name).group == solved.find(name).group == 2


def test_the_suspects_of_the_cold_run_point_at_the_upkeep(rates, model):
    # it was 1.2 and not 4.0; nothing tells it from a wrong growth requirement
    suspects = next(r for r in fx.solve(model, rates).runs if r.run == "W14").suspects
    first = suspects.group[0]
    assert first.name == "flux upkeep"
    assert abs(first.would_be - 1.2) < 2 * first.would_be_sd
    assert {"K_X", "PO"} <= set(first.twins)


def test_the_wrong_run_cannot_be_told_by_eye(rates, model):
    # each balance of the wrong run by itself lies within two sd, and its carbon closes better than
    # that of a run that is right
    balances = {r.run: {b.name: b for b in r.balances} for r in fx.closure(rates, model).runs}
    wrong = balances["W11"]
    assert all(abs(wrong[name].z) < 2 for name in ("carbon", "electrons"))
    off = {run: abs(balances[run]["carbon"].recovery - 100) for run in RUNS}
    assert off["W11"] < off["W09"]


def test_the_cold_run_cannot_pay_for_the_upkeep_of_the_warm_ones(rates, model):
    # it was kept at 30 °C, where upkeep is 1.2 and not 4.0; the rates themselves close
    solution = fx.solve(model, rates, maximise="2,3-butanediol")
    found = {run.run: run for run in solution.runs}
    assert found["W14"].status is SolveStatus.INFEASIBLE
    assert found["W15"].status is SolveStatus.OPTIMAL
    assert "limit upkeep = 4 ± 0.4" in {m.name for m in found["W14"].conflict.given}


def test_the_good_run_gives_the_true_rates(rates, model, script):
    run = next(r for r in fx.solve(model, rates).runs if r.run == "W15")
    assert run.status is SolveStatus.SOLVED
    truth = script.true_rates(next(t for t in script.RUNS if t.run == "W15"))
    for name in ("glucose", "oxygen", "CO2", "2,3-butanediol"):
        found = next(r for r in run.rates if r.quantity.name == name)
        assert abs(found.reconciled - truth[name]) < 3 * found.reconciled_sd
