"""Routes grouped by their net equations, and ranked."""

from __future__ import annotations

from collections.abc import Sequence
from fractions import Fraction
from math import lcm

import numpy as np
from numpy.typing import NDArray

from fluxnet.exact.sparse import SparseRow
from fluxnet.ground.record import record
from fluxnet.modes.whole import Whole, reduced, times
from fluxnet.studies.equations import reference_substrate
from fluxnet.studies.routes_result import Energy, RouteGroup
from fluxnet.studies.routes_system import RouteSystem

__all__ = ["group_routes", "numbers_of"]


Array = NDArray[np.float64]


def group_routes(
    system: RouteSystem, values: Whole, substrate: str | None, product: str | None
) -> tuple[RouteGroup, ...]:
    """The routes by net equation: the best yield first, then what takes up no substrate."""
    if not len(values):
        return ()
    releases, divisor = numbers_of(values, [form for _, form in system.releases])
    numbers = _Numbers(
        releases.astype(np.float64) / divisor,
        _energies(system, values),
        (values[:, : len(system.turned)] != 0).sum(axis=1),
    )
    equations, member = _distinct(reduced(releases))
    order = np.lexsort((numbers.sizes, member))
    starts = np.searchsorted(member[order], np.arange(len(equations) + 1))
    groups = [
        _group(system, equation, order[starts[k] : starts[k + 1]], numbers, substrate, product)
        for k, equation in enumerate(equations)
    ]
    return tuple(sorted(groups, key=lambda group: _rank(group, substrate)))


def numbers_of(values: Whole, forms: Sequence[SparseRow]) -> tuple[Whole, int]:
    """The values of some forms as whole numbers (routes, forms), and what they are divided by.

    Examples
    --------
    >>> numbers, divisor = numbers_of(np.array([[2, 3]]), [{0: Fraction(1, 2), 1: Fraction(1)}])
    >>> numbers.tolist(), divisor
    ([[8]], 2)
    """
    shared = lcm(*(a.denominator for form in forms for a in form.values()))
    matrix: Whole = np.zeros((values.shape[1], len(forms)), dtype=object)
    for i, form in enumerate(forms):
        for j, a in form.items():
            matrix[j, i] = int(a * shared)
    if all(abs(v) < 2**31 for v in matrix.flat):
        matrix = matrix.astype(np.int64)
    return times(values, matrix), shared


@record
class _Numbers:
    """Of each route the releases and what is left of carriers as floats, and its length."""

    releases: Array
    energies: Array
    sizes: NDArray[np.intp]


def _energies(system: RouteSystem, values: Whole) -> Array:
    if not system.energy:
        return np.zeros((len(values), 0))
    numbers, divisor = numbers_of(values, [form for _, form in system.energy])
    return numbers.astype(np.float64) / divisor


def _distinct(rows: Whole) -> tuple[list[tuple[int, ...]], NDArray[np.intp]]:
    """The different rows, and which of them each row is."""
    if rows.dtype != object:
        found, member = np.unique(rows, axis=0, return_inverse=True)
        return [tuple(row) for row in found.tolist()], member.reshape(-1)
    places: dict[tuple[int, ...], int] = {}
    listed = [places.setdefault(tuple(row), len(places)) for row in rows.tolist()]
    return list(places), np.array(listed, dtype=np.intp)


def _group(
    system: RouteSystem,
    equation: tuple[int, ...],
    members: NDArray[np.intp],
    numbers: _Numbers,
    substrate: str | None,
    product: str | None,
) -> RouteGroup:
    names = [name for name, _ in system.releases]
    terms = tuple((name, v) for name, v in zip(names, equation, strict=True) if v)
    amounts = dict(terms)
    per = substrate if substrate is not None and amounts.get(substrate, 0) < 0 else None
    gain = None
    if per is not None and product is not None:
        gain = Fraction(amounts.get(product, 0), -amounts[per])
    if per is None:
        per = reference_substrate(system.network, {name: float(v) for name, v in terms})
    told: list[Energy] = []
    if per is not None:
        taken = -numbers.releases[members, names.index(per)]
        for k, (name, _) in enumerate(system.energy):
            left = numbers.energies[members, k] / taken
            told.append(Energy(name, float(left.min()), float(left.max())))
    return RouteGroup(terms, per, gain, tuple(told), members, int(numbers.sizes[members[0]]))


def _rank(group: RouteGroup, substrate: str | None) -> tuple[bool, Fraction, bool, int, int]:
    """Routes from the substrate first, the best yield first, the shortest first."""
    from_it = substrate is None or group.product_yield is not None or group.substrate == substrate
    best = -(group.product_yield or Fraction(0))
    return not from_it, best, group.substrate is None, group.shortest, -group.count
