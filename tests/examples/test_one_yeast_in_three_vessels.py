"""The third example: from raw files to rates, beside the truth that made the files."""

from __future__ import annotations

import csv
import importlib.util
import io
import sys
from pathlib import Path
from types import ModuleType

import pytest

import fluxnet as fx
from fluxnet.studies.rates import FoundRates, find_rates
from fluxnet.tables.cultivation_tables import read_cultivation

FOLDER = Path(__file__).resolve().parents[2] / "examples" / "3-one-yeast-in-three-vessels"
DATA = ("chemostat.xlsx", "batch", "fed-batch")


@pytest.fixture(scope="module")
def script() -> ModuleType:
    # no compiled copy is left in a folder that is packed as it stands
    write, sys.dont_write_bytecode = sys.dont_write_bytecode, True
    sys.path.insert(0, str(FOLDER))
    spec = importlib.util.spec_from_file_location("make_raw", FOLDER / "make_raw.py")
    assert spec is not None
    assert spec.loader is not None
    module = importlib.util.module_from_spec(spec)
    sys.modules["make_raw"] = module
    spec.loader.exec_module(module)
    sys.path.remove(str(FOLDER))
    sys.dont_write_bytecode = write
    return module


@pytest.fixture(scope="module")
def network() -> fx.Network:
    return fx.read_model(FOLDER / "lv3.flux").network


@pytest.fixture(scope="module")
def found(network) -> dict[str, FoundRates]:
    return {
        name: find_rates(read_cultivation(FOLDER / name, network).cultivations, network)
        for name in DATA
    }


def truth() -> dict[tuple[str, str, str], float]:
    with (FOLDER / "truth.csv").open(encoding="utf-8") as file:
        rows = list(csv.DictReader(file))
    return {(r["vessel"], r["phase"], r["species"]): float(r["rate"]) for r in rows}


def test_the_files_are_what_the_script_writes(script):
    from python_calamine import CalamineWorkbook

    for path, data in script.make_files().items():
        if not path.endswith(".xlsx"):
            assert (FOLDER / path).read_bytes() == data, path
            continue
        # a workbook's bytes are those of one version of its writer; its cells are what counts
        made = CalamineWorkbook.from_filelike(io.BytesIO(data))
        kept = CalamineWorkbook.from_path(str(FOLDER / path))
        assert made.sheet_names == kept.sheet_names
        for sheet in made.sheet_names:
            assert (
                made.get_sheet_by_name(sheet).to_python()
                == kept.get_sheet_by_name(sheet).to_python()
            ), (path, sheet)
    assert (FOLDER / "truth.csv").read_text(encoding="utf-8") == script.make_truth()


def test_the_truth_obeys_the_model(script, network):
    lines = ["run,species,direction,rate,sd,unit"]
    for (vessel, phase, name), rate in truth().items():
        taken = name in ("glucose", "ammonia", "oxygen")
        direction = "" if name == "mu" else "in" if taken else "out"
        unit = "1/h" if name == "mu" else "mmol/g/h"
        lines.append(f"{vessel} {phase},{name},{direction},{rate},0.001,{unit}")
    solution = fx.solve(network, fx.read_rates_text("\n".join(lines), network))
    assert len(solution.runs) == 5
    for run in solution.runs:
        assert run.test.h == pytest.approx(0, abs=1e-3)


@pytest.mark.parametrize("name", DATA)
def test_the_rates_lie_about_the_truth(found, name):
    true = truth()
    apart = [
        (rate.value - true[one.name, phase.phase.name, rate.quantity.name or "mu"]) / rate.sd
        for one in found[name].found
        for phase in one.phases
        for rate in phase.run.rates
    ]
    # of up to twelve, more than two beyond 1.96 sds would come by chance once in a hundred cases
    assert len(apart) >= 5
    assert sum(abs(z) > 1.96 for z in apart) <= 2
    assert max(abs(z) for z in apart) < 4


def test_the_errors_are_small_enough_to_tell_something(found):
    growth = found["batch"].found[0].phases[1]
    sizes = {r.quantity.name or "mu": r.sd / r.value for r in growth.run.rates}
    assert sizes["mu"] < 0.02
    assert all(sizes[name] < 0.05 for name in ("glucose", "ethanol", "oxygen", "CO2"))


def test_leaving_samples_and_base_out_would_be_told(found):
    feed = found["fed-batch"].found[0].phases[0]
    glucose = feed.find("glucose")
    true = truth()["vessel 3", "feed", "glucose"]
    naive = next(w for w in glucose.ways if w.method.value == "without the account of the broth")
    assert abs(-glucose.value - true) < abs(-naive.value - true)
    assert abs(naive.difference) > 2 * glucose.sd


def test_the_broth_of_the_fed_batch_closes(found):
    account = next(a for a in found["fed-batch"].found[0].accounts if a.title == "broth")
    assert account.closure == pytest.approx(1, abs=0.005)


def test_each_cell_that_was_no_number_is_told(found):
    doubtful = {d.place: d.text for d in found["chemostat.xlsx"].raw[0].doubtful}
    assert doubtful["chemostat.xlsx HPLC!E18"] == "n.d."
    assert doubtful["chemostat.xlsx HPLC!D5"] == "<0.05"
