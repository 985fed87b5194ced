"""Writes one cultivation in the dialects of many instruments and spreadsheets.

    python tests/tables/dialects/make.py

The files beside this one are its output; the tests read the files. XLSX is written with
xlsxwriter; ODS and XLS, for which no writer is at hand, by the few lines below.
"""

from __future__ import annotations

import datetime
import struct
import sys
import zipfile
from collections.abc import Callable, Sequence
from pathlib import Path
from xml.sax.saxutils import escape

HERE = Path(__file__).resolve().parent
START = datetime.datetime(2026, 3, 2, 9, 30)  # inoculation

TITLES = ("Time", "OD600", "Dry weight", "Glucose", "Ethanol", "Base total", "O2 out", "CO2 out",
          "Air flow")  # fmt: skip
UNITS = ("h", "-", "g/L", "g/L", "g/L", "mL", "%", "%", "NL/h")
ROWS: tuple[tuple[float | str | None, ...], ...] = (
    (0.0, 0.25, 0.1, 20.0, "<0.05", 1012.5, 20.95, 0.04, 60.0),
    (2.5, 0.75, 0.3, 19.25, "n.d.", 1013.75, 20.8, 0.19, 60.0),
    (13.25, 3.5, 1.4, 15.5, 1.5, 1019.25, 20.2, 0.78, 60.0),
    (25.75, 8.25, 3.3, 8.75, None, 1031.5, 19.5, 1.45, 62.5),
    (37.0, 12.5, 5.0, 1.25, 4.75, 1044.0, 19.05, 1.9, 62.5),
)
SETTINGS = (("mode", "batch", ""), ("volume", 1.5, "L"), ("inlet CO2", 0.04, "%"))

Cell = float | str | None


def decimal(value: Cell, sign: str = ".", thousands: str = "") -> str:
    if value is None:
        return ""
    if isinstance(value, str):
        return value.replace(".", sign) if value.startswith("<") else value
    text = f"{value:,.6f}".rstrip("0").rstrip(".")
    return text.replace(",", "\0").replace(".", sign).replace("\0", thousands)


def lines(
    sign: str, separator: str, thousands: str = "", first: Callable[[float], str] | None = None,
    columns: Sequence[int] = tuple(range(9)),
) -> list[str]:
    told = []
    for row in ROWS:
        cells = [decimal(row[j], sign, thousands) for j in columns]
        if first is not None:
            assert isinstance(row[0], float)
            cells[0] = first(row[0])
        told.append(separator.join(cells))
    return told


def head(separator: str, sign: str = ".") -> list[str]:
    return [separator.join((k, decimal(v, sign), u)) for k, v, u in SETTINGS]


def titled(separator: str, first: str | None = None) -> str:
    names = [f"{t} [{u}]" for t, u in zip(TITLES, UNITS, strict=True)]
    return separator.join([first or names[0], *names[1:]])


def clock(hours: float) -> datetime.datetime:
    return START + datetime.timedelta(hours=hours)


def write(name: str, told: Sequence[str], encoding: str = "utf-8", end: str = "\n") -> None:
    (HERE / name).write_bytes((end.join(told) + end).encode(encoding))


def plain() -> None:
    write("01-comma.csv", [*head(","), "", titled(","), *lines(".", ",")])


def spreadsheet_locale() -> None:
    write("02-semicolon.csv", [*head(";", ","), "", titled(";"), *lines(",", ";")], "utf-8-sig",
          "\r\n")  # fmt: skip


def controller_export() -> None:
    stamp = [f"{clock(row[0]):%d.%m.%Y %H:%M:%S}" for row in ROWS]  # type: ignore[arg-type]
    body = [f"{s};{t}" for s, t in zip(stamp, lines(",", ";", "."), strict=True)]
    write("03-three-rows.csv", [
        "Export of unit 4", *head(";", ","), "", "Clock;" + ";".join(TITLES),
        ";" + ";".join(["value"] * 9), ";" + ";".join(f"[{u}]" for u in UNITS), *body,
    ])  # fmt: skip


def several_tables() -> None:
    write("04-bracketed-tables.csv", [
        "[Settings]", "Setting;Value;Unit", *head(";", ","), "",
        "[Proben]", "Prozesszeit;OD600;Biotrockenmasse;Traubenzucker;Äthanol", "h;-;g/L;g/L;g/L",
        *lines(",", ";", "", None, (0, 1, 2, 3, 4)), "",
        "[Abgas]", "Prozesszeit [h];Sauerstoff Abgas [Vol.-%];CO2 Abgas [Vol.-%];Begasung [NL/h]",
        *lines(",", ";", "", None, (0, 6, 7, 8)), "",
        "[Lauge]", "Prozesszeit [h];Lauge gesamt [mL]", *lines(",", ";", "", None, (0, 5)),
    ], "latin-1")  # fmt: skip


def unicode_text() -> None:
    write("05-utf-16.txt", [*head("\t"), titled("\t"), *lines(".", "\t")], "utf-16", "\r\n")


def declared_separator() -> None:
    told = ["sep=|", *head("|", ","), "", titled("|"), *lines(",", "|")]
    write("06-declared.csv", told, "cp1252")


def durations() -> None:
    def written(hours: float) -> str:
        return f"{int(hours)}:{round(hours % 1 * 60):02d}:00"

    write("07-durations.tsv", [*head("\t"), titled("\t", "Duration"),
                               *lines(".", "\t", "", written)])  # fmt: skip


def date_and_time() -> None:
    def written(hours: float) -> str:
        return f"{clock(hours):%d.%m.%Y;%H:%M}"

    write("08-date-and-time.csv", [
        *head(";", ","), "Inokulation;02.03.2026 09:30", "", titled(";", "Datum;Uhrzeit"),
        *lines(",", ";", "", written),
    ])  # fmt: skip


def month_first() -> None:
    def written(hours: float) -> str:
        return f"{clock(hours):%m/%d/%Y %I:%M %p}"

    write("09-month-first.csv", [
        *head(","), "dates,month first", "inoculation,03/02/2026 09:30 AM", "",
        titled(",", "Timestamp"), *lines(".", ",", "", written),
    ])  # fmt: skip


def serial_dates() -> None:
    def written(hours: float) -> str:
        days = (clock(hours) - datetime.datetime(1899, 12, 30)) / datetime.timedelta(days=1)
        # as where only some cells of a column were turned into dates
        return f"{clock(hours):%Y-%m-%d %H:%M:%S}" if hours == 2.5 else f"{days:.10f}"

    write("10-serial-dates.csv", [
        *head(","), "inoculation,2026-03-02 09:30", "", titled(",", "Date"),
        *lines(".", ",", "", written),
    ])  # fmt: skip


def other_units() -> None:
    molar = {3: 180.156, 4: 46.069}
    told = []
    for row in ROWS:
        cells: list[Cell] = list(row)
        for j, mass in molar.items():
            if isinstance(cells[j], float):
                cells[j] = cells[j] / mass * 1000  # type: ignore[operator]
            elif isinstance(cells[j], str) and cells[j].startswith("<"):  # type: ignore[union-attr]
                cells[j] = f"<{50 / mass!r}"
        minutes = row[0] * 60  # type: ignore[operator]
        moles = [c if c is None or isinstance(c, str) else repr(c) for c in cells]
        volume, flow = row[5] / 1000, row[8] / 60  # type: ignore[operator]
        told.append(",".join([
            f"{minutes:g}", moles[1] or "", repr(row[2] * 1000), moles[3] or "",  # type: ignore[operator]
            moles[4] or "", repr(volume), repr(row[6] / 100), repr(row[7] * 1e4), repr(flow),  # type: ignore[operator]
        ]))  # fmt: skip
    write("11-other-units.csv", [
        "mode,batch", "volume,1500,mL", "CO2 in,400,ppm", "",
        "t / min,OD 600,CDW (mg/L),c_Glucose / mM,Ethanol (mmol/L),Base added (L),"
        "O2 off-gas (mol/mol),CO2 off-gas (ppm),Aeration (NL/min)", *told,
    ])  # fmt: skip


def quoted() -> None:
    names = [f'"{t}\n({u})"' for t, u in zip(TITLES, UNITS, strict=True)]
    body = [",".join(f'"{c}"' for c in line.split(";")) for line in lines(",", ";")]
    told = ['"mode","batch"', '"volume","1,5","L"', '"inlet CO2","0,04","%"', "", ",".join(names),
            *body]  # fmt: skip
    (HERE / "12-quoted.csv").write_text("\r\n".join(told) + "\r\n", encoding="utf-8", newline="")


def old_line_ends() -> None:
    notes = ["Cultivation 12; second try", "Medium as in the book, page 3", ""]
    write("13-old-line-ends.csv", [*notes, *head(","), "", titled(","), *lines(".", ",")],
          "utf-8", "\r")  # fmt: skip


def mapped() -> None:
    folder = HERE / "14-mapped"
    folder.mkdir(exist_ok=True)
    tags = ["R4.T", "R4.AU", "R4.KF1", "R4.KF2", "R4.KF3", "R4.W1", "R4.G1", "R4.G2", "R4.MFC"]
    write("14-mapped/export.csv", [*head(","), "", ",".join(tags), *lines(".", ",")])
    means = ["time", "OD", "dry weight", "glucose", "ethanol", "base total", "oxygen out",
             "CO2 out", "gas flow"]  # fmt: skip
    rows = [",".join(x) for x in zip(tags, means, UNITS, strict=True)]
    write("14-mapped/columns.csv", ["column,means,unit", *rows])


def two_files() -> None:
    folder = HERE / "15-folder"
    folder.mkdir(exist_ok=True)

    def written(hours: float) -> str:
        return f"{clock(hours):%Y-%m-%dT%H:%M:%S}"

    write("15-folder/settings.csv", ["setting,value,unit", *head(","),
                                     "inoculation,2026-03-02 09:30,"])  # fmt: skip
    write("15-folder/samples.csv", [
        "Sampled at,OD600,Dry weight [g/L],Glucose [g/L],Ethanol [g/L],Base total [mL]",
        *lines(".", ",", "", written, (0, 1, 2, 3, 4, 5)),
    ])  # fmt: skip
    for name, some in (("day-1", (0, 1, 2)), ("day-2", (3, 4))):
        told = lines(",", ";", "", written, (0, 6, 7, 8))
        write(f"15-folder/offgas-{name}.csv", [
            "Zeitstempel;O2 [%];CO2 [%];Begasung [NL/h]", *(told[i] for i in some)
        ], "latin-1")  # fmt: skip


def workbook() -> None:
    import xlsxwriter

    book = xlsxwriter.Workbook(HERE / "16-workbook.xlsx")
    book.set_properties({"created": datetime.datetime(2026, 3, 4)})
    sheet = book.add_worksheet("Cultivation")
    for i, row in enumerate(SETTINGS):
        sheet.write_row(i, 0, row)
    sheet.write_row(4, 1, TITLES)
    sheet.write_row(5, 1, [f"[{u}]" for u in UNITS])
    for i, row in enumerate(ROWS):
        sheet.write_row(6 + i, 1, ["" if c is None else c for c in row])
    book.close()


def sheets() -> None:
    import xlsxwriter

    book = xlsxwriter.Workbook(HERE / "17-sheets.xlsx")
    book.set_properties({"created": datetime.datetime(2026, 3, 4)})
    dates = book.add_format({"num_format": "dd/mm/yyyy hh:mm"})
    lasting = book.add_format({"num_format": "[h]:mm:ss"})
    percent = book.add_format({"num_format": "0.00%"})
    sheet = book.add_worksheet("Info")
    sheet.write_row(0, 0, ("Setting", "Value", "Unit"))
    for i, row in enumerate(SETTINGS):
        sheet.write_row(1 + i, 0, row)
    sheet.write(4, 0, "Inoculation")
    sheet.write_datetime(4, 1, START, dates)
    sheet = book.add_worksheet("HPLC")
    sheet.write_row(2, 2, ("Date", "OD600", "Dry weight [g/L]", "Glucose [g/L]", "Ethanol [g/L]"))
    for i, row in enumerate(ROWS):
        sheet.write_datetime(3 + i, 2, clock(row[0]), dates)  # type: ignore[arg-type]
        sheet.write_row(3 + i, 3, ["" if c is None else c for c in row[1:5]])
    sheet = book.add_worksheet("Gas")
    titles = ("Age", "Date", "Base total [mL]", "O2 out", "CO2 out", "Air flow [NL/h]")
    sheet.write_row(0, 0, titles)
    for i, row in enumerate(ROWS):
        sheet.write_number(1 + i, 0, row[0] / 24, lasting)  # type: ignore[operator]
        sheet.write_datetime(1 + i, 1, clock(row[0]), dates)  # type: ignore[arg-type]
        sheet.write_number(1 + i, 2, row[5])  # type: ignore[arg-type]
        sheet.write_number(1 + i, 3, row[6] / 100, percent)  # type: ignore[operator]
        sheet.write_number(1 + i, 4, row[7] / 100, percent)  # type: ignore[operator]
        sheet.write_number(1 + i, 5, row[8])  # type: ignore[arg-type]
    book.close()


def grid() -> list[list[Cell]]:
    return [
        *([*row] for row in SETTINGS), [], [*TITLES], [f"[{u}]" for u in UNITS],
        *([*row] for row in ROWS),
    ]  # fmt: skip


def open_document() -> None:
    def cell(value: Cell) -> str:
        if value is None or value == "":
            return "<table:table-cell/>"
        if isinstance(value, str):
            text = f"<text:p>{escape(value)}</text:p>"
            return f'<table:table-cell office:value-type="string">{text}</table:table-cell>'
        return (
            f'<table:table-cell office:value-type="float" office:value="{value!r}">'
            f"<text:p>{value:g}</text:p></table:table-cell>"
        )

    rows = "".join(
        "<table:table-row>" + "".join(map(cell, r or [None])) + "</table:table-row>" for r in grid()
    )
    names = "urn:oasis:names:tc:opendocument:xmlns"
    content = (
        '<?xml version="1.0" encoding="UTF-8"?><office:document-content '
        f'xmlns:office="{names}:office:1.0" xmlns:table="{names}:table:1.0" '
        f'xmlns:text="{names}:text:1.0" office:version="1.2"><office:body><office:spreadsheet>'
        f'<table:table table:name="Cultivation">{rows}</table:table>'
        "</office:spreadsheet></office:body></office:document-content>"
    )
    kind = "application/vnd.oasis.opendocument.spreadsheet"
    manifest = (
        '<?xml version="1.0" encoding="UTF-8"?><manifest:manifest '
        f'xmlns:manifest="{names}:manifest:1.0" manifest:version="1.2"><manifest:file-entry '
        f'manifest:full-path="/" manifest:media-type="{kind}"/><manifest:file-entry '
        'manifest:full-path="content.xml" manifest:media-type="text/xml"/></manifest:manifest>'
    )
    with zipfile.ZipFile(HERE / "18-open-document.ods", "w") as archive:
        for name, text in (("mimetype", kind), ("content.xml", content),
                           ("META-INF/manifest.xml", manifest)):  # fmt: skip
            archive.writestr(zipfile.ZipInfo(name, (2026, 3, 4, 0, 0, 0)), text)


def old_workbook() -> None:
    (HERE / "19-old-workbook.xls").write_bytes(compound_file(old_records(grid())))


def old_records(rows: Sequence[Sequence[Cell]]) -> bytes:
    """A workbook stream of the older kind (BIFF8) with one sheet of numbers and labels."""

    def record(kind: int, data: bytes) -> bytes:
        return struct.pack("<HH", kind, len(data)) + data

    begin = record(0x0809, struct.pack("<HHHHII", 0x0600, 0x0005, 0, 0, 0, 0))
    name = b"Cultivation"
    bound = record(0x0085, struct.pack("<IHBB", 0, 0, len(name), 0) + name)
    end = record(0x000A, b"")
    place = len(begin) + len(bound) + len(end)
    bound = record(0x0085, struct.pack("<IHBB", place, 0, len(name), 0) + name)
    sheet = record(0x0809, struct.pack("<HHHHII", 0x0600, 0x0010, 0, 0, 0, 0))
    width = max(map(len, rows))
    sheet += record(0x0200, struct.pack("<IIHHH", 0, len(rows), 0, width, 0))
    for i, row in enumerate(rows):
        for j, value in enumerate(row):
            if value is None or value == "":
                continue
            if isinstance(value, str):
                text = value.encode("latin-1")
                sheet += record(0x0204, struct.pack("<HHHHB", i, j, 0, len(text), 0) + text)
            else:
                sheet += record(0x0203, struct.pack("<HHHd", i, j, 0, value))
    return begin + bound + end + sheet + end


def compound_file(stream: bytes) -> bytes:
    """A compound file with one stream, ``Workbook``."""
    stream = stream.ljust(max(4096, -(-len(stream) // 512) * 512), b"\0")
    sectors = len(stream) // 512
    none, last = 0xFFFFFFFF, 0xFFFFFFFE
    header = b"\xd0\xcf\x11\xe0\xa1\xb1\x1a\xe1" + bytes(16) + struct.pack(
        "<HHHHHHIIIIIIIIII", 0x3E, 3, 0xFFFE, 9, 6, 0, 0, 0, 1, 1, 0, 4096, last, 0, last, 0
    )  # fmt: skip
    header += struct.pack("<109I", 0, *[none] * 108)
    table = [0xFFFFFFFD, last, *range(3, 2 + sectors), last]
    fat = struct.pack(f"<{len(table)}I", *table).ljust(512, b"\xff")

    def entry(name: str, kind: int, child: int, start: int, size: int) -> bytes:
        text = name.encode("utf-16-le") + b"\0\0" if name else b""
        return (
            text.ljust(64, b"\0")
            + struct.pack("<HBBIII", len(text), kind, 1, none, none, child)
            + bytes(36) + struct.pack("<IQ", start, size)
        )  # fmt: skip

    folder = (
        entry("Root Entry", 5, 1, last, 0) + entry("Workbook", 2, none, 2, len(stream))
        + entry("", 0, none, 0, 0) * 2
    )  # fmt: skip
    return header + fat + folder + stream


DIALECTS = (
    plain, spreadsheet_locale, controller_export, several_tables, unicode_text, declared_separator,
    durations, date_and_time, month_first, serial_dates, other_units, quoted, old_line_ends, mapped,
    two_files, workbook, sheets, open_document, old_workbook,
)  # fmt: skip

if __name__ == "__main__":
    for dialect in DIALECTS:
        dialect()
    sys.stderr.write(f"{len(DIALECTS)} dialects written\n")
