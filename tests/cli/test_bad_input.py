"""Bad input gets one clear sentence with its place, the right exit status, never a traceback."""

from __future__ import annotations

from pathlib import Path

import pytest

from fluxnet.cli.main import Exit, run
from fluxnet.cli.new import MODEL, RATES


@pytest.fixture
def folder(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Path:
    (tmp_path / "model.flux").write_text(MODEL, encoding="utf-8")
    (tmp_path / "rates.csv").write_text(RATES, encoding="utf-8")
    monkeypatch.chdir(tmp_path)
    return tmp_path


def told(words: list[str], capsys: pytest.CaptureFixture[str]) -> tuple[int, str]:
    status = run(words)
    return status, " ".join(capsys.readouterr().err.split())


FILES = {
    "missing": None,
    "empty": b"",
    "binary": b"\x7fELF\x00\x00\x01",
    "long": b"# nothing\n" * 20_001,
}


@pytest.mark.parametrize(
    ("kind", "name"),
    [
        ("missing", "file-missing"),
        ("folder", "not-a-file"),
        ("empty", "empty-file"),
        ("binary", "binary-file"),
        ("long", "file-too-long"),
    ],
)
@pytest.mark.parametrize("command", ["check", "solve"])
def test_a_model_that_cannot_be_read_exits_with_2(
    folder: Path, command: str, kind: str, name: str, capsys: pytest.CaptureFixture[str]
) -> None:
    path = folder / "bad.flux"
    if kind == "folder":
        path.mkdir()
    elif FILES[kind] is not None:
        path.write_bytes(FILES[kind])
    status, text = told([command, "bad.flux"], capsys)

    assert status == Exit.MISUSE
    assert f"({name})" in text
    assert "bad.flux" in text


@pytest.mark.parametrize(
    ("kind", "name"),
    [
        ("missing", "file-missing"),
        ("folder", "not-a-file"),
        ("empty", "empty-file"),
        ("binary", "binary-file"),
    ],
)
def test_a_rates_table_that_cannot_be_read_exits_with_2(
    folder: Path, kind: str, name: str, capsys: pytest.CaptureFixture[str]
) -> None:
    path = folder / "bad.csv"
    if kind == "folder":
        path.mkdir()
    elif FILES[kind] is not None:
        path.write_bytes(FILES[kind])
    status, text = told(["closure", "bad.csv"], capsys)

    assert status == Exit.MISUSE
    assert f"({name})" in text


def test_the_number_of_lines_is_told_and_large_lets_them_in(
    folder: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    (folder / "long.flux").write_text(MODEL + "# nothing\n" * 20_000, encoding="utf-8")
    status, text = told(["check", "long.flux"], capsys)

    assert status == Exit.MISUSE
    assert f"{20_000 + len(MODEL.splitlines())} lines" in text
    assert run(["check", "long.flux", "--large"]) == Exit.SOUND


MODELS = {
    "unknown-species": ("glucose -> 2 pyruvate", "glucose -> 2 pyruvat"),
    "declared-twice": ("product    ethanol", "product    ethanol\nproduct    ethanol"),
    "reaction-outside": (
        "compartment catabolism", "extra : pyruvate -> ethanol\ncompartment catabolism"
    ),
    "use-missing": ("model   My strain", 'model   My strain\nuse "nowhere.flux"'),
    "use-outside": ("model   My strain", 'model   My strain\nuse "../other.flux"'),
    "contradictory-limits": (
        "limit  upkeep", "limit glucose >= 5\nlimit glucose <= 3\nlimit  upkeep"
    ),
    "outside-range": ("PO   = 1.4", "PO   = 9.4"),
    "division-by-zero": ("PO ATP", "(PO/0) ATP"),
    "wide-coefficients": (
        "ATP -> nothing", "1000000000000 ATP -> nothing\n    w : 1e12 ATP -> 1e-12 ATP"
    ),
}  # fmt: skip


@pytest.mark.parametrize("name", MODELS)
def test_a_fault_in_a_model_is_named_with_line_and_column(
    folder: Path, name: str, capsys: pytest.CaptureFixture[str]
) -> None:
    old, new = MODELS[name]
    assert old in MODEL
    (folder.parent / "other.flux").write_text("inside a\n", encoding="utf-8")
    (folder / "bad.flux").write_text(MODEL.replace(old, new, 1), encoding="utf-8")
    status, text = told(["check", "bad.flux"], capsys)

    assert f"({name})" in text
    assert "bad.flux, line" in text
    assert status == Exit.FINDING


def test_a_circle_of_use_is_told(folder: Path, capsys: pytest.CaptureFixture[str]) -> None:
    (folder / "a.flux").write_text('use "b.flux"\n' + MODEL, encoding="utf-8")
    (folder / "b.flux").write_text('use "a.flux"\n', encoding="utf-8")
    status, text = told(["check", "a.flux"], capsys)

    assert status == Exit.FINDING
    assert "(use-circle)" in text


@pytest.mark.parametrize("change", ["latin-1", "crlf", "tabs"])
def test_other_encodings_line_ends_and_tabs_are_read(
    folder: Path, change: str, capsys: pytest.CaptureFixture[str]
) -> None:
    text = MODEL
    if change == "crlf":
        text = text.replace("\n", "\r\n")
    if change == "tabs":
        text = text.replace("    ", "\t")
    (folder / "other.flux").write_bytes(
        text.encode("latin-1" if change == "latin-1" else "utf-8")
    )

    assert run(["check", "other.flux"]) == Exit.SOUND
    if change == "latin-1":
        assert "(wrong-encoding)" in " ".join(capsys.readouterr().err.split())


TABLES = {
    "negative-sd": ("2.05,3 %", "2.05,-0.1"),
    "not-a-number": ("2.05,3 %", "nan,3 %"),
    "unknown-unit": ("3 %,mmol/g/h", "3 %,mmoll/g/h"),
    "wrong-unit": ("3 %,mmol/g/h", "3 %,m"),
    "row-repeated": ("1,oxygen,in", "1,glucose,in,1,0.1,mmol/g/h\n1,oxygen,in"),
    "unknown-quantity": ("glucose", "glucoes"),
    "unreadable-cell": ("2.05,3 %", "2.O5,3 %"),
    "rate-against-role": ("glucose,in", "glucose,out"),
    "bad-direction": ("glucose,in", "glucose,inside"),
    "mixed-basis": ("5 %,mmol/g/h\n1,CO2", "5 %,g/L/h\n1,CO2"),
}


@pytest.mark.parametrize("name", TABLES)
def test_a_fault_in_a_table_is_named_with_line_and_column(
    folder: Path, name: str, capsys: pytest.CaptureFixture[str]
) -> None:
    old, new = TABLES[name]
    assert old in RATES
    (folder / "bad.csv").write_text(RATES.replace(old, new, 1), encoding="utf-8")
    status, text = told(["solve", "model.flux", "bad.csv"], capsys)

    assert status == Exit.FINDING
    assert f"({name})" in text
    assert "bad.csv, line" in text


def test_a_run_without_any_measured_rate_is_told(
    folder: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    (folder / "bad.csv").write_text("run,species,direction,rate,sd,unit\n1,glucose,in,,,mmol/g/h\n")
    status, text = told(["closure", "bad.csv"], capsys)

    assert status == Exit.FINDING
    assert "(no-measured-rate)" in text


def test_an_exact_rate_is_allowed(folder: Path) -> None:
    (folder / "exact.csv").write_text(RATES.replace("2.05,3 %", "2.05,0"), encoding="utf-8")

    assert run(["closure", "exact.csv", "--model", "model.flux"]) == Exit.SOUND


@pytest.mark.parametrize(
    "words",
    [
        ["solve", "model.flux", "--maximise", "ethnol"],
        ["solve", "model.flux", "--variant", "anearobic"],
        ["solve", "model.flux", "rates.csv", "--run", "7"],
        ["solve", "model.flux", "--maximise", "ethanol", "--minimise", "CO2"],
        ["solve", "model.flux", "rates.csv", "--maximise", "ethanol", "--within", "-1"],
        ["solve", "model.flux", "rates.csv", "--within", "inf"],
        ["solve", "model.flux", "rates.csv", "--fraction", "0.5"],
        ["solve", "model.flux", "--run", "A"],
        ["solve", "model.flux", "rates.csv", "--maximise", "ethanol", "--suspects"],
        ["solve", "-", "-"],
        ["check", "model.flux", "--no-such-option"],
        ["explain", "no-such-name"],
        ["manual", "no-such-topic"],
    ],
    ids=" ".join,
)
def test_a_command_that_is_wrongly_used_exits_with_2(
    folder: Path, words: list[str], capsys: pytest.CaptureFixture[str]
) -> None:
    status, text = told(words, capsys)

    assert status == Exit.MISUSE
    assert text


@pytest.mark.parametrize(
    ("words", "file", "expected"),
    [
        (["check", "rates.csv"], "rates.csv", "a model was expected"),
        (["check", "rates.csv", "--tidy"], "rates.csv", "a model was expected"),
        (["closure", "model.flux"], "model.flux", "a table of rates was expected"),
        (["closure", "rates.csv", "--model", "rates.csv"], "rates.csv", "a model was expected"),
        (["solve", "rates.csv", "model.flux"], "rates.csv", "a model was expected"),
        (["solve", "model.flux", "model.flux"], "model.flux", "a table of rates was expected"),
    ],
    ids=lambda v: " ".join(v) if isinstance(v, list) else "",
)
def test_files_that_were_swapped_give_one_error_each(
    folder: Path, words: list[str], file: str, expected: str, capsys: pytest.CaptureFixture[str]
) -> None:
    before = (folder / file).read_bytes()
    status, text = told(words, capsys)

    assert status == Exit.MISUSE
    assert text.startswith(f"{file}: {file} looks like a")
    assert expected in text
    assert text.count("(wrong-kind-of-file)") == text.count("mend") == 1
    assert (folder / file).read_bytes() == before


def test_a_workbook_is_no_model(folder: Path, capsys: pytest.CaptureFixture[str]) -> None:
    (folder / "book.xlsx").write_bytes(b"PK\x03\x04 what follows is packed")
    status, text = told(["check", "book.xlsx"], capsys)

    assert status == Exit.MISUSE
    assert "book.xlsx is a workbook, and no model" in text


def test_a_variant_that_the_model_lacks_is_told_with_the_file(
    folder: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    status, text = told(["solve", "model.flux", "--variant", "nope"], capsys)

    assert status == Exit.MISUSE
    assert text.startswith("model.flux: the model has no variant nope")


@pytest.mark.parametrize(("command", "last"), [("new", "HOW-TO.txt"), ("demo", "tw4.flux")])
def test_a_folder_with_one_of_the_files_in_it_is_left_as_it_is(
    tmp_path: Path, command: str, last: str, capsys: pytest.CaptureFixture[str]
) -> None:
    (tmp_path / last).write_text("mine", encoding="utf-8")
    status, text = told([command, str(tmp_path)], capsys)

    assert status == Exit.MISUSE
    assert f"{last} exists" in text
    assert [p.name for p in tmp_path.iterdir()] == [last]


def test_links_in_a_circle_are_told_where_they_stand(
    folder: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    (folder / "circle").symlink_to(folder / "circle")
    for words in (
        ["check", "circle", "--csv", "out"],
        ["check", "model.flux", "--xlsx", "circle"],
        ["closure", "circle", "--xlsx", "out.xlsx"],
        ["check", "model.flux", "--csv", "circle"],
    ):
        status, text = told(words, capsys)
        assert status == Exit.MISUSE
        assert "circle" in text
