"""What a trade-off shows: what trading costs, and each break point with what changes there."""

from __future__ import annotations

from fluxnet.ground.table import Align, Column, Table
from fluxnet.presenting.caution import CAUTION
from fluxnet.presenting.frontier_plot import frontier_plot
from fluxnet.presenting.numbers import format_number
from fluxnet.presenting.screen import Block, Mood, Sentence
from fluxnet.studies.frontier_result import Curve, CurveStatus, Frontier

__all__ = ["frontier_screen"]

_TITLE, _TITLE_OF_SEVERAL = 20, 14


def frontier_screen(result: Frontier) -> tuple[Block, ...]:
    """The whole screen."""
    found = [c for c in result.curves if c.points]
    mood = Mood.GOOD if result.is_sound else Mood.BAD
    blocks: list[Block] = [Sentence(result.words, mood, verdict=True)]
    if result.choice:
        blocks.append(Sentence(result.choice, mood))
    blocks += [Sentence(note, Mood.DOUBTFUL) for note in result.notes]
    if len(result.curves) > 1:
        blocks += [_curve_words(curve) for curve in result.curves]
    blocks += [
        Sentence(f"{name}: left out, for it makes no network: {words}.", Mood.DOUBTFUL)
        for name, words in result.skipped
    ]
    if found:
        blocks += [*frontier_plot(result), _points_table(result), *_proof_words(found)]
    if found and result.sizes_oxygen:
        blocks.append(Sentence(CAUTION, Mood.QUIET))
    return tuple(blocks)


def _curve_words(curve: Curve) -> Sentence:
    told = (CurveStatus.TRACED, CurveStatus.POINT)
    mood = Mood.PLAIN if curve.status in told else Mood.DOUBTFUL
    words = curve.words.removeprefix(f"{curve.label}: ")
    return Sentence(f"{curve.label}: {words[:1].lower()}{words[1:]}", mood)


def _points_table(result: Frontier) -> Table:
    several = len(result.curves) > 1
    room = _TITLE_OF_SEVERAL if several else _TITLE
    label = (
        Column("variant" if result.over is None else "case", "", wrap=12), Column("", "case"),
    )  # fmt: skip
    columns = (
        *(label if several else ()),
        *(
            Column(axis.name, key, axis.unit if len(axis.titled) <= room else "", Align.RIGHT)
            for axis, key in ((result.x, "x"), (result.y, "y"))
        ),
        Column("slope to next", "slope_after", "", Align.RIGHT),
        Column("what changes here", "", wrap=18),
        Column("", "changes"),
        Column("", "slope_before"),
        Column("", "x_exact"),
        Column("", "y_exact"),
    )
    rows = []
    for curve in result.curves:
        for k, p in enumerate(curve.points):
            names = ("" if k else curve.label, curve.label) if several else ()
            slope = None if p.slope_after is None else p.slope_after + 0.0
            rows.append((
                *names, _near(p.x), _near(p.y), slope, "; ".join(p.changes),
                "; ".join(p.changes), p.slope_before, p.x_exact, p.y_exact,
            ))  # fmt: skip
    units = [axis.titled for axis in (result.x, result.y) if len(axis.titled) > room]
    notes = (
        f"slope: {result.slope_unit}, up to the next point",
        "between two points the line is straight; changes are told for growing "
        f"{result.x.name}",
    )
    if any(curve.drawn for curve in result.curves):
        notes = (
            f"slope: {result.slope_unit}, just behind the point",
            "between two points the line is curved",
        )
    notes = (*((", ".join(units),) if units else ()), *notes)
    return Table("points", "Break points", columns, tuple(rows), notes)


def _near(value: float) -> float:
    """Zero for what only rounding keeps from it."""
    return 0.0 if abs(value) < 1e-12 else value


def _proof_words(found: list[Curve]) -> list[Sentence]:
    proofs = [(c.label, c.proof) for c in found if c.proof is not None]
    bad = [(label, proof) for label, proof in proofs if not proof.verified]
    if bad:
        return [Sentence(f"{label}: {proof.words}.", Mood.BAD) for label, proof in bad]
    points = sum(len(c.points) for c in found)
    if any(c.drawn for c in found) or len(found) == 1:
        return [Sentence(f"{proofs[0][1].words}.", Mood.GOOD)]
    return [Sentence(f"The {format_number(points)} points are proven in exact arithmetic.",
                     Mood.GOOD)]  # fmt: skip
