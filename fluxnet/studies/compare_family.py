"""Cases that share one linear programme: each is a choice of its columns, rows and bounds.

All reactions of all cases stand side by side, one of another coefficient as a column of its
own; so do all their limits as rows. A case closes the columns, and opens the rows, that it does
not have. So the programme is made once and stays warm from case to case.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import replace
from fractions import Fraction
from typing import Any

import numpy as np
from numpy.typing import NDArray

from fluxnet.exact.programme import ExactProgramme, to_flint
from fluxnet.ground.record import record
from fluxnet.network.model import Network, Parameter, Species
from fluxnet.solving.build import Built, build_problem
from fluxnet.solving.forms import Form, as_fraction, exact_numbers, form_of, growth_weights
from fluxnet.solving.problem import Problem, Row
from fluxnet.studies.compare_cases import Case
from fluxnet.studies.compare_columns import Columns, FamilyColumn
from fluxnet.studies.compare_sheets import Sheets, place_row

__all__ = ["Family", "Member", "gather", "own_problem", "own_programme"]

Array = NDArray[np.float64]
Sparse = Mapping[int, Fraction]


@record
class Member:
    """A case's places among the columns and rows of its family, and its own rows' bounds."""

    case: Case
    columns: tuple[int, ...]
    rows: tuple[int, ...]
    labels: tuple[Row, ...]
    low: tuple[float, ...]
    high: tuple[float, ...]


@record
class Family:
    """Cases with one programme.

    ``problem`` has all bounds open; ``rows`` are its rows in exact numbers (FLINT's). A row is
    ``weights`` (rows x species) times what the columns make of each species, plus ``fluxes``.
    """

    problem: Problem
    columns: tuple[FamilyColumn, ...]
    species: tuple[str, ...]
    members: tuple[Member, ...]
    rows: tuple[dict[int, Any], ...]
    weights: Array
    fluxes: Array

    def place(self, name: str) -> int:
        """The row of a species: its balance, or its rate."""
        return next(i for i, row in enumerate(self.problem.rows) if row.name == name)


def gather(cases: Sequence[Case]) -> tuple[Family, ...]:
    """The families of some cases: one, unless a name stands for different species."""
    groups: list[tuple[dict[str, tuple[Species, object]], list[Case]]] = []
    for case in cases:
        own = case.network.species
        fits = (
            g for g in groups if all(s.name not in g[0] or _same(g[0][s.name], s) for s in own)
        )
        group = next(fits, None)
        if group is None:
            groups.append(group := ({}, []))
        group[1].append(case)
        for species in own:
            if species.name not in group[0]:
                group[0][species.name] = (species, _likeness(species))
    return tuple(
        _family(tuple(species for species, _ in known.values()), members)
        for known, members in groups
    )


def _same(known: tuple[Species, object], species: Species) -> bool:
    return known[0] is species or known[1] == _likeness(species)


def _likeness(species: Species) -> object:
    """What two species of one name have in common where they are the same."""
    return species.role, species.formula, species.cargo, species.ash


def _family(species: tuple[Species, ...], cases: Sequence[Case]) -> Family:
    columns, sheets = Columns(), Sheets()
    labels: dict[object, int] = {}
    rows: list[Row] = []
    quick: dict[int, int] = {}  # the members keep the rows, and so their identities
    members: list[Member] = []
    for case in cases:
        parameters = {p.name: p for p in case.network.parameters}
        places = tuple(columns.place(r, parameters) for r in case.network.reactions)
        laid, low, high = sheets.of(case.network)
        own: dict[int, None] = {}
        for row in laid:
            place = quick.get(id(row), -1)
            if place < 0 or place in own:
                place = place_row(row, own, labels, rows)
                quick[id(row)] = place
            own[place] = None
        members.append(Member(case, places, tuple(own), laid, low, high))
    return _joined(species, tuple(columns.found), tuple(rows), tuple(members))


def _joined(
    species: tuple[Species, ...],
    columns: tuple[FamilyColumn, ...],
    rows: tuple[Row, ...],
    members: tuple[Member, ...],
) -> Family:
    """The programme of all rows and columns."""
    names = tuple(s.name for s in species)
    place_of = {name: i for i, name in enumerate(names)}
    frame = _frame(species, columns, members)
    growth = growth_weights(frame, exact_numbers(frame))
    by_name: dict[str, list[int]] = {}
    for j, column in enumerate(columns):
        by_name.setdefault(column.reaction.name, []).append(j)
    made: list[dict[int, Fraction]] = [{} for _ in names]
    for j, column in enumerate(columns):
        for name, value in column.made:
            if value:
                made[place_of[name]][j] = value
    weights = np.zeros((len(rows), len(names)))
    fluxes = np.zeros((len(rows), len(columns)))
    matrix = np.zeros((len(rows), len(columns)))
    exact: list[dict[int, Any]] = []
    for i, row in enumerate(rows):
        form = _form(frame, row)
        parts = dict(form.species)
        for k, weight in growth.items() if form.growth else ():
            parts[k] = parts.get(k, Fraction(0)) + form.growth * weight
        total: dict[int, Fraction] = {}
        for k, weight in parts.items():
            weights[i, k] = float(weight)
            for j, value in made[k].items():
                total[j] = total.get(j, Fraction(0)) + weight * value
        for k, weight in form.fluxes:
            for j in by_name[frame.stoichiometry.reactions[k]]:
                fluxes[i, j] += float(weight)
                total[j] = total.get(j, Fraction(0)) + weight
        for j, value in total.items():
            matrix[i, j] = float(value)
        exact.append({j: to_flint(v) for j, v in total.items() if v})
    both = np.full(len(rows), np.inf), np.full(len(columns), np.inf)
    problem = Problem(
        columns=tuple(f"{c.reaction.name} {j}" for j, c in enumerate(columns)),
        rows=rows,
        matrix=matrix,
        row_low=-both[0],
        row_high=both[0],
        column_low=-both[1],
        column_high=both[1],
    )
    return Family(problem, columns, names, members, tuple(exact), weights, fluxes)


def _frame(
    species: tuple[Species, ...], columns: Sequence[FamilyColumn], members: Sequence[Member]
) -> Built:
    """What quantities are made of, in a network that holds every name once."""
    reactions = {c.reaction.name: c.reaction for c in columns}
    parameters: dict[str, Parameter] = {}
    for member in members:
        for parameter in member.case.network.parameters:
            parameters.setdefault(parameter.name, parameter)
    network: Network = replace(
        members[0].case.network,
        species=species,
        parameters=tuple(parameters.values()),
        reactions=tuple(reactions.values()),
        limits=(),
        variants=(),
    )
    return build_problem(network)


def _form(frame: Built, row: Row) -> Form:
    if row.quantity is None:
        return Form(((frame.stoichiometry.row(row.name), Fraction(1)),))
    return form_of(frame, row.quantity, None if row.ratio is None else as_fraction(row.ratio))


def own_problem(
    family: Family, member: Member, row_bounds: tuple[Array, Array]
) -> Problem:
    """A member's problem by itself: its own columns and rows, with bounds of its rows."""
    case = member.case.network
    return Problem(
        columns=tuple(r.name for r in case.reactions),
        rows=member.labels,
        matrix=family.problem.matrix[np.ix_(member.rows, member.columns)],
        row_low=row_bounds[0].copy(),
        row_high=row_bounds[1].copy(),
        column_low=np.array([-np.inf if r.reversible else 0.0 for r in case.reactions]),
        column_high=np.full(len(case.reactions), np.inf),
    )


def own_programme(
    family: Family,
    member: Member,
    row_bounds: Sequence[tuple[Fraction | None, Fraction | None]],
    costs: Sparse,
) -> ExactProgramme:
    """The same in exact numbers; ``costs`` by the member's own columns, to be minimised."""
    place = {j: k for k, j in enumerate(member.columns)}
    zero = to_flint(Fraction(0))
    lows: list[Any] = [None if r.reversible else zero for r in member.case.network.reactions]
    lows += [None if low is None else to_flint(low) for low, _ in row_bounds]
    highs: list[Any] = [None] * len(place)
    highs += [None if high is None else to_flint(high) for _, high in row_bounds]
    return ExactProgramme(
        len(place),
        tuple(
            {place[j]: a for j, a in family.rows[i].items() if j in place} for i in member.rows
        ),
        tuple(lows),
        tuple(highs),
        {j: to_flint(c) for j, c in costs.items() if c},
    )
