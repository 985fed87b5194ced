"""Elementary modes as the extreme rays of a cone, by a general polyhedral library (pplpy)."""

from __future__ import annotations

from math import lcm

import ppl

from fluxnet.modes.cone import Cone

Mode = tuple[int, ...]


def cone_of(cone: Cone) -> ppl.Constraint_System:
    """The constraints, two-way columns as two."""
    places = split_columns(cone)
    variables = [ppl.Variable(k) for k in range(len(places))]
    system = ppl.Constraint_System()
    for variable in variables:
        system.insert(variable >= 0)
    for row in cone.rows:
        scale = lcm(*(v.denominator for v in row.values()))
        total = ppl.Linear_Expression(0)
        for variable, (j, sign) in zip(variables, places, strict=True):
            if j in row:
                total += int(row[j] * scale) * sign * variable
        system.insert(total == 0)
    return system


def split_columns(cone: Cone) -> list[tuple[int, int]]:
    """Each column forwards, and backwards where it runs both ways."""
    ways = [(1, -1) if both else (1,) for both in cone.both_ways]
    return [(j, sign) for j, signs in enumerate(ways) for sign in signs]


def extreme_rays(system: ppl.Constraint_System) -> list[list[int]]:
    """The extreme rays of the split cone."""
    generators = ppl.C_Polyhedron(system).minimized_generators()
    return [[int(c) for c in g.coefficients()] for g in generators if g.is_ray()]


def joined(cone: Cone, rays: list[list[int]]) -> set[Mode]:
    """The rays in the cone's own columns, without those that run a column both ways at once."""
    places = split_columns(cone)
    found: set[Mode] = set()
    for ray in rays:
        mode = [0] * len(cone.columns)
        used = [j for (j, _), v in zip(places, ray, strict=True) if v]
        if len(used) > len(set(used)):
            continue
        for (j, sign), v in zip(places, ray, strict=True):
            mode[j] += sign * v
        turned = [-v for v in mode]
        runs_back = all(both or not v for v, both in zip(mode, cone.both_ways, strict=True))
        found.add(tuple(max(mode, turned) if runs_back else mode))
    return found
