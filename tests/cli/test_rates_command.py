"""``fluxnet rates``, and the templates for raw data that ``fluxnet new`` writes."""

from __future__ import annotations

import json
from pathlib import Path

import jsonschema
import numpy as np
import pytest

import fluxnet as fx
from fluxnet.cli.main import Exit, run
from fluxnet.ground.resources import resource_folder
from fluxnet.rates.covariance import run_covariance

EXAMPLE = resource_folder("examples") / "3-one-yeast-in-three-vessels"
SCHEMA = Path(fx.__file__).parent / "presenting" / "schemas" / "rates-1.json"
MODEL = str(EXAMPLE / "lv3.flux")


@pytest.fixture(autouse=True)
def _here(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.chdir(tmp_path)


def document(words: list[str], capsys: pytest.CaptureFixture[str]) -> dict:
    capsys.readouterr()
    run([*words, "--json"])
    found = json.loads(capsys.readouterr().out)
    jsonschema.validate(found, json.loads(SCHEMA.read_text(encoding="utf-8")))
    return found


@pytest.mark.parametrize("name", ["chemostat.xlsx", "batch", "fed-batch"])
def test_the_document_of_each_mode_obeys_its_schema(name, capsys):
    found = document(["rates", str(EXAMPLE / name), "--model", MODEL], capsys)

    (one,) = found["cultivations"]
    assert one["phases"]
    assert len(one["understood"]) == 3
    for phase in one["phases"]:
        size = len(phase["rates"])
        assert np.shape(phase["covariance"]) == (size, size)


def test_a_document_of_what_cannot_be_read_obeys_the_schema_too(tmp_path, capsys):
    (tmp_path / "x.csv").write_text("time [h],glucose [g/L]\n0,20\n1,18\n", encoding="utf-8")

    found = document(["rates", "x.csv"], capsys)

    assert found["cultivations"] == []
    assert any(w["severity"] == "error" for w in found["warnings"])
    assert run(["rates", "x.csv"]) == Exit.FINDING
    assert run(["rates", "nothing.csv"]) == Exit.MISUSE


def test_the_table_is_read_back_with_its_covariance(capsys):
    run(["rates", str(EXAMPLE / "batch"), "--model", MODEL, "-o", "rates.csv"])
    (one,) = document(["rates", str(EXAMPLE / "batch"), "--model", MODEL], capsys)["cultivations"]
    model = fx.read_model(MODEL)
    table = fx.read_rates("rates.csv", model)

    assert Path("rates.covariance.csv").is_file()
    for phase, back in zip(one["phases"], table.runs, strict=True):
        assert back.name == phase["run"]
        assert [r.value for r in back.rates] == [r["rate"] for r in phase["rates"]]
        kept = np.array(phase["covariance"])
        scale = np.sqrt(np.outer(np.diag(kept), np.diag(kept)))
        assert np.abs((run_covariance(back) - kept) / scale).max() < 1e-9


def test_files_are_not_overwritten_unasked(capsys):
    words = ["rates", str(EXAMPLE / "fed-batch"), "-o", "rates.csv", "--quiet"]
    assert run(words) == Exit.SOUND
    assert run(words) == Exit.MISUSE
    assert run([*words, "--force"]) == Exit.SOUND
    assert run(["rates", "rates.csv", "-o", "rates.csv", "--force"]) == Exit.MISUSE


def test_proposed_phases_are_written_mended_and_used(tmp_path, capsys):
    for source in (EXAMPLE / "batch").iterdir():
        if source.name != "phases.csv":
            (tmp_path / source.name).write_bytes(source.read_bytes())
    words = ["rates", ".", "--phases", "../chosen.csv", "--model", MODEL]
    chosen = tmp_path.parent / "chosen.csv"
    chosen.unlink(missing_ok=True)
    assert run(words) == Exit.SOUND
    names = [line.split(",")[0] for line in chosen.read_text(encoding="utf-8").splitlines()]
    assert names[:2] == ["phase", "lag"]
    chosen.write_text("phase,start [h],end [h]\nlate,7,10.5\n", encoding="utf-8")

    (one,) = document(words, capsys)["cultivations"]

    assert [(p["phase"], p["start"], p["end"]) for p in one["phases"]] == [("late", 7, 10.5)]
    assert chosen.read_text(encoding="utf-8").endswith("late,7,10.5\n")
    assert run([*words, "--phase", "late 7 to 9"]) == Exit.MISUSE
    chosen.unlink()


@pytest.mark.parametrize("text", ["late 7 9", "7 to 9", "late 9 to 7", "late a to b"])
def test_a_phase_that_is_none_is_told(text, capsys):
    assert run(["rates", str(EXAMPLE / "batch"), "--phase", text]) == Exit.MISUSE
    assert "write a name and two hours" in capsys.readouterr().err


def test_the_columns_as_understood_are_a_file_that_is_read_again(tmp_path, capsys):
    (tmp_path / "raw").mkdir()
    for source in (EXAMPLE / "batch").iterdir():
        data = source.read_bytes().replace(b"Glucose;", b"Peak 3;")
        (tmp_path / "raw" / source.name).write_bytes(data)
    words = ["rates", "raw", "--model", MODEL]
    assert run([*words, "--columns", "columns.csv"]) == Exit.SOUND
    text = Path("columns.csv").read_text(encoding="utf-8")
    assert "Peak 3 (g/L),ignore" in text or "Peak 3 [g/L],ignore" in text
    before = document(words, capsys)["cultivations"][0]["phases"][1]["rates"]
    mended = "\n".join(
        line.replace(",ignore", ",glucose") if line.startswith("Peak 3") else line
        for line in text.splitlines()
    )
    Path("raw/columns.csv").write_text(mended + "\n", encoding="utf-8")
    after = document(words, capsys)["cultivations"][0]["phases"][1]["rates"]

    assert "glucose" not in [r["species"] for r in before]
    assert "glucose" in [r["species"] for r in after]


def test_figures_are_drawn_with_their_finding(capsys):
    assert run(["rates", str(EXAMPLE / "fed-batch"), "--figures", "plots", "--quiet"]) == Exit.SOUND
    names = sorted(p.name for p in Path("plots").iterdir())
    assert names == ["vessel-3-carbon.svg", "vessel-3-gas.svg", "vessel-3-rates.svg"]
    assert "C-mmol were used" in Path("plots/vessel-3-carbon.svg").read_text(encoding="utf-8")


def test_tables_are_written_for_files(capsys):
    assert run(["rates", str(EXAMPLE / "batch"), "--model", MODEL, "--csv", "out"]) == Exit.SOUND
    heads = {p.stem: p.read_text(encoding="utf-8").split("\n")[0] for p in Path("out").iterdir()}
    assert {"rates", "doubtful", "accounts", "courses", "assumptions", "estimators"} <= set(heads)
    assert heads["rates"].strip().startswith("run,phase,start,end,species,direction,rate,sd,unit")
    courses = Path("out/courses.csv").read_text(encoding="utf-8").splitlines()
    assert len(courses) > 500


@pytest.mark.parametrize("mode", ["chemostat", "batch", "fed-batch"])
def test_the_templates_of_each_mode_go_through_the_whole_job(mode, capsys):
    assert run(["new", "start", "--mode", mode]) == Exit.SOUND
    model = ["--model", "start/model.flux"]
    assert run(["rates", "start/raw", *model, "-o", "rates.csv"]) == Exit.SOUND
    assert run(["closure", "rates.csv", *model]) == Exit.SOUND
    assert run(["solve", "start/model.flux", "rates.csv"]) == Exit.SOUND


@pytest.mark.parametrize("mode", ["chemostat", "batch", "fed-batch"])
def test_the_templates_hold_the_rates_of_the_example(mode, capsys):
    run(["new", "start", "--mode", mode])
    found = document(["rates", "start/raw", "--model", "start/model.flux"], capsys)
    (phase,) = found["cultivations"][0]["phases"]
    rates = {r["species"]: r["rate"] for r in phase["rates"]}
    example = fx.read_rates("start/example.csv").runs[0]
    assert rates["mu"] == pytest.approx(0.172, rel=0.03)
    for rate in example.rates:
        if rate.quantity.name:
            assert rates[rate.quantity.name] == pytest.approx(rate.value, rel=0.06), rate.quantity
