"""``fluxnet routes``: the screen, the document, and what it refuses."""

from __future__ import annotations

import csv
import json
from pathlib import Path

import jsonschema
import pytest

import fluxnet as fx
import fluxnet.presenting
from fluxnet.cli.main import Exit, run
from fluxnet.ground.progress import silent
from fluxnet.ground.resources import resource_folder
from fluxnet.modes import enumerate as search

TO_ETHANOL = ["routes", "mixed-acid.flux", "--from", "glucose", "--to", "ethanol"]


@pytest.fixture(autouse=True)
def folder(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Path:
    for source in resource_folder("models").glob("*.flux"):
        (tmp_path / source.name).write_bytes(source.read_bytes())
    monkeypatch.chdir(tmp_path)
    monkeypatch.delenv("COLUMNS", raising=False)
    return tmp_path


def document(words: list[str], capsys: pytest.CaptureFixture[str], status: int = 0) -> dict:
    assert run([*words, "--json"]) == status
    found = json.loads(capsys.readouterr().out)
    schemas = Path(fluxnet.presenting.__file__).parent / "schemas"
    jsonschema.validate(found, json.loads((schemas / "routes-1.json").read_text("utf-8")))
    return found


@pytest.mark.parametrize(
    "more",
    [
        [],
        ["--drain", "ATP", "--keep-above", "1.5"],
        ["--open", "NADH,ATP"],
        ["--best", "4"],
        ["--variant", "anaerobic", "--all"],
    ],
    ids=" ".join,
)
def test_the_document_is_one_that_its_schema_allows(
    more: list[str], capsys: pytest.CaptureFixture[str]
) -> None:
    found = document([*TO_ETHANOL, *more], capsys)

    assert found["count"] == sum(group["count"] for group in found["groups"]) > 0
    assert found["listed"] == sum(len(group["routes"]) for group in found["groups"])
    assert found["complete"]


def test_a_document_lists_the_best_routes_up_to_a_number(
    capsys: pytest.CaptureFixture[str], monkeypatch: pytest.MonkeyPatch
) -> None:
    monkeypatch.setattr("fluxnet.presenting.routes_record.LISTED", 5)
    few = document(TO_ETHANOL, capsys)
    every = document([*TO_ETHANOL, "--all"], capsys)

    assert (few["listed"], every["listed"]) == (5, every["count"])
    assert few["groups"][0] == every["groups"][0]


def test_the_yields_fall_and_are_exact(capsys: pytest.CaptureFixture[str]) -> None:
    groups = document(TO_ETHANOL, capsys)["groups"]
    yields = [group["yield"] for group in groups]

    assert yields == sorted(yields, reverse=True)
    assert groups[0]["exact_yield"] == "2"
    assert {e["carrier"]: e["low"] for e in groups[0]["energy"]} == {"ATP": 2.0}


@pytest.mark.parametrize("more", [[], ["--keep-above", "1.5"], ["--drain", "ATP"], ["--best", "5"]])
def test_the_screen_is_readable_at_eighty_columns(
    more: list[str], capsys: pytest.CaptureFixture[str]
) -> None:
    assert run([*TO_ETHANOL, *more]) == Exit.SOUND
    shown = capsys.readouterr().out

    assert max(map(len, shown.splitlines())) <= 80
    assert "ethanol" in shown


def test_a_yield_beside_another_substrate_is_marked(capsys: pytest.CaptureFixture[str]) -> None:
    words = ["routes", "heterolactic.flux", "--from", "glucose", "--to", "lactate"]
    assert run(words) == Exit.SOUND
    shown = " ".join(capsys.readouterr().out.split())
    assert "at most 24.71 mol/mol beside other substrates, 1 without them." in shown
    assert "yield: mol lactate per mol glucose, other substrates not counted" in shown
    assert run(TO_ETHANOL) == Exit.SOUND
    assert "other substrates" not in capsys.readouterr().out


def test_quiet_keeps_the_verdicts(capsys: pytest.CaptureFixture[str]) -> None:
    assert run([*TO_ETHANOL, "--quiet", "--keep-above", "1.5"]) == Exit.SOUND

    assert "\n\n" not in capsys.readouterr().out


def test_tables_go_to_files(folder: Path) -> None:
    assert run([*TO_ETHANOL, "--keep-above", "1.5", "--csv", "out"]) == Exit.SOUND
    with (folder / "out" / "routes.csv").open(encoding="utf-8") as file:
        groups = list(csv.DictReader(file))
    with (folder / "out" / "route_reactions.csv").open(encoding="utf-8") as file:
        lines = list(csv.DictReader(file))

    assert len(groups) == fx.routes(fx.read_model("mixed-acid.flux")).count
    assert sum(line["route"] == "1" for line in lines) == int(float(groups[0]["reactions"]))
    assert (folder / "out" / "cuts.csv").exists()


def test_ctrl_c_keeps_what_was_found(
    capsys: pytest.CaptureFixture[str], monkeypatch: pytest.MonkeyPatch
) -> None:
    calls: list[int] = []

    def stop(what: str, done: int, total: int) -> None:
        calls.append(done)
        if len(calls) == 9:
            raise KeyboardInterrupt

    found = search.find_modes
    monkeypatch.setattr(
        "fluxnet.studies.routes.find_modes",
        lambda cone, progress=silent, **bounds: found(cone, **bounds, progress=stop),
    )
    assert run(TO_ETHANOL) == Exit.INTERRUPTED
    shown = capsys.readouterr().out

    assert "Not all routes" in shown
    assert "Interrupted" in shown


def test_more_routes_than_memory_allows_are_told_with_how_to_narrow(
    capsys: pytest.CaptureFixture[str],
) -> None:
    found = document([*TO_ETHANOL, "--memory", "30kB"], capsys, Exit.FINDING)
    assert (found["complete"], found["ending"]) == (False, "memory")
    assert found["memory_needed"] > 30_000

    assert run([*TO_ETHANOL, "--memory", "30kB"]) == Exit.FINDING
    shown = " ".join(capsys.readouterr().out.split())
    assert "Stopped before the bound on memory was passed" in shown
    assert "--best 20" in shown


@pytest.mark.parametrize(
    ("more", "words"),
    [
        (["--to", "ethnol"], "near to it are ethanol"),
        (["--from", "glucose", "--to", "glucose"], "name two species"),
        (["--memory", "much"], "a size such as 2GB"),
        (["--keep-above", "high", "--to", "ethanol"], "a number is needed"),
        (["--drain", "ATQ"], "near to it are ATP"),
        (["--variant", "anaerobc"], "anaerob"),
    ],
)
def test_what_makes_no_sense_is_refused_with_the_nearest(
    more: list[str], words: str, capsys: pytest.CaptureFixture[str]
) -> None:
    assert run(["routes", "mixed-acid.flux", *more]) == Exit.MISUSE
    assert words in " ".join(capsys.readouterr().err.split())


def test_a_network_without_a_route_says_why(
    folder: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    (folder / "stuck.flux").write_text(
        "substrate glucose\ninside pyruvate\ncarrier ATP, NADH\ncompartment a\n"
        "    lump : glucose -> 2 pyruvate + 2 ATP + 2 NADH\n    burn : ATP -> nothing\n",
        encoding="utf-8",
    )
    assert run(["routes", "stuck.flux"]) == Exit.FINDING
    shown = capsys.readouterr().out

    assert shown.startswith("No route.")
    assert "nothing uses it" in shown


def test_a_product_that_no_route_makes_is_told_with_what_is_in_the_way(
    folder: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    (folder / "short.flux").write_text(
        """
substrate  glucose
product    ethanol, succinate
exchange   CO2
carrier    ATP, NADH
inside     pyruvate
inside     OAA  C4H4O5
compartment catabolism
    glycolysis : glucose -> 2 pyruvate + 2 ATP + 2 NADH
    pdc        : pyruvate + NADH -> ethanol + CO2
    pyc        : pyruvate + CO2 + ATP -> OAA
    frd        : OAA + 2 NADH -> succinate
compartment maintenance
    upkeep     : ATP -> nothing
""",
        encoding="utf-8",
    )
    for more in ([], ["--best", "3"]):
        assert run(["routes", "short.flux", "--to", "succinate", *more]) == Exit.FINDING
        shown = " ".join(capsys.readouterr().out.split())
        assert "No route from glucose makes succinate: frd, which makes it, cannot run" in shown
        assert "NADH" in shown
    assert run(["routes", "short.flux", "--to", "succinate", "--open", "NADH"]) == Exit.SOUND
    capsys.readouterr()
    # ATP set free by --open or --drain does not help: it is NADH that no route makes enough of
    for more in (["--open", "ATP"], ["--drain", "ATP"], ["--open", "ATP", "--best", "2"]):
        assert run(["routes", "short.flux", "--to", "succinate", *more]) == Exit.FINDING
        shown = " ".join(capsys.readouterr().out.split())
        assert (
            "No route from glucose makes succinate: NADH would have to be spent for it, and no "
            "route makes any." in shown
        )


def test_python_has_the_same_routes(capsys: pytest.CaptureFixture[str]) -> None:
    answer = fx.routes(fx.read_model("mixed-acid.flux"), substrate="glucose", product="ethanol")
    found = document(TO_ETHANOL, capsys)

    assert answer.count == found["count"]
    assert list(answer.to_frame()["yield"])[:3] == [g["yield"] for g in found["groups"][:3]]
    assert json.loads(answer.to_json())["groups"] == found["groups"]
