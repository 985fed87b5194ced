"""Quantities that stand twice in one run."""

from __future__ import annotations

from collections.abc import Sequence

from fluxnet.ground.diagnostic import Diagnostic
from fluxnet.ground.names import Name
from fluxnet.network.model import QuantityKind, Species
from fluxnet.tables.values import Reading

__all__ = ["find_repeats"]


def find_repeats(readings: Sequence[Reading], biomass: Species | None) -> list[Diagnostic]:
    """One fault for each reading whose quantity stands already in the run."""
    first: dict[object, Reading] = {}
    faults: list[Diagnostic] = []
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
        cell = reading.entry.name_cell
        words = f"{quantity} of run {reading.entry.run} stands already in {_where(before, reading)}"
        if before.quantity.kind is not quantity.kind:
            words += f" as {before.quantity}"
        faults.append(
            Diagnostic(
                Name.ROW_REPEATED,
                f"{cell.place}: {words}",
                cell.span,
                mend="keep one, average them, or give the second another run's name",
                also=(before.entry.name_cell.span,),
            )
        )
    return faults


def _where(before: Reading, reading: Reading) -> str:
    cell = before.entry.name_cell
    if cell.span == reading.entry.name_cell.span:
        return f"row {before.entry.value.span.line}"
    return cell.place
