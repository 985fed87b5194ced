"""The columns of one raw table: what each means, its unit, and how it becomes the base unit."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import field, replace
from fractions import Fraction

from fluxnet.chemistry.units import UnitError
from fluxnet.chemistry.units_based import Conversion, conversion_of
from fluxnet.chemistry.units_measured import Measure, MeasuredUnit
from fluxnet.ground.diagnostic import Diagnostic
from fluxnet.ground.names import Name
from fluxnet.ground.record import record
from fluxnet.network.model import Network
from fluxnet.rates.cultivation import SeriesKind, Setting, SettingKind
from fluxnet.tables.cultivation_settings import substance_of
from fluxnet.tables.cultivation_words import MEASURES, Meaning, Part, read_meaning
from fluxnet.tables.mapping import ColumnMatch, Mapping, meaning_of
from fluxnet.tables.raw_blocks import Block
from fluxnet.tables.raw_titles import RawTitle, try_unit

__all__ = ["Column", "Columns", "Known", "plan_columns", "understand_title"]

_ATMOSPHERE = Fraction("1.01325")
_PLAIN = (SeriesKind.OPTICAL_DENSITY, SeriesKind.PH)


@record
class Known:
    """What is known while columns are read: the model, the mapping file, the settings."""

    network: Network | None = None
    mapping: Mapping = field(default_factory=Mapping)
    settings: tuple[Setting, ...] = ()

    def setting(self, kind: SettingKind) -> float | None:
        """The value of a setting, or None."""
        return next((s.value for s in self.settings if s.kind is kind), None)


@record
class Column:
    """A measured column with the way to its base unit, and the column of its errors."""

    title: RawTitle
    meaning: Meaning
    change: Conversion
    sd: int | None = None
    sd_relative: bool = False


@record
class Columns:
    """All columns of a table."""

    values: tuple[Column, ...]
    times: tuple[tuple[RawTitle, Part], ...]
    run: RawTitle | None
    matches: tuple[ColumnMatch, ...]
    diagnostics: tuple[Diagnostic, ...]


def understand_title(title: RawTitle, file: str, known: Known) -> tuple[Meaning | None, str]:
    """Meaning and unit of a title: by the mapping file, else by its words."""
    mapped = known.mapping.find(file, title)
    if mapped is not None:
        words, unit = mapped
        unit = unit or title.unit
        found = meaning_of(words, unit, known.network)
        if found is not None:
            return found, unit
    if title.is_set or not title.name:
        return None, title.unit
    measured = try_unit(title.unit) if title.unit else None
    found = read_meaning(title.name, measured, known.network)
    return found, title.unit


def plan_columns(block: Block, known: Known) -> Columns:
    """Understand all columns of a table; faults name the title's cell."""
    file = block.grid.file
    values: list[Column] = []
    sds: list[tuple[RawTitle, Meaning | None, str]] = []
    times: list[tuple[RawTitle, Part]] = []
    matches: list[ColumnMatch] = []
    faults: list[Diagnostic] = []
    run: RawTitle | None = None
    last: dict[int, int] = {}
    for title in block.titles:
        if not title.shown and not title.name:
            continue
        meaning, unit = understand_title(title, file, known)
        title = replace(title, unit=unit)
        if title.is_sd or (meaning is not None and meaning.is_sd):
            sds.append((title, meaning, unit))
            last[title.column] = len(values) - 1
            continue
        if meaning is not None and meaning.part is Part.VALUE:
            change = _change(block, title, meaning, unit, known)
            if isinstance(change, Diagnostic):
                faults.append(change)
            else:
                values.append(Column(title, meaning, change))
        elif meaning is not None and meaning.part is Part.RUN:
            run = run or title
        elif meaning is not None and meaning.part is not Part.IGNORED:
            times.append((title, meaning.part))
        matches.append(_match(block, title, meaning))
        if meaning is None and not title.is_set and _is_concentration(unit):
            faults.append(_title_fault(
                block, title, Name.COLUMN_NOT_UNDERSTOOD,
                f"`{title.shown}` is a concentration of nothing that is known here; it is not used",
                f"write a line `{title.shown},SPECIES` or `{title.shown},ignore` in columns.csv",
            ))  # fmt: skip
    for title, meaning, unit in sds:
        values, place = _with_sd(values, title, meaning, unit, last[title.column])
        means = f"{values[place].meaning.words} sd" if place is not None else ""
        matches.append(ColumnMatch(file, title.shown, unit, means, "name"))
    faults += _repeated(block, values)
    return Columns(tuple(values), tuple(times), run, tuple(matches), tuple(faults))


def _match(block: Block, title: RawTitle, meaning: Meaning | None) -> ColumnMatch:
    words = "" if meaning is None else meaning.words
    how = "set point" if title.is_set else "not understood" if meaning is None else meaning.how
    return ColumnMatch(block.grid.file, title.shown, title.unit, words, how)


def _is_concentration(unit: str) -> bool:
    found = try_unit(unit) if unit else None
    return found is not None and found.amount is not None


def _with_sd(
    values: Sequence[Column], title: RawTitle, meaning: Meaning | None, unit: str, left: int
) -> tuple[list[Column], int | None]:
    """The columns, with the errors given to the one that they belong to."""
    listed = list(values)
    place = left if not title.name and left >= 0 else None
    for index, column in enumerate(listed):
        if meaning is not None and meaning.kind is column.meaning.kind and (
            meaning.name == column.meaning.name
        ):  # fmt: skip
            place = index
    if place is not None:
        column = listed[place]
        in_percent = unit.strip() == "%" and column.title.unit.strip() != "%"
        listed[place] = replace(column, sd=title.column, sd_relative=in_percent)
    return listed, place


def _change(
    block: Block, title: RawTitle, meaning: Meaning, unit: str, known: Known
) -> Conversion | Diagnostic:
    """The way from the column's unit to the base, or what is wrong with the unit."""
    kind = meaning.kind
    assert kind is not None
    measured = try_unit(unit) if unit else None
    if not unit:
        if kind in _PLAIN:
            return Conversion("1", Fraction(1))
        if block.grid.percents and Measure.FRACTION in MEASURES[kind]:
            measured = MeasuredUnit("%", Measure.FRACTION, Fraction(1, 100))
        else:
            usual = MEASURES[kind][0].value
            return _title_fault(block, title, Name.UNIT_MISSING, f"`{title.shown}` has no unit",
                                f"write it in the title: {title.name} [{usual}]")  # fmt: skip
    if measured is None:
        return _title_fault(block, title, Name.UNKNOWN_UNIT, f"`{unit}` is no unit that is known",
                            "`fluxnet manual units` lists what can be written")  # fmt: skip
    if kind is SeriesKind.PH and measured.measure is Measure.FRACTION:
        return _wrong(block, title, unit, meaning)
    if measured.measure not in MEASURES[kind]:
        return _wrong(block, title, unit, meaning)
    is_dry = kind is SeriesKind.DRY_WEIGHT
    counted = measured.amount is not None and measured.amount.amount is not None
    substance = substance_of(meaning.name, known.network) if counted else None
    if is_dry and measured.amount is not None and measured.amount.amount.value == "g":  # type: ignore[union-attr]
        substance = None
    reference = known.setting(SettingKind.REFERENCE)
    volume = known.setting(SettingKind.VOLUME)
    if measured.measure is Measure.GAS_PER_BROTH and volume is None:
        return _title_fault(block, title, Name.BROTH_UNKNOWN,
                            f"`{title.shown}` is gas per broth, and no volume is given",
                            "give the volume as a setting: volume; 1.5; L")  # fmt: skip
    try:
        change = conversion_of(measured, substance, gas_reference=reference, broth=volume,
                               grams=is_dry)  # fmt: skip
    except UnitError as fault:
        return _title_fault(block, title, Name.WRONG_UNIT, str(fault), None)
    if change.base == "L/h" and kind in (SeriesKind.GAS_FLOW, SeriesKind.GAS_FLOW_OUT):
        called = "standard litres are stated at 0, 20 or 21.1 °C" if measured.standard else (
            "litres of gas hold 7.3 % more at 0 °C than at 20 °C"
        )
        return _title_fault(
            block, title, Name.FLOW_WITHOUT_REFERENCE,
            f"`{title.shown}` has no reference temperature: {called}; 7.3 % of every gas rate are "
            "at stake", "write NL/h for litres at 0 °C, L/h (20 °C), or a line `reference; 20; °C`",
        )  # fmt: skip
    if meaning.gauge and not change.offset:
        change = replace(change, offset=_ATMOSPHERE)
    return change


def _wrong(block: Block, title: RawTitle, unit: str, meaning: Meaning) -> Diagnostic:
    kind = meaning.kind
    assert kind is not None
    usual = " or ".join(m.value for m in MEASURES[kind][:2])
    what = "a concentration" if kind is SeriesKind.CONCENTRATION else f"a {kind.value}"
    mend = f"write one such as {usual}"
    if unit.strip() == "%" and kind is SeriesKind.CONCENTRATION:
        mend = "say of what: % w/v (10 g/L), % w/w (10 g/kg); gas is `NAME out`"
    elif "ppm" in unit and kind is SeriesKind.CONCENTRATION:
        mend = "say of what: mg/L or mg/kg; gas is `NAME out`"
    return _title_fault(block, title, Name.WRONG_UNIT,
                        f"`{title.shown}`: `{unit}` cannot be {what} ({meaning.words})", mend)


def _repeated(block: Block, values: Sequence[Column]) -> list[Diagnostic]:
    seen: dict[tuple[SeriesKind | None, str], Column] = {}
    faults: list[Diagnostic] = []
    for column in values:
        key = (column.meaning.kind, column.meaning.name)
        first = seen.setdefault(key, column)
        if first is not column:
            faults.append(_title_fault(
                block, column.title, Name.COLUMN_REPEATED,
                f"`{first.title.shown}` and `{column.title.shown}` both mean "
                f"{column.meaning.words}",
                f"write `{column.title.shown},ignore` in columns.csv, or its true meaning",
            ))  # fmt: skip
    return faults


def _title_fault(
    block: Block, title: RawTitle, name: Name, words: str, mend: str | None
) -> Diagnostic:
    grid, row = block.grid, block.header
    place = grid.place(row, title.column)
    span = grid.span(row, title.column)
    return Diagnostic(name, f"{place}: {words}", span, mend=mend, source_line=grid.line_text(row))
