"""Contents that equations determine, and equations that contradict one another, exactly."""

from __future__ import annotations

from collections.abc import Callable, Iterable, Mapping, Sequence
from dataclasses import dataclass, field
from fractions import Fraction
from heapq import heappop, heappush

from fluxnet.checks.composition_rows import Equation
from fluxnet.exact.basic import find_nonnegative
from fluxnet.exact.linear import echelon, kernel, solve

__all__ = ["Determined", "circuit", "determine", "is_possible", "shrink"]

_ZERO = Fraction(0)


@dataclass(slots=True, eq=False, repr=False)
class Determined:
    """What one balance's equations say.

    ``values`` are the contents that are determined, ``origins`` the equations each follows
    from, ``clashes`` sets of equations that cannot hold together, ``rounded`` equations that
    hold only within rounding, ``open`` those that leave something free.
    """

    values: dict[str, Fraction] = field(default_factory=dict)
    origins: dict[str, frozenset[int]] = field(default_factory=dict)
    clashes: list[frozenset[int]] = field(default_factory=list)
    rounded: set[int] = field(default_factory=set)
    open: set[int] = field(default_factory=set)


def determine(
    equations: Sequence[Equation],
    excuses: Callable[[Equation, Mapping[str, Fraction], Fraction], bool],
) -> Determined:
    """Solve for every content that the equations determine.

    An equation with one unknown gives it; what is then left with several is solved together.
    Equations of rounded numbers come after the exact ones, and ``excuses`` says whether
    rounding explains the gap of one.
    """
    found = Determined()
    exact = [k for k, e in enumerate(equations) if e.exact]
    rounded = [k for k, e in enumerate(equations) if not e.exact]
    left: set[int] = set()
    for batch in (exact, rounded):
        left |= set(batch)
        while True:
            _propagate(equations, left, found, excuses)
            if not _solve_together(equations, left, found):
                break
    found.open = left
    return found


def _rest(equation: Equation, found: Determined) -> tuple[list[str], Fraction]:
    """The unknowns that an equation still has, and its gap at the values found."""
    unknown = [n for n in equation.factors if n not in found.values]
    known = sum(
        (f * found.values[n] for n, f in equation.factors.items() if n in found.values), _ZERO
    )
    return unknown, equation.gap + known


def _origin(
    equations: Sequence[Equation], members: Iterable[int], found: Determined
) -> frozenset[int]:
    """Equations, and those that the values in them follow from."""
    chosen = frozenset(members)
    return chosen.union(
        *(found.origins[n] for k in chosen for n in equations[k].factors if n in found.origins)
    )


def _propagate(
    equations: Sequence[Equation],
    left: set[int],
    found: Determined,
    excuses: Callable[[Equation, Mapping[str, Fraction], Fraction], bool],
) -> None:
    """Take out equations with no unknown or one, until none is left.

    Those that follow from the fewest others come first, so that a contradiction is found
    between as few as may be.
    """
    users: dict[str, list[int]] = {}
    waiting: list[tuple[int, int]] = []

    def queue(k: int) -> None:
        if k in left and len(_rest(equations[k], found)[0]) <= 1:
            heappush(waiting, (len(_origin(equations, [k], found)), k))

    for k in sorted(left):
        for name in equations[k].factors:
            users.setdefault(name, []).append(k)
        queue(k)
    while waiting:
        k = heappop(waiting)[1]
        if k not in left:
            continue
        left.discard(k)
        unknown, gap = _rest(equations[k], found)
        origin = _origin(equations, [k], found)
        if unknown:
            name = unknown[0]
            found.values[name] = -gap / equations[k].factors[name]
            found.origins[name] = origin
            for user in users[name]:
                queue(user)
        elif gap and excuses(equations[k], found.values, gap):
            found.rounded.add(k)
        elif gap:
            found.clashes.append(origin)


def _solve_together(equations: Sequence[Equation], left: set[int], found: Determined) -> bool:
    """Solve groups of equations that share unknowns; whether anything new was found."""
    progress = False
    for group in _groups(equations, left, found):
        names, rows, rights = _system(equations, group, found)
        form = echelon([[*r, b] for r, b in zip(rows, rights, strict=True)], len(names) + 1)
        turned = [[row[j] for row in rows] for j in range(len(names))]
        if len(names) in form.pivots:
            combination = next(
                y for y in kernel(turned, len(rows)) if sum(map(_times, y, rights), _ZERO)
            )
            members = [k for k, y in zip(group, combination, strict=True) if y]
            found.clashes.append(_origin(equations, members, found))
            left.difference_update(group)
            continue
        for pivot, row in zip(form.pivots, form.rows, strict=True):
            if any(v for j, v in enumerate(row[:-1]) if j != pivot):
                continue
            unit = [Fraction(int(j == pivot)) for j in range(len(names))]
            weights = solve(turned, unit, len(rows)) or ()
            members = [k for k, y in zip(group, weights, strict=True) if y]
            origin = _origin(equations, members, found)
            found.values[names[pivot]] = row[-1]
            found.origins[names[pivot]] = origin
            progress = True
    return progress


def _times(a: Fraction, b: Fraction) -> Fraction:
    return a * b


def _groups(
    equations: Sequence[Equation], left: Iterable[int], found: Determined
) -> list[list[int]]:
    """The equations that hang together through unknowns."""
    parent: dict[str, str] = {}

    def root(name: str) -> str:
        while parent.setdefault(name, name) != name:
            parent[name] = parent[parent[name]]
            name = parent[name]
        return name

    first: dict[int, str] = {}
    for k in sorted(left):
        unknown = _rest(equations[k], found)[0]
        first[k] = unknown[0]
        for name in unknown[1:]:
            parent[root(name)] = root(unknown[0])
    groups: dict[str, list[int]] = {}
    for k, name in first.items():
        groups.setdefault(root(name), []).append(k)
    return list(groups.values())


def _system(
    equations: Sequence[Equation], group: Sequence[int], found: Determined
) -> tuple[list[str], list[list[Fraction]], list[Fraction]]:
    """Unknowns, rows and right sides of some equations at the values found."""
    rests = [_rest(equations[k], found) for k in group]
    names = list(dict.fromkeys(n for unknown, _ in rests for n in unknown))
    rows = [[equations[k].factors.get(n, _ZERO) for n in names] for k in group]
    return names, rows, [-gap for _, gap in rests]


def is_possible(
    equations: Sequence[Equation],
    members: Iterable[int],
    *,
    counts: bool,
    found: Determined | None = None,
) -> bool:
    """Whether contents exist that meet some equations; ``counts``: none of them negative.

    ``found`` holds values that stand already.
    """
    names, rows, rights = _system(equations, sorted(members), found or Determined())
    if counts:
        return not rows or find_nonnegative(rows, rights, len(names)) is not None
    return solve(rows, rights, len(names)) is not None


def circuit(
    equations: Sequence[Equation], members: Iterable[int]
) -> tuple[tuple[int, ...], tuple[Fraction, ...]]:
    """An irreducible contradicting part of some equations, with its multipliers.

    Multiples of the equations in whose sum every unknown cancels and a gap is left. Where but
    one such sum of a set exists, none of the equations in it can be left out.

    Raises
    ------
    ValueError
        If the equations do not contradict one another.
    """
    chosen = sorted(members)
    while True:
        names, rows, rights = _system(equations, chosen, Determined())
        sums = kernel([[row[j] for row in rows] for j in range(len(names))], len(rows))
        failing = [y for y in sums if sum(map(_times, y, rights), _ZERO)]
        if not failing:
            raise ValueError("the equations hold together")
        weights = min(failing, key=lambda y: sum(1 for x in y if x))
        kept = [(k, x) for k, x in zip(chosen, weights, strict=True) if x]
        if len(sums) == 1:
            return tuple(k for k, _ in kept), tuple(x for _, x in kept)
        chosen = [k for k, _ in kept]


def shrink(
    members: Iterable[int], impossible: Callable[[Sequence[int]], bool]
) -> tuple[int, ...]:
    """An irreducible part of a set for which something is impossible.

    Whole stretches are left out first, then single members, so that a small part of a large
    set is found with few trials; in the end no member can be left out.
    """
    kept = sorted(members)
    size = max(len(kept) // 2, 1)
    while size:
        start = 0
        while start < len(kept):
            tried = kept[:start] + kept[start + size :]
            if tried and impossible(tried):
                kept = tried
            else:
                start += size
        size //= 2
    return tuple(kept)
