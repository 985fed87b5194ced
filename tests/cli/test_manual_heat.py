"""The example of the manual's page on heat is what solve shows."""

from __future__ import annotations

import re
from pathlib import Path

import pytest

import fluxnet
from fluxnet.cli.main import Exit, run

PAGE = (Path(fluxnet.__file__).parent / "manual" / "heat.md").read_text(encoding="utf-8")


def block(kind: str) -> str:
    (text,) = re.findall(rf"```{kind}\n(.*?)```", PAGE, re.S)
    return str(text)


def test_the_screen_of_the_page_is_what_its_model_and_rates_give(
    tmp_path: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    model, rates = tmp_path / "model.flux", tmp_path / "rates.csv"
    model.write_text(block("flux"), encoding="utf-8")
    rates.write_text(block("heat-rates"), encoding="utf-8")

    assert run(["solve", str(model), str(rates)]) == Exit.SOUND

    assert block("heat-screen") in capsys.readouterr().out


def test_the_numbers_that_the_page_tells_in_passing_are_those_of_the_catalogue() -> None:
    """Neutralisation, of enthalpies in OBIGT; hydroxide (-230.02 kJ/mol) is in no catalogue."""
    from fluxnet.chemistry.formation import find_formations

    ammonia = {f.charge: f.enthalpy for f in find_formations("ammonia")}

    (water,) = find_formations("water")
    assert ammonia[0] - ammonia[1] == pytest.approx(52, abs=0.5)
    assert -230.02 - water.enthalpy == pytest.approx(56, abs=0.5)
    assert "52 kJ more with ammonia and 56 kJ" in re.sub(r"\s+", " ", PAGE)
