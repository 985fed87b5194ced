"""Quantities that stand twice in one run."""

from __future__ import annotations

from collections.abc import Sequence

from fluxnet.ground.diagnostic import Diagnostic
from fluxnet.ground.names import Name
from fluxnet.network.model import QuantityKind, Species
from fluxnet.tables.values import Reading

__all__ = ["find_repeats"]


def find_repeats(readings: Sequence[Reading], biomass: Species | None) -> list[Diagnostic]:
    """One fault for each reading whose quantity stands already in the run.

    Of a wide table one for each row that repeats its run's quantities.
    """
    first: dict[object, Reading] = {}
    faults: list[Diagnostic] = []
    rows: dict[tuple[int, int], list[Reading]] = {}
    for reading in readings:
        quantity = reading.quantity
        key: object = quantity
        if quantity.kind is QuantityKind.RATE:
            key = quantity.name
        elif quantity.kind is QuantityKind.MU and biomass is not None:
            key = biomass.name
        before = first.setdefault(key, reading)
        if before is reading:
            continue
        if before.entry.name_cell.span == reading.entry.name_cell.span:
            lines = (before.entry.value.span.line, reading.entry.value.span.line)
            rows.setdefault(lines, []).append(reading)
        else:
            faults.append(_twice(before, reading))
    return faults + [_row_twice(line, repeated) for (line, _), repeated in rows.items()]


def _twice(before: Reading, reading: Reading) -> Diagnostic:
    cell, earlier = reading.entry.name_cell, before.entry.name_cell
    words = f"{reading.quantity} of run {reading.entry.run} stands already in {earlier.place}"
    if before.quantity.kind is not reading.quantity.kind:
        words += f" as {before.quantity}"
    return Diagnostic(
        Name.ROW_REPEATED,
        f"{cell.place}: {words}",
        cell.span,
        mend="keep one, average them, or give the second another run's name",
        also=(earlier.span,),
    )


def _row_twice(line: int, repeated: Sequence[Reading]) -> Diagnostic:
    entry = repeated[0].entry
    names = ", ".join(str(r.quantity) for r in repeated)
    return Diagnostic(
        Name.ROW_REPEATED,
        f"row {entry.value.span.line}: {names} of run {entry.run} stand{'s' * (len(repeated) < 2)} "
        f"already in row {line}",
        entry.value.span,
        mend=f"average the rows, or give each a run's name of its own: {entry.run}-1, "
        f"{entry.run}-2",
    )
