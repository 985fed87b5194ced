"""Long records are read in chunks: the same means as when read whole, faults told by row."""

from __future__ import annotations

import resource
from pathlib import Path

import numpy as np
import pytest

from fluxnet.ground.names import Name
from fluxnet.rates.cultivation import SeriesKind
from fluxnet.tables import raw_files
from fluxnet.tables.cultivation_tables import CultivationReading, read_cultivation


@pytest.fixture
def short(monkeypatch: pytest.MonkeyPatch) -> None:
    """Treats files from 100 kB on as long."""
    monkeypatch.setattr(raw_files, "LONG_BYTES", 100_000)


def record(path: Path, rows: int, rows_told: dict[int, str] | None = None) -> Path:
    random = np.random.default_rng(3)
    oxygen = 20.95 - 1.5 * np.arange(rows) / rows + random.normal(0, 0.02, rows)
    lines = ["mode;batch", "inoculation;02.03.2026 10:00:00", "Clock;O2 out [%];Air flow [NL/h]"]
    start = np.datetime64("2026-03-02T09:00:00")
    for i, value in enumerate(oxygen):
        stamp = str(start + i)
        date = f"{stamp[8:10]}.{stamp[5:7]}.{stamp[:4]} {stamp[11:]}"
        percent = f"{value:.4f}".replace(".", ",")
        lines.append(f"{date};{percent};60,0")
    for row, text in (rows_told or {}).items():
        lines[row - 1] = text
    path.write_text("\n".join(lines) + "\n", encoding="utf-8")
    return path


def told(reading: CultivationReading) -> dict[Name, str]:
    return {d.name: d.message for d in reading.diagnostics}


def test_a_record_read_in_chunks_is_the_one_read_whole(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    path = record(tmp_path / "gas.csv", 30_000)
    whole = read_cultivation(path).cultivations[0]
    monkeypatch.setattr(raw_files, "LONG_BYTES", 100_000)
    chunked = read_cultivation(path).cultivations[0]

    for one, other in zip(whole.series, chunked.series, strict=True):
        assert (one.kind, one.name, one.unit) == (other.kind, other.name, other.unit)
        assert one.time.size == other.time.size < 6_000
        np.testing.assert_allclose(one.time, other.time, atol=1e-8)
        np.testing.assert_allclose(one.value, other.value, rtol=1e-12)
        assert other.time[0] == pytest.approx(-1.0, abs=0.01)


@pytest.mark.usefixtures("short")
def test_means_keep_their_errors(tmp_path: Path) -> None:
    path = record(tmp_path / "gas.csv", 60_000)
    raw = read_cultivation(path).cultivations[0]
    oxygen = raw.find(SeriesKind.GAS_OUT)

    assert oxygen is not None
    assert oxygen.sd is not None
    middle = oxygen.sd[oxygen.sd.size // 2]
    rows = 60_000 / oxygen.time.size
    assert middle == pytest.approx(0.0002 / np.sqrt(rows), rel=0.1)
    truth = 0.2095 - 0.015 * (oxygen.time + 1) * 3600 / 60_000
    assert np.std((oxygen.value - truth) / oxygen.sd) == pytest.approx(1.0, abs=0.1)
    assert "thinned" in raw.understood[0]


@pytest.mark.usefixtures("short")
def test_doubtful_cells_of_a_long_record_are_told_by_row(tmp_path: Path) -> None:
    path = record(tmp_path / "gas.csv", 10_000, {
        5000: "02.03.2026 10:23:16;#DIV/0!;60,0",
        6000: "02.03.2026 10:39:56;n.d.;60,0",
        7000: "02.03.2026 10:56:36;;60,0",
    })  # fmt: skip
    reading = read_cultivation(path)
    done = {d.place: d.text for d in reading.cultivations[0].doubtful}

    assert done == {"gas.csv row 5000": "#DIV/0!", "gas.csv row 6000": "n.d."}


@pytest.mark.usefixtures("short")
@pytest.mark.parametrize(
    ("row", "name", "words"),
    [
        ("02.03.2026 09:00:01;20,9;60,0", Name.TIME_BACKWARDS, "row 8000"),
        ("02.03.2026 11:13:16;120,9;60,0", Name.IMPOSSIBLE_GAS, "row 8000"),
        ("02.03.2026 11:13:16;1.234;60,0", Name.AMBIGUOUS_NUMBER, "row 8000"),
    ],
)
def test_faults_of_a_long_record_are_told_by_row(
    tmp_path: Path, row: str, name: Name, words: str
) -> None:
    reading = read_cultivation(record(tmp_path / "gas.csv", 10_000, {8000: row}))

    assert reading.cultivations == ()
    assert words in told(reading)[name]


@pytest.mark.usefixtures("short")
def test_a_long_file_with_several_tables_is_read_whole(tmp_path: Path) -> None:
    path = record(tmp_path / "gas.csv", 8_000)
    with path.open("a", encoding="utf-8") as file:
        file.write("\nClock;Dry weight [g/L]\n02.03.2026 10:00:00;0,5\n02.03.2026 11:00:00;0,7\n")
    raw = read_cultivation(path).cultivations[0]
    weight = raw.find(SeriesKind.DRY_WEIGHT)

    assert weight is not None
    assert weight.value.tolist() == [0.5, 0.7]


@pytest.mark.usefixtures("short")
@pytest.mark.parametrize("encoding", ["utf-16", "latin-1", "utf-8-sig"])
def test_a_long_record_may_have_any_encoding(tmp_path: Path, encoding: str) -> None:
    path = record(tmp_path / "gas.csv", 6_000)
    plain = read_cultivation(path).cultivations[0]
    text = path.read_text(encoding="utf-8").replace("mode;", "Säule;7 °C\nmode;")
    path.write_text(text, encoding=encoding)
    other = read_cultivation(path).cultivations[0]

    assert [s.value.size for s in other.series] == [s.value.size for s in plain.series]
    for one, two in zip(plain.series, other.series, strict=True):
        np.testing.assert_allclose(two.value, one.value, rtol=1e-12)


@pytest.mark.usefixtures("short")
def test_progress_is_told_while_a_long_file_is_read(tmp_path: Path) -> None:
    seen: list[tuple[str, int, int]] = []
    read_cultivation(
        record(tmp_path / "gas.csv", 8_000), progress=lambda *told: seen.append(told)
    )

    assert seen
    assert seen[-1][1] == seen[-1][2]
    assert seen[-1][0] == "reading gas.csv"


@pytest.mark.slow
def test_a_file_of_fifty_megabytes_is_read_in_flat_memory(tmp_path: Path) -> None:
    path = tmp_path / "gas.csv"
    block = "".join(f",{20.9 - i % 7 / 100:.4f},{0.04 + i % 5 / 100:.4f},60.00\n" for i in range(7))
    lines = block.splitlines()
    with path.open("w", encoding="utf-8") as file:
        file.write("mode,batch\ntime [s],O2 out [%],CO2 out [%],air flow [NL/h]\n")
        row = 0
        while file.tell() < 50_000_000:
            file.write("".join(f"{row + i}{lines[(row + i) % 7]}\n" for i in range(50_000)))
            row += 50_000
    before = resource.getrusage(resource.RUSAGE_SELF).ru_maxrss
    raw = read_cultivation(path).cultivations[0]
    after = resource.getrusage(resource.RUSAGE_SELF).ru_maxrss

    assert raw.series[0].time.size < 12_000
    assert (after - before) / 1024 < 300
