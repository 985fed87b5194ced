"""Elementary modes by looking at every set of columns, for small cones."""

from __future__ import annotations

from fractions import Fraction
from itertools import combinations
from math import gcd, lcm

from fluxnet.exact.linear import kernel
from fluxnet.modes.cone import Cone

Mode = tuple[int, ...]


def every_mode(cone: Cone) -> set[Mode]:
    """The vectors whose columns carry one direction only, and no fewer columns do."""
    found: set[Mode] = set()
    supports: list[frozenset[int]] = []
    count = len(cone.columns)
    for size in range(1, count + 1):
        for chosen in combinations(range(count), size):
            if any(support <= set(chosen) for support in supports):
                continue
            rows = [[row.get(j, Fraction(0)) for j in chosen] for row in cone.rows]
            basis = kernel(rows, size)
            if len(basis) == 1 and all(basis[0]):
                vector = whole(basis[0])
                supports_one = frozenset(chosen)
                full = [0] * count
                for j, v in zip(chosen, vector, strict=True):
                    full[j] = v
                ways = [mode for mode in (full, [-v for v in full]) if fits(cone, mode)]
                if ways:
                    found.add(canonical(cone, ways[0]))
                    supports.append(supports_one)
    return found


def fits(cone: Cone, mode: list[int]) -> bool:
    return all(v >= 0 or both for v, both in zip(mode, cone.both_ways, strict=True))


def canonical(cone: Cone, mode: list[int]) -> Mode:
    """A mode that runs both ways as the larger of its two vectors."""
    turned = [-v for v in mode]
    return tuple(max(mode, turned) if fits(cone, turned) else mode)


def whole(vector: tuple[Fraction, ...]) -> list[int]:
    scaled = [int(v * lcm(*(w.denominator for w in vector))) for v in vector]
    return [v // gcd(*scaled) for v in scaled]
