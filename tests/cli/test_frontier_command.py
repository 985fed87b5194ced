"""``fluxnet frontier``: its document, its faces, its figure, and what it refuses."""

from __future__ import annotations

import json
import re
import shlex
from pathlib import Path
from xml.etree import ElementTree

import jsonschema
import pytest

import fluxnet as fx
from fluxnet.cli.main import Exit, run

MANUAL = Path(fx.__file__).parent / "manual" / "frontier.md"
SCHEMA = Path(fx.__file__).parent / "presenting" / "schemas" / "frontier-1.json"
MODEL = re.findall(r"```flux\n(.*?)```", MANUAL.read_text(encoding="utf-8"), re.S)[0]
(LINES,) = re.findall(r"```frontier\n(.*?)```", MANUAL.read_text(encoding="utf-8"), re.S)
SVG = "{http://www.w3.org/2000/svg}"


@pytest.fixture(autouse=True)
def model(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Path:
    monkeypatch.chdir(tmp_path)
    path = tmp_path / "model.flux"
    path.write_text(MODEL, encoding="utf-8")
    return path


def document(line: str, capsys: pytest.CaptureFixture[str]) -> dict[str, object]:
    status = run([*shlex.split(line)[1:], "--json"])
    found: dict[str, object] = json.loads(capsys.readouterr().out)
    jsonschema.validate(found, json.loads(SCHEMA.read_text(encoding="utf-8")))
    assert status in (Exit.SOUND, Exit.FINDING)
    return found


@pytest.mark.parametrize("line", LINES.strip().splitlines())
def test_each_line_of_the_manual_gives_proven_curves(
    line: str, capsys: pytest.CaptureFixture[str]
) -> None:
    found = document(line, capsys)
    curves = found["curves"]

    assert isinstance(curves, list)
    assert all(curve["proof"]["verified"] for curve in curves)
    assert all(curve["status"] == "traced" for curve in curves)
    assert run(shlex.split(line)[1:]) == Exit.SOUND
    shown = capsys.readouterr().out
    assert "exact arithmetic" in shown
    assert max(map(len, shown.splitlines())) <= 80


def test_lactate_is_paid_with_atp(capsys: pytest.CaptureFixture[str]) -> None:
    # 2 glucose at 2.5 ATP an NADH: 2 (2 + 2 x 2.5 + 2 + 10 x 2.5) = 68; all to lactate: 4
    found = document("fluxnet frontier model.flux lactate ATP", capsys)
    points = [(p["x"], p["y"]) for p in found["curves"][0]["points"]]  # type: ignore[index]

    assert points == [(0, 68), (4, 4)]


def test_where_no_limit_ends_it_the_exit_status_is_that_of_a_finding(
    model: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    model.write_text(MODEL.replace("limit      glucose <= 2", ""), encoding="utf-8")

    assert run(["frontier", "model.flux", "lactate", "ATP"]) == Exit.FINDING
    assert "limit glucose <= 10" in capsys.readouterr().out.replace("\n", " ")
    found = document("fluxnet frontier model.flux lactate ATP", capsys)
    assert found["curves"][0]["status"] == "unbounded"  # type: ignore[index]


@pytest.mark.parametrize(
    ("words", "said"),
    [
        (["lactate", "lactate"], "one quantity"),
        (["lactate", "lactat"], "lactate"),
        (["lactate"], "--over"),
        (["lactate", "ATP", "--over", "oxygen"], "--from A --to B"),
        (["lactate", "ATP", "--across", "tigth"], "tight"),
        (["lactate", "ATP", "--figure", "a.jpg"], ".svg, .png or .pdf"),
        (["lactate", "ATP", "--figure", "model.flux"], "model.flux"),
    ],
)
def test_what_makes_no_sense_is_refused(
    words: list[str], said: str, capsys: pytest.CaptureFixture[str]
) -> None:
    assert run(["frontier", "model.flux", *words]) == Exit.MISUSE
    assert said in capsys.readouterr().err


def test_a_faulty_model_gives_its_faults(
    model: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    model.write_text(MODEL.replace("-> 2 pyruvate", "-> 3 pyruvate"), encoding="utf-8")
    found = document("fluxnet frontier model.flux lactate ATP", capsys)

    assert found["warnings"]
    assert found["runs"] == []


@pytest.mark.parametrize("kind", ["svg", "png", "pdf"])
def test_a_figure_has_the_same_bytes_each_time(kind: str, tmp_path: Path) -> None:
    line = ["frontier", "model.flux", "in oxygen", "ATP", "--across", "base|tight", "-q"]
    written = []
    for name in ("a", "b"):
        path = tmp_path / f"{name}.{kind}"
        assert run([*line, "--figure", str(path)]) == Exit.SOUND
        written.append(path.read_bytes())

    assert written[0] == written[1]
    assert len(written[0]) > 1000
    assert run([*line, "--figure", str(tmp_path / f"a.{kind}")]) == Exit.MISUSE
    assert run([*line, "--figure", str(tmp_path / f"a.{kind}"), "--force"]) == Exit.SOUND


def test_an_svg_says_in_text_what_is_seen(tmp_path: Path) -> None:
    path = tmp_path / "trade.svg"
    run(["frontier", "model.flux", "in oxygen", "ATP", "--across", "base|tight", "-q",
         "--figure", str(path)])  # fmt: skip
    root = ElementTree.fromstring(path.read_text(encoding="utf-8"))
    texts = " ".join("".join(t.itertext()) for t in root.iter(f"{SVG}text"))

    assert root[0].tag == f"{SVG}title"
    assert root[0].text == "Most ATP surplus at each oxygen in"
    assert root[1].tag == f"{SVG}desc"
    assert "The most ATP surplus of all" in (root[1].text or "")
    assert "tight" in texts
    assert "oxygen in [mmol/g/h]" in texts
    assert "errors of its parameters are not shown" in re.sub(r"\s+", " ", texts)
    assert "<dc:date>" not in path.read_text(encoding="utf-8")


def test_tables_are_written(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    folder = tmp_path / "tables"
    line = ["frontier", "model.flux", "lactate", "ATP", "--csv", str(folder)]

    assert run(line) == Exit.SOUND
    head = (folder / "points.csv").read_text(encoding="utf-8").splitlines()[0]
    assert head.split(",")[:2] == ["x", "y"]
    assert run(line) == Exit.MISUSE
    capsys.readouterr()


def test_python_gives_the_same(model: Path, tmp_path: Path) -> None:
    answer = fx.frontier(fx.read_model(model), "lactate", "ATP", figure=tmp_path / "a.svg")
    frame = answer.to_frame()

    assert frame["y"].tolist() == [68, 4]
    assert (tmp_path / "a.svg").exists()
    assert json.loads(answer.to_json())["document"] == "frontier/1"
    assert "lactate" in str(answer)
    assert "<table>" in answer._repr_html_()


def test_what_is_to_be_known_beside_a_line_is_shown_and_in_the_document(
    capsys: pytest.CaptureFixture[str]
) -> None:
    line = 'fluxnet frontier model.flux "in oxygen" ATP --across "base | tight"'
    found = document(line, capsys)
    run(shlex.split(line)[1:])
    shown = " ".join(capsys.readouterr().out.split())

    assert found["common"] == []
    assert found["choice"] == "At every oxygen in, tight is best."
    assert [(s["from"], s["to"], s["labels"]) for s in found["best"]] == [  # type: ignore[attr-defined]
        (0, 12, ["tight"])
    ]
    assert str(found["choice"]) in shown


def test_every_figure_that_is_asked_for_is_written(
    tmp_path: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    files = [tmp_path / name for name in ("a.svg", "b.png")]
    line = ["frontier", "model.flux", "in oxygen", "ATP", "-q"]
    asked = [word for file in files for word in ("--figure", str(file))]
    assert run([*line, *asked]) == Exit.SOUND

    assert all(file.stat().st_size > 1000 for file in files)
    assert capsys.readouterr().err.count("wrote ") == 2
    (files[0]).unlink()
    assert run([*line, *asked]) == Exit.MISUSE
    assert not files[0].exists()


def test_a_variant_that_changes_nothing_is_told(
    model: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    model.write_text(f"{MODEL}variant idle\n    limit glucose <= 2\n", encoding="utf-8")
    found = document('fluxnet frontier model.flux lactate ATP --across "base|idle"', capsys)

    assert "Variant idle changes nothing." in found["notes"]
    run(["frontier", "model.flux", "lactate", "ATP", "--across", "base|idle"])
    assert "Variant idle changes nothing." in capsys.readouterr().out


def test_what_sizes_oxygen_is_told_with_its_caution_once(
    capsys: pytest.CaptureFixture[str],
) -> None:
    for more in (["in oxygen", "ATP"], ["ATP", "--over", "oxygen", "--from", "0", "--to", "9"]):
        run(["frontier", "model.flux", *more])
        shown = " ".join(capsys.readouterr().out.split())
        assert shown.count("safety review, local codes and licensed engineers") == 1
    run(["frontier", "model.flux", "lactate", "ATP"])
    assert "licensed engineers" not in " ".join(capsys.readouterr().out.split())


def test_a_line_that_bends_is_drawn_in_eighty_columns(
    capsys: pytest.CaptureFixture[str],
) -> None:
    run(["frontier", "model.flux", "ATP", "--over", "oxygen", "--from", "0", "--to", "15"])
    lines = capsys.readouterr().out.splitlines()
    plot = [line for line in lines if "|" in line]

    assert sum(line.count("o") for line in plot if line.strip()) >= 3
    assert max(map(len, lines)) <= 80
