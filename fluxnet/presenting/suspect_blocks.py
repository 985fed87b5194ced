"""What could be wrong: the suspects that explain a run best, and what to do about it."""

from __future__ import annotations

from fluxnet.ground.table import Align, Cell, Column, Table
from fluxnet.network.model import Direction
from fluxnet.presenting.numbers import format_number, format_p
from fluxnet.presenting.screen import Block, Data, Mood, Sentence
from fluxnet.presenting.suspect_text import and_words, suspect_words, would_be_words
from fluxnet.solving.statistics import chi_squared_quantile
from fluxnet.studies.suspect_result import Standing, Suspect, SuspectKind, Suspects

__all__ = ["suspect_blocks"]

_MOST_ROWS = 12
_MOST_READ = 3
_MOST_READINGS = 2
_SAME = "="
_ZERO = 1e-9
"""A true value below this part of the measured one is none."""
_PLAUSIBLE = (Standing.MEASURED, Standing.MODEL, Standing.COMMON)


def suspect_blocks(
    suspects: Suspects, run: str | None, *, more: str = "", everything: bool = False
) -> list[Block]:
    """The suspects of one run: those that explain it best, and what that is worth.

    Parameters
    ----------
    run
        The name of the run, for the tables as data.
    more
        What would bring more relations to test the rates with.
    everything
        Show all suspects that cannot be told from the best one, rare and impossible ones too.
    """
    blocks: list[Block] = [_lead(suspects)]
    if suspects.explained or not suspects.pairs:
        blocks.append(_table(suspects, everything=everything))
    else:
        blocks.append(_pairs(suspects))
    blocks += [Sentence(text) for text in (*_readings(suspects), *_advice(suspects, more))]
    return [*blocks, Data(lambda: (_data(suspects, run),))]


def _lead(suspects: Suspects) -> Sentence:
    """What the table under it holds."""
    limit = chi_squared_quantile(0.95, suspects.dof)
    if suspects.h <= limit:
        return Sentence(
            "The rates agree. What would make them agree still better is no sign of an error."
        )
    if suspects.dof == 1:
        return Sentence(
            "What could be wrong? Only one relation tests the rates: every suspect explains it "
            "fully, and none can be told from another.",
            Mood.DOUBTFUL,
        )
    if not suspects.explained and suspects.passed:
        return Sentence(
            "What could be wrong? No single error of a measurement or of the model: what would "
            f"explain the balances still passes {and_words(suspects.passed)}. Look into that "
            "first.",
            Mood.BAD,
        )
    if not suspects.explained:
        best = min((s.h_left for s in suspects.group if s.possible), default=suspects.h)
        return Sentence(
            f"What could be wrong? No single error explains it: the best one leaves h = "
            f"{format_number(best, 3)}, where "
            f"{format_number(chi_squared_quantile(0.95, suspects.dof - 1), 3)} would do.",
            Mood.BAD,
        )
    possible = [s.direction_number for s in suspects.group if s.possible]
    if len(possible) == 1:
        text = "One thing explains it, and no other does (at 5 %)."
    elif len(set(possible)) == 1:
        text = "These explain it, each by itself, and nothing else does (at 5 %)."
    else:
        text = (
            "Each of these by itself explains it; the measurements do not tell which (at 5 %), "
            "the likelier ones come first."
        )
    return Sentence(f"What could be wrong? {text}", Mood.DOUBTFUL)


def _table(suspects: Suspects, *, everything: bool) -> Table:
    """The first group, those that can never be told apart under one another."""
    shown, left = _shown(suspects, everything=everything)
    columns = (
        Column("suspect", ""),
        Column("measured", "", align=Align.RIGHT),
        Column("would have to be", "", align=Align.RIGHT),
        Column("h left", "", align=Align.RIGHT, digits=2),
        Column("by chance", "", align=Align.RIGHT),
        Column("apart [sd]", "", align=Align.RIGHT, decimals=1),
    )
    cells: list[tuple[Cell, ...]] = []
    before: int | None = None
    for one in shown:
        if one.direction_number == before:
            measured = "" if one.measured is None else format_number(one.measured)
            name = f"{_SAME} {_named(one, suspects)}"
            cells.append((name, measured, would_be_words(one), "", "", ""))
            continue
        before = one.direction_number
        cells.append((
            _named(one, suspects), format_number(one.measured), would_be_words(one),
            one.h_left if one.h_left > 0.005 else 0.0, format_p(one.p), one.separation,
        ))  # fmt: skip
    notes = [f"and {left}: --all"] if left else []
    if any(str(row[0]).startswith(_SAME) for row in cells):
        notes.append(
            f"{_SAME} of any size, it cannot be told from the one above by these measurements"
        )
    notes.append(
        "h left: the test value that remains; by chance: how often the best of "
        f"{suspects.distinct} different suspects would gain as much if nothing were wrong: small "
        "speaks for it; apart: how far off the nearest different suspect is"
    )
    unit = _usual_unit(suspects)
    what = "Suspects" if any(s.possible for s in suspects.group) else "Suspects, none possible"
    title = f"{what} [{unit}]" if unit else what
    return Table("", title, columns, tuple(cells), tuple(notes))


def _shown(suspects: Suspects, *, everything: bool) -> tuple[list[Suspect], str]:
    """The suspects to show, twins together, and words for those of the group that are not."""
    numbers = dict.fromkeys(s.direction_number for s in suspects.group)
    ordered = [s for n in numbers for s in suspects.group if s.direction_number == n]
    if everything:
        return ordered, ""
    likely = [s for s in ordered if s.standing in _PLAUSIBLE]
    shown = (likely or [s for s in ordered if s.possible] or ordered)[:_MOST_ROWS]
    hidden = [s for s in ordered if s not in shown]
    counts = [
        (sum(s.standing in _PLAUSIBLE for s in hidden), "more as likely"),
        (sum(s.standing is Standing.RARE for s in hidden), "less likely"),
        (sum(not s.possible for s in hidden), "not possible"),
    ]
    told = [f"{count} {words}" for count, words in counts if count]
    return shown, and_words(told) if told else ""


def _named(suspect: Suspect, suspects: Suspects) -> str:
    """The first cell of a line: the label, with the unit where it is not that of the rates."""
    label = suspect.label
    if suspect.unit not in (_usual_unit(suspects), "", "mol/mol"):
        label += f" [{suspect.unit}]"
    if suspect.kind is SuspectKind.CARRIER:
        label += " spent beside" if suspect.size >= 0 else " made beside"
    is_told = suspect.possible or not any(s.possible for s in suspects.group)
    return label if is_told else f"{label} (not possible)"


def _usual_unit(suspects: Suspects) -> str:
    """The unit that most suspects have."""
    units = [s.unit for s in suspects.all]
    return max(units, key=units.count) if units else ""


def _pairs(suspects: Suspects) -> Table:
    """Pairs of suspects, where none by itself explains it."""
    columns = (
        Column("two at once", "", wrap=66),
        Column("h left", "", align=Align.RIGHT, digits=2),
    )
    rows = tuple(
        row
        for pair in suspects.pairs
        for row in (
            (suspect_words(pair.first), pair.h_left),
            (f"  and {suspect_words(pair.second)}", ""),
        )
    )
    notes = [f"and {suspects.pairs_left} pairs that do as well"] if suspects.pairs_left else []
    notes.append("each of the two is needed beside the other")
    return Table("", "Pairs of suspects", columns, rows, tuple(notes))


def _readings(suspects: Suspects) -> list[str]:
    """What in the laboratory may have made the first rates wrong by so much."""
    rates = [s for s in suspects.group if s.readings and s.possible][:_MOST_READ]
    return [
        f"{s.label}, possible causes: {'; or '.join(r.words for r in s.readings[:_MOST_READINGS])}."
        for s in rates
    ]


def _advice(suspects: Suspects, more: str) -> list[str]:
    """What the suspects are worth, and what to do."""
    told: list[str] = []
    if suspects.h <= chi_squared_quantile(0.95, suspects.dof):
        return told
    cleared = [s.label for s in suspects.others if s.kind is SuspectKind.MEASURED_RATE]
    if suspects.explained and cleared and suspects.dof > 1:
        told.append(f"Not it alone (at 5 %): {and_words(cleared)}.")
    best = next((s for s in suspects.group if s.is_declared), None)
    best = best or next((s for s in suspects.group if s.possible), None)
    if suspects.explained and best is not None:
        told.append(_what_to_do(best, suspects))
    if not suspects.explained and not suspects.passed:
        told.append(_of_two(suspects))
    if suspects.dof == 2 and suspects.explained:
        told.append(
            "Two relations test the rates, and the size of a suspect uses up one of them: that it "
            f"fits well is no evidence.{' ' if more else ''}{more}"
        )
    missing = suspects.missing
    if missing is not None and missing.low is not None and missing.low > 0:
        sign = "released" if missing.carbon >= 0 else "taken up"
        told.append(
            f"If something {sign} is missing, it holds {format_number(missing.gamma, 2)} electrons "
            f"per carbon (95 %: {format_number(missing.low, 2)} to "
            f"{format_number(missing.high, 2)}; sugars and acetate 4, ethanol 6)."
        )
    return told


def _of_two(suspects: Suspects) -> str:
    """What to do where no single error explains a run."""
    if suspects.dof < 3:
        return (
            "Two errors at once explain any two relations fully, so that no two can be told from "
            "others by this run: look for a slip that meets several rates (units, dilution, time)."
        )
    if not suspects.pairs:
        return (
            "No two at once explain it either: look for a slip that meets several rates (units, "
            "dilution, time)."
        )
    first = suspects.pairs[0]
    names = [
        f"{one.label} once more" if one.measured is not None else one.name
        for one in (first.first, first.second)
    ]
    return f"To do: look into {and_words(names)}."


def _what_to_do(best: Suspect, suspects: Suspects) -> str:
    """Which measurement to repeat, and what its outcome would tell."""
    numbers = {s.direction_number for s in suspects.group}
    rates = [
        s for s in suspects.group
        if s.kind is SuspectKind.MEASURED_RATE and s.possible
    ]  # fmt: skip
    if best.is_declared:
        text = (
            f"To do: {best.name} is a product of the model and has no row; measure it (it would "
            f"have to be {would_be_words(best)} {best.unit})."
        )
        twins = [s.label for s in rates if s.direction_number == best.direction_number]
        if twins:
            text += (
                f" {and_words(twins)} {'explains' if len(twins) == 1 else 'explain'} it equally "
                "well."
            )
        return text
    if best.kind is SuspectKind.MEASURED_RATE and (lacking := _other_side(suspects)):
        return lacking
    if best.kind is SuspectKind.MEASURED_RATE:
        other = [s.label for s in rates if s is not best]
        text = (
            f"To do: measure {best.label} once more. Near {would_be_words(best)} it was the error; "
            f"near {format_number(best.measured)} it was not"
        )
        if other:
            come = "comes" if len(other) == 1 else "come"
            return f"{text}, and {and_words(other[:3])} {come} next."
        return f"{text}." if len(numbers) == 1 else f"{text}, and look further down the table."
    what = {
        SuspectKind.CARRIER: "look for a reaction that the model lacks",
        SuspectKind.PARAMETER: f"look into {best.name} of the model",
    }.get(best.kind, f"measure {best.name}")
    return f"To do: {what}; {suspect_words(best)} would explain it."


def _other_side(suspects: Suspects) -> str:
    """What to measure where only one side of the balances has rows; nothing where both have."""
    rates = [s for s in suspects.all if s.kind is SuspectKind.MEASURED_RATE]
    is_one_sided = all(abs(s.would_be or 0.0) <= _ZERO * abs(s.measured or 0.0) for s in rates)
    sides = {s.direction for s in rates}
    if not is_one_sided or len(sides) != 1:
        return ""
    if sides == {Direction.IN}:
        lacking, way = "CO2, oxygen and the products", "it goes to"
    else:
        lacking, way = "the substrates, oxygen and CO2", "it comes from"
    names = and_words([s.label for s in rates])
    return f"To do: beside {names} nothing that {way} has a row: measure and give {lacking}."


def _data(suspects: Suspects, run: str | None) -> Table:
    """All suspects of a run as data."""
    keys = (
        "kind", "species", "direction", "size", "sd", "unit", "measured", "would_be",
        "would_be_sd", "h_left", "p", "separation", "possible", "standing", "group",
        "direction_number", "words",
    )  # fmt: skip
    rows = tuple(
        (
            s.kind.value, s.name, s.direction.value if s.direction else None, s.size, s.sd, s.unit,
            s.measured, s.would_be, s.would_be_sd, s.h_left, s.p, s.separation, s.possible,
            s.standing.value, s.group, s.direction_number, suspect_words(s),
        )
        for s in suspects.all
    )  # fmt: skip
    return Table("suspects", "Suspects", tuple(Column("", key) for key in keys), rows, run=run)
