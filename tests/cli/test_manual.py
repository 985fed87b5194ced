"""The manual's examples are read, checked and solved as printed."""

from __future__ import annotations

import re
from pathlib import Path

import pytest

import fluxnet
from fluxnet.cli.explain import read_words
from fluxnet.cli.main import Exit, run
from fluxnet.cli.new import MODEL, RATES
from fluxnet.ground.names import Name
from fluxnet.rates.kinds import RateKind
from fluxnet.solving.flux_fit import FluxKind
from fluxnet.studies.solution import SolveStatus
from fluxnet.tables.rates_table import read_rates_text

MANUAL = Path(fluxnet.__file__).parent / "manual"
TOPICS = sorted(path.stem for path in MANUAL.glob("*.md"))


def blocks(kind: str) -> list[object]:
    """The examples of one kind, each known by its topic and place."""
    found = []
    for path in sorted(MANUAL.glob("*.md")):
        texts = re.findall(rf"```{kind}\n(.*?)```", path.read_text(encoding="utf-8"), re.S)
        found += [pytest.param(text, id=f"{path.stem}-{k}") for k, text in enumerate(texts)]
    return found


@pytest.mark.parametrize("topic", TOPICS)
def test_each_topic_is_shown(topic: str, capsys: pytest.CaptureFixture[str]) -> None:
    assert run(["manual", topic]) == Exit.SOUND
    assert capsys.readouterr().out.startswith("# ")


@pytest.mark.parametrize("text", blocks("flux"))
def test_each_model_of_the_manual_is_sound(text: str, tmp_path: Path) -> None:
    path = tmp_path / "model.flux"
    path.write_text(text, encoding="utf-8")

    assert run(["check", str(path)]) == Exit.SOUND


@pytest.mark.parametrize("text", blocks("rates"))
def test_each_table_of_the_manual_closes(text: str, tmp_path: Path) -> None:
    model, table = tmp_path / "model.flux", tmp_path / "rates.csv"
    model.write_text(MODEL, encoding="utf-8")
    table.write_text(text, encoding="utf-8")

    assert run(["closure", str(table), "--model", str(model)]) == Exit.SOUND
    assert run(["solve", str(model), str(table)]) == Exit.SOUND


@pytest.mark.parametrize("text", blocks("table"))
def test_each_other_table_of_the_manual_is_read_without_an_error(text: str) -> None:
    reading = read_rates_text(text)

    assert reading.table is not None, reading.diagnostics


def test_the_manual_has_examples_of_both_kinds() -> None:
    assert blocks("flux")
    assert blocks("table")
    assert len(blocks("rates")) >= 2
    assert RATES


@pytest.mark.parametrize("name", [name.value for name in Name])
def test_each_diagnostic_name_is_explained(
    name: str, capsys: pytest.CaptureFixture[str]
) -> None:
    assert run(["explain", name]) == Exit.SOUND
    shown = capsys.readouterr().out

    assert name in shown
    assert "what to do" in shown


def test_each_word_that_a_solve_can_end_with_is_explained() -> None:
    words = read_words()

    assert {status.value for status in SolveStatus} <= set(words)
    assert {kind.value.replace("_", " ") for kind in RateKind} <= set(words)
    assert {kind.value for kind in FluxKind} <= set(words)
    assert all(len(meaning) > 10 for meaning in words.values())


@pytest.mark.parametrize("word", ["suspect", "apart", "h left", "by chance", "bill", '"price"'])
def test_the_words_of_suspects_and_bills_are_explained(
    word: str, capsys: pytest.CaptureFixture[str]
) -> None:
    assert run(["explain", *word.split()]) == Exit.SOUND
    assert capsys.readouterr().out.startswith(f"{word.strip(chr(34))}: ")
