"""The solver's own model of a linear programme, and where its basis stands.

Here and in :mod:`fluxnet.solving.linear` alone is highspy spoken to; it is imported when the
first model is made.
"""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

import numpy as np
from numpy.typing import NDArray

from fluxnet.ground.errors import MisuseError
from fluxnet.solving.problem import Problem
from fluxnet.solving.residuals import Entries

if TYPE_CHECKING:
    from fluxnet.exact.simplex import Place

__all__ = ["basis_places", "load_model"]

Vector = NDArray[np.float64]

_OPTIONS = (
    ("output_flag", False),
    ("presolve", "off"),  # a warm start needs the whole model, and rays exist only there
    ("solver", "simplex"),
    ("threads", 1),
    ("simplex_scale_strategy", 0),  # scaled here; its own leaves some problems "unknown"
    ("small_matrix_value", 1e-12),
)


def load_model(
    problem: Problem, entries: Entries, row_scale: Vector, column_scale: Vector
) -> Any:
    """A model of the problem without costs, its rows and columns scaled.

    Parameters
    ----------
    entries
        Those of the problem's matrix.

    Raises
    ------
    MisuseError
        Where the problem is beyond what the solver can hold.
    """
    import highspy

    rows, columns = problem.matrix.shape
    make: Any = highspy.Highs
    highs = make()
    for option, value in _OPTIONS:
        highs.setOptionValue(option, value)
    starts = np.searchsorted(entries.row, np.arange(rows + 1))
    model = highspy.HighsLp()
    model.num_row_, model.num_col_ = rows, columns
    model.col_cost_ = np.zeros(columns)
    model.col_lower_ = problem.column_low / column_scale
    model.col_upper_ = problem.column_high / column_scale
    model.row_lower_ = problem.row_low * row_scale
    model.row_upper_ = problem.row_high * row_scale
    model.a_matrix_.format_ = highspy.MatrixFormat.kRowwise
    model.a_matrix_.start_ = starts.astype(np.int32)
    model.a_matrix_.index_ = entries.column.astype(np.int32)
    model.a_matrix_.value_ = entries.value * row_scale[entries.row] * column_scale[entries.column]
    if highs.passModel(model) is highspy.HighsStatus.kError:
        raise MisuseError("the problem is beyond what a linear programme can hold")
    return highs


def basis_places(highs: Any, rows: int, columns: int) -> tuple[Place, ...]:
    """Where each column, then each row, stands in the last basis; the rows' own without one."""
    import highspy

    from fluxnet.exact.simplex import Place

    status, found = highspy.HighsBasisStatus, highs.getBasis()
    if not found.valid:
        return (Place.LOW,) * columns + (Place.BASIC,) * rows
    meanings = {
        status.kBasic: Place.BASIC, status.kUpper: Place.HIGH, status.kZero: Place.FREE,
    }
    statuses = (*found.col_status, *found.row_status)
    return tuple([meanings.get(one, Place.LOW) for one in statuses])
