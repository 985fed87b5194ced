"""The linear problem that every solver shares: labelled rows and columns with bounds.

Variables are the fluxes only. A boundary rate is a row (its release is S_ext v), so no
artificial reaction is needed; a role, a limit and a measured value are bounds on rows.
"""

from __future__ import annotations

from dataclasses import field
from enum import Enum

import numpy as np
from numpy.typing import NDArray

from fluxnet.ground.record import record
from fluxnet.ground.source import NOWHERE, Span
from fluxnet.network.model import Quantity

__all__ = ["Problem", "Row", "RowKind"]


class RowKind(Enum):
    """Why a row of a problem is there. The order is that in which members are listed."""

    BALANCE = "balance"
    ROLE = "role"
    LIMIT = "limit"
    MEASUREMENT = "measurement"
    MEASURED_LIMIT = "measured limit"


@record
class Row:
    """The label of one row.

    ``name`` is told to the user: the species of a balance or role, the limit as written, the
    measured quantity. ``quantity`` is what the row's product with the fluxes is the value of
    (None for a balance). ``value`` and ``sd`` are those of a measured row.

    A ratio A / B at ``ratio`` is the row A - ratio B. Where it is measured, ``value`` is 0 and
    ``sd`` is the ratio's own sd times ``denominator``, the size taken for B. Ratios count
    moles: ``per_mole`` is how many units of the basis are in one mole of B.
    """

    kind: RowKind
    name: str
    quantity: Quantity | None = None
    value: float | None = None
    sd: float | None = None
    span: Span = NOWHERE
    ratio: float | None = None
    denominator: float | None = None
    per_mole: float = 1.0


@record
class Problem:
    """low <= A v <= high with column_low <= v <= column_high.

    ``matrix`` is rows x columns, both labelled (``rows``, ``columns``: reaction names).
    Balances have low = high = 0. An irreversible reaction has a column_low of 0. Arrays are
    read-only; infinities mark absent bounds; NaN is refused.
    """

    columns: tuple[str, ...]
    rows: tuple[Row, ...]
    matrix: NDArray[np.float64]
    row_low: NDArray[np.float64]
    row_high: NDArray[np.float64]
    column_low: NDArray[np.float64]
    column_high: NDArray[np.float64]
    _places: dict[str, int] = field(init=False, repr=False, compare=False, hash=False)

    def __post_init__(self) -> None:
        shape = (len(self.rows), len(self.columns))
        if self.matrix.shape != shape:
            raise ValueError(f"a matrix of {shape} is needed, {self.matrix.shape} was given")
        for name in ("matrix", "row_low", "row_high", "column_low", "column_high"):
            array = getattr(self, name)
            if np.isnan(array).any():
                raise ValueError(f"{name} holds NaN")
            array.setflags(write=False)
        object.__setattr__(self, "_places", {c: j for j, c in enumerate(self.columns)})

    def column(self, reaction: str) -> int:
        """The column of a reaction's flux."""
        return self._places[reaction]
