from __future__ import annotations

import numpy as np
import pytest

from fluxnet.ground.errors import MisuseError
from fluxnet.rates.cultivation import (
    Cultivation,
    Form,
    Mode,
    SeriesKind,
    Setting,
    SettingKind,
    make_series,
)

GLUCOSE = make_series(SeriesKind.CONCENTRATION, "glucose", "mmol/L", [0, 2, 4], [90, 60, 10], 1.0)
O2 = make_series(SeriesKind.GAS_OUT, "O2", "mol/mol", [0, 1], [0.2, 0.19])


def test_the_arrays_of_a_series_cannot_be_written_to() -> None:
    with pytest.raises(ValueError, match="read-only"):
        GLUCOSE.value[0] = 3.0


@pytest.mark.parametrize(
    ("time", "value", "sd", "words"),
    [
        ([0, 1], [1.0], None, "2 times and 1 values"),
        ([0, 1], [1.0, np.nan], None, "no number"),
        ([1, 0], [1.0, 1.0], None, "time does not increase"),
        ([1, 1], [1.0, 1.0], None, "time does not increase"),
        ([0, 1], [1.0, 1.0], [0.1, -0.1], "sd is negative"),
    ],
)
def test_a_series_without_sense_is_refused(
    time: list[float], value: list[float], sd: list[float] | None, words: str
) -> None:
    with pytest.raises(MisuseError, match=words):
        make_series(SeriesKind.CONCENTRATION, "glucose", "mmol/L", time, value, sd)


def test_series_and_settings_are_found_by_kind_and_name() -> None:
    fed = Setting(SettingKind.CONTENT, 2500.0, "mmol/L", of="glucose", stream="feed")
    raw = Cultivation("A", Mode.FED_BATCH, (GLUCOSE, O2), (fed,))

    assert raw.find(SeriesKind.CONCENTRATION, "glucose") is GLUCOSE
    assert raw.find(SeriesKind.CONCENTRATION, "acetate") is None
    assert raw.find(SeriesKind.GAS_OUT) is O2
    assert raw.setting(SettingKind.CONTENT, "glucose", "feed") is fed
    assert raw.setting(SettingKind.CONTENT, "glucose") is None


def test_a_value_tells_where_it_stood() -> None:
    named = make_series(
        SeriesKind.FEED, "feed", "kg", [0, 1], [0, 0.1], form=Form.TOTAL, places=("f.csv",)
    )

    assert GLUCOSE.place(1) == "glucose"
    assert named.place(1) == "f.csv"
    assert O2.title == "O2 (gas out)"
