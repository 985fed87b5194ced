"""Raw tables against bare pandas: a workbook of 5,000 x 30, and 1,000,000 rows of gas.

    python tests/benchmarks/raw_tables.py

Prints ratios of processor times measured in one run, the least of five each, and the memory that
reading adds at its peak for 250,000 and for 1,000,000 rows.
"""

from __future__ import annotations

import subprocess
import sys
import tempfile
import time
from collections.abc import Callable
from pathlib import Path

import numpy as np

ROWS = 1_000_000


def gas_file(path: Path, rows: int, *, clock: bool = False) -> None:
    """A gas analyser's record, a row a second."""
    random = np.random.default_rng(7)
    start = np.datetime64("2026-03-02T09:00:00")
    with path.open("w", encoding="utf-8") as file:
        file.write("mode,batch\n" + ("inoculation,2026-03-02 09:00:00\n" if clock else ""))
        file.write(f"{'timestamp' if clock else 'time [h]'},O2 out [%],CO2 out [%],")
        file.write("air flow [NL/h]\n")
        for row in range(rows):  # one by one, so that this process stays small
            at = f"{row / 3600:.6f}" if not clock else str(start + row).replace("T", " ")
            part = row / rows
            o, c, f = random.normal((20.95 - 1.5 * part, 0.04 + 1.4 * part, 60), (0.02, 0.01, 0.1))
            file.write(f"{at},{o:.4f},{c:.4f},{f:.3f}\n")


def workbook(path: Path, rows: int = 5_000, columns: int = 30) -> None:
    """A controller's record with samples among it."""
    import xlsxwriter

    random = np.random.default_rng(8)
    book = xlsxwriter.Workbook(path)
    sheet = book.add_worksheet("data")
    named = ["time [h]", "OD600", "dry weight [g/L]", "glucose [g/L]", "ethanol [g/L]",
             "acetate [mM]", "O2 out [%]", "CO2 out [%]", "air flow [NL/h]", "pH"]  # fmt: skip
    sheet.write_row(0, 0, named + [f"signal {i} [rpm]" for i in range(columns - len(named))])
    for i in range(rows):
        sheet.write_row(1 + i, 0, [i / 60, *random.uniform(1, 20, columns - 1).tolist()])
    book.close()


def ratio(ours: Callable[[], object], bare: Callable[[], object], times: int = 5) -> str:
    """The least processor times [s] of alternating repeats, and their ratio."""
    spent: tuple[list[float], list[float]] = ([], [])
    for _ in range(times):
        for work, told in zip((ours, bare), spent, strict=True):
            start = time.process_time()
            work()
            told.append(time.process_time() - start)
    mine, other = min(spent[0]), min(spent[1])
    return f"{mine:.2f} s, {mine / other:.2f} x {other:.2f} s of"


def peak(path: Path) -> float:
    """Megabytes that a process has at its peak beyond what it has before it reads a file."""
    code = (
        "import resource, sys\n"
        "import pandas, numpy\n"
        "from fluxnet.tables.cultivation_tables import read_cultivation\n"
        "before = resource.getrusage(resource.RUSAGE_SELF).ru_maxrss\n"
        f"assert read_cultivation({str(path)!r}).cultivations\n"
        "print((resource.getrusage(resource.RUSAGE_SELF).ru_maxrss - before) / 1024)\n"
    )
    return float(subprocess.run([sys.executable, "-c", code], capture_output=True, check=True,
                                text=True).stdout)  # fmt: skip


def main() -> None:
    """Print the ratios."""
    from fluxnet.tables.cultivation_tables import read_cultivation

    with tempfile.TemporaryDirectory() as folder:
        small, gas, clock = (Path(folder) / f"{n}.csv" for n in ("small", "gas", "clock"))
        book = Path(folder) / "book.xlsx"
        gas_file(small, ROWS // 4)
        gas_file(gas, ROWS)
        gas_file(clock, ROWS, clock=True)
        workbook(book)
        print(f"memory: {peak(small):.0f} MB more for 250,000 rows, {peak(gas):.0f} MB for "
              "1,000,000")  # fmt: skip
        import pandas as pd  # not before: a child's peak counts from its parent's

        told = ratio(lambda: read_cultivation(book), lambda: pd.read_excel(book, engine="calamine"))
        print(f"workbook 5,000 x 30: {told} pandas.read_excel")
        for name, path, skip in (("hours", gas, 1), ("a clock", clock, 2)):
            told = ratio(lambda p=path: read_cultivation(p),
                         lambda p=path, s=skip: pd.read_csv(p, skiprows=s))  # fmt: skip
            print(f"1,000,000 gas rows by {name}: {told} pandas.read_csv")


if __name__ == "__main__":
    main()
