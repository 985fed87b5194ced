"""All grids of one cultivation understood: decimal signs, settings, order of dates, tables."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import field, replace

from fluxnet.ground.diagnostic import Diagnostic
from fluxnet.ground.names import Name
from fluxnet.ground.progress import Progress
from fluxnet.ground.record import record
from fluxnet.ground.source import Span
from fluxnet.network.model import Network
from fluxnet.rates.cultivation import CalibrationPoint, DoubtfulCell, Phase, SeriesKind
from fluxnet.tables.cultivation_blocks import BlockRead, read_block
from fluxnet.tables.cultivation_columns import Columns, Known, plan_columns, understand_title
from fluxnet.tables.cultivation_series import left_out
from fluxnet.tables.cultivation_settings import Told, read_settings
from fluxnet.tables.cultivation_words import Meaning, Part, plain_words
from fluxnet.tables.mapping import ColumnMatch, Mapping
from fluxnet.tables.numbers import decimal_faults
from fluxnet.tables.numerals import Decimal, DecimalChoice
from fluxnet.tables.raw_blocks import Block, BlockKind, Cut, cut_blocks
from fluxnet.tables.raw_clock import DateOrder, find_order
from fluxnet.tables.raw_grid import RawGrid, RawValue, shown
from fluxnet.tables.raw_numbers import choose_decimal, read_column
from fluxnet.tables.raw_titles import RawTitle

__all__ = ["Gathered", "gather"]


@record
class Gathered:
    """All that the tables of one path hold, before times are told from inoculation.

    ``told`` are settings by run (empty: all runs); ``files`` say how each grid was read.
    """

    reads: tuple[BlockRead, ...] = ()
    told: tuple[tuple[str, Told], ...] = ()
    calibration: tuple[CalibrationPoint, ...] = ()
    phases: tuple[Phase, ...] = ()
    order: DateOrder | None = None
    files: tuple[str, ...] = ()
    columns: tuple[ColumnMatch, ...] = ()
    doubtful: tuple[DoubtfulCell, ...] = ()
    diagnostics: tuple[Diagnostic, ...] = field(default=())


def gather(
    grids: Sequence[RawGrid], mapping: Mapping, network: Network | None, decimal: Decimal | None,
    faults: Sequence[Diagnostic], progress: Progress,
) -> Gathered:
    """Read all tables; settings first, since units of gas flows rest on them."""
    bare = Known(network, mapping)
    cuts: list[tuple[Cut, Decimal]] = []
    found = list(faults)
    files: list[str] = []
    for grid in grids:
        cut = cut_blocks(grid, _understand(grid, bare))
        choice = choose_decimal(grid, _numbers(cut, bare))
        asked = decimal or _said_decimal(grid, cut)
        if asked is None:
            found.extend(_decimal_faults(grid, choice))
        cuts.append((cut, asked or choice.decimal))
        files.append(_how(grid, cut, choice, asked))
    told = [one for cut, sign in cuts for one in _settings(cut, sign, network)]
    for _, one in told:
        found.extend(one.diagnostics)
    doubtful = [DoubtfulCell(p, t, "not understood: left out") for _, o in told for p, t in o.rest]
    known = Known(network, mapping, tuple(s for _, one in told for s in one.settings))
    series = [
        (block, plan_columns(block, known), sign)
        for cut, sign in cuts for block in cut.blocks if block.kind is BlockKind.SERIES
    ]  # fmt: skip
    order = _order(told, series)
    reads: list[BlockRead] = []
    matches: list[ColumnMatch] = []
    for block, columns, sign in series:
        found.extend(columns.diagnostics)
        matches.extend(columns.matches)
        reads.extend(read_block(block, columns, sign, order, progress))
    points: list[CalibrationPoint] = []
    phases: list[Phase] = []
    for cut, sign in cuts:
        for block in cut.blocks:
            if block.kind is BlockKind.CALIBRATION:
                columns = plan_columns(block, known)
                found.extend(columns.diagnostics)
                matches.extend(columns.matches)
                points.extend(_calibration(block, columns, sign, found))
            elif block.kind is BlockKind.PHASES:
                phases.extend(_phases(block, sign))
    found.extend(d for read in reads for d in read.diagnostics)
    if not series:
        found.append(_no_time(grids))
    found.extend(_unused(mapping, matches))
    return Gathered(
        tuple(reads), tuple(told), tuple(points), tuple(phases), order, tuple(files),
        tuple(matches), tuple(doubtful), tuple(found),
    )  # fmt: skip


class _understand:  # noqa: N801
    """Gives the meaning of a title of one grid."""

    def __init__(self, grid: RawGrid, known: Known) -> None:
        self.file, self.known = grid.file, known

    def __call__(self, title: RawTitle) -> Meaning | None:
        """By the mapping file, else by its words."""
        return understand_title(title, self.file, self.known)[0]


def _numbers(cut: Cut, known: Known) -> Iterator[tuple[int, int]]:
    """The cells of all tables in which numbers are expected."""
    for block in cut.blocks:
        understand = _understand(block.grid, known)
        for title in block.titles:
            meaning = understand(title)
            is_value = meaning is not None and meaning.part in (Part.VALUE, Part.HOURS)
            is_setting = block.kind is not BlockKind.SERIES and title.column > 0
            if is_value or title.is_sd or is_setting:
                yield from ((row, title.column) for row in block.body)


def _said_decimal(grid: RawGrid, cut: Cut) -> Decimal | None:
    """The decimal sign that a line ``decimal; comma`` tells."""
    told = {"comma": Decimal.COMMA, "komma": Decimal.COMMA, "point": Decimal.POINT,
            "punkt": Decimal.POINT, ",": Decimal.COMMA, ".": Decimal.POINT}  # fmt: skip
    settings = [r for b in cut.blocks if b.kind is BlockKind.SETTINGS for r in b.body]
    for row in (*cut.lines, *settings):
        if plain_words(shown(grid.cell(row, 0))) == "decimal":
            return told.get(plain_words(shown(grid.cell(row, 1))))
    return None


def _decimal_faults(grid: RawGrid, choice: DecimalChoice) -> list[Diagnostic]:
    """Numbers that may be read in two ways, with a mend that fits raw data."""
    sign = choice.decimal.name.lower() if choice.said else "comma` or `decimal; point"
    name = grid.short
    return [
        replace(d, message=f"{name} {d.message}",
                mend=f"write all numbers in one way, or a line above the table: `decimal; {sign}`")
        for d in decimal_faults(choice)
    ]  # fmt: skip


def _how(grid: RawGrid, cut: Cut, choice: DecimalChoice, asked: Decimal | None) -> str:
    """How a grid was read, in words."""
    separators = {"\t": "tabs", ";": "semicolons", ",": "commas", "|": "bars"}
    parts = [grid.encoding]
    if grid.separator is not None:
        parts.append(separators.get(grid.separator, f"`{grid.separator}` between cells"))
    if choice.said or asked is not None:
        parts.append(f"decimal {(asked or choice.decimal).name.lower()}")
    if len(cut.blocks) > 1:
        parts.append(f"{len(cut.blocks)} tables")
    deepest = max((b.depth for b in cut.blocks), default=0)
    if deepest > 1:
        parts.append(f"{deepest} rows of titles")
    return f"{grid.short} ({', '.join(parts)})"


def _settings(
    cut: Cut, decimal: Decimal, network: Network | None
) -> list[tuple[str, Told]]:
    told: list[tuple[str, Told]] = []
    if cut.lines and cut.blocks:
        grid = cut.blocks[0].grid
        told.append(("", read_settings(grid, cut.lines, (0, 1, 2, 3), decimal, network,
                                       listed=False)))  # fmt: skip
    for block in cut.blocks:
        if block.kind is not BlockKind.SETTINGS:
            continue
        names = [plain_words(t.shown) for t in block.titles]
        value = next(j for j, n in enumerate(names) if n in ("value", "wert", "setting value"))
        key = next(j for j, n in enumerate(names) if j != value and n not in ("run", "unit", "sd"))
        unit = next((j for j, n in enumerate(names) if n in ("unit", "units", "einheit")), -1)
        sd = next((j for j, t in enumerate(block.titles) if t.is_sd), -1)
        run = names.index("run") if "run" in names else -1
        rows: dict[str, list[int]] = {}
        for row in block.body:
            rows.setdefault(shown(block.grid.cell(row, run)) if run >= 0 else "", []).append(row)
        for name, some in rows.items():
            told.append((name, read_settings(
                block.grid, some, (key, value, unit, sd), decimal, network, listed=True
            )))  # fmt: skip
    return told


def _order(
    told: Sequence[tuple[str, Told]], series: Sequence[tuple[Block, Columns, Decimal]]
) -> DateOrder | None:
    """The order of dates that is said, or that any date shows."""
    cells: list[RawValue] = []
    for _, one in told:
        said = one.words.get("dates")
        if said is not None:
            words = plain_words(shown(said[0])).replace("-", " ")
            return DateOrder.MONTH_FIRST if words.startswith("month") else DateOrder.DAY_FIRST
        if "inoculation" in one.words:
            cells.append(one.words["inoculation"][0])
    for block, columns, _ in series:
        for title, _part in columns.times:
            cells.extend(block.grid.cell(r, title.column) for r in block.body)
    return find_order(cells)[0]


def _calibration(
    block: Block, columns: Columns, decimal: Decimal, faults: list[Diagnostic]
) -> list[CalibrationPoint]:
    of = {c.meaning.kind: c for c in columns.values}
    density, weight = of.get(SeriesKind.OPTICAL_DENSITY), of.get(SeriesKind.DRY_WEIGHT)
    if density is None or weight is None:
        return []
    grid = block.grid
    x = read_column(grid, block.body, density.title.column, decimal)
    y = read_column(grid, block.body, weight.title.column, decimal)
    sd = None if weight.sd is None else read_column(grid, block.body, weight.sd, decimal)
    faults.extend(left_out(grid, [(density.title.column, d) for d in x.doubts]))
    faults.extend(left_out(grid, [(weight.title.column, d) for d in y.doubts]))
    factor = float(weight.change.factor)
    points: list[CalibrationPoint] = []
    for place, row in enumerate(block.body):
        a, b = float(x.value[place]), float(y.value[place]) * factor
        if a == a and b == b and not x.below[place] and not y.below[place]:
            error = None if sd is None else float(sd.value[place])
            if error is not None and weight.sd_relative:
                error = error * b / 100 / factor
            own = None if error is None or error != error else error * factor
            points.append(CalibrationPoint(a, b, own, grid.place(row, weight.title.column)))
    return points


def _phases(block: Block, decimal: Decimal) -> list[Phase]:
    names = [plain_words(t.name) for t in block.titles]
    start, end = (
        read_column(block.grid, block.body, names.index(n), decimal).value for n in ("start", "end")
    )
    name = names.index("phase")
    return [
        Phase(shown(block.grid.cell(row, name)), float(a), float(b))
        for row, a, b in zip(block.body, start, end, strict=True) if a == a and b == b
    ]  # fmt: skip


def _no_time(grids: Sequence[RawGrid]) -> Diagnostic:
    grid = grids[0]
    likely = max(range(min(len(grid.rows), 60)), key=lambda r: sum(
        isinstance(c, str) and c != "" for c in grid.rows[r]
    ))  # fmt: skip
    told = " | ".join(shown(c) for c in grid.rows[likely] if c != "")[:80]
    line = grid.lines[likely]
    return Diagnostic(
        Name.NO_RAW_DATA, f"{grid.short}: no table has a column of time; row {line} is `{told}`",
        Span(grid.title, line, 1, 2), source_line=grid.line_text(likely),
        mend="call a column `time [h]`, or say in columns.csv which column is the time",
    )


def _unused(mapping: Mapping, matches: Sequence[ColumnMatch]) -> list[Diagnostic]:
    """Rows of the mapping file that no column took."""
    used = {plain_words(m.column) for m in matches}
    used |= {plain_words(m.column.partition("[")[0]) for m in matches}
    return [
        Diagnostic(
            Name.MAPPING_UNUSED, f"no column is called `{column}`", mapping.spans[(file, column)],
            mend="write the title as it stands in the table",
        )
        for file, column in mapping.rows if column not in used
    ]  # fmt: skip
