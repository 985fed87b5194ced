"""Options of `solve` reach what they are named for, or are refused."""

from __future__ import annotations

import json
from collections.abc import Iterator
from pathlib import Path

import pytest

from fluxnet.cli.main import Exit, run
from fluxnet.cli.new import MODEL
from fluxnet.studies import solve
from fluxnet.studies.solution import FluxSolution

RATES = """run,species,direction,rate,sd,unit
A,glucose,in,3,0.1,mmol/g/h
A,CO2,out,6,0.2,mmol/g/h
A,oxygen,in,5,0.2,mmol/g/h
A,ethanol,out,1,0.05,mmol/g/h
A,mu,,0.2,0.01,1/h
"""


@pytest.fixture(autouse=True)
def folder(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Path:
    (tmp_path / "model.flux").write_text(MODEL, encoding="utf-8")
    (tmp_path / "limited.flux").write_text(MODEL + "limit glucose <= 1\n", encoding="utf-8")
    (tmp_path / "rates.csv").write_text(RATES, encoding="utf-8")
    monkeypatch.chdir(tmp_path)
    return tmp_path


def shown(words: list[str], capsys: pytest.CaptureFixture[str]) -> tuple[int, str]:
    status = run(words)
    return status, " ".join(capsys.readouterr().out.split())


@pytest.mark.parametrize("within", ["1", "5"])
def test_the_conflict_of_a_rejected_fit_is_within_as_many_sds_as_asked(
    within: str, capsys: pytest.CaptureFixture[str]
) -> None:
    words = ["solve", "limited.flux", "rates.csv", "--within", within]
    status, text = shown(words, capsys)
    assert status == Exit.FINDING
    assert f"with every measured value within {within} sd" in text
    assert "within 2 sd" not in text


def test_a_proof_without_anything_to_prove_is_told(capsys: pytest.CaptureFixture[str]) -> None:
    _, text = shown(["solve", "model.flux", "--proof"], capsys)
    assert "No bill: there is no aim whose best value it could prove, and no conflict." in text
    _, text = shown(["solve", "limited.flux", "rates.csv", "--proof"], capsys)
    assert "No bill" not in text


def test_exact_values_that_agree_are_not_said_to_test_nothing_or_one_another(
    tmp_path: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    (tmp_path / "exact.csv").write_text(
        "run,species,direction,rate,sd,unit\nA,glucose,in,10,0,mmol/g/h\n"
        "A,ethanol,out,20,0,mmol/g/h\nA,CO2,out,20,0,mmol/g/h\n",
        encoding="utf-8",
    )
    lines = MODEL.replace("parameter  PO   = 1.4 ± 0.2  in [0.5, 2.5]", "parameter PO = 1.4")
    model = "\n".join(x for x in lines.splitlines() if not x.startswith(("limit", "    burn")))
    model = model.replace("    growth ", "    loss : ATP -> nothing\n    # growth ")
    (tmp_path / "short.flux").write_text(
        "\n".join(x for x in model.splitlines() if "K_X" not in x and "biomass" not in x) + "\n",
        encoding="utf-8",
    )
    _, text = shown(["solve", "short.flux", "exact.csv"], capsys)
    assert "The exact values agree, and without errors nothing is tested" in text
    assert "they agree, and h is not defined" in text
    assert "none tests another" not in text
    _, text = shown(["closure", "exact.csv"], capsys)
    assert "the exact values agree, and without errors nothing is tested." in text
    assert "Balanceable: the others fix it." in text
    assert "test it" not in text


def write_runs(folder: Path, count: int, wrong: int) -> None:
    """So many runs that fit, of which the first few have far too much glucose."""
    lines = ["run,species,direction,rate,sd,unit"]
    for i in range(count):
        glucose = 4 if i < wrong else 2.7
        lines += [
            f"R{i},glucose,in,{glucose},0.1,mmol/g/h", f"R{i},CO2,out,6,0.2,mmol/g/h",
            f"R{i},oxygen,in,5,0.2,mmol/g/h", f"R{i},ethanol,out,1,0.05,mmol/g/h",
            f"R{i},mu,,0.2,0.01,1/h",
        ]  # fmt: skip
    (folder / "many.csv").write_text("\n".join(lines) + "\n", encoding="utf-8")


def test_more_than_twelve_runs_are_told_one_a_line(
    tmp_path: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    write_runs(tmp_path, 13, 2)
    status = run(["solve", "model.flux", "many.csv", "--csv", "out"])
    text = capsys.readouterr().out
    assert status == Exit.FINDING
    assert "13 runs: 11 solved, 2 inconsistent" in text
    assert len(text.splitlines()) < 30
    assert all(f"R{i} " in text for i in range(13))
    fluxes = (tmp_path / "out" / "fluxes.csv").read_text(encoding="utf-8").splitlines()
    assert len(fluxes) == 1 + 13 * 6
    assert (tmp_path / "out" / "suspects.csv").exists()
    few = "R0,R1"
    run(["solve", "model.flux", "many.csv", "--run", few])
    assert "Suspects" in capsys.readouterr().out


def test_of_very_many_runs_their_spread_and_the_worst_are_told(
    tmp_path: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    write_runs(tmp_path, 32, 21)
    run(["solve", "model.flux", "many.csv"])
    text = capsys.readouterr().out
    assert "32 runs: 11 solved, 21 inconsistent" in text
    assert "Runs that fail, the worst 20 of 21" in text
    assert "Main fluxes of the runs that do not fail" in text
    assert "R31" not in text
    assert len(text.splitlines()) < 50
    run(["solve", "model.flux", "many.csv", "--quiet"])
    assert len(capsys.readouterr().out.splitlines()) <= 3


def test_whoever_stops_keeps_the_runs_that_are_done(
    tmp_path: Path, capsys: pytest.CaptureFixture[str], monkeypatch: pytest.MonkeyPatch
) -> None:
    write_runs(tmp_path, 5, 0)
    whole = solve.solve_runs

    def stopped(*what: object, **how: object) -> Iterator[FluxSolution]:
        for count, one in enumerate(whole(*what, **how)):  # type: ignore[arg-type]
            if count == 2:
                raise KeyboardInterrupt
            yield one

    monkeypatch.setattr(solve, "solve_runs", stopped)
    status = run(["solve", "model.flux", "many.csv", "--json"])
    out, err = capsys.readouterr()
    told = json.loads(out)
    assert status == Exit.INTERRUPTED
    assert [one["run"] for one in told["runs"]] == ["R0", "R1"]
    assert told["undone"] == 3
    assert "interrupted: 2 of 5 runs are solved" in err


def test_the_progress_of_several_runs_counts_runs() -> None:
    import fluxnet as fx

    model = fx.read_model("model.flux")
    write_runs(Path(), 3, 0)
    seen: list[tuple[str, int, int]] = []
    table = fx.read_rates("many.csv", model).table
    list(solve.solve_runs(model.network, table, progress=lambda *told: seen.append(told)))
    assert seen == [("solving runs", k, 3) for k in (1, 2, 3)]
