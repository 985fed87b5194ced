"""The catalogue as a screen and as data."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any

from fluxnet.chemistry.catalogue import Compound
from fluxnet.chemistry.electron_energy import half_reaction
from fluxnet.chemistry.enthalpy import HeatOfCombustion, heat_of_combustion
from fluxnet.chemistry.formation import Formation, State, find_formation, find_formations
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
    heat = heat_of_combustion(compound.formula, compound)
    if heat is not None and not compound.kind.is_carrier:
        lines.append(("combustion", _heat_words(compound, heat)))
    lines += [("formation", _formation_words(form)) for form in find_formations(compound.name)]
    held = _per_electron(compound)
    if held is not None:
        lines.append(
            (
                "each electron",
                f"holds {format_number(held, 4)} kJ (Gibbs energy at pH 7, against HCO3-, NH4+, "
                "H2O; Heijnen & van Dijken 1992)",
            )
        )
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
                "formations": [
                    {
                        "charge": form.charge,
                        "state": form.state.value,
                        "gibbs_kJ_mol": form.gibbs,
                        "enthalpy_kJ_mol": form.enthalpy,
                        "source": form.source,
                    }
                    for form in find_formations(compound.name)
                ],
                "gibbs_kJ_per_electron": _per_electron(compound),
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


_STATES = {
    State.GAS: "gas at 1 bar",
    State.LIQUID: "liquid",
    State.DISSOLVED: "in water, 1 mol/kg",
    State.SOLID: "solid",
}


def _heat_words(compound: Compound, heat: HeatOfCombustion) -> str:
    value = f"{format_number(heat.value, 5)} kJ/mol"
    if compound.combustion_kJ is not None:
        return f"{value} ({compound.combustion_state}): {heat.source}"
    looked = f" (pure: {compound.combustion_source})" if compound.combustion_source else ""
    return f"{value}, {heat.source}{looked}"


def _formation_words(form: Formation) -> str:
    charge = f", charge {form.charge:+d}" if form.charge else ""
    return (
        f"{_STATES[form.state]}{charge}: Gibbs energy {format_number(form.gibbs, 6)}, enthalpy "
        f"{format_number(form.enthalpy, 6)} kJ/mol: {form.source}"
    )


def _per_electron(compound: Compound) -> float | None:
    """The Gibbs energy that each electron of the form at pH 7 holds [kJ/mol]."""
    form = find_formation(compound.name, compound.charge)
    half = None if form is None else half_reaction(compound.formula_ph7, form.gibbs)
    return half.per_electron if half is not None and half.electrons > 0 else None
