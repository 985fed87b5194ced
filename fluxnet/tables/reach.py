"""Numbers that can be read and that no computer can weigh against the others."""

from __future__ import annotations

from fluxnet.ground.diagnostic import Diagnostic
from fluxnet.ground.names import Name
from fluxnet.tables.entries import Entry
from fluxnet.tables.grid import Cell
from fluxnet.tables.numbers import Number, cell_fault

__all__ = ["reach_faults"]

_LEAST, _MOST = 1e-30, 1e30
"""Sizes between which a rate can be computed with, whatever its unit."""

_SHARE = 1e-9
"""A smaller sd, as a part of its rate, is lost in the rounding of the numbers."""


def reach_faults(entry: Entry, value: Number, sd: Number) -> list[Diagnostic]:
    """Faults of rates and sds that are too large or too small, by themselves or together."""
    title = f"sd of {entry.name}"
    faults: list[Diagnostic] = []
    for number, cell, head in (
        (value.value, entry.value, entry.title),
        (value.sd, entry.value, title),
        (value.relative, entry.value, title),
        (sd.value, entry.sd, title),
    ):
        if number and not _LEAST <= abs(number) <= _MOST:
            mend = f"check the unit; numbers lie between {_LEAST:g} and {_MOST:g}"
            faults.append(_fault(cell, head, "is out of reach", mend))
    if faults:
        return faults
    cell = entry.value if sd.value is None else entry.sd
    relative = _relative(entry, value, sd)
    if not relative or _SHARE <= relative <= 1 / _SHARE:
        return []
    if relative > 1:
        return [_fault(cell, title, "leaves nothing of the rate", "leave the rate blank")]
    mend = "write 0 where the rate is exact"
    return [_fault(cell, title, "is nothing beside the rate", mend)]


def _relative(entry: Entry, value: Number, sd: Number) -> float | None:
    """The sd as a part of the rate, where both are told and in one unit."""
    if sd.value is not None and (sd.percent or entry.sd_unit == "%"):
        return sd.value / 100
    error = value.sd if sd.value is None else sd.value
    if error is None:
        return value.relative
    if not value.value or entry.sd_unit not in ("", entry.unit):
        return None
    return error / abs(value.value)


def _fault(cell: Cell, title: str, words: str, mend: str) -> Diagnostic:
    return cell_fault(Name.UNREADABLE_CELL, cell, title, f"`{cell.text}` {words}", mend)
