"""The cone whose elementary modes are asked for: balances, and columns that run one way or both."""

from __future__ import annotations

from fluxnet.exact.sparse import SparseRow
from fluxnet.ground.record import record

__all__ = ["Cone"]


@record
class Cone:
    """All v with row . v = 0 for each of ``rows``, and v_j >= 0 for columns that are one-way.

    Parameters
    ----------
    columns
        The columns' names.
    both_ways
        For each column whether it runs both ways.
    rows
        Sparse rows {column: exact coefficient}.
    """

    columns: tuple[str, ...]
    both_ways: tuple[bool, ...]
    rows: tuple[SparseRow, ...]

    def __post_init__(self) -> None:
        if len(self.columns) != len(self.both_ways):
            raise ValueError("each column runs one way or both")
