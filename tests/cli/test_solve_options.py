"""Options of `solve` reach what they are named for, or are refused."""

from __future__ import annotations

from pathlib import Path

import pytest

from fluxnet.cli.main import Exit, run
from fluxnet.cli.new import MODEL

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
