"""What holds for every rates table: writing and reading, decimal signs, bytes whatever."""

from __future__ import annotations

import numpy as np
from hypothesis import given, settings
from hypothesis import strategies as st

from fluxnet.rates.covariance import covariance_at, is_possible, run_covariance
from fluxnet.tables.decoding import decode
from fluxnet.tables.delimited import split_lines, split_text
from fluxnet.tables.numerals import Decimal, possible_decimals, read_number
from fluxnet.tables.rates_table import RatesReading, read_rates_bytes, read_rates_text
from fluxnet.tables.writer import write_rates_text

SPECIES = ["glucose", "acetic acid", "2,3-butanediol", "oxygen", "CO2", "ethanol", "ammonia"]
UNITS = {
    "specific": ["mmol/g/h", "g/g/h", "µmol/g/min"],
    "volumetric": ["mmol/L/h", "g/L/d"],
    "amount": ["mmol", "g", "mol"],
    "per hundred": ["mol/100 mol"],
}

sizes = st.floats(0.001, 1000, allow_subnormal=False).map(lambda x: float(f"{x:.4g}"))
errors = st.one_of(
    st.just(""), st.just("0"), sizes.map(repr), sizes.map(lambda x: f"{x!r} %")
)


@st.composite
def tables(draw: st.DrawFn) -> list[list[str]]:
    """The cells of a long table of one or two runs, each in one basis."""
    rows = [["run", "species", "direction", "rate", "sd", "unit", "strain"]]
    for run in ("A", "B")[: draw(st.integers(1, 2))]:
        units = UNITS[draw(st.sampled_from(sorted(UNITS)))]
        names = draw(st.lists(st.sampled_from(SPECIES), min_size=1, max_size=6, unique=True))
        for place, name in enumerate(names):
            value = repr(draw(sizes)) if place == 0 or draw(st.booleans()) else ""
            error = draw(errors) if value else ""
            direction, unit = draw(st.sampled_from(["in", "out"])), draw(st.sampled_from(units))
            rows.append([run, name, direction, value, error, unit, "s7"])
    return rows


def text_of(rows: list[list[str]], separator: str, decimal: str) -> str:
    def cell(text: str, column: int) -> str:
        text = text.replace(".", decimal) if column in (3, 4) else text
        return f'"{text}"' if separator in text else text

    return "".join(separator.join(cell(c, j) for j, c in enumerate(row)) + "\n" for row in rows)


def plain(reading: RatesReading) -> list[object]:
    assert reading.table is not None, [d.message for d in reading.diagnostics]
    return [
        (
            run.name, run.basis, run.unit, run.extras, run.shared_error,
            None if run.covariance is None else run.covariance.tolist(),
            [(r.quantity, r.value, r.sd, r.relative, r.own_sd) for r in run.rates],
        )
        for run in reading.table.runs
    ]  # fmt: skip


@given(tables(), st.sampled_from(["", "shared error biomass 4.5 %\n"]))
@settings(deadline=None)
def test_writing_then_reading_is_the_identity(rows, above):
    first = read_rates_text(above + text_of(rows, ",", "."))
    assert first.table is not None
    assert plain(read_rates_text(write_rates_text(first.table))) == plain(first)


@given(tables(), st.sampled_from([";", "\t"]))
@settings(deadline=None)
def test_a_decimal_comma_gives_the_same_table_as_a_decimal_point(rows, separator):
    point = read_rates_text(text_of(rows, ",", "."))
    comma = read_rates_text(text_of(rows, separator, ","), decimal=Decimal.COMMA)
    assert plain(comma) == plain(point)


@given(tables())
@settings(deadline=None)
def test_a_guessed_decimal_sign_is_right_or_the_table_is_refused(rows):
    point = read_rates_text(text_of(rows, ",", "."))
    guessed = read_rates_text(text_of(rows, ";", ","))
    if guessed.table is None:
        assert {d.name.value for d in guessed.diagnostics if d.severity.rank == 0} == {
            "ambiguous-number"
        }
    else:
        assert plain(guessed) == plain(point)


@given(tables(), st.randoms(use_true_random=False))
@settings(deadline=None)
def test_the_order_of_the_rows_changes_no_rate(rows, random):
    body = rows[1:]
    random.shuffle(body)
    first = read_rates_text(text_of(rows, ",", "."))
    second = read_rates_text(text_of([rows[0], *body], ",", "."))
    rates = [
        {
            run.name: {r.quantity: (r.value, r.sd) for r in run.rates}
            for run in reading.table.runs
        }
        for reading in (first, second)
        if reading.table is not None
    ]
    assert rates[0] == rates[1]


@given(tables())
@settings(deadline=None)
def test_every_covariance_is_possible_and_has_the_sds_on_its_diagonal(rows):
    reading = read_rates_text("shared error biomass 7 %\n" + text_of(rows, ",", "."))
    for run in reading.table.runs:
        covariance = run_covariance(run)
        assert is_possible(covariance)
        np.testing.assert_allclose(np.diag(covariance), [r.sd**2 for r in run.measured], rtol=1e-12)
        again = covariance_at(run, [r.value for r in run.measured])
        scale = np.sqrt(np.outer(np.diag(covariance), np.diag(covariance)))
        assert (abs(again - covariance) <= 1e-12 * scale).all()


@given(st.binary(max_size=400))
@settings(deadline=None)
def test_no_bytes_whatever_raise(data):
    reading = read_rates_bytes(data)
    assert reading.table is not None or any(d.severity.rank == 0 for d in reading.diagnostics)


@given(tables(), st.data())
@settings(deadline=None)
def test_no_damage_to_a_table_raises(rows, data):
    text = text_of(rows, ",", ".")
    start = data.draw(st.integers(0, len(text)))
    end = data.draw(st.integers(start, len(text)))
    middle = data.draw(st.text(alphabet='",;\t\n\r#/±%. -0159einfmol[]()AÄ\x00', max_size=12))
    reading = read_rates_text(text[:start] + middle + text[end:])
    assert reading.table is not None or any(d.severity.rank == 0 for d in reading.diagnostics)


@given(st.text(alphabet="ab,;\"' \t\n\r", max_size=60), st.sampled_from([",", ";", "\t"]))
def test_every_cell_stands_where_its_place_says(text, separator):
    lines = split_lines(text)
    for row in split_text(lines, separator, "t").rows:
        for cell in row.cells:
            line = lines[cell.span.line - 1]
            assert 1 <= cell.span.column <= cell.span.end_column <= len(line) + 1
            shown = line[cell.span.column - 1 : cell.span.end_column - 1]
            if not shown.startswith('"'):
                assert shown == cell.text


@given(st.floats(allow_nan=False, allow_infinity=False))
def test_a_number_written_in_full_is_read_as_itself(number):
    written = repr(number)
    assert read_number(written, Decimal.POINT) == number
    assert read_number(written.replace(".", ","), Decimal.COMMA) == number


@given(st.text(alphabet=st.characters(codec="latin-1", exclude_categories=["Cc"]), max_size=50))
def test_text_in_any_encoding_is_text_again(text):
    for codec in ("utf-8", "utf-8-sig", "utf-16"):
        assert decode(text.encode(codec)).text == text


@given(st.from_regex(r"[+-]?[0-9]{1,5}(\.[0-9]{1,5})?", fullmatch=True))
def test_a_number_tells_as_much_with_a_point_as_with_a_comma(text: str) -> None:
    """Numbers with a point are recognised by a quicker way than those with a comma."""
    other = {Decimal.POINT: Decimal.COMMA, Decimal.COMMA: Decimal.POINT}
    turned = text.replace(".", ",")
    assert possible_decimals(text) == {other[d] for d in possible_decimals(turned)}
    for decimal in Decimal:
        assert read_number(text, decimal) == read_number(turned, other[decimal])


CELL = r"[ \t]*[^\s\",;#]{0,4}[ \t]*"


@given(st.from_regex(f"{CELL}(;{CELL}){{0,4}}", fullmatch=True))
def test_a_line_without_quotes_is_cut_as_one_with_them(line: str) -> None:
    """Such lines are cut by a quicker way; a quoted cell behind them makes it the other."""
    rows = split_text((line,), ";", "f").rows
    (longer,) = split_text((line + ';"q"',), ";", "f").rows
    first = rows[0].cells if rows else ()
    assert first == longer.cells[: len(first)]
