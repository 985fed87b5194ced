"""Rates as text: one long table that is read back as the same rates."""

from __future__ import annotations

import csv
import io
from collections.abc import Sequence
from decimal import Decimal
from fractions import Fraction
from math import nextafter

from fluxnet.chemistry.catalogue import find_compound
from fluxnet.chemistry.formula import Formula
from fluxnet.network.model import Basis, Quantity, QuantityKind, Role, Species
from fluxnet.rates.covariance import run_covariance
from fluxnet.rates.measured import MeasuredRate, RatesTable, Run
from fluxnet.tables.vocabulary import assumed_biomass

__all__ = ["write_covariance_text", "write_rates_text"]

_SHARED = "shared error biomass"


def write_rates_text(table: RatesTable) -> str:
    r"""The table in one canonical layout: comma-separated, long, every number in full.

    :func:`fluxnet.tables.rates_table.read_rates_text` gives the same runs back, with the model
    if it was read with one; the correlations of own errors go into
    :func:`write_covariance_text`. An assumed sd is written as a number, so that it stays.

    Examples
    --------
    >>> from fluxnet.tables.rates_table import read_rates_text
    >>> text = "run;species;direction;rate;sd;unit\nA;glucose;in;2,5;3 %;mmol/g/h\n"
    >>> print(write_rates_text(read_rates_text(text).table), end="")
    run,species,direction,rate,sd,unit
    A,glucose,in,2.5,3 %,mmol/g/h
    """
    stream = io.StringIO()
    for line in _declarations(table):
        stream.write(line + "\n")
    extras = list(dict.fromkeys(title for run in table.runs for title, _ in run.extras))
    shares = any(run.shared_error is not None for run in table.runs)
    writer = csv.writer(stream, lineterminator="\n")
    titles = ["run", "species", "direction", "rate", "sd", "unit"]
    writer.writerow([*titles, *([_SHARED] if shares else []), *extras])
    species = {s.name: s for s in table.species}
    for run in table.runs:
        carried = dict(run.extras)
        shared = "" if run.shared_error is None else _percent(run.shared_error)
        tail = [*([shared] if shares else []), *(carried.get(t, "") for t in extras)]
        for rate in run.rates:
            writer.writerow([run.name, *_cells(rate, run, species), *tail])
    return stream.getvalue()


def write_covariance_text(table: RatesTable) -> str:
    """The correlations of own errors as the table that may lie beside the rates.

    Empty where all own errors are independent.
    """
    lines: list[Sequence[str]] = []
    for run in table.runs:
        if run.covariance is None:
            continue
        rates = run.measured
        covariance = run_covariance(run)
        share = run.shared_error or 0.0
        shifts = [share * (r.value or 0.0) if r.own_sd is not None else 0.0 for r in rates]
        sds = [(r.sd if r.own_sd is None else r.own_sd) or 0.0 for r in rates]
        for i in range(len(rates)):
            for j in range(i):
                own = float(covariance[i, j]) - shifts[i] * shifts[j]
                size = sds[i] * sds[j]
                if size and abs(own) > 1e-12 * (size + abs(shifts[i] * shifts[j])):
                    names = (str(rates[j].quantity), str(rates[i].quantity))
                    lines.append((run.name, *names, repr(own / size)))
    if not lines:
        return ""
    stream = io.StringIO()
    writer = csv.writer(stream, lineterminator="\n")
    writer.writerow(["run", "first", "second", "correlation"])
    writer.writerows(lines)
    return stream.getvalue()


def _declarations(table: RatesTable) -> list[str]:
    """Lines for what neither the catalogue nor the common biomass formula says."""
    lines: list[str] = []
    for species in table.species:
        if species.formula is None or species == assumed_biomass():
            continue
        compound = find_compound(species.name) if species.role is not Role.BIOMASS else None
        if compound is not None and dict(compound.formula.counts) == dict(species.formula.counts):
            continue
        role = "species" if species.role is Role.EXCHANGE else species.role.value
        line = f"{role} {species.name} {_formula(species.formula)}"
        if species.ash or species.ash_sd:
            line += f" ash {_decimal(species.ash * 100)}"
            line += f" ± {_decimal(species.ash_sd * 100)} %" if species.ash_sd else " %"
        lines.append(line)
    if table.nitrogen is not None:
        lines.append(f"nitrogen source {table.nitrogen}")
    return lines


def _cells(rate: MeasuredRate, run: Run, species: dict[str, Species]) -> list[str]:
    quantity = rate.quantity
    direction = ""
    name = str(quantity)
    if quantity.kind is QuantityKind.RATE and quantity.direction is not None:
        name, direction = quantity.name, quantity.direction.value
    if rate.value is None:
        return [name, direction, "", "", _unit(quantity, run, species)]
    sd = rate.sd if rate.own_sd is None else rate.own_sd
    told = _percent(rate.relative) if rate.relative is not None else repr(sd)
    return [name, direction, repr(rate.value), told, _unit(quantity, run, species)]


def _unit(quantity: Quantity, run: Run, species: dict[str, Species]) -> str:
    if quantity.kind is QuantityKind.MU:
        return "1/h"
    if quantity.kind is QuantityKind.RATIO:
        return "mol/mol"
    if run.basis is not Basis.CARBON:
        return run.unit
    known = species.get(quantity.name)
    formula = known.formula if known is not None else None
    counts_carbon = quantity.kind is QuantityKind.RATE and formula and formula.count("C")
    return "C-mol/C-mol/h" if counts_carbon else "mol/C-mol/h"


def _percent(fraction: float) -> str:
    """A fraction in per cent, so that the text divided by 100 is the same number again."""
    near = float(Decimal(repr(fraction)) * 100)
    for number in (near, nextafter(near, 0.0), nextafter(near, 2 * near + 1)):
        if number / 100 == fraction:
            return f"{number!r} %".replace(".0 %", " %")
    return f"{near!r} %"


def _formula(formula: Formula) -> str:
    if formula.written:
        return formula.written
    text = "".join(f"{e}{'' if n == 1 else _decimal(n)}" for e, n in formula.counts)
    return f"{text} charge {_decimal(formula.charge)}" if formula.charge else text


def _decimal(number: Fraction) -> str:
    """A fraction that was written as a decimal number, as one again."""
    return f"{float(number):.15g}"
