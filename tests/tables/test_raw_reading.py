"""Raw tables: titles, mapping file, clocks, runs, limits, and what is said of each."""

from __future__ import annotations

import random
from pathlib import Path

import pytest

from fluxnet.chemistry.reader import read_formula
from fluxnet.ground.names import Name, Severity
from fluxnet.network.model import Basis, Network, Role, Species
from fluxnet.rates.cultivation import Form, Mode, Series, SeriesKind, SettingKind
from fluxnet.tables.cultivation_tables import CultivationReading, read_cultivation
from fluxnet.tables.mapping import mapping_text

K = SeriesKind
DIALECTS = Path(__file__).resolve().parent / "dialects"


def read(tmp_path: Path, text: str, **files: str) -> CultivationReading:
    path = tmp_path / "run.csv"
    path.write_text(text, encoding="utf-8")
    for name, other in files.items():
        (tmp_path / f"{name}.csv").write_text(other, encoding="utf-8")
    return read_cultivation(tmp_path if len(files) > ("columns" in files) else path)


def series(reading: CultivationReading, kind: SeriesKind, name: str | None = None) -> Series:
    assert reading.cultivations, [d.message for d in reading.diagnostics]
    found = reading.cultivations[0].find(kind, name)
    assert found is not None
    return found


def names(reading: CultivationReading) -> set[Name]:
    return {d.name for d in reading.diagnostics if d.severity is not Severity.NOTE}


def test_the_mapping_file_names_columns_and_mends_units(tmp_path: Path) -> None:
    reading = read(
        tmp_path, "mode,batch\nt [h],Peak 3,dry weight [g/L],Temp\n0,1.8016,1,x\n1,0.9008,2,x\n",
        columns="column,means,unit\nPeak 3,glucose,g/L\nTemp,ignore,\n",
    )  # fmt: skip

    assert series(reading, K.CONCENTRATION, "glucose").value[0] == pytest.approx(10.0, rel=1e-4)
    assert {c.column: (c.means, c.how) for c in reading.columns}["Peak 3"] == (
        "glucose", "mapping file"
    )  # fmt: skip


def test_the_matching_as_a_mapping_file_gives_the_same_reading(tmp_path: Path) -> None:
    path = DIALECTS / "01-comma.csv"
    (tmp_path / "run.csv").write_bytes(path.read_bytes())
    before = read_cultivation(tmp_path / "run.csv")
    text = mapping_text(before.columns).replace(path.as_posix(), "")
    (tmp_path / "columns.csv").write_text(text, encoding="utf-8")
    after = read_cultivation(tmp_path / "run.csv")

    assert {(c.column, c.means) for c in after.columns} == {
        (c.column, c.means) for c in before.columns
    }
    for one, other in zip(before.cultivations[0].series, after.cultivations[0].series, strict=True):
        assert (one.kind, one.name, one.unit) == (other.kind, other.name, other.unit)
        assert one.value.tolist() == other.value.tolist()


def test_names_of_the_model_are_used(tmp_path: Path) -> None:
    network = Network("small", Basis.SPECIFIC, (
        Species("Glc", Role.SUBSTRATE, read_formula("C6H12O6"), entry="glucose"),
        Species("cells", Role.BIOMASS, read_formula("CH1.8O0.5N0.2")),
        Species("pigment", Role.PRODUCT, read_formula("C20H20O5")),
    ), (), (), ())  # fmt: skip
    path = tmp_path / "run.csv"
    path.write_text(
        "mode,batch\nt [h],glucose [g/L],dry weight [g/L],pigment [mg/L]\n0,1,1,3\n1,2,2,4\n"
    )
    raw = read_cultivation(path, network).cultivations[0]

    assert [(s.name, s.unit) for s in raw.series] == [
        ("Glc", "mmol/L"), ("cells", "g/L"), ("pigment", "mmol/L")
    ]  # fmt: skip


def test_errors_beside_a_column_are_absolute_or_relative(tmp_path: Path) -> None:
    reading = read(tmp_path, "mode,batch\nt [h],glucose [g/L],sd [%],ethanol [g/L],ethanol sd,"
                   "acetate [g/L]\n0,18.0156,2,1,0.1,1 ± 0.1\n1,9.0078,2,2,0.2,2 ± 5 %\n")

    assert series(reading, K.CONCENTRATION, "glucose").sd == pytest.approx([2.0, 1.0])
    assert series(reading, K.CONCENTRATION, "ethanol").sd == pytest.approx(
        [0.1 / 0.046069, 0.2 / 0.046069], rel=1e-6
    )
    assert series(reading, K.CONCENTRATION, "acetate").sd == pytest.approx(
        [0.1 / 0.060052, 0.1 / 0.060052], rel=1e-4
    )


def test_a_clock_ten_minutes_off_is_told(tmp_path: Path) -> None:
    reading = read_cultivation(DIALECTS.parent.parent / "faulty" / "raw" / "clocks-differ.csv")

    told = next(d for d in reading.diagnostics if d.name is Name.CLOCKS_DIFFER)
    assert "10 min ahead" in told.message


@pytest.mark.parametrize(
    ("before", "after", "expected"),
    [
        (("2026-10-25 02:50", "2026-10-25 02:55"), ("2026-10-25 02:00", "2026-10-25 02:05"), 1.0),
        (("2026-03-29 01:50", "2026-03-29 01:55"), ("2026-03-29 03:00", "2026-03-29 03:05"), -1.0),
        (("2026-11-01 01:50", "2026-11-01 01:55"), ("2026-11-01 01:00", "2026-11-01 01:05"), 1.0),
    ],
)
def test_an_hour_of_summer_time_is_mended_and_told(
    tmp_path: Path, before: tuple[str, str], after: tuple[str, str], expected: float
) -> None:
    lines = [f"{t},20.5" for t in (*before, *after)]
    reading = read(
        tmp_path, f"mode,batch\ninoculation,{before[0]}\nclock,O2 out [%]\n" + "\n".join(lines)
    )

    assert names(reading) == {Name.CLOCK_CHANGED}
    assert f"{expected:+g} h" in reading.diagnostics[0].message
    found = series(reading, K.GAS_OUT)
    assert found.time == pytest.approx([0.0, 5 / 60, 10 / 60, 15 / 60], abs=1e-6)


def test_an_hour_back_on_any_other_night_is_an_error(tmp_path: Path) -> None:
    reading = read(tmp_path, "mode,batch\nclock,O2 out [%]\n2026-06-07 02:55,20.5\n"
                   "2026-06-07 02:00,20.5\n2026-06-07 02:05,20.5\n")

    assert Name.TIME_BACKWARDS in names(reading)
    assert not reading.cultivations


def test_process_time_holds_where_a_clock_beside_it_is_changed(tmp_path: Path) -> None:
    reading = read(tmp_path, "mode,batch\nclock,t [h],O2 out [%]\n2026-10-25 02:30,0,20.5\n"
                   "2026-10-25 02:55,0.4167,20.5\n2026-10-25 02:10,0.6667,20.5\n")

    assert names(reading) == {Name.CLOCK_CHANGED}
    assert series(reading, K.GAS_OUT).time.tolist() == [0, 0.4167, 0.6667]


def test_clock_and_process_time_are_tied_by_the_inoculation(tmp_path: Path) -> None:
    reading = read(
        tmp_path, "mode,batch\ninoculation,2026-03-02 09:30\n\nclock,t [h],O2 out [%]\n"
        "2026-03-02 09:00,10,20.9\n2026-03-02 10:00,11,20.8\n",
        samples="sampled at,dry weight [g/L]\n2026-03-02 10:30,1\n2026-03-02 11:30,2\n",
    )  # fmt: skip

    assert series(reading, K.GAS_OUT).time == pytest.approx([-0.5, 0.5], abs=1e-6)
    assert series(reading, K.DRY_WEIGHT).time == pytest.approx([1.0, 2.0], abs=1e-6)


def test_runs_of_one_table_become_cultivations(tmp_path: Path) -> None:
    reading = read(tmp_path, "setting,value,unit,run\nmode,batch,,\nvolume,1,L,A\nvolume,2,L,B\n\n"
                   "run,t [h],dry weight [g/L]\nA,0,1\nA,1,2\nB,0,3\nB,2,4\n")

    told = [(c.name, c.series[0].value.tolist(), c.setting(SettingKind.VOLUME))
            for c in reading.cultivations]  # fmt: skip
    assert [(n, v) for n, v, _ in told] == [("A", [1.0, 2.0]), ("B", [3.0, 4.0])]
    assert [s.value for _, _, s in told if s is not None] == [1.0, 2.0]


def test_folders_in_a_folder_are_a_cultivation_each(tmp_path: Path) -> None:
    for name in ("first", "second"):
        (tmp_path / name).mkdir()
        (tmp_path / name / "data.csv").write_text("mode,batch\nt [h],OD\n0,1\n1,2\n")
    reading = read_cultivation(tmp_path)

    assert [c.name for c in reading.cultivations] == ["first", "second"]


def test_a_bottle_on_a_balance_counts_what_it_lost(tmp_path: Path) -> None:
    reading = read(tmp_path, "mode,fed-batch\nt [h],feed balance [g]\n0,900\n1,880\n2,850\n")
    feed = series(reading, K.FEED)

    assert (feed.form, feed.unit) == (Form.TOTAL, "kg")
    assert feed.value == pytest.approx([0, 0.02, 0.05])


@pytest.mark.parametrize(
    ("title", "form"),
    [
        ("sample [mL]", Form.EVENT), ("sample volume [mL]", Form.EVENT),
        ("sample total [mL]", Form.TOTAL), ("base [mL]", Form.TOTAL), ("base [mL/h]", Form.RATE),
        ("feed pulse [g]", Form.EVENT), ("NaOH added [g]", Form.TOTAL),
        ("feed 2 pump [g/min]", Form.RATE), ("antifoam addition [mL]", Form.EVENT),
    ],
)  # fmt: skip
def test_words_and_unit_say_how_a_stream_is_counted(
    tmp_path: Path, title: str, form: Form
) -> None:
    reading = read(tmp_path, f"mode,batch\nt [h],{title}\n0,1\n1,2\n2,4\n")

    assert reading.cultivations[0].series[0].form is form


def test_times_of_day_go_on_past_midnight(tmp_path: Path) -> None:
    reading = read(tmp_path, "mode,batch\ninoculation,22:30\nUhrzeit,OD\n22:30,1\n23:45,2\n"
                   "00:30,3\n")

    assert series(reading, K.OPTICAL_DENSITY).time == pytest.approx([0, 1.25, 2.0])


def test_dates_of_one_day_need_no_order(tmp_path: Path) -> None:
    reading = read(tmp_path, "mode,batch\ninoculation,02/03/2026 09:00\ndate,OD\n"
                   "02/03/2026 10:00,1\n02/03/2026 11:00,2\n")

    assert series(reading, K.OPTICAL_DENSITY).time == pytest.approx([1.0, 2.0])


@pytest.mark.parametrize(("sign", "expected"), [("comma", 1.234), ("point", 1234.0)])
def test_an_ambiguous_number_is_refused_until_a_line_says_the_sign(
    tmp_path: Path, sign: str, expected: float
) -> None:
    text = "mode;batch\n{}t [h];dry weight [g/L]\n0;1,234\n1;2,345\n"
    refused = read(tmp_path, text.format(""))
    told = refused.diagnostics[0]

    assert (told.name, told.span.line, told.span.column) == (Name.AMBIGUOUS_NUMBER, 3, 3)
    assert told.message.startswith("run.csv row 3, column B: `1,234` may be 1.234 or 1234")
    assert told.mend is not None
    assert "decimal; comma" in told.mend
    taken = read(tmp_path, text.format(f"decimal;{sign}\n"))
    assert series(taken, K.DRY_WEIGHT).value[0] == expected


def test_gas_per_broth_needs_volume_and_reference(tmp_path: Path) -> None:
    text = "mode,batch\n{}t [h],aeration [vvm]\n0,1\n1,1\n"
    whole = read(tmp_path, text.format("volume,2,L\nreference,20,°C\n"))

    assert series(whole, K.GAS_FLOW).value[0] == pytest.approx(120 / 24.0551, rel=1e-5)
    assert names(read(tmp_path, text.format("reference,20,°C\n"))) == {Name.BROTH_UNKNOWN}
    assert names(read(tmp_path, text.format("volume,2,L\n"))) == {Name.FLOW_WITHOUT_REFERENCE}


@pytest.mark.parametrize("unit", ["sL/min", "SLPM", "L/min"])
def test_a_flow_without_reference_says_what_is_at_stake(tmp_path: Path, unit: str) -> None:
    reading = read(tmp_path, f"mode,batch\nt [h],air flow [{unit}]\n0,1\n1,1\n")

    assert "7.3 %" in next(
        d.message for d in reading.diagnostics if d.name is Name.FLOW_WITHOUT_REFERENCE
    )


@pytest.mark.parametrize("unit", ["%", "ppm", "bar", "L/h", "g"])
def test_what_cannot_be_a_concentration_is_refused(tmp_path: Path, unit: str) -> None:
    reading = read(tmp_path, f"mode,batch\nt [h],glucose [{unit}]\n0,1\n1,1\n")

    assert names(reading) == {Name.WRONG_UNIT}
    assert not reading.cultivations


def test_content_of_feed_and_flows_are_settings(tmp_path: Path) -> None:
    reading = read(
        tmp_path, "mode;chemostat\nvolume;1,5;L\ndilution rate;0,1;1/h\nglucose in feed;18,0156 ± "
        "0,2;g/L\nfeed density;1,02;kg/L\ngas flow;1;vvm\nreference;0;°C\nash;8;%\n"
        "inlet O2;20,95;%\nhumidity out;100;%\nlag;2;min\n\nt [h];OD\n0;1,5\n1;1,5\n",
    )  # fmt: skip
    raw = reading.cultivations[0]
    content = raw.setting(SettingKind.CONTENT, "glucose", "feed")
    flow = raw.setting(SettingKind.FLOW, "", "feed")
    ash, lag = raw.setting(SettingKind.ASH), raw.setting(SettingKind.LAG)
    gas, inlet = raw.setting(SettingKind.GAS_FLOW), raw.setting(SettingKind.INLET, "oxygen")

    assert raw.mode is Mode.CHEMOSTAT
    assert content is not None
    assert content.value == pytest.approx(100.0)
    assert content.sd == pytest.approx(0.2 / 0.180156)
    assert flow is not None
    assert (flow.value, flow.unit) == (pytest.approx(0.15), "L/h")
    assert ash is not None
    assert (ash.value, ash.unit) == (0.08, "1")
    assert lag is not None
    assert lag.value == pytest.approx(2 / 60)
    assert gas is not None
    assert (gas.value, gas.unit) == (90.0, "L/h")
    assert inlet is not None
    assert inlet.value == pytest.approx(0.2095)


def test_a_file_that_is_not_there_is_told(tmp_path: Path) -> None:
    assert [d.name for d in read_cultivation(tmp_path / "no.csv").diagnostics] == [
        Name.FILE_MISSING
    ]
    assert [d.name for d in read_cultivation(tmp_path).diagnostics] == [Name.NO_RAW_DATA]


@pytest.mark.parametrize("seed", range(6))
def test_a_spoilt_file_never_ends_in_an_exception(tmp_path: Path, seed: int) -> None:
    spoil(tmp_path, seed, 25)


@pytest.mark.slow
@pytest.mark.parametrize("seed", range(100, 140))
def test_many_spoilt_files_never_end_in_an_exception(tmp_path: Path, seed: int) -> None:
    spoil(tmp_path, seed, 100)


def spoil(tmp_path: Path, seed: int, times: int) -> None:
    """Read dialects with signs put in, taken out and doubled; faults or tables, nothing else."""
    chance = random.Random(seed)
    files = sorted(p for p in DIALECTS.rglob("*") if p.suffix in (".csv", ".tsv", ".txt"))
    signs = [b'"', b";", b",", b".", b"[", b"]", b"\n", b"\n\n", b"\x00", b"\xff", b"1e999", b"#",
             b"-", b"=", b"nan", b"<", b"01/01/2026", b":", b"\t", b"%"]  # fmt: skip
    path = tmp_path / "run.csv"
    for _ in range(times):
        data = bytearray(chance.choice(files).read_bytes())
        for _ in range(chance.randint(1, 6)):
            at = chance.randrange(len(data))
            if chance.random() < 0.3:
                del data[at : at + chance.randint(1, 30)]
            else:
                data[at:at] = chance.choice(signs)
            if not data:
                data = bytearray(b"x")
        path.write_bytes(bytes(data))
        reading = read_cultivation(path)
        faulty = any(d.severity is Severity.ERROR for d in reading.diagnostics)

        assert faulty is not bool(reading.cultivations), bytes(data)
