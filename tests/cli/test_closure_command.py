from __future__ import annotations

import json
from pathlib import Path
from typing import Any

import pytest

from fluxnet.cli.main import Exit, run
from fluxnet.studies import closure

HEAD = "run,species,direction,rate,sd,unit\n"
GOOD = """A,glucose,in,2,0.1,mmol/g/h
A,CO2,out,6,0.3,mmol/g/h
A,oxygen,in,5.9,0.3,mmol/g/h
A,mu,,0.15,0.005,1/h
A,CO2 / oxygen,,1.03,0.02,
"""
BAD = """B,glucose,in,10,0.2,mmol
B,ethanol,out,15,0.2,mmol
B,CO2,out,20,0.2,mmol
"""


@pytest.fixture(autouse=True)
def folder(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Path:
    (tmp_path / "good.csv").write_text(HEAD + GOOD, encoding="utf-8")
    (tmp_path / "both.csv").write_text(HEAD + GOOD + BAD, encoding="utf-8")
    monkeypatch.chdir(tmp_path)
    return tmp_path


def document(words: list[str], capsys: pytest.CaptureFixture[str]) -> Any:
    run(["closure", *words, "--json"])
    return json.loads(capsys.readouterr().out)


def test_the_status_says_whether_the_runs_close() -> None:
    assert run(["closure", "good.csv"]) == Exit.SOUND
    assert run(["closure", "both.csv"]) == Exit.FINDING
    assert run(["closure", "both.csv", "--run", "A"]) == Exit.SOUND


def test_a_run_holds_the_keys_that_others_rely_on(capsys: pytest.CaptureFixture[str]) -> None:
    told = document(["both.csv"], capsys)
    assert told["document"] == "closure/1"
    assert {"fluxnet", "document", "inputs", "warnings", "runs"} <= set(told)
    for one in told["runs"]:
        assert {"run", "balances", "or_index", "test", "world", "rates", "suspects"} <= set(one)
        assert set(one["test"]) == {"h", "dof", "p", "limit", "closes"}
        assert {"free", "not_exchanged"} <= set(one["world"])
        for balance in one["balances"]:
            assert {"name", "unit", "in", "out", "gap", "sd", "z", "recovery"} <= set(balance)
        for rate in one["rates"]:
            assert {"species", "direction", "measured", "sd", "reconciled", "reconciled_sd", "z",
                    "kind"} <= set(rate)  # fmt: skip
    ratio = told["runs"][0]["rates"][-1]
    assert (ratio["species"], ratio["direction"]) == ("CO2 out / oxygen in", None)
    assert ratio["kind"] == "balanceable"


def test_a_row_is_left_out_by_name(capsys: pytest.CaptureFixture[str]) -> None:
    told = document(["good.csv", "--without", "O2"], capsys)["runs"][0]
    assert told["world"]["not_exchanged"] == ["O2", "H2"]
    assert [rate["species"] for rate in told["rates"]] == ["glucose", "CO2", "mu"]


@pytest.mark.parametrize(
    ("words", "hint"),
    [
        (["--without", "glucos"], "did you mean glucose?"),
        (["--without", "lactate"], "the rows are glucose in, CO2 out"),
        (["--nitrogen", "amonia"], "ammonia"),
        (["--run", "Z"], "its runs are A"),
    ],
)
def test_an_option_that_names_what_is_not_there_is_misuse(
    words: list[str], hint: str, capsys: pytest.CaptureFixture[str]
) -> None:
    assert run(["closure", "good.csv", *words]) == Exit.MISUSE
    streams = capsys.readouterr()
    assert streams.out == ""
    assert hint in " ".join(streams.err.split())


def test_a_nitrogen_source_that_the_table_names_wrongly_is_a_fault_of_the_table(
    folder: Path,
) -> None:
    (folder / "bad.csv").write_text("nitrogen source glucose\n" + HEAD + GOOD, encoding="utf-8")
    assert run(["closure", "bad.csv"]) == Exit.FINDING


@pytest.mark.parametrize("option", ["--nitrogen nope", "--without nope"])
def test_an_option_that_names_what_is_not_there_is_the_place_of_its_fault(
    folder: Path, capsys: pytest.CaptureFixture[str], option: str
) -> None:
    assert run(["closure", "good.csv", *option.split()]) == Exit.MISUSE
    assert capsys.readouterr().err.startswith(f"{option}: ")


def test_files_of_one_run_hold_its_test(folder: Path) -> None:
    assert run(["closure", "good.csv", "--csv", "out"]) == Exit.SOUND
    head, row = (folder / "out" / "overview.csv").read_text(encoding="utf-8").splitlines()
    told = dict(zip(head.split(","), row.split(","), strict=True))
    assert told["closes"] == "yes"
    assert float(told["h"]) < float(told["limit"])
    assert (folder / "out" / "balances.csv").exists()


def test_what_is_closed_when_the_user_stops_is_kept_and_told(
    monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str]
) -> None:
    """The runs differ in their rows, so that they are closed one after the other."""
    made = closure.make_closures

    def stop_at_the_second(plan: Any, batch: Any, arrays: Any) -> Any:
        if batch.runs[0].name == "B":
            raise KeyboardInterrupt
        return made(plan, batch, arrays)

    monkeypatch.setattr(closure, "make_closures", stop_at_the_second)
    assert run(["closure", "both.csv", "--json"]) == Exit.INTERRUPTED
    shown = capsys.readouterr()
    told = json.loads(shown.out)
    assert [one["run"] for one in told["runs"]] == ["A"]
    assert told["undone"] == 1
    assert "interrupted: 1 of 2 runs are closed" in shown.err
    assert run(["closure", "both.csv", "--run", "B"]) == Exit.INTERRUPTED
    assert capsys.readouterr().out == ""


GRAMS = """run,species,direction,rate,sd,unit
A,glucose,in,1.80156,3 %,g/g/h
A,ethanol,out,0.86,,g/g/h
A,CO2,out,19.6,0.4,mmol/g/h
"""


@pytest.mark.parametrize("above", ["", "shared error biomass 4 %\n"], ids=["", "shared"])
def test_the_rates_as_understood_are_a_table_with_the_same_closure(
    folder: Path, capsys: pytest.CaptureFixture[str], above: str
) -> None:
    (folder / "grams.csv").write_text(above + GRAMS, encoding="utf-8")
    pairs = "first,second,correlation\nglucose in,CO2 out,0.4\n"
    (folder / "grams.covariance.csv").write_text(pairs, encoding="utf-8")
    first = document(["grams.csv", "--table", "plain.csv"], capsys)["runs"]
    written = (folder / "plain.csv").read_text(encoding="utf-8")
    assert "A,glucose,in,10.0,3 %,mmol/g/h" in written
    assert (folder / "plain.covariance.csv").exists()
    (again,) = document(["plain.csv"], capsys)["runs"]
    assert again["test"] == pytest.approx(first[0]["test"], rel=1e-9)
    assert run(["closure", "grams.csv", "--table", "plain.csv"]) == Exit.MISUSE
    assert run(["closure", "grams.csv", "--table", "grams.csv", "--force"]) == Exit.MISUSE


def test_correlations_left_beside_a_table_are_not_taken_for_those_of_a_new_one(
    folder: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    (folder / "plain.covariance.csv").write_text("first,second,correlation\n", encoding="utf-8")
    assert run(["closure", "good.csv", "--table", "plain.csv", "--force"]) == Exit.MISUSE
    assert "take it away" in capsys.readouterr().err
    assert not (folder / "plain.csv").exists()


def many_runs(count: int) -> str:
    return HEAD + "".join(
        (BAD if i % 10 == 3 else GOOD.replace("A,", "B,")).replace("B,", f"R{i},")
        for i in range(count)
    )


def test_many_runs_are_told_by_their_spread_and_the_worst_and_written_in_full(
    folder: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    (folder / "many.csv").write_text(many_runs(250), encoding="utf-8")
    assert run(["closure", "many.csv", "--csv", "out"]) == Exit.FINDING
    text = capsys.readouterr().out
    words = " ".join(text.split())
    assert "25 of 250 tested runs do not close (10 %; of sound runs chance alone" in words
    assert "the worst 20 of 25" in words
    assert len(text.splitlines()) < 50
    assert max(len(line) for line in text.splitlines()) <= 80
    for name, rows in (("overview", 250), ("rates", 225 * 5 + 25 * 3)):
        table = (folder / "out" / f"{name}.csv").read_text(encoding="utf-8").splitlines()
        assert len(table) == 1 + rows
    spread = (folder / "out" / "spread.csv").read_text(encoding="utf-8").splitlines()
    assert spread[1].startswith("carbon,250,")


def test_quiet_tells_of_many_runs_how_many_close(
    folder: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    (folder / "many.csv").write_text(many_runs(20), encoding="utf-8")
    run(["closure", "many.csv", "--quiet"])
    assert capsys.readouterr().out.startswith("2 of 20 tested runs do not close")


def test_many_runs_as_data_are_the_same_as_few(
    folder: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    """They stand one a line, and hold what each holds by itself."""
    (folder / "many.csv").write_text(many_runs(101), encoding="utf-8")
    run(["closure", "many.csv", "--json"])
    text = capsys.readouterr().out
    many = json.loads(text)["runs"]
    assert len(many) == 101
    assert sum(line.startswith('    {"run"') for line in text.splitlines()) == 101
    for name in ("R3", "R100"):
        (alone,) = document(["many.csv", "--run", name], capsys)["runs"]
        told = next(one for one in many if one["run"] == name)
        assert told["test"]["h"] == pytest.approx(alone["test"]["h"], rel=1e-12)
        assert told.keys() == alone.keys()


def test_quiet_tells_the_verdict_alone(capsys: pytest.CaptureFixture[str]) -> None:
    run(["closure", "good.csv", "--quiet"])
    words = " ".join(capsys.readouterr().out.split())
    assert words.startswith("run A: closes Carbon closes to")
    assert words.endswith(").")
