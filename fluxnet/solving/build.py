"""From a network and one run to the linear problem: which rows, which bounds, and why.

One row each for every balance, role, limit and measured value, so that each keeps its own
name in a conflict. A measured value is a row without bounds (least squares judge it), within
``K`` of its sd where an aim is asked for, and an equality where its sd is 0.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import field, replace
from types import MappingProxyType

import numpy as np
from numpy.typing import NDArray

from fluxnet.ground.diagnostic import Diagnostic
from fluxnet.ground.errors import MisuseError
from fluxnet.ground.record import record
from fluxnet.matrices.stoichiometry import Stoichiometry, stoichiometry
from fluxnet.network.model import Basis, Limit, Network, Quantity, QuantityKind
from fluxnet.rates.measured import Run
from fluxnet.solving.problem import Problem, Row
from fluxnet.solving.quantities import (
    Frame,
    ash_key,
    frame_at,
    number_values,
    quantity_row,
)
from fluxnet.solving.rows import Sheet, lay_rows

__all__ = ["Built", "Uncertain", "build_problem", "quantity_row", "rebuild"]

Vector = NDArray[np.float64]


@record
class Uncertain:
    """A number of the model that is itself measured: a parameter with ±, or an ash.

    ``name`` is the parameter's, or :func:`fluxnet.solving.quantities.ash_key` of a biomass.
    """

    name: str
    value: float
    sd: float
    low: float
    high: float


@record
class Built:
    """A problem with all that was decided on the way to it.

    ``measured`` are the rows with an sd above 0, and ``covariance`` is square over them;
    ``estimated`` are those of them (measured ratios) whose sd rests on a mere guess of the
    denominator: solve, and :func:`rebuild` with the denominators found. ``values`` are the
    numbers the matrix was made at, ``uncertain`` those of them that are measured themselves.
    ``left_out`` and ``replaced`` are limits of the model that take no part; ``left_free`` the
    boundary species that nothing measures and no limit fixes; ``notes`` tell all that.
    """

    problem: Problem
    network: Network
    run: Run | None
    basis: Basis
    stoichiometry: Stoichiometry
    values: Mapping[str, float]
    measured: tuple[int, ...]
    covariance: Vector
    estimated: tuple[int, ...]
    uncertain: tuple[Uncertain, ...]
    left_out: tuple[Limit, ...]
    replaced: tuple[Limit, ...]
    left_free: tuple[str, ...]
    notes: tuple[Diagnostic, ...] = field(default=())

    @property
    def measured_values(self) -> Vector:
        """The values of the measured rows."""
        rows = self.problem.rows
        return np.array([rows[i].value for i in self.measured], dtype=np.float64)


def build_problem(
    network: Network,
    run: Run | None = None,
    *,
    values: Mapping[str, float] | None = None,
    within: float | None = None,
    denominators: Mapping[Quantity, float] | None = None,
) -> Built:
    """The problem of a network and one run.

    Parameters
    ----------
    run
        Its measured rates; without one, the network's limits alone.
    values
        Other values for some parameters or ash: see
        :func:`fluxnet.solving.quantities.number_values`.
    within
        Hold each measured value within so many of its sd; None leaves it to least squares.
    denominators
        The sizes of measured ratios' denominators in moles, where they are known from a fit.

    Raises
    ------
    MisuseError
        Where the run measures what the network does not have, or holds NaN.

    Notes
    -----
    A run whose basis is not the model's (amounts: no time) leaves out limits other than zero
    and measured values given in the model's basis; ratios hold in every basis.

    Examples
    --------
    >>> from fluxnet.reading.model import read_model_text
    >>> lines = ("substrate glucose", "product ethanol", "exchange CO2", "compartment all",
    ...     "    ferment : glucose -> 2 ethanol + 2 CO2", "limit ethanol <= 3")
    >>> built = build_problem(read_model_text(chr(10).join(lines)).network)
    >>> [row.name for row in built.problem.rows], built.problem.row_high.tolist()
    (['glucose', 'ethanol', 'CO2', 'limit ethanol <= 3'], [inf, inf, inf, 3.0])
    """
    if within is not None and not within >= 0:
        raise MisuseError("measured values can only be held within a positive number of sd")
    stoich = stoichiometry(network)
    numbers = number_values(network, values)
    basis = run.basis if run is not None else network.basis
    frame = frame_at(network, stoich, numbers, basis)
    sheet = lay_rows(network, run, within, dict(denominators or {}))
    matrix = _matrix(sheet.rows, frame)
    measured, covariance = _errors(sheet, run)
    return Built(
        problem=Problem(
            columns=stoich.reactions,
            rows=sheet.rows,
            matrix=matrix,
            row_low=sheet.low,
            row_high=sheet.high,
            column_low=np.array([-np.inf if r.reversible else 0.0 for r in network.reactions]),
            column_high=np.full(len(network.reactions), np.inf),
        ),
        network=network,
        run=run,
        basis=basis,
        stoichiometry=stoich,
        values=MappingProxyType(numbers),
        measured=measured,
        covariance=covariance,
        estimated=tuple(i for i in measured if i in sheet.guessed),
        uncertain=_uncertain(network, stoich, sheet.rows, frame, numbers),
        left_out=sheet.left_out,
        replaced=sheet.replaced,
        left_free=sheet.left_free,
        notes=sheet.notes,
    )


def rebuild(
    built: Built,
    values: Mapping[str, float] | None = None,
    *,
    denominators: Mapping[Quantity, float] | None = None,
    sds: Mapping[Quantity, float] | None = None,
) -> Built:
    """The same problem at other numbers: only the matrix, and the sds of ratios, change.

    Parameters
    ----------
    values
        New values of some parameters or ash; the others stay.
    denominators
        The sizes of measured ratios' denominators in moles, by the denominator's quantity.
    sds
        New sds of measured quantities (of a ratio: the ratio's own); correlations stay.
    """
    numbers = dict(built.values) | dict(values or {})
    number_values(built.network, numbers)
    frame = frame_at(built.network, built.stoichiometry, numbers, built.basis)
    rows = list(built.problem.rows)
    scale = np.ones(len(built.measured))
    for k, i in enumerate(built.measured):
        rows[i] = _resized(rows[i], denominators or {}, sds or {})
        old, new = built.problem.rows[i].sd, rows[i].sd
        scale[k] = new / old if old and new else 1.0
    known = set(denominators or {})
    return replace(
        built,
        problem=replace(built.problem, rows=tuple(rows), matrix=_matrix(tuple(rows), frame)),
        values=MappingProxyType(numbers),
        covariance=_read_only(built.covariance * np.outer(scale, scale)),
        estimated=tuple(i for i in built.estimated if _denominator(rows[i]) not in known),
    )


def _matrix(rows: tuple[Row, ...], frame: Frame) -> Vector:
    matrix = np.zeros((len(rows), frame.matrix.shape[1]))
    for i, row in enumerate(rows):
        if row.quantity is None:
            matrix[i] = frame.balance(row.name)
        else:
            matrix[i] = frame.row(row.quantity, row.ratio)
    return matrix


def _errors(sheet: Sheet, run: Run | None) -> tuple[tuple[int, ...], Vector]:
    """The rows with an sd, and the covariance over them in the rows' own units."""
    measured = tuple(i for i, row in enumerate(sheet.rows) if row.sd is not None and row.sd > 0)
    covariance = np.diag([(sheet.rows[i].sd or 0.0) ** 2 for i in measured])
    if run is None or run.covariance is None:
        return measured, _read_only(covariance)
    place = {sheet.sources[i]: k for k, i in enumerate(measured) if sheet.sources[i] is not None}
    for a, p in place.items():
        for b, q in place.items():
            if a != b and a is not None and b is not None:
                size = sheet.sizes[measured[p]] * sheet.sizes[measured[q]]
                covariance[p, q] = run.covariance[a, b] * size
    return measured, _read_only(covariance)


def _uncertain(
    network: Network,
    stoich: Stoichiometry,
    rows: tuple[Row, ...],
    frame: Frame,
    numbers: Mapping[str, float],
) -> tuple[Uncertain, ...]:
    """The measured numbers that the matrix really depends on."""
    used = {name for _, _, entry in stoich.entries for name in entry.parameters}
    found = [
        Uncertain(
            p.name,
            numbers[p.name],
            float(p.sd),
            -np.inf if p.low is None else float(p.low),
            np.inf if p.high is None else float(p.high),
        )
        for p in network.parameters
        if p.sd and p.name in used
    ]
    grows = any(_speaks_of_mu(row.quantity) for row in rows)
    for species in network.boundary:
        if species.ash_sd > 0 and grows and frame.basis is not Basis.CARBON:
            key = ash_key(species.name)
            found.append(Uncertain(key, numbers[key], float(species.ash_sd), 0.0, 0.99))
    return tuple(found)


def _speaks_of_mu(quantity: Quantity | None) -> bool:
    if quantity is None:
        return False
    parts = (quantity, quantity.numerator, quantity.denominator)
    return any(q is not None and q.kind is QuantityKind.MU for q in parts)


def _denominator(row: Row) -> Quantity | None:
    return row.quantity.denominator if row.quantity is not None else None


def _resized(
    row: Row, denominators: Mapping[Quantity, float], sds: Mapping[Quantity, float]
) -> Row:
    """The row with a new denominator or a new sd."""
    sd, size = row.sd, row.denominator
    if sd is None or row.quantity is None:
        return row
    own = sd / size if size else sd
    own = sds.get(row.quantity, own)
    below = _denominator(row)
    if below is None:
        return replace(row, sd=own)
    size = abs(denominators.get(below, size or 1.0)) or size
    return replace(row, sd=own * (size or 1.0), denominator=size)


def _read_only(array: Vector) -> Vector:
    array.setflags(write=False)
    return array

