"""A suspect in one line for a tired reader."""

from __future__ import annotations

from collections.abc import Sequence

from fluxnet.network.model import Direction
from fluxnet.presenting.numbers import format_measured, format_number
from fluxnet.studies.suspect_result import Suspect, SuspectKind

__all__ = ["and_words", "suspect_words", "would_be_words"]


def suspect_words(suspect: Suspect) -> str:
    """What would have to be so if this suspect were the whole of it.

    Examples
    --------
    >>> from fluxnet.studies.suspect_result import Standing
    >>> rate = Suspect(SuspectKind.MEASURED_RATE, "oxygen", Direction.IN, -1.0, 0.31, "mmol/g/h",
    ...     0.1, 0.02, 3.0, Standing.MEASURED, 1, 0, 4.1, 5.1, 0.29)
    >>> suspect_words(rate)
    'oxygen in would have to be 5.10 ± 0.29 instead of 4.1 mmol/g/h'
    >>> acid = Suspect(SuspectKind.UNMEASURED_SPECIES, "succinate", Direction.OUT, 2.1, 0.31,
    ...     "mmol/g/h", 0.1, 0.02, 3.0, Standing.COMMON, 1, 1)
    >>> suspect_words(acid)
    '2.10 ± 0.31 mmol/g/h of succinate released, not measured'
    """
    unit = f" {suspect.unit}" if suspect.unit and suspect.unit != "mol/mol" else ""
    if suspect.would_be is not None:
        should = format_measured(suspect.would_be, suspect.would_be_sd)
        text = (
            f"{suspect.label} would have to be {should} instead of "
            f"{format_number(suspect.measured)}{unit}"
        )
    else:
        size = f"{format_measured(abs(suspect.size), suspect.sd)}{unit} of {suspect.name}"
        if suspect.kind is SuspectKind.CARRIER:
            way = "spent" if suspect.size >= 0 else "made"
            text = f"{size} {way} that no reaction of the model has"
        else:
            way = "taken up" if suspect.direction is Direction.IN else "released"
            text = f"{size} {way}, not measured"
    return text if suspect.why_not is None else f"{text}: not possible, {suspect.why_not}"


def would_be_words(suspect: Suspect) -> str:
    """What a suspect would have to be: the true value, or how much goes unmeasured."""
    if suspect.would_be is not None:
        return format_measured(suspect.would_be, suspect.would_be_sd)
    return format_measured(abs(suspect.size), suspect.sd)


def and_words(names: Sequence[str]) -> str:
    """Names in a row, the last one behind "and".

    Examples
    --------
    >>> and_words(["a", "b", "c"]), and_words(["a"])
    ('a, b and c', 'a')
    """
    return names[0] if len(names) == 1 else f"{', '.join(names[:-1])} and {names[-1]}"
