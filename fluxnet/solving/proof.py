"""Whether an answer of the floating-point solver holds in exact arithmetic.

The problem is written once more in rational numbers, from the decimals as they stand in the
model and the table; the solver's basis is taken over, mended where it is not the best, and
what it says is proven by prices (:mod:`fluxnet.exact.programme`).
"""

from __future__ import annotations

from collections.abc import Iterable, Mapping, Sequence
from fractions import Fraction
from math import isclose, isfinite

from fluxnet.exact.programme import (
    ExactProgramme,
    excludes,
    is_endless,
    make_programme,
    meets,
)
from fluxnet.exact.simplex import End, ExactSolution, Place, solve_from
from fluxnet.exact.sparse import SparseRow
from fluxnet.ground.record import record
from fluxnet.network.model import Quantity
from fluxnet.solving.build import Built
from fluxnet.solving.forms import (
    Form,
    as_fraction,
    exact_numbers,
    exact_row,
    exact_species,
    form_of,
    form_of_row,
)
from fluxnet.solving.linear import Outcome
from fluxnet.solving.problem import Problem, Row

__all__ = [
    "Proof", "Proven", "exact_programme", "exact_rows", "exact_sums", "prove_endless",
    "prove_infeasible", "prove_outcome",
]  # fmt: skip


@record
class Proof:
    """Whether an answer is proven in exact arithmetic.

    ``gap`` is how far off it is where it is not (the largest violation of a bound or of a
    price's sign), else 0. ``words`` tell it.
    """

    verified: bool
    gap: float
    words: str


@record
class Proven:
    """A proof (or that there is none), with the exact solution that it rests on."""

    proof: Proof
    solution: ExactSolution
    programme: ExactProgramme


def exact_rows(problem: Problem) -> tuple[SparseRow, ...]:
    """The rows of a problem of which nothing but its floats is known, as {column: fraction}.

    Each coefficient is the shortest decimal that its float stands for.
    """
    return tuple(
        {j: as_fraction(v) for j, v in enumerate(row) if v} for row in problem.matrix.tolist()
    )


def exact_sums(
    built: Built, sums: Iterable[Sequence[tuple[Fraction, Quantity]]]
) -> tuple[tuple[SparseRow, ...], tuple[SparseRow, ...]]:
    """The rows of a network's problem from the decimals as written, and those of some sums.

    Parameters
    ----------
    sums
        Weighted sums of quantities, such as an aim.
    """
    numbers = exact_numbers(built)
    species = exact_species(built.stoichiometry, numbers)
    balances = dict(zip(built.stoichiometry.species, species, strict=True))
    rows = tuple(
        balances[row.name]
        if row.quantity is None
        else exact_row(built, form_of_row(built, row), species, numbers)
        for row in built.problem.rows
    )
    found: list[SparseRow] = []
    for terms in sums:
        form = Form()
        for weight, quantity in terms:
            form = form.minus(-weight, form_of(built, quantity))
        found.append(exact_row(built, form, species, numbers))
    return rows, tuple(found)


def exact_programme(
    problem: Problem,
    rows: Sequence[SparseRow] | None = None,
    costs: SparseRow | None = None,
    *,
    within: float | None = None,
) -> ExactProgramme:
    """A problem in exact numbers.

    Parameters
    ----------
    rows
        Its rows, of :func:`exact_sums`; else those of :func:`exact_rows`.
    costs
        To be minimised; none ask whether anything is feasible.
    within
        The number of sds that measured values are held within; their bounds are then reckoned
        from value and sd as written.
    """
    row_ends = zip(problem.rows, problem.row_low.tolist(), problem.row_high.tolist(), strict=True)
    ends = zip(problem.column_low.tolist(), problem.column_high.tolist(), strict=True)
    return make_programme(
        len(problem.columns),
        exact_rows(problem) if rows is None else rows,
        [_row_bounds(row, low, high, within) for row, low, high in row_ends],
        [(_bound(low), _bound(high)) for low, high in ends],
        costs or {},
    )


def prove_outcome(
    programme: ExactProgramme, places: Sequence[Place], outcome: Outcome
) -> Proven:
    """Prove what a solver says of a programme, from its last basis.

    Parameters
    ----------
    places
        Of the fluxes first, then of the rows (:meth:`fluxnet.solving.linear.Programme.places`).
    outcome
        What the solver says; where it says nothing (FAILED), whatever can be proven will do.
    """
    found = solve_from(programme, places)
    said = _SAID.get(outcome)
    verified = found.end is not End.OPEN and said in (None, found.end)
    if verified and found.end is End.INFEASIBLE:
        verified = excludes(programme, found.weights)
    if verified and found.end is End.UNBOUNDED:
        verified = prove_endless(programme, found.fluxes, found.ray)
    gap = 0.0 if verified else float(found.off)
    return Proven(Proof(verified, gap, _words(found, verified, gap)), found, programme)


def prove_infeasible(programme: ExactProgramme, weights: Sequence[Fraction]) -> bool:
    """Whether weights of the rows prove exactly that no fluxes meet all bounds (Farkas).

    Examples
    --------
    >>> import numpy as np
    >>> from fluxnet.solving.problem import Row, RowKind
    >>> rows = (Row(RowKind.LIMIT, "limit a <= 1"), Row(RowKind.LIMIT, "limit 2 a >= 3"))
    >>> problem = Problem(("a",), rows, np.array([[1.0], [2.0]]), np.array([-np.inf, 3.0]),
    ...     np.array([1.0, np.inf]), np.zeros(1), np.full(1, np.inf))
    >>> prove_infeasible(exact_programme(problem), [Fraction(-2), Fraction(1)])
    True
    """
    return excludes(programme, weights)


def prove_endless(
    programme: ExactProgramme, fluxes: Sequence[Fraction], ray: Sequence[Fraction]
) -> bool:
    """Whether fluxes that meet all bounds can follow a ray for ever, to ever lower costs."""
    return meets(programme, fluxes) and is_endless(programme, ray)


_SAID: Mapping[Outcome, End] = {
    Outcome.OPTIMAL: End.OPTIMAL,
    Outcome.INFEASIBLE: End.INFEASIBLE,
    Outcome.UNBOUNDED: End.UNBOUNDED,
}
_PROVEN = {
    End.OPTIMAL: "Proven in exact arithmetic",
    End.INFEASIBLE: "That no fluxes meet everything is proven in exact arithmetic",
    End.UNBOUNDED: "That there is no end to it is proven in exact arithmetic",
}
_OTHERWISE = {
    End.OPTIMAL: "there is an optimum",
    End.INFEASIBLE: "no fluxes meet everything",
    End.UNBOUNDED: "there is no end to it",
    End.OPEN: "the steps allowed lead to no proof",
}


def _words(found: ExactSolution, verified: bool, gap: float) -> str:
    if verified:
        return _PROVEN[found.end]
    return f"Not proven: in exact arithmetic {_OTHERWISE[found.end]} (off by {gap:.2g})"


def _bound(value: float) -> Fraction | None:
    if not isfinite(value):
        return None
    return Fraction(int(value)) if value.is_integer() else as_fraction(value)


def _row_bounds(
    row: Row, low: float, high: float, within: float | None
) -> tuple[Fraction | None, Fraction | None]:
    """Bounds at the decimals as written; of a measured value, value -+ within sds of these."""
    reach = within if within is not None and isfinite(within) else None
    if reach is None or row.value is None or not row.sd or row.ratio is not None:
        return _bound(low), _bound(high)
    value, room = as_fraction(row.value), as_fraction(reach) * as_fraction(row.sd)
    size = 1e-12 * abs(row.value)
    lower, upper = (
        end if isclose(bound, end, rel_tol=1e-12, abs_tol=size) else _bound(bound)
        for bound, end in ((low, value - room), (high, value + room))
    )
    return lower, upper
