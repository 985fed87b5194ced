"""What a table says of a run's biomass: the error that specific rates share, its concentration."""

from __future__ import annotations

from dataclasses import field

from fluxnet.chemistry.unit_words import Dimension
from fluxnet.chemistry.units import UnitError, UnitFault, parse_unit
from fluxnet.ground.diagnostic import Diagnostic
from fluxnet.ground.names import Name
from fluxnet.ground.record import record
from fluxnet.tables.entries import RunHead
from fluxnet.tables.grid import Cell
from fluxnet.tables.numbers import Number, cell_fault, read_cell
from fluxnet.tables.numerals import Decimal
from fluxnet.tables.statements import Statements

__all__ = ["BiomassNumbers", "read_biomass_numbers"]


@record
class BiomassNumbers:
    """The shared error as a fraction; the concentration [g/L] with its relative error."""

    shared_error: float | None = None
    concentration: tuple[float, float] | None = None
    diagnostics: tuple[Diagnostic, ...] = field(default=())


def read_biomass_numbers(head: RunHead, statements: Statements, decimal: Decimal) -> BiomassNumbers:
    """The numbers of one run: its own columns, else the lines above the table."""
    faults: list[Diagnostic] = []
    shared = statements.shared_error
    if not head.shared.is_blank:
        shared = _shared(head.shared, head.shared_unit, decimal, faults)
    concentration = None
    if not head.concentration.is_blank:
        number = read_cell(head.concentration, decimal, "biomass concentration")
        sd = Number()
        if not head.concentration_sd.is_blank:
            sd = read_cell(head.concentration_sd, decimal, "sd of the biomass concentration")
        concentration = _concentration(
            number, sd, head.concentration_unit, head.concentration, faults
        )
    elif statements.concentration is not None:
        cell = statements.concentration
        number = read_cell(cell, decimal, "biomass concentration")
        concentration = _concentration(
            number, Number(), statements.concentration_unit, cell, faults
        )
    return BiomassNumbers(shared, concentration, tuple(faults))


def _shared(cell: Cell, unit: str, decimal: Decimal, faults: list[Diagnostic]) -> float | None:
    title = "shared error biomass"
    number = read_cell(cell, decimal, title)
    if number.fault is not None:
        faults.append(number.fault)
        return None
    if number.value is None or number.value < 0:
        faults.append(cell_fault(Name.NEGATIVE_SD, cell, title, f"`{cell.text}` is negative"))
        return None
    if not number.percent and unit != "%":
        faults.append(
            cell_fault(
                Name.UNREADABLE_CELL, cell, title, f"`{cell.text}` is not in per cent", "write 4 %"
            )
        )
        return None
    return number.value / 100


def _concentration(
    number: Number, sd: Number, unit: str, cell: Cell, faults: list[Diagnostic]
) -> tuple[float, float] | None:
    """Grams per litre and the relative error."""
    title = "biomass concentration"
    bad = [n.fault for n in (number, sd) if n.fault is not None]
    if bad or number.value is None:
        faults.extend(bad)
        return None
    if number.value <= 0:
        faults.append(
            cell_fault(
                Name.UNREADABLE_CELL, cell, title, f"`{cell.text}` is no concentration of biomass"
            )
        )
        return None
    try:
        read = parse_unit(unit)
    except UnitError as fault:
        name = Name.UNKNOWN_UNIT if fault.kind is UnitFault.UNKNOWN else Name.WRONG_UNIT
        faults.append(cell_fault(name, cell, title, str(fault), "write g/L"))
        return None
    if read.amount is not Dimension.MASS or read.per != (Dimension.VOLUME,):
        words = f"`{unit}` is no unit of a biomass concentration"
        faults.append(cell_fault(Name.WRONG_UNIT, cell, title, words, "write g/L"))
        return None
    absolute = number.sd if number.sd is not None else sd.value
    relative = number.relative
    if sd.value is not None and sd.percent:
        absolute, relative = None, sd.value / 100
    if absolute is not None:
        relative = absolute / number.value
    relative = relative or 0.0
    if relative < 0:
        faults.append(
            cell_fault(Name.NEGATIVE_SD, cell, title, "its standard deviation is negative")
        )
        return None
    return number.value * float(read.scale), relative
