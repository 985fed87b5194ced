from __future__ import annotations

import io
from typing import Any

import pytest

import fluxnet as fx
from fluxnet.ground.table import Table
from fluxnet.presenting.terminal import Terminal

HEAD = "run,species,direction,rate,sd,unit,reactor\n"
A = """A,glucose,in,2,0.1,mmol/g/h,north
A,CO2,out,6,0.3,mmol/g/h,north
A,oxygen,in,5.9,0.3,mmol/g/h,north
A,mu,,0.15,0.005,1/h,north
A,CO2 / oxygen,,1.03,0.02,,north
"""
B = """B,glucose,in,2,0.1,mmol/g/h,south
B,CO2,out,,,mmol/g/h,south
B,oxygen,in,5.9,0.3,mmol/g/h,south
B,mu,,0.15,0.005,1/h,south
"""
C = """C,glucose,in,2,0,mmol/g/h,south
C,ethanol,out,5,0,mmol/g/h,south
C,CO2,out,4,0.1,mmol/g/h,south
"""


def answer(text: str, **options: Any) -> Any:
    return fx.closure(fx.read_rates_text(HEAD + text), **options)


def shown(text: str, **options: Any) -> str:
    stream = io.StringIO()
    Terminal(stream, colour=False, width=80, ascii_only=False).show(answer(text, **options).screen)
    return stream.getvalue()


def flat(text: str, **options: Any) -> str:
    """What is shown as running text."""
    return " ".join(shown(text, **options).split())


def test_the_world_is_the_first_thing_told_and_names_the_nitrogen_source() -> None:
    assert flat(A).startswith(
        "run A: closes Assumed to be exchanged: what has a row, and in any amount water, "
        "protons, phosphate, sulfate and the nitrogen source, ammonia. Not exchanged: H2, and "
        "all else without a row. Carbon closes to"
    )
    nitrate = A + "A,nitrate,in,1.2,0.1,mmol/g/h,north\n"
    assert "phosphate and sulfate; the nitrogen source, nitrate, has a row. Not exchanged" in (
        flat(nitrate, nitrogen="nitrate")
    )
    assert "Not exchanged: O2, H2, and all else" in flat(A, without=("oxygen",))
    assert "Not exchanged: all else." in flat(A + "A,H2,out,,,mmol/g/h,north\n")


def test_a_world_that_all_runs_share_is_told_once_and_first() -> None:
    assert flat(A + B).startswith("Assumed to be exchanged: what has a row")
    assert flat(A + B).count("Assumed") == 1
    assert flat(A + C).startswith("2 runs")
    assert flat(A + C).count("Assumed") == 2


def test_a_nitrogen_compound_that_is_taken_up_beside_the_free_source_is_told() -> None:
    nitrate = A + "A,nitrate,in,1.2,0.1,mmol/g/h,north\n"
    assert "name it (--nitrogen nitrate)" in flat(nitrate)
    assert "--nitrogen" not in flat(nitrate, nitrogen="nitrate")


def test_an_overview_tells_no_recovery_where_a_rate_was_not_measured() -> None:
    lines = shown(A + B + C).splitlines()
    overview = {line.split()[0]: line.split() for line in lines[: lines.index("run A: closes")]
                if line[:1] in "ABC" and line}  # fmt: skip
    assert overview["A"][1] == "yes"
    assert "–" not in overview["A"]
    assert overview["B"][5] == "–"
    assert overview["C"][1:4] == ["no", "–", "1"]


def test_no_line_is_wider_than_eighty_columns() -> None:
    text = shown(A + B + C)
    assert max(len(line) for line in text.splitlines()) <= 80
    assert "CO2 out / oxygen in" in text
    assert "[mol/mol]" not in text


def test_the_screen_says_once_at_its_end_that_closing_is_no_proof() -> None:
    text = flat(A + B + C)
    assert text.count("no proof") == 1
    assert text.endswith("what no balance tests can be wrong by any amount.")


def test_only_kinds_that_occur_are_explained() -> None:
    assert "calculable" not in flat(A)
    assert "calculable: not measured, but fixed by the others" in flat(B)


def test_nothing_is_reconciled_where_exact_values_contradict_one_another() -> None:
    run = answer(C).runs[0]
    assert [r.reconciled for r in run.rates] == [None] * 3
    assert "reconciled  " not in shown(C)
    assert "glucose in and ethanol out" in flat(C)


def test_a_table_that_is_data_alone_is_not_shown() -> None:
    one, two = answer(A), answer(A + B)
    assert "overview" in one.tables
    assert not one.tables["overview"].is_shown
    assert two.tables["overview"].is_shown
    frame = one.to_frame("overview")
    assert list(frame["reactor"]) == ["north"]
    assert frame["h"][0] == one.runs[0].test.h
    assert frame["limit"][0] == pytest.approx(7.8147, abs=1e-4)


def test_data_name_species_and_units_apart() -> None:
    frame = answer(A).to_frame()
    assert list(frame["species"]) == ["glucose", "CO2", "oxygen", "mu", "CO2 out / oxygen in"]
    assert list(frame["unit"])[3:] == ["1/h", "mol/mol"]
    assert "mu [1/h]" in shown(A)


def test_many_runs_are_told_as_an_overview_alone() -> None:
    text = "".join(A.replace("A,", f"R{i},") for i in range(13))
    tables = [block for block in answer(text).screen if isinstance(block, Table)]
    assert [table.key for table in tables] == ["overview"]
    assert "--run NAME" in shown(text)
    assert "All 13 tested runs close." in shown(text)
    frame = answer(text).to_frame()
    assert len(frame) == 13 * 5
    assert "R12" in set(frame["run"])


def test_very_many_runs_are_told_by_their_spread() -> None:
    """Carbon recoveries of 31 runs whose CO2 goes from 5.0 to 6.5: the middle one is 5.75."""
    text = "".join(
        A.replace("A,", f"R{i},").replace("out,6,", f"out,{5 + i / 20},") for i in range(31)
    )
    spread = answer(text).tables["spread"]
    told = dict(zip([c.key for c in spread.columns], spread.rows[0], strict=True))
    middle = answer(A.replace("out,6,", "out,5.75,")).runs[0].find_balance("carbon")
    assert told["median"] == pytest.approx(middle.recovery)
    assert told["sd"] == pytest.approx(middle.recovery_sd, rel=0.05)
    second = answer(A.replace("out,6,", "out,5.05,")).runs[0].find_balance("carbon")
    assert told["low"] == pytest.approx(second.recovery)
    assert len(answer(text).to_frame("overview")) == 31
    assert str(answer(text)).count("R1 ") <= 1
    assert "<td" in answer(text)._repr_html_()


def test_options_that_name_what_is_not_there_raise() -> None:
    with pytest.raises(fx.InputError, match="no row of lactate"):
        answer(A, without=("lactate",))


def test_only_a_typed_zero_is_told_as_exact_and_data_keep_every_zero() -> None:
    text = "A,glucose,in,2,0,mmol,x\nA,ethanol,out,3.9,0.1,mmol,x\nA,CO2,out,4.1,0.1,mmol,x\n"
    assert shown(text).count("exact") == 1
    assert list(answer(text).to_frame()["reconciled_sd"]) == [0, 0, 0]


def test_where_one_side_alone_has_rows_the_other_is_to_be_measured() -> None:
    alone = flat("A,glucose,in,10,0.2,mmol/g/h,north\n")
    assert (
        "To do: beside glucose in nothing that it goes to has a row: measure and give CO2, oxygen "
        "and the products." in alone
    )
    assert "once more" not in alone
    assert "nothing that it comes from has a row" in flat("A,ethanol,out,10,1,mmol/g/h,north\n")
    assert "has a row: measure and give" not in flat(
        "A,glucose,in,10,0.2,mmol/g/h,n\nA,ethanol,out,10,1,mmol/g/h,n\n"
    )
