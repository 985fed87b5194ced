"""A cone made smaller without loss: what cannot run is out, what runs together is one column.

Three steps, exact, until nothing changes: a balance that is only fed or only drained blocks its
columns; one that a single two-way column has to feed or drain fixes its direction; columns in a
fixed proportion on the whole null space become one. Balances that the others imply (conserved
sums) vanish in the null space.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from fractions import Fraction
from math import lcm

from fluxnet.exact.sparse import NullSpace, SparseRow, null_space
from fluxnet.ground.record import record
from fluxnet.modes.cone import Cone

__all__ = ["Group", "SmallCone", "compress"]


@record
class Group:
    """Columns of a cone that run in a fixed proportion: each as (column, factor).

    ``both_ways``: whether they can turn round; else the group's own flux is 0 or more.
    """

    members: tuple[tuple[int, Fraction], ...]
    both_ways: bool


@record
class SmallCone:
    """A compressed cone by the null space of its balances.

    Parameters
    ----------
    groups
        The columns of the small cone.
    blocked
        Columns of the first cone that are zero throughout.
    forms
        For each group its flux as a form {coordinate: value} in the free coordinates.
    free
        For each coordinate the group whose flux it is.
    """

    groups: tuple[Group, ...]
    blocked: tuple[int, ...]
    forms: tuple[SparseRow, ...]
    free: tuple[int, ...]


def compress(cone: Cone) -> SmallCone:
    """The small cone that holds the same modes.

    Examples
    --------
    >>> one = Fraction(1)
    >>> rows = ({0: one, 1: -2 * one}, {1: one, 2: -one, 3: -one}, {4: one})
    >>> small = compress(Cone(tuple("abcde"), (False, True, True, False, False), rows))
    >>> [[(j, str(f)) for j, f in group.members] for group in small.groups]
    [[(0, '2'), (1, '1')], [(2, '1')], [(3, '1')]]
    >>> [group.both_ways for group in small.groups], small.blocked
    ([False, True, False], (4,))
    """
    signs = {j: 0 if both else 1 for j, both in enumerate(cone.both_ways)}
    while True:
        while _narrow(cone.rows, signs):
            pass
        active = sorted(signs)
        space = _space(cone.rows, active)
        bundles = _bundles(space, active)
        if not _agree(bundles, active, signs):
            return _small(cone, space, active, bundles, signs)


def _narrow(rows: Sequence[SparseRow], signs: dict[int, int]) -> bool:
    """Use each balance by itself once; whether anything is known now that was not."""
    changed = False
    for row in rows:
        held = [(j, a) for j, a in row.items() if j in signs]
        ways = [signs[j] * (1 if a > 0 else -1) for j, a in held]
        turning = [k for k, way in enumerate(ways) if way == 0]
        fixed = {way for way in ways if way}
        if not held or len(fixed) > 1 or len(turning) > 1:
            continue
        if not turning or not fixed:
            for j, _ in held:
                del signs[j]
        else:
            j, a = held[turning[0]]
            signs[j] = -fixed.pop() * (1 if a > 0 else -1)
        changed = True
    return changed


def _space(rows: Sequence[SparseRow], active: Sequence[int]) -> NullSpace:
    """The null space over the active columns, numbered by their place."""
    place = {j: k for k, j in enumerate(active)}
    kept = [{place[j]: a for j, a in row.items() if j in place} for row in rows]
    return null_space([row for row in kept if row], len(active))


def _bundles(space: NullSpace, active: Sequence[int]) -> list[list[tuple[int, Fraction]]]:
    """Places whose forms are proportional, each with its factor of the first one's form."""
    found: dict[tuple[tuple[int, Fraction], ...], list[tuple[int, Fraction]]] = {}
    for k in range(len(active)):
        form = space.rows[k]
        if not form:
            continue
        lead = form[min(form)]
        key = tuple(sorted((t, a / lead) for t, a in form.items()))
        found.setdefault(key, []).append((k, lead))
    return list(found.values())


def _agree(
    bundles: Sequence[Sequence[tuple[int, Fraction]]],
    active: Sequence[int],
    signs: dict[int, int],
) -> bool:
    """Carry directions over to all columns of a bundle; whether that said anything new."""
    bundled = {k for bundle in bundles for k, _ in bundle}
    dead = [j for k, j in enumerate(active) if k not in bundled]
    changed = bool(dead)
    for j in dead:
        del signs[j]
    for bundle in bundles:
        ways = {signs[active[k]] * (1 if a > 0 else -1) for k, a in bundle} - {0}
        if len(ways) > 1:
            for k, _ in bundle:
                del signs[active[k]]
            changed = True
        elif ways:
            (way,) = ways
            for k, a in bundle:
                sign = way * (1 if a > 0 else -1)
                changed = changed or signs[active[k]] != sign
                signs[active[k]] = sign
    return changed


def _small(
    cone: Cone,
    space: NullSpace,
    active: Sequence[int],
    bundles: Sequence[Sequence[tuple[int, Fraction]]],
    signs: Mapping[int, int],
) -> SmallCone:
    """The small cone, in smallest whole proportions, one-way groups turned to run forwards."""
    groups: list[Group] = []
    forms: list[SparseRow] = []
    owner: dict[int, int] = {}
    scales: dict[int, Fraction] = {}
    for bundle in bundles:
        k, lead = next(((k, a) for k, a in bundle if k in space.free), bundle[0])
        sign = signs[active[k]] or 1
        ratios = [a / lead for _, a in bundle]
        shared = lcm(*(r.denominator for r in ratios))
        factors = [r * shared * sign for r in ratios]
        members = tuple((active[m], f) for (m, _), f in zip(bundle, factors, strict=True))
        if k in space.free:
            coordinate = space.free.index(k)
            owner[coordinate] = len(groups)
            scales[coordinate] = Fraction(shared * sign)
        groups.append(Group(members, not signs[active[k]]))
        forms.append({t: a / (shared * sign) for t, a in space.rows[k].items()})
    # A coordinate counts units of its group, not of the column that it was.
    turned = tuple({t: a * scales[t] for t, a in form.items()} for form in forms)
    blocked = tuple(j for j in range(len(cone.columns)) if j not in signs)
    return SmallCone(
        tuple(groups), blocked, turned, tuple(owner[t] for t in range(len(space.free)))
    )
