"""The catalogue as a screen and as data."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any

from fluxnet.chemistry.catalogue import Compound
from fluxnet.chemistry.formula import Formula, degree_of_reduction
from fluxnet.ground.table import Align, Column, Table
from fluxnet.presenting.numbers import format_number
from fluxnet.presenting.screen import Block, Heading, Sentence

__all__ = ["catalogue_record", "catalogue_screen", "compound_screen"]


def catalogue_screen(compounds: Sequence[Compound]) -> tuple[Block, ...]:
    """All compounds, a line each."""
    columns = (
        Column("compound", "compound"),
        Column("formula", "formula"),
        Column("charge pH 7", "charge", align=Align.RIGHT),
        Column("mass", "molar_mass", "g/mol", Align.RIGHT, digits=5),
        Column("electrons", "electrons", "mol/mol", Align.RIGHT),
        Column("combustion", "combustion", "kJ/mol", Align.RIGHT, digits=5),
    )
    rows = tuple(
        (
            compound.name,
            formula_text(compound.formula),
            compound.charge,
            compound.molar_mass or None,
            _electrons(compound),
            compound.combustion_kJ,
        )
        for compound in compounds
    )
    return (
        Table("catalogue", f"{len(rows)} compounds", columns, rows),
        Sentence("`fluxnet catalogue NAME` shows other names and sources."),
    )


def compound_screen(compound: Compound) -> tuple[Block, ...]:
    """One compound with every value and its source."""
    lines = [
        ("other names", ", ".join(compound.synonyms) or "none"),
        ("formula", f"{formula_text(compound.formula) or 'none'} ({compound.formula_source})"),
        ("at pH 7", f"charge {compound.charge}"),
        ("molar mass", f"{compound.molar_mass:.3f} g/mol"),
        ("electrons", f"{format_number(_electrons(compound))} mol/mol (nitrogen as ammonia)"),
    ]
    if compound.combustion_kJ is not None:
        heat = f"{format_number(compound.combustion_kJ, 5)} kJ/mol ({compound.combustion_state})"
        lines.append(("combustion", f"{heat}: {compound.combustion_source}"))
    else:
        lines.append(("combustion", "no source; estimated from the electrons where it is needed"))
    lines += [
        (
            "formation",
            f"Gibbs energy {format_number(g.energy, 6)} kJ/mol, charge {g.charge}: {g.source}",
        )
        for g in compound.gibbs
    ]
    table = Table(
        "compound",
        "",
        (Column("what", "what"), Column("value", "value", wrap=64)),
        tuple(lines),
    )
    return (Heading(compound.name), table)


def catalogue_record(compounds: Sequence[Compound]) -> dict[str, Any]:
    """Compounds as data."""
    return {
        "compounds": [
            {
                "name": compound.name,
                "synonyms": list(compound.synonyms),
                "kind": compound.kind.value,
                "formula": formula_text(compound.formula),
                "formula_source": compound.formula_source,
                "charge_ph7": compound.charge,
                "molar_mass": compound.molar_mass,
                "electrons": _electrons(compound),
                "combustion_kJ_mol": compound.combustion_kJ,
                "combustion_source": compound.combustion_source,
            }
            for compound in compounds
        ]
    }


def formula_text(formula: Formula) -> str:
    """A formula as one would type it."""
    if formula.written:
        return formula.written
    return "".join(
        f"{element}{'' if count == 1 else format_number(float(count), 6)}"
        for element, count in formula.counts
    )


def _electrons(compound: Compound) -> float | None:
    electrons = degree_of_reduction(compound.formula)
    return None if electrons is None else float(electrons)
