"""``use``: other files taken in, from the model's own folder."""

from __future__ import annotations

from pathlib import Path

import pytest

from fluxnet.reading.model import read_model, read_model_text

MODEL = """\
model The whole
use "parts/species.flux"
compartment c
    a : glucose -> 2 ethanol + 2 CO2
"""
SPECIES = "model A part\nsubstrate glucose\nproduct ethanol, CO2\n"


@pytest.fixture
def folder(tmp_path: Path) -> Path:
    (tmp_path / "model" / "parts").mkdir(parents=True)
    (tmp_path / "model" / "main.flux").write_text(MODEL, encoding="utf-8")
    (tmp_path / "model" / "parts" / "species.flux").write_text(SPECIES, encoding="utf-8")
    return tmp_path / "model"


def names(path: Path, **options: object) -> list[str]:
    return [d.name.value for d in read_model(path, **options).diagnostics]  # type: ignore[arg-type]


def test_a_used_file_is_taken_in_and_its_title_is_not(folder: Path) -> None:
    reading = read_model(folder / "main.flux")

    assert reading.network is not None, reading.diagnostics
    assert reading.network.title == "The whole"
    assert [Path(s.file).name for s in reading.sources] == ["main.flux", "species.flux"]
    assert Path(reading.network.species[0].span.file).name == "species.flux"


def test_a_text_uses_files_of_the_folder_it_is_given(folder: Path) -> None:
    assert read_model_text(MODEL, folder=folder).network is not None
    assert read_model_text(MODEL).diagnostics[0].name.value == "use-missing"


def test_a_file_that_is_used_twice_is_taken_in_once(folder: Path) -> None:
    (folder / "again.flux").write_text('use "parts/species.flux"\n', encoding="utf-8")
    (folder / "main.flux").write_text('use "again.flux"\n' + MODEL, encoding="utf-8")

    assert names(folder / "main.flux") == []


def test_a_file_in_a_folder_below_may_use_one_above_it_inside_the_models_folder(
    folder: Path,
) -> None:
    (folder / "limits.flux").write_text("limit glucose <= 3\n", encoding="utf-8")
    (folder / "parts" / "species.flux").write_text(
        SPECIES + 'use "../limits.flux"\n', encoding="utf-8"
    )

    reading = read_model(folder / "main.flux")

    assert reading.network is not None, reading.diagnostics
    assert len(reading.network.limits) == 1


def test_a_file_outside_must_be_allowed(folder: Path) -> None:
    outside = folder.parent / "species.flux"
    outside.write_text(SPECIES, encoding="utf-8")
    (folder / "main.flux").write_text(
        MODEL.replace("parts/species.flux", "../species.flux"), encoding="utf-8"
    )

    assert "use-outside" in names(folder / "main.flux")
    assert names(folder / "main.flux", allow_use=(outside,)) == []
    assert names(folder / "main.flux", allow_use=(folder.parent,)) == []


def test_a_link_does_not_lead_outside(folder: Path) -> None:
    outside = folder.parent / "species.flux"
    outside.write_text(SPECIES, encoding="utf-8")
    link = folder / "parts" / "species.flux"
    link.unlink()
    link.symlink_to(outside)

    assert "use-outside" in names(folder / "main.flux")


def test_an_absolute_path_must_be_allowed_even_inside(folder: Path) -> None:
    inside = (folder / "parts" / "species.flux").resolve()
    (folder / "main.flux").write_text(
        MODEL.replace("parts/species.flux", inside.as_posix()), encoding="utf-8"
    )

    assert "use-outside" in names(folder / "main.flux")
    assert names(folder / "main.flux", allow_use=(inside,)) == []


@pytest.mark.parametrize("name", ["a.flux", "main.flux"])
def test_a_circle_is_told_once(folder: Path, name: str) -> None:
    (folder / "a.flux").write_text(f'use "{name}"\n', encoding="utf-8")
    (folder / "main.flux").write_text('use "a.flux"\n' + MODEL, encoding="utf-8")

    assert names(folder / "main.flux") == ["use-circle"]


@pytest.mark.parametrize(
    ("content", "name"),
    [(b"\x00\x01", "binary-file"), (b"# x\n" * 20_001, "file-too-long")],
)
def test_a_used_file_that_cannot_be_read_is_told_where_it_is_used(
    folder: Path, content: bytes, name: str
) -> None:
    (folder / "parts" / "species.flux").write_bytes(content)

    found = [d for d in read_model(folder / "main.flux").diagnostics if d.name.value == name]

    assert [d.span.line for d in found] == [2]


def test_names_clash_across_files_with_both_places(folder: Path) -> None:
    (folder / "main.flux").write_text(MODEL + "exchange CO2\n", encoding="utf-8")

    found = read_model(folder / "main.flux").diagnostics[0]

    assert found.name.value == "declared-twice"
    assert found.message == (
        f"CO2 is declared twice (first in {folder / 'parts' / 'species.flux'}, line 3)"
    )
    assert Path(found.span.file).name == "main.flux"
    assert Path(found.also[0].file).name == "species.flux"


@pytest.mark.parametrize(
    ("used", "own", "sound"),
    [
        ("basis mmol/L/h\nlimit CO2 <= 3\n", "", False),
        ("limit CO2 <= 3\n", "basis mmol/L/h\n", False),
        ("limit CO2 <= 3\n", "", True),
        ("basis mmol/L/h\nlimit CO2 <= 3\n", "basis mmol/L/h\n", True),
        ("", "basis mmol/L/h\n", True),
    ],
)
def test_used_files_are_written_in_the_models_basis(
    folder: Path, used: str, own: str, sound: bool
) -> None:
    (folder / "parts" / "species.flux").write_text(SPECIES + used, encoding="utf-8")
    (folder / "main.flux").write_text(own + MODEL, encoding="utf-8")

    assert names(folder / "main.flux") == ([] if sound else ["basis-differs"])


def test_files_that_use_one_another_without_an_end_are_told_and_not_followed(
    tmp_path: Path,
) -> None:
    for number in range(300):
        (tmp_path / f"{number}.flux").write_text(f'use "{number + 1}.flux"\n', encoding="utf-8")
    found = read_model(tmp_path / "0.flux").diagnostics

    (told,) = [d for d in found if d.name.value == "file-too-long"]
    assert (Path(told.span.file).name, told.span.line) == ("99.flux", 1)
