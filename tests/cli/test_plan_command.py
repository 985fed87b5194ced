"""``fluxnet solve --plan`` and ``--shares``: what is asked for is what is shown."""

from __future__ import annotations

import csv
import json
from pathlib import Path

import jsonschema
import pytest

import fluxnet as fx
import fluxnet.presenting
from fluxnet.cli.main import Exit, run
from fluxnet.ground.resources import resource_folder

SOLVE = ["solve", "tw4.flux", "rates.csv", "--run", "W15"]


@pytest.fixture(autouse=True)
def folder(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Path:
    for source in (resource_folder("examples") / "1-four-weeks-of-a-diol").iterdir():
        if source.suffix in (".flux", ".csv"):
            (tmp_path / source.name).write_bytes(source.read_bytes())
    monkeypatch.chdir(tmp_path)
    return tmp_path


def test_the_document_holds_the_plan_and_its_schema_allows_it(
    capsys: pytest.CaptureFixture[str],
) -> None:
    assert run([*SOLVE, "--plan", "ATP anabolism", "--json"]) == Exit.SOUND
    document = json.loads(capsys.readouterr().out)
    schemas = Path(fluxnet.presenting.__file__).parent / "schemas"
    jsonschema.validate(document, json.loads((schemas / "solve-1.json").read_text("utf-8")))
    plan = document["runs"][0]["plan"]
    assert plan["quantity"] == "net ATP of anabolism"
    assert plan["options"][0]["steps"][0]["name"] == "K_X"
    assert plan["options"][0]["of_today"] == pytest.approx(63, abs=1)
    assert plan["error"] == pytest.approx(0.05)
    assert document["runs"][0]["fluxes"][0]["shares"][0]["source"] == "shared error"


def test_a_plan_shows_no_other_tables_and_writes_them_all(
    folder: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    assert run([*SOLVE, "--plan", "cycle", "--plan-error", "3%", "--csv", "out"]) == Exit.SOUND
    shown = capsys.readouterr().out
    assert "What would make flux cycle surer" in shown
    assert "new: at 3 %" in shown
    assert "Carrier ledger" not in shown
    assert {"plan.csv", "fluxes.csv", "ledger.csv", "shares.csv"} <= {
        path.name for path in (folder / "out").iterdir()
    }
    rows = list(csv.DictReader((folder / "out" / "plan.csv").open(encoding="utf-8")))
    assert {row["place"] for row in rows} == {"one step", "inside", "two together"}
    assert {row["run"] for row in rows} == {"W15"}


def test_every_run_has_a_plan_of_its_own() -> None:
    model = fx.read_model("tw4.flux")
    rates = fx.read_rates("rates.csv", model)
    runs = fx.solve(model, rates, plan="2,3-butanediol / glucose").runs
    assert [r.plan.quantity for r in runs] == ["2,3-butanediol out / glucose in"] * 4
    assert len({r.plan.sd for r in runs}) == 4


def test_a_plan_on_data_that_do_not_hold_together_is_not_to_be_trusted(
    capsys: pytest.CaptureFixture[str],
) -> None:
    words = ["solve", "tw4.flux", "rates.csv", "--run", "W14", "--plan", "upkeep"]
    assert run(words) == Exit.FINDING
    assert "rests on a fit that is not to be trusted" in capsys.readouterr().out


@pytest.mark.parametrize(("words", "told"), [
    (["--plan", "cycel"], "near to it are cycle"),
    (["--plan", "ATP"], "name a line of its ledger"),
    (["--plan", "upkeep", "--maximise", "mu"], "leave the aim out"),
    (["--plan", "upkeep", "--plan-error", "0"], "lies between 0 and 100 %"),
    (["--plan", "upkeep", "--plan-error", "nan"], "lies between 0 and 100 %"),
])  # fmt: skip
def test_what_makes_no_plan_is_misuse(
    words: list[str], told: str, capsys: pytest.CaptureFixture[str]
) -> None:
    assert run([*SOLVE, *words]) == Exit.MISUSE
    shown = capsys.readouterr()
    assert told in shown.err
    assert shown.out == ""


def test_shares_are_shown_when_they_are_asked_for(capsys: pytest.CaptureFixture[str]) -> None:
    run(SOLVE)
    plain = capsys.readouterr().out
    assert "Where the errors come from" not in plain
    assert "± of ATP, anabolism, from: K_X 52%, PO 35%" in plain
    run([*SOLVE, "--shares"])
    assert "Where the errors come from" in capsys.readouterr().out


def test_what_a_limit_tells_by_itself_is_planned_without_it(
    capsys: pytest.CaptureFixture[str],
) -> None:
    assert run([*SOLVE, "--plan", "ATP maintenance", "--json"]) == Exit.SOUND
    document = json.loads(capsys.readouterr().out)
    schemas = Path(fluxnet.presenting.__file__).parent / "schemas"
    jsonschema.validate(document, json.loads((schemas / "solve-1.json").read_text("utf-8")))
    typed = document["runs"][0]["plan"]["typed"]
    assert typed["limit"] == "upkeep = 4 ± 0.4"
    assert typed["share"] > 0.9
    assert run([*SOLVE, "--unmeasured", "flux upkeep", "--plan", "ATP maintenance", "--json"]) == 0
    alone = json.loads(capsys.readouterr().out)["runs"][0]["plan"]
    assert alone["typed"] is None
    assert typed["without"] == alone
    assert alone["sd"] > 4 * document["runs"][0]["plan"]["sd"]

    assert run([*SOLVE, "--plan", "ATP maintenance"]) == Exit.SOUND
    shown = " ".join(capsys.readouterr().out.split())
    assert "97 % of the error of net ATP of maintenance is that of the limit" in shown
    assert "without it this run gives -2.2 ± 2.2 mmol/g/h" in shown
    assert "flux upkeep half its sd" not in shown


def test_a_measured_limit_can_be_left_unmeasured(capsys: pytest.CaptureFixture[str]) -> None:
    assert run([*SOLVE, "--unmeasured", "flux upkeep", "--json"]) == Exit.SOUND
    (told,) = json.loads(capsys.readouterr().out)["runs"]
    assert all(r["measured"] is None for r in told["rates"] if r["species"] == "flux upkeep")
    assert run([*SOLVE, "--unmeasured", "flux upkep"]) == Exit.MISUSE
    assert "the nearest is flux upkeep" in capsys.readouterr().err


def test_a_compartment_is_told_as_one(capsys: pytest.CaptureFixture[str]) -> None:
    assert run([*SOLVE, "--plan", "maintenance"]) == Exit.MISUSE
    shown = capsys.readouterr().err
    assert 'maintenance is a compartment; write --plan "ATP maintenance" or --plan upkeep' in shown


def test_the_verdict_alone_names_its_run(capsys: pytest.CaptureFixture[str]) -> None:
    assert run([*SOLVE, "--quiet"]) == Exit.SOUND
    shown = capsys.readouterr().out
    assert shown.startswith("run W15 (temperature 37): solved\nThe rates and the network agree")
    assert run(["closure", "rates.csv", "--run", "W11", "--quiet"]) == Exit.FINDING
    assert capsys.readouterr().out.startswith("run W11: does not close\n")
