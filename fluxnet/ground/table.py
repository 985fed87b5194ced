"""Tables of results: rows, columns, units. What is shown is decided once, here as data."""

from __future__ import annotations

from enum import Enum
from typing import TYPE_CHECKING

from fluxnet.ground.record import record

if TYPE_CHECKING:
    import pandas as pd

__all__ = ["Align", "Cell", "Column", "Table"]

Cell = str | float | int | bool | None


class Align(Enum):
    """Where a column's text stands."""

    LEFT = "left"
    RIGHT = "right"


@record
class Column:
    """A column: its title on screen, its key in data, its unit.

    Without a title it stands only in data, without a key only on screen.
    ``sd_of`` names the column whose standard deviation this one holds: on screen the two are
    shown together, rounded to what the error allows; an sd of 0 as ``exact``, unless
    ``says_exact`` is False. Otherwise ``digits`` significant ones are shown, or ``decimals``
    behind the point, or as many in every cell as suit them all where they are ``even``. Text
    may be broken down to ``wrap`` letters where the table is too wide.
    """

    title: str
    key: str
    unit: str = ""
    align: Align = Align.LEFT
    sd_of: str | None = None
    digits: int = 4
    decimals: int | None = None
    even: bool = False
    wrap: int | None = None
    says_exact: bool = True


@record
class Table:
    """One table of a result; missing values are None, never NaN.

    ``run`` names the run that it belongs to, where a result has one such table a run.
    """

    key: str
    title: str
    columns: tuple[Column, ...]
    rows: tuple[tuple[Cell, ...], ...]
    notes: tuple[str, ...] = ()
    run: str | None = None

    def __post_init__(self) -> None:
        for row in self.rows:
            if len(row) != len(self.columns):
                raise ValueError(f"a row of table {self.key} has {len(row)} cells")

    @property
    def is_shown(self) -> bool:
        """Whether it has a column for the screen; a table of data alone has none."""
        return any(column.title for column in self.columns)

    def to_frame(self) -> pd.DataFrame:
        """The table as a pandas frame, columns by key, numbers at full precision."""
        import pandas as pd

        return pd.DataFrame(
            [list(row) for row in self.rows], columns=[c.key for c in self.columns]
        )
