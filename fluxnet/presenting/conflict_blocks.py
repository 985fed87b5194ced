"""Why it cannot be: the bill of each conflict, and what would end it; or what has no end."""

from __future__ import annotations

from fluxnet.ground.table import Align, Column, Table
from fluxnet.presenting.bill_table import NEEDS, SURPLUS, bill_tables
from fluxnet.presenting.numbers import format_number
from fluxnet.presenting.screen import Block, Mood, Sentence
from fluxnet.presenting.suspect_text import and_words, would_be_words
from fluxnet.solving.alternatives import Alternative
from fluxnet.solving.least_change import LeastChange
from fluxnet.studies.conflicts import MOST_CONFLICTS, ToldConflict
from fluxnet.studies.solution import FluxSolution, SolveStatus

__all__ = ["alternative_words", "conflict_blocks", "unbounded_blocks"]

_SHOWN = 0.5
"""Smaller changes, in sd, are named together."""


def conflict_blocks(run: FluxSolution, *, prices: bool = False) -> tuple[Block, ...]:
    """The bills, what is in conflict, the least change that mends it, and what else would.

    Parameters
    ----------
    prices
        Show what each carrier and species is worth in the bill, too.
    """
    blocks: list[Block] = []
    several = len(run.conflicts) > 1
    for place, told in enumerate(run.conflicts):
        number = f" {place + 1}" if several else ""
        blocks += _bill(run, told, number, is_told=place == 0)
        blocks += _prices(told, number, prices)
        blocks += _members(run, told, number)
    if len(run.conflicts) == MOST_CONFLICTS:
        blocks.append(Sentence(f"No more than {MOST_CONFLICTS} conflicts are looked for."))
    if run.least_change is not None:
        blocks += _least_change(run.least_change)
    for place, told in enumerate(run.conflicts):
        blocks += _alternatives(told, f" {place + 1}" if several else "")
    if not several:
        blocks += _which_to_use(run)
    return tuple(blocks)


def _bill(run: FluxSolution, told: ToldConflict, number: str, *, is_told: bool) -> list[Block]:
    if told.bill is None:
        return []
    blocks: list[Block] = []
    if not (is_told and run.status is SolveStatus.INFEASIBLE):
        within = f"with every measured value within {run.within:g} sd, " if run.within else ""
        head = f"Conflict{number}" if number else "Why the rates cannot hold together"
        blocks.append(Sentence(f"{head}: {within}{_lower(told.bill.words)}", Mood.BAD))
    titles = SURPLUS if told.is_surplus else NEEDS
    title = f"Bill{number}, worth counted in {told.bill.unit}"
    return [*blocks, *bill_tables(told.bill, title, titles, note=_on_prices(told))]


def _on_prices(told: ToldConflict) -> str:
    """That a line is not worth what it holds, where something inside has another price."""
    unit = told.bill.unit if told.bill is not None else ""
    others = [p.species for p in told.prices if f" {p.species}/" not in unit]
    if not others:
        return ""
    name = next((name for name in others if name.startswith("NAD")), others[0])
    return f"a price counts all that the line allows elsewhere, such as taking up {name}"


def _lower(words: str) -> str:
    return words[:1].lower() + words[1:]


def _prices(told: ToldConflict, number: str, is_shown: bool) -> list[Block]:
    """What each balanced species and carrier is worth."""
    if told.bill is None or not told.prices:
        return []
    titles = ("one of", "is worth") if is_shown else ("", "")
    columns = (
        Column(titles[0], "species"),
        Column(titles[1], "price", align=Align.RIGHT),
        Column("", "unit"),
    )
    rows = tuple((p.species, p.price, told.bill.unit) for p in told.prices)
    notes = ("below zero: a surplus that has to be got rid of",)
    any_below = any(p.price < 0 for p in told.prices)
    title = f"Prices of bill{number} [{told.bill.unit}]"
    return [Table("bill_prices", title, columns, rows, notes if any_below else ())]


def _members(run: FluxSolution, told: ToldConflict, number: str) -> list[Block]:
    """What is in conflict: the bill has named the limits and measurements already."""
    conflict = told.conflict
    given = conflict.given or conflict.members
    within = f", each within {run.within:g} sd" if run.within is not None else ""
    titles = ("cannot hold together", "kind") if told.bill is None else ("", "")
    columns = (Column(titles[0], "words", wrap=56), Column(titles[1], "kind"))
    rows = tuple((m.words, m.kind.value) for m in given)
    title = f"These cannot hold together{within}"
    making = [m.words for m in conflict.members if m not in given]
    beside = f" It rests on {'; '.join(making)}." if making else ""
    number = f" of conflict{number}" if number else ""
    checked = f"Without any one line{number} the others can hold together (each was tried)."
    if not conflict.verified:
        checked = f"Whether each line{number} is needed could not be verified."
    proof = " The bill was checked in exact arithmetic." if told.bill is not None else (
        " No exact proof was found."
    )
    return [Table("conflict", title, columns, rows), Sentence(f"{checked}{proof}{beside}")]


def _least_change(change: LeastChange) -> list[Block]:
    if not change.possible:
        return [
            Sentence(
                "No change of the measured rates mends it: limits and exact values contradict "
                "one another."
            )
        ]
    if not change.changes:
        return []
    columns = (
        Column("measured value", "name"),
        Column("measured", "measured", align=Align.RIGHT),
        Column("would be", "changed", align=Align.RIGHT),
        Column("by [sd]", "in_sd", align=Align.RIGHT, decimals=1),
    )
    ranked = sorted(change.changes, key=lambda c: -abs(c.in_sd))
    least = min(_SHOWN, abs(ranked[0].in_sd) / 2)
    moved = [c for c in change.changes if abs(c.in_sd) >= least]
    rest = [c for c in change.changes if abs(c.in_sd) < least]
    rounding = 1e-12 * max(abs(c.measured) for c in change.changes)
    rows = tuple(
        (str(c.quantity), c.measured, 0.0 if abs(c.changed) < rounding else c.changed, c.in_sd)
        for c in moved
    )
    notes = ["with parameters as written; limits and exact values do not give way"]
    if rest:
        notes.append(f"the others by less than {format_number(least, 2)} sd")
    if change.common_k is not None:
        within = format_number(change.common_k, 3)
        notes.append(f"all measured values can hold together within {within} sd")
    return [Table("least_change", "The least change that mends it", columns, rows, tuple(notes))]


def _alternatives(told: ToldConflict, number: str) -> list[Block]:
    """Each limit or measurement that could give way alone, the smallest change in sd first."""
    ends = f"ends conflict{number}" if number else "mends it"
    if not told.alternatives:
        return [Sentence(f"No limit or measured value {ends} by giving way alone.")]
    ranked = sorted(told.alternatives, key=lambda a: a.ease)
    listed = "; or ".join(alternative_words(a) for a in ranked)
    which = "Any one of these" if len(ranked) > 1 else "This one"
    keys = ("quantity", "is_ceiling", "needed", "stated", "in_sd")
    rows = tuple(
        (str(a.quantity), a.is_ceiling, a.needed, a.stated, a.in_sd) for a in ranked
    )
    more = ""
    if told.beyond:
        names = and_words([_bare(a) for a in told.beyond])
        more = (
            f" What is missing in the bill is not all that {names} would have to give: on the "
            "way other lines come to hold."
        )
    return [
        Sentence(f"{which} alone {ends} (all else as it stands): {listed}.{more}"),
        Table("alternatives", "", tuple(Column("", key) for key in keys), rows),
    ]


def alternative_words(alternative: Alternative) -> str:
    """What one of them would have to be, instead of what."""
    a = alternative
    needed = format_number(a.needed)
    if not a.member.kind.is_measured:
        return f"{a.member.name} {'lowered' if a.is_ceiling else 'raised'} to {needed}"
    stated = format_number(a.stated)
    away = f"instead of {stated}"
    if a.in_sd is not None:
        away = f"({a.in_sd:+.1f} sd from the value {stated})"
    return f"{_bare(a)} {'at most' if a.is_ceiling else 'at least'} {needed} {away}"


def _which_to_use(run: FluxSolution) -> list[Block]:
    """Of all values shown of the one that gives way most easily, what each is good for."""
    ways = [a for told in run.conflicts for a in told.alternatives if a.in_sd is not None]
    if not ways or run.within is None:
        return []
    way = min(ways, key=lambda a: a.ease)
    name, stated = _bare(way), format_number(way.stated)
    told = [
        f"{'At most' if way.is_ceiling else 'At least'} {format_number(way.needed)} with every "
        f"other measured value stretched to {run.within:g} sd in its favour, parameters as written."
    ]
    found = run.suspects.group if run.suspects is not None else ()
    alone = len({one.direction_number for one in found if one.possible}) == 1
    chance = "" if alone else ", if it is the one that is wrong"
    for one in found:
        is_it = one.measured is not None and str(way.quantity) in (one.label, one.name)
        if is_it and one.possible and run.suspects is not None and run.suspects.explained:
            told.insert(
                0,
                f"Best estimate without the {stated}{chance}: {would_be_words(one)} (parameters "
                "may move).",
            )
    if run.aim is not None:
        told.append("Solved without an aim, the run's suspects give a best estimate.")
    fitted = next((r for r in run.rates if r.quantity == way.quantity), None)
    if fitted is not None and fitted.reconciled is not None and len(told) > 1:
        told.append(
            f"The solved {format_number(fitted.reconciled, 3)} is drawn towards the {stated}, and "
            "not to be used."
        )
    return [Sentence(f"Which value of {name} to use? {' '.join(told)}")]


def _bare(alternative: Alternative) -> str:
    return str(alternative.quantity).removeprefix("flux ")


def unbounded_blocks(run: FluxSolution) -> tuple[Block, ...]:
    """The loop or conversion that can grow without end."""
    if run.unbounded is None:
        return ()
    columns = (
        Column("reaction", "reaction"),
        Column("runs per unit", "coefficient", align=Align.RIGHT),
    )
    rows = tuple((step.reaction, step.coefficient) for step in run.unbounded.loop)
    return (Table("unbounded", "What can grow without end", columns, rows),)
