"""Routes grouped by their net equations, and ranked."""

from __future__ import annotations

from collections.abc import Sequence
from fractions import Fraction
from math import lcm

import numpy as np
from numpy.typing import NDArray

from fluxnet.exact.sparse import SparseRow
from fluxnet.modes.whole import Whole, reduced, times
from fluxnet.network.model import Network
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
    amounts = releases.astype(np.float64) / divisor
    left = _energies(system, values)
    sizes = (values[:, : len(system.turned)] != 0).sum(axis=1)
    equations, member = _distinct(reduced(releases))
    order = np.lexsort((sizes, member))
    starts = np.searchsorted(member[order], np.arange(len(equations) + 1))
    names = [name for name, _ in system.releases]
    per = _per(system.network, names, equations, substrate)
    taken = -amounts[order, per[member[order]]]
    with np.errstate(divide="ignore", invalid="ignore"):
        spare = left[order] / taken[:, None]
    low = np.minimum.reduceat(spare, starts[:-1], axis=0).tolist()
    high = np.maximum.reduceat(spare, starts[:-1], axis=0).tolist()
    shortest = sizes[order[starts[:-1]]].tolist()
    groups = []
    for k, (equation, place) in enumerate(zip(equations.tolist(), per.tolist(), strict=True)):
        told = place >= 0
        name = names[place] if told else None
        gain = None
        if product is not None and told and name == substrate:
            gain = Fraction(equation[names.index(product)], -equation[place])
        energy = zip((c for c, _ in system.energy), low[k], high[k], strict=True) if told else ()
        groups.append(
            RouteGroup(
                tuple((n, v) for n, v in zip(names, equation, strict=True) if v),
                name,
                gain,
                tuple(Energy(*ends) for ends in energy),
                order[starts[k] : starts[k + 1]],
                shortest[k],
            )
        )
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


def _energies(system: RouteSystem, values: Whole) -> Array:
    if not system.energy:
        return np.zeros((len(values), 0))
    numbers, divisor = numbers_of(values, [form for _, form in system.energy])
    return numbers.astype(np.float64) / divisor


def _distinct(rows: Whole) -> tuple[Whole, NDArray[np.intp]]:
    """The different rows, and which of them each row is."""
    if rows.dtype != object:
        found, member = np.unique(rows, axis=0, return_inverse=True)
        return found, member.reshape(-1)
    places: dict[tuple[int, ...], int] = {}
    listed = [places.setdefault(tuple(row), len(places)) for row in rows.tolist()]
    return np.array(list(places), dtype=object), np.array(listed, dtype=np.intp)


def _per(
    network: Network, names: list[str], equations: Whole, substrate: str | None
) -> NDArray[np.intp]:
    """The column of what each equation is told per; -1 where nothing with carbon is taken up."""
    found = np.full(len(equations), -1, dtype=np.intp)
    foods = [
        s.name for s in network.boundary if s.formula is not None and s.formula.count("C") > 0
    ]
    for name in (*reversed(foods), *([substrate] if substrate is not None else [])):
        place = names.index(name)
        found[equations[:, place] < 0] = place
    return found


def _rank(group: RouteGroup, substrate: str | None) -> tuple[bool, float, bool, int, int]:
    """Routes from the substrate first, the best yield first, the shortest first."""
    elsewhere = substrate is not None and group.substrate != substrate
    best = -float(group.product_yield or 0)
    return elsewhere, best, group.substrate is None, group.shortest, -group.count
