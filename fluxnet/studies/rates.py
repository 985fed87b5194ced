"""Rates of several cultivations as one answer, and the phases that a user chooses."""

from __future__ import annotations

import csv
import io
from collections.abc import Sequence

from fluxnet.cultivation.reckoning import rates_of
from fluxnet.cultivation.result import CultivationRates
from fluxnet.ground.diagnostic import Diagnostic, has_errors
from fluxnet.ground.errors import MisuseError
from fluxnet.ground.progress import Progress, silent
from fluxnet.ground.record import record
from fluxnet.network.model import Network, Species
from fluxnet.rates.cultivation import Cultivation, Phase
from fluxnet.rates.measured import RatesTable

__all__ = ["FoundRates", "find_rates", "phases_text", "read_phase", "read_phases_text"]


@record
class FoundRates:
    """Each cultivation as read beside what was found of it, and all runs as one table."""

    raw: tuple[Cultivation, ...]
    found: tuple[CultivationRates, ...]
    table: RatesTable

    @property
    def diagnostics(self) -> tuple[Diagnostic, ...]:
        """The findings on all of them."""
        return tuple(dict.fromkeys(d for one in self.found for d in one.diagnostics))

    @property
    def is_sound(self) -> bool:
        """Whether every cultivation gave rates, without an error."""
        return all(one.phases for one in self.found) and not has_errors(self.diagnostics)


def find_rates(
    cultivations: Sequence[Cultivation],
    network: Network | None = None,
    *,
    phases: Sequence[Phase] = (),
    progress: Progress = silent,
) -> FoundRates:
    """The rates of each cultivation; ``phases`` overrule those of the data."""
    raw = tuple(cultivations)
    found: list[CultivationRates] = []
    for place, one in enumerate(raw):
        progress("reckoning rates", place, len(raw))
        found.append(rates_of(one, network, tuple(phases) or None))
    return FoundRates(raw, tuple(found), _joined(found))


def _joined(found: Sequence[CultivationRates]) -> RatesTable:
    """All runs as one table; a species that several name stands once."""
    species: dict[str, Species] = {}
    for one in found:
        for each in one.table.species:
            species.setdefault(each.name, each)
    return RatesTable(
        tuple(run for one in found for run in one.table.runs),
        tuple(words for one in found for words in one.table.understood),
        tuple(species.values()),
        next((one.table.nitrogen for one in found if one.table.nitrogen is not None), None),
    )


def read_phase(text: str) -> Phase:
    """A phase as it is typed: ``growth 2 to 10.5``, hours since inoculation.

    Raises
    ------
    MisuseError
        Where it is written otherwise, or ends before it starts.

    Examples
    --------
    >>> read_phase("growth 2 to 10.5")
    Phase(name='growth', start=2.0, end=10.5)
    """
    words = text.split()
    try:
        name, (start, joint, end) = " ".join(words[:-3]), words[-3:]
        found = Phase(name, float(start), float(end))
    except ValueError:
        joint = ""
    if joint != "to" or not name or not found.end > found.start:
        raise MisuseError(f"--phase {text!r}: write a name and two hours, such as 'growth 2 to 9'")
    return found


def read_phases_text(text: str, shown: str) -> tuple[Phase, ...]:
    r"""The phases of a file such as :func:`phases_text` writes; commas or semicolons.

    Raises
    ------
    MisuseError
        Where a line is none, with its number.

    Examples
    --------
    >>> read_phases_text("phase;start [h];end [h]\ngrowth;2;10,5\n", "phases.csv")
    (Phase(name='growth', start=2.0, end=10.5),)
    """
    separator = ";" if ";" in text.split("\n", 1)[0] else ","
    phases: list[Phase] = []
    for number, cells in enumerate(csv.reader(io.StringIO(text), delimiter=separator), start=1):
        if number == 1 or not any(cell.strip() for cell in cells):
            continue
        name, *hours = (cell.strip() for cell in cells)
        try:
            start, end = (float(hour.replace(",", ".")) for hour in hours if hour)
        except ValueError:
            start, end = 0.0, 0.0
        if not name or not end > start:
            told = separator.join(cells)
            raise MisuseError(f"{shown}, line {number}: {told!r} is no phase, start and end")
        phases.append(Phase(name, start, end))
    return tuple(phases)


def phases_text(found: Sequence[CultivationRates]) -> str:
    """The phases as a file that is read beside the data, to be mended by hand."""
    stream = io.StringIO()
    writer = csv.writer(stream, lineterminator="\n")
    writer.writerow(["phase", "start [h]", "end [h]"])
    for one in found:
        for each in one.phases:
            writer.writerow([each.phase.name, f"{each.phase.start:g}", f"{each.phase.end:g}"])
    return stream.getvalue()
