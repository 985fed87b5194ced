"""A rates table as a file, with the correlations of its errors beside it."""

from __future__ import annotations

import sys
from pathlib import Path
from typing import TYPE_CHECKING

from fluxnet.ground.errors import MisuseError
from fluxnet.presenting.files import refuse_file, write_text

if TYPE_CHECKING:
    from fluxnet.rates.measured import RatesTable

__all__ = ["refuse_table", "write_table"]


def refuse_table(path: Path, *, force: bool) -> None:
    """Refuse, before anything is read, a table that could not be written.

    Raises
    ------
    MisuseError
        Where one of its two files exists and is not to be overwritten, or would lie in no folder.
    """
    for each in (path, _beside(path)):
        refuse_file(each, force=force)


def write_table(table: RatesTable, path: Path, *, force: bool) -> None:
    """Write the rates, and beside them the correlations of their errors where there are any."""
    from fluxnet.tables.writer import write_covariance_text, write_rates_text

    beside = _beside(path)
    pairs = write_covariance_text(table)
    if not pairs and beside.exists():
        raise MisuseError(f"{beside} would be taken for the correlations of {path}; take it away")
    write_text(path, write_rates_text(table), force=force)
    if pairs:
        write_text(beside, pairs, force=force)
    print(f"wrote {path}{f' and {beside}' if pairs else ''}", file=sys.stderr)


def _beside(table: Path) -> Path:
    """Where a rates table's correlations are looked for."""
    return table.with_name(f"{table.stem}.covariance.csv")
