"""What a comparison shows: the verdict, one ranked table, why the second is second."""

from __future__ import annotations

from collections.abc import Sequence

from fluxnet.presenting.caution import CAUTION
from fluxnet.presenting.compare_detail import detail_blocks, fraction_text
from fluxnet.presenting.compare_ranking import how_sure_blocks, ranking_table, shown_of
from fluxnet.presenting.compare_supplies import supply_sentences
from fluxnet.presenting.compare_tables import compare_data
from fluxnet.presenting.screen import Block, Data, Heading, Mood, Sentence
from fluxnet.presenting.staircase_blocks import staircase_blocks
from fluxnet.studies.compare_result import Ability, Comparison

__all__ = ["compare_screen"]


def compare_screen(
    comparison: Comparison, *, detail: Sequence[str] = (), everything: bool = False
) -> tuple[Block, ...]:
    """Everything that is shown of a comparison.

    Parameters
    ----------
    detail
        The names of which all is told; ``all`` stands for every one.
    everything
        Show all rows and columns of a long table, and how sure each is.
    """
    able = bool(comparison.abilities) and bool(comparison.abilities[0].final.moles)
    mood = Mood.GOOD if able and comparison.is_sound else Mood.BAD
    blocks: list[Block] = [
        Heading(f"{comparison.product}: what each variant can make"),
        Sentence(comparison.words, mood, verdict=True),
    ]
    if able:
        blocks += supply_sentences(comparison)
    if comparison.second:
        blocks.append(Sentence(comparison.second))
    blocks.append(ranking_table(comparison, everything=everything))
    blocks += how_sure_blocks(comparison, everything=everything)
    blocks += _unable(shown_of(comparison, everything=everything)) if able else []
    blocks += [Sentence(f"Skipped: {s.variant}: {s.words}.", Mood.DOUBTFUL)
               for s in comparison.skipped]  # fmt: skip
    blocks += [Sentence(f"{note[:1].upper()}{note[1:]}.", Mood.QUIET) for note in comparison.notes]
    blocks += _left_out(comparison)
    for ability in comparison.abilities:
        if "all" in detail or any(ability.is_called(name) for name in detail):
            blocks += detail_blocks(comparison, ability)
        if ability.staircase is not None:
            blocks += staircase_blocks(comparison.product, ability)
    blocks.append(_proofs(comparison))
    if any(a.facts is not None for a in comparison.abilities):
        blocks.append(Sentence(CAUTION, Mood.QUIET))
    blocks.append(Data(lambda: compare_data(comparison)))
    return tuple(blocks)


def _unable(shown: Sequence[Ability]) -> list[Block]:
    """Those that make nothing, each reason once."""
    reasons: dict[str, list[str]] = {}
    for ability in shown:
        if ability.reason:
            reasons.setdefault(ability.reason, []).append(ability.name)
    return [
        Sentence(f"{', '.join(names)}: no yield; {reason}.", Mood.DOUBTFUL)
        for reason, names in reasons.items()
    ]


def _left_out(comparison: Comparison) -> list[Block]:
    names = dict.fromkeys(n for a in comparison.abilities for n in a.left_out)
    if not names:
        return []
    return [
        Sentence(
            f"Taking no part: {', '.join(f'`{name}`' for name in names)}. A measured value tells "
            "what one cultivation did; a limit in absolute units needs the uptake (--uptake, or a "
            "limit on the substrate).",
            Mood.QUIET,
        )
    ]


def _proofs(comparison: Comparison) -> Sentence:
    doubtful = [
        f"{a.name} {y.mode.value}: {y.proof}"
        for a in comparison.abilities
        for y in a.yields
        if not y.proven
    ]
    if doubtful:
        return Sentence(f"Not every yield is proven: {'; '.join(doubtful[:3])}.", Mood.BAD)
    text = fraction_text(comparison.abilities[0].final.moles) if comparison.abilities else ""
    best = f" (the best is {text} mol/mol exactly)" if text else ""
    return Sentence(f"Every yield is proven in exact arithmetic{best}.", Mood.QUIET)
