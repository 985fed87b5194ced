"""Tables joined to cultivations: times told from inoculation, pieces of one series in order."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace

import numpy as np
from numpy.typing import NDArray

from fluxnet.ground.diagnostic import Diagnostic
from fluxnet.ground.names import Name
from fluxnet.ground.source import Span
from fluxnet.rates.cultivation import (
    Cultivation,
    DoubtfulCell,
    Form,
    Mode,
    Series,
    SeriesKind,
    Setting,
    SettingKind,
    make_series,
)
from fluxnet.tables.cultivation_blocks import BlockRead
from fluxnet.tables.cultivation_grids import Gathered
from fluxnet.tables.cultivation_series import Piece
from fluxnet.tables.cultivation_zero import (
    Zero,
    find_zero,
    nothing_read,
    shift_of,
    whole_table,
)
from fluxnet.tables.raw_grid import RawValue, shown

__all__ = ["join"]

Array = NDArray[np.float64]

_MODES = {
    "chemostat": Mode.CHEMOSTAT, "continuous": Mode.CHEMOSTAT, "kontinuierlich": Mode.CHEMOSTAT,
    "batch": Mode.BATCH, "fed-batch": Mode.FED_BATCH, "fed batch": Mode.FED_BATCH,
    "fedbatch": Mode.FED_BATCH, "zulauf": Mode.FED_BATCH,
}  # fmt: skip
_OFF_LINE = (SeriesKind.CONCENTRATION, SeriesKind.DRY_WEIGHT, SeriesKind.OPTICAL_DENSITY)
_FREE = (SeriesKind.PRESSURE, SeriesKind.TEMPERATURE, SeriesKind.PH)


def join(
    gathered: Gathered, name: str, mode: Mode | None
) -> tuple[tuple[Cultivation, ...], tuple[Diagnostic, ...]]:
    """The cultivations of what was gathered: one, or one a run."""
    runs = list(dict.fromkeys(r.run for r in gathered.reads if r.run))
    common = [r for r in gathered.reads if not r.run]
    faults: list[Diagnostic] = []
    if runs and common:
        faults.append(Diagnostic(
            Name.MISSING_COLUMN, f"{common[0].title} has no column `run`, and other tables tell "
            f"the runs {', '.join(runs[:5])} apart", whole_table(common[0]),
            mend="add the column `run`, or put each cultivation in a folder of its own",
        ))  # fmt: skip
        return (), tuple(faults)
    found: list[Cultivation] = []
    for run in runs or [""]:
        one = _join_run(gathered, run, run or name, mode, faults)
        if one is not None:
            found.append(one)
    return tuple(found), tuple(faults)


def _join_run(
    gathered: Gathered, run: str, name: str, mode: Mode | None, faults: list[Diagnostic]
) -> Cultivation | None:
    reads = [r for r in gathered.reads if r.run == run]
    told = [t for owner, t in gathered.told if owner in ("", run)]
    words: dict[str, tuple[RawValue, str]] = {}
    for one in told:
        words.update(one.words)
    settings = _settings([s for one in told for s in one.settings],
                         next((t.dilution for t in told if t.dilution is not None), None), faults)
    zero = find_zero(reads, words.get("inoculation"), gathered.order, faults)
    if zero is None:
        return None
    doubtful = [d for read in reads for d in read.doubtful]
    groups: dict[tuple[SeriesKind, str], list[tuple[Piece, float]]] = {}
    for read in reads:
        shift = shift_of(read, zero)
        for piece in read.pieces:
            meaning = piece.column.meaning
            assert meaning.kind is not None
            groups.setdefault((meaning.kind, meaning.name), []).append((piece, shift))
    series: list[Series] = []
    for (kind, species), pieces in groups.items():
        joined = _series(kind, species, pieces, faults, doubtful)
        if joined is not None:
            series.append(joined)
    if not series:
        faults.append(nothing_read(reads))
        return None
    _tell_before(series, faults)
    taken = mode or _mode(words.get("mode"), series, settings, faults)
    title = shown(words["name"][0]) if "name" in words and not run else name
    return Cultivation(
        title, taken, tuple(series), settings, gathered.calibration, gathered.phases,
        (*gathered.doubtful, *doubtful), _understood(gathered, reads, zero, taken, series),
    )  # fmt: skip


def _settings(
    settings: Sequence[Setting], dilution: float | None, faults: list[Diagnostic]
) -> tuple[Setting, ...]:
    """Settings, the last one of each kind; a dilution rate as a flow of feed."""
    last = {(s.kind, s.of, s.stream): s for s in settings}
    volume = last.get((SettingKind.VOLUME, "", ""))
    flow = last.get((SettingKind.GAS_FLOW, "", ""))
    if flow is not None and flow.unit == "L/L/h":
        if volume is None:
            faults.append(Diagnostic(
                Name.BROTH_UNKNOWN, f"{flow.place}: the gas flow is per broth, and no volume is "
                "given", mend="give the volume as a setting: volume; 1.5; L",
            ))  # fmt: skip
        else:
            sd = None if flow.sd is None else flow.sd * volume.value
            last[(flow.kind, "", "")] = replace(flow, value=flow.value * volume.value, sd=sd,
                                                unit="L/h")  # fmt: skip
    if dilution is not None and volume is not None:
        feed = Setting(SettingKind.FLOW, dilution * volume.value, "L/h", None, "", "feed")
        last.setdefault((feed.kind, "", "feed"), feed)
    return tuple(last.values())


def _series(
    kind: SeriesKind, name: str, pieces: Sequence[tuple[Piece, float]], faults: list[Diagnostic],
    doubtful: list[DoubtfulCell],
) -> Series | None:
    """Pieces of one series in order of time; values at one time averaged."""
    first = pieces[0][0]
    odd = [p for p, _ in pieces if p.column.change.base != first.column.change.base
           or p.column.meaning.form is not first.column.meaning.form]  # fmt: skip
    if odd:
        if kind not in _FREE:
            faults.append(Diagnostic(
                Name.COLUMN_REPEATED, f"{first.column.meaning.words} stands in "
                f"{first.column.change.base} in {first.grid.title}, and in "
                f"{odd[0].column.change.base} in {odd[0].grid.title}",
                Span(odd[0].grid.title, 0, 0, 0), mend="keep one: mark the other `ignore` in "
                "columns.csv",
            ))  # fmt: skip
            return None
        pieces = [(p, s) for p, s in pieces if p not in odd]
    time = np.concatenate([p.time - s for p, s in pieces])
    value = np.concatenate([p.value for p, _ in pieces])
    below = np.concatenate([p.below for p, _ in pieces])
    sd = _sds([p for p, _ in pieces])
    one_place = any(p.thinned for p, _ in pieces)
    places = [] if one_place else [x for p, _ in pieces for x in p.places]
    order = np.argsort(time, kind="stable")
    time, value, below = time[order], value[order], below[order]
    sd = None if sd is None else sd[order]
    places = [places[i] for i in order] if places else []
    fresh = np.r_[True, np.diff(time) > 1e-7] if time.size else np.zeros(0, dtype=np.bool_)
    if not fresh.all():
        starts = np.flatnonzero(fresh)
        count = np.diff(np.r_[starts, time.size])
        twice = np.flatnonzero(count > 1)
        told = [places[int(starts[i]) + 1] if places else f"{time[starts[i]]:.4g} h"
                for i in twice[:3]]  # fmt: skip
        more = f" and {twice.size - 3} more" if twice.size > 3 else ""
        is_event = first.column.meaning.form is Form.EVENT
        done = "added up" if is_event else "averaged"
        faults.append(Diagnostic(
            Name.DOUBLED_TIME, f"{first.column.meaning.words} has several values at one time "
            f"({', '.join(told)}{more}); they were {done}", Span(first.grid.title, 0, 0, 0),
            mend="replicates may stand like this; otherwise correct the times",
        ))  # fmt: skip
        scale = np.ones_like(count, dtype=np.float64) if is_event else count
        value = np.add.reduceat(value, starts) / scale
        sd = None if sd is None else np.sqrt(np.add.reduceat(sd**2, starts)) / scale
        below = np.minimum.reduceat(below, starts)
        time = time[starts]
        places = [places[int(i)] for i in starts] if places else []
    return make_series(
        kind, name, first.column.change.base, time, value, sd, below=below if below.any() else None,
        form=first.column.meaning.form, places=tuple(places) or first.places[:1],
    )  # fmt: skip


def _sds(pieces: Sequence[Piece]) -> Array | None:
    """The errors of all pieces; none where a piece has none."""
    if any(p.sd is None for p in pieces):
        return None
    return np.concatenate([p.sd for p in pieces if p.sd is not None])


def _tell_before(series: Sequence[Series], faults: list[Diagnostic]) -> None:
    early = [
        f"{s.title} at {s.time[i]:.3g} h ({s.place(int(i))})"
        for s in series if s.kind in _OFF_LINE for i in np.flatnonzero(s.time < -1e-6)
    ]  # fmt: skip
    if early:
        more = f", and {len(early) - 3} more" if len(early) > 3 else ""
        faults.append(Diagnostic(
            Name.BEFORE_INOCULATION,
            f"samples from before inoculation count in no phase: {', '.join(early[:3])}{more}",
            mend="correct the inoculation where they are not from before it",
        ))  # fmt: skip


def _mode(
    said: tuple[RawValue, str] | None, series: Sequence[Series], settings: Sequence[Setting],
    faults: list[Diagnostic],
) -> Mode:
    if said is not None:
        found = _MODES.get(shown(said[0]).strip().lower())
        if found is not None:
            return found
        faults.append(Diagnostic(
            Name.UNREADABLE_CELL, f"{said[1]}: `{shown(said[0])}` is no mode",
            mend="write chemostat, batch or fed-batch",
        ))  # fmt: skip
    kinds = {s.kind for s in series}
    streams = {s.stream.split()[0] for s in settings if s.kind is SettingKind.FLOW and s.stream}
    if SeriesKind.EFFLUENT in kinds or "effluent" in streams or streams & {"feed"}:
        taken, why = Mode.CHEMOSTAT, "a constant feed or an effluent"
    elif SeriesKind.FEED in kinds:
        taken, why = Mode.FED_BATCH, "a feed"
    else:
        taken, why = Mode.BATCH, "no feed"
    faults.append(Diagnostic(
        Name.MODE_GUESSED, f"no line names the mode; with {why} it is taken as {taken.value}",
        mend="write a line above the table: mode; batch (or fed-batch, chemostat)",
    ))  # fmt: skip
    return taken


def _understood(
    gathered: Gathered, reads: Sequence[BlockRead], zero: Zero, mode: Mode,
    series: Sequence[Series],
) -> tuple[str, ...]:
    """Three lines: what was read, the time, the columns."""
    rows = sum(r.rows for r in reads)
    thinned = [f"{r.title} in means over {r.thinned * 3600:.0f} s" for r in reads if r.thinned]
    first = f"read: {'; '.join(gathered.files)}; {rows} rows" + (
        f"; thinned: {', '.join(thinned)}" if thinned else ""
    )
    axes = "; ".join(dict.fromkeys(r.words for r in reads))
    start, end = min(s.time[0] for s in series), max(s.time[-1] for s in series)
    order = "" if gathered.order is None else f"; dates {gathered.order.value}"
    second = (
        f"time: {axes}{order}; {zero.words}; {start:.4g} to {end:.4g} h; {mode.value}"
    )
    taken = [f"{m.column} as {m.means}" for m in gathered.columns if m.means not in ("", "ignore")]
    left = [m.column for m in gathered.columns if m.means in ("", "ignore")]
    third = f"columns: {'; '.join(dict.fromkeys(taken))}" + (
        f"; not used: {', '.join(dict.fromkeys(left))}" if left else ""
    )
    return first, second, third
