"""What the routes of a network show."""

from __future__ import annotations

from collections.abc import Sequence
from functools import partial

from fluxnet.ground.table import Align, Cell, Column, Table
from fluxnet.presenting.numbers import format_number, format_range
from fluxnet.presenting.routes_words import (
    count_words,
    cut_words,
    ending_words,
    many,
    yield_words,
)
from fluxnet.presenting.screen import Block, Data, Mood, Sentence
from fluxnet.presenting.table_lines import GLUE
from fluxnet.studies.routes_result import Cuts, RouteGroup, Routes

__all__ = ["group_equation", "routes_screen"]

_MOST = 12
_SHORTEST = 4
_MOST_CUTS = 12
_LARGEST = 99
_WRAP = 30


def routes_screen(routes: Routes, *, everything: bool = False) -> tuple[Block, ...]:
    """The verdict, the net equations, the shortest route of the best ones, and the cuts."""
    mood = Mood.PLAIN if routes.is_sound else Mood.BAD
    blocks: list[Block] = [Sentence(count_words(routes), mood, verdict=True)]
    for words in (ending_words(routes), routes.words):
        if words:
            blocks.append(Sentence(words, Mood.DOUBTFUL, verdict=bool(ending_words(routes))))
    if routes.groups:
        shown = _chosen(routes, everything)
        blocks.append(_equations(routes, shown))
        blocks.append(_shortest(routes, shown if everything else shown[:_SHORTEST]))
    if routes.cuts is not None:
        blocks.append(Sentence(cut_words(routes.cuts, routes), verdict=True))
        if routes.cuts.found:
            blocks.append(_cuts(routes.cuts, everything))
    if routes.system.sizes:
        sizes = ", ".join(routes.system.sizes)
        blocks.append(Sentence(f"A route has no size; left out are {sizes}.", Mood.QUIET))
    blocks.append(Data(partial(_data, routes)))
    return tuple(blocks)


def group_equation(group: RouteGroup) -> str:
    """The net equation, in whole numbers where they are small, else per mol of substrate.

    Examples
    --------
    >>> import numpy as np
    >>> terms = (("glucose", -1), ("ethanol", 2), ("CO2", 2))
    >>> group_equation(RouteGroup(terms, "glucose", None, (), np.zeros(1, np.intp), 3))
    'glucose -> 2 ethanol + 2 CO2'
    """
    small = all(abs(amount) <= _LARGEST for _, amount in group.terms)
    terms = group.terms if small else group.per_substrate()
    sides: tuple[list[str], list[str]] = ([], [])
    for name, amount in terms:
        number = format_number(abs(float(amount)), 3)
        sides[amount > 0].append(name if number == "1" else f"{number} {name}")
    left, right = (" + ".join(side) or "nothing" for side in sides)
    return f"{left} -> {right}"


def _chosen(routes: Routes, everything: bool) -> list[tuple[int, RouteGroup]]:
    """The groups to show, with their numbers: those that answer the question first."""
    numbered = list(enumerate(routes.groups, 1))
    if everything:
        return numbered
    if routes.product is not None:
        wanted = [(k, g) for k, g in numbered if g.product_yield]
        numbered = wanted or numbered
    return numbered[:_MOST]


def _equations(routes: Routes, shown: Sequence[tuple[int, RouteGroup]]) -> Table:
    energy = [name for name, _ in routes.system.energy]
    has_yield = routes.product is not None
    columns = [
        Column("no.", "", align=Align.RIGHT),
        Column("routes", "", align=Align.RIGHT),
        Column("yield" if has_yield else "", "", align=Align.RIGHT),
        *(Column(name, "", align=Align.RIGHT) for name in energy),
        Column("net equation", "", wrap=_WRAP),
    ]
    rows: list[tuple[Cell, ...]] = []
    for number, group in shown:
        told = {e.carrier: format_range(e.low, e.high) for e in group.energy}
        value = None if group.product_yield is None else float(group.product_yield)
        equation = _glued(group_equation(group))
        rows.append(
            (str(number), f"{group.count:,}", yield_words(value) if has_yield else "",
             *(told.get(name, "–") for name in energy), equation)
        )  # fmt: skip
    notes = []
    if has_yield:
        too = ""
        if any(routes.takes_more(group) for _, group in shown):
            too = ", other substrates not counted"
        notes.append(f"yield: mol {routes.product} per mol {routes.substrate}{too}")
    if energy:
        per = routes.substrate or "substrate"
        notes.append(f"{', '.join(energy)}: mol to spare per mol {per}")
    left = len(routes.groups) - len(shown)
    if left:
        notes.append(f"{many(left, 'more net equation')}: --all shows them")
    return Table("", "Net equations", tuple(columns), tuple(rows), tuple(notes))


def _shortest(routes: Routes, shown: Sequence[tuple[int, RouteGroup]]) -> Table:
    """The reactions of the shortest route of each group."""
    columns = (
        Column("no.", "", align=Align.RIGHT),
        Column("reactions of its shortest route, with whole coefficients", "", wrap=_WRAP),
    )
    rows: list[tuple[Cell, ...]] = []
    backwards = False
    for number, group in shown:
        route = routes.route(int(group.members[0]), group)
        parts = [name if n == 1 else f"{n}{GLUE}{name}" for name, n in route.reactions]
        rows.append((str(number), ", ".join(parts)))
        backwards = backwards or any(n < 0 for _, n in route.reactions)
    note = "a negative coefficient: the reaction runs from right to left"
    return Table("", "What runs", columns, tuple(rows), (note,) if backwards else ())


def _cuts(cuts: Cuts, everything: bool) -> Table:
    columns = (
        Column("take out", "", wrap=_WRAP),
        Column("routes left", "", align=Align.RIGHT),
        Column("yield left", "", align=Align.RIGHT),
    )
    shown = cuts.found if everything else cuts.found[:_MOST_CUTS]
    rows: list[tuple[Cell, ...]] = []
    for cut in shown:
        parts = [
            name + (f" (or {' or '.join(alike)})" if alike else "")
            for name, alike in zip(cut.reactions, cut.alike, strict=True)
        ]
        left = format_range(float(cut.least), float(cut.best))
        names = " and ".join([", ".join(parts[:-1]), parts[-1]] if len(parts) > 1 else parts)
        rows.append((names, f"{cut.left:,}", left))
    more = len(cuts.found) - len(shown)
    notes = (f"{many(more, 'more cut')}: --all shows them",) if more else ()
    return Table("", "What has to go", columns, tuple(rows), notes)


def _data(routes: Routes) -> tuple[Table, ...]:
    """Everything as data: net equations, the reactions of every route, cuts."""
    keys = ("group", "routes", "reactions", "substrate", "yield", "equation")
    energy = [name for name, _ in routes.system.energy]
    equations: list[tuple[Cell, ...]] = []
    lines: list[tuple[Cell, ...]] = []
    number = 0
    for k, group in enumerate(routes.groups, 1):
        value = None if group.product_yield is None else float(group.product_yield)
        told = {e.carrier: (e.low, e.high) for e in group.energy}
        ends = [end for name in energy for end in told.get(name, (None, None))]
        equations.append(
            (k, group.count, group.shortest, group.substrate, value, group_equation(group), *ends)
        )
        for place in group.members.tolist():
            number += 1
            route = routes.route(place, group)
            lines += [(number, k, name, amount) for name, amount in route.reactions]
    ends_keys = [f"{name}_{end}" for name in energy for end in ("low", "high")]
    tables = [
        Table("routes", "Net equations of routes", _columns(*keys, *ends_keys), tuple(equations)),
        Table(
            "route_reactions", "Reactions of routes",
            _columns("route", "group", "reaction", "coefficient"), tuple(lines),
        ),
    ]  # fmt: skip
    if routes.cuts is not None:
        rows = tuple(
            (c, name, " ".join(alike), cut.left, float(cut.least), float(cut.best))
            for c, cut in enumerate(routes.cuts.found, 1)
            for name, alike in zip(cut.reactions, cut.alike, strict=True)
        )
        held = _columns("cut", "reaction", "alike", "routes_left", "least_yield", "best_yield")
        tables.append(Table("cuts", "Cuts", held, rows))
    return tuple(tables)


def _columns(*keys: str) -> tuple[Column, ...]:
    return tuple(Column("", key) for key in keys)


def _glued(text: str) -> str:
    """An equation that can only be broken before a + or the arrow."""
    return text.replace(" ", GLUE).replace(f"{GLUE}+", " +").replace(f"{GLUE}->", " ->")
