"""The faces of an answer: frames, JSON, a notebook, a terminal of rich's."""

from __future__ import annotations

import io
import json
from typing import Any

import pytest
from rich.console import Console

import fluxnet as fx
from fluxnet.cli.new import MODEL, RATES
from fluxnet.ground.table import Column, Table
from fluxnet.presenting.notebook import screen_html
from fluxnet.presenting.screen import Heading, Sentence

UNLIMITED = MODEL.replace("limit  upkeep", "#")
EXACT = """run,species,direction,rate,sd,unit
1,glucose,in,1,0,mmol/g/h
1,ethanol,out,3,0,mmol/g/h
"""


def answers() -> dict[str, fx.Answer[Any]]:
    model = fx.read_model_text(MODEL)
    rates = fx.read_rates_text(RATES, model)
    return {
        "check": fx.check(model),
        "closure": fx.closure(rates, model),
        "solve": fx.solve(model, rates),
        "aim": fx.solve(model, rates, maximise="mu"),
        "unbounded": fx.solve(fx.read_model_text(UNLIMITED), maximise="ethanol"),
        "infeasible": fx.solve(model, fx.read_rates_text(EXACT, model)),
    }


ANSWERS = answers()


@pytest.fixture(params=ANSWERS, ids=list(ANSWERS))
def answer(request: pytest.FixtureRequest) -> fx.Answer[Any]:
    return ANSWERS[request.param]


def in_console(answer: fx.Answer[Any], width: int) -> str:
    stream = io.StringIO()
    Console(file=stream, width=width).print(answer)
    return stream.getvalue()


def test_rich_prints_an_answer_with_the_units_in_brackets(answer: fx.Answer[Any]) -> None:
    assert in_console(answer, 200) == str(answer)


def test_rich_prints_an_answer_for_the_width_of_its_console() -> None:
    shown = in_console(ANSWERS["solve"], 60)

    assert max(map(len, shown.splitlines())) <= 60
    assert "[mmol/g/h]" in shown


def test_an_interpreter_shows_the_screen(answer: fx.Answer[Any]) -> None:
    assert repr(answer) == str(answer)


def test_every_answer_has_a_frame(answer: fx.Answer[Any]) -> None:
    assert list(answer.to_frame().columns)
    for key in answer.tables:
        frame = answer.to_frame(key)
        assert len(frame) == len(answer.tables[key].rows)


def test_a_check_without_findings_has_an_empty_frame_of_them() -> None:
    frame = ANSWERS["check"].to_frame()

    assert len(frame) == 0
    assert list(frame.columns)[:3] == ["name", "severity", "message"]
    assert ANSWERS["check"].to_frame("most_energy")["amount"].tolist() == pytest.approx([20.8])


def test_a_check_gives_its_findings_as_a_frame() -> None:
    text = MODEL.replace("product    ethanol", "product    ethanol, lactate")

    frame = fx.check(fx.read_model_text(text)).to_frame()

    assert frame[["name", "severity", "line"]].values.tolist() == [["unused-species", "warning", 6]]


def test_the_document_holds_what_was_noted_while_reading() -> None:
    document = json.loads(ANSWERS["closure"].to_json())

    names = [warning["name"] for warning in document["warnings"]]
    assert "table-understood" in names
    assert names == [w["name"] for w in json.loads(ANSWERS["solve"].to_json())["warnings"]]


def test_a_notebook_shows_the_tables_of_the_terminal_as_tables(answer: fx.Answer[Any]) -> None:
    page = answer._repr_html_()

    shown = [b for b in answer.screen if isinstance(b, Table) and b.is_shown]
    assert page.count("<table>") == page.count("</table>") == len(shown)
    for block in answer.screen:
        if isinstance(block, Heading):
            assert f"<h4>{block.text}" in page
    assert ">nan<" not in page


def test_a_notebook_shows_signs_of_html_as_letters_and_hides_columns_of_data() -> None:
    table = Table(
        "t", "a < b", (Column("x", "x"), Column("", "hidden")), (("<b>", "secret"),), ("c & d",)
    )

    page = screen_html((Sentence("1 > 0"), table))

    assert "<caption>a &lt; b</caption>" in page
    assert ">&lt;b&gt;</td>" in page
    assert "<p>1 &gt; 0</p>" in page
    assert "<p>c &amp; d</p>" in page
    assert "secret" not in page
