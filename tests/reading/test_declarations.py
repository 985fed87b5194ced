"""Declarations: species with formulas and cargo, biomass with ash, parameters, the head."""

from __future__ import annotations

from fractions import Fraction

import pytest

from fluxnet.ground.names import Name
from fluxnet.network.model import Basis, CargoKind, Role
from fluxnet.reading.model import read_model_text

TAIL = "compartment c\n    a : glucose -> 2 ethanol + 2 CO2\n"
HEAD = "substrate glucose\nproduct ethanol, CO2\n"


def test_each_role_has_its_word(read) -> None:
    network = read("""
        substrate glucose, ammonia
        product ethanol
        exchange CO2
        biomass X CH1.8O0.5N0.2 ash 8 %
        carrier ATP carries energy
        inside pyruvate
        compartment c
            a : glucose -> 2 ethanol + 2 CO2
    """)

    assert [(s.name, s.role) for s in network.species] == [
        ("glucose", Role.SUBSTRATE), ("ammonia", Role.SUBSTRATE), ("ethanol", Role.PRODUCT),
        ("CO2", Role.EXCHANGE), ("X", Role.BIOMASS), ("ATP", Role.CARRIER),
        ("pyruvate", Role.INSIDE),
    ]  # fmt: skip


def test_a_name_of_the_catalogue_brings_its_formula_and_its_entry(read) -> None:
    network = read(HEAD.replace("glucose", "xylose") + """
inside acetyl-CoA, succinyl-CoA, EtOH-in C2H6O
compartment c
    a : 6 xylose -> 10 ethanol + 10 CO2
""")
    xylose, bound, thick, own = (
        network.find_species(n) for n in ("xylose", "acetyl-CoA", "succinyl-CoA", "EtOH-in")
    )

    assert dict(xylose.formula.counts) == {"C": 5, "H": 10, "O": 5}
    assert dict(bound.formula.counts) == {"C": 2, "H": 2, "O": 1}
    assert dict(thick.formula.counts) == {"C": 4, "H": 4, "O": 3}
    assert (xylose.entry, own.entry) == ("xylose", None)


def test_a_synonym_of_the_catalogue_is_matched_to_its_entry(read) -> None:
    assert read("substrate Glc\n" + HEAD[18:] + TAIL.replace("glucose", "Glc")).find_species(
        "Glc"
    ).entry == "glucose"


@pytest.mark.parametrize("formula", ["C2H4O2", "C2H3O2(-)", "C2H3O2 charge -1", "C2H6O3", "C2H2O"])
def test_a_given_formula_may_differ_by_water_and_protons(read, formula) -> None:
    network = read(f"product acetate {formula}\nsubstrate glucose\n"
                   "compartment c\n    a : glucose -> 3 acetate\n")

    assert network.find_species("acetate").formula.written == formula


def test_a_formula_that_differs_by_more_is_an_error_with_both(fault) -> None:
    found = fault(HEAD + "product acetate C2H6O2\n" + TAIL)

    assert found.name.value == "formula-differs"
    assert "C2H4O2" in found.message
    assert "C2H6O2" in found.message


@pytest.mark.parametrize(
    ("text", "kind", "electrons", "checks"),
    [
        ("ATP carries energy", CargoKind.ENERGY, 0, False),
        ("ATP", CargoKind.ENERGY, 0, False),
        ("Fd carries 1 electron", CargoKind.ELECTRONS, 1, False),
        ("NADH carries 2 electrons", CargoKind.ELECTRONS, 2, False),
        ("NADH", CargoKind.GROUP, 2, True),
        ("QH2", CargoKind.GROUP, 2, True),
        ("acetylP carries C2H2O", CargoKind.GROUP, 8, False),
        ("hydride carries H charge -1", CargoKind.GROUP, 2, True),
        ("hydride carries H(-)", CargoKind.GROUP, 2, True),
    ],
)
def test_a_carrier_carries_energy_electrons_or_a_group(read, text, kind, electrons, checks) -> None:
    cargo = read(HEAD + f"carrier {text}\n" + TAIL).carriers[0].cargo

    assert (cargo.kind, cargo.electrons, cargo.checks_protons) == (kind, electrons, checks)


def test_with_balanced_phosphate_the_energy_carriers_of_the_catalogue_carry_it(read) -> None:
    network = read(
        "balance phosphate\nexchange phosphate\ncarrier ATP\n" + HEAD + TAIL.replace(
            "a :", "b : ATP -> phosphate\n    a :"))

    assert network.balance_phosphate
    assert dict(network.carriers[0].cargo.formula.counts) == {"H": 1, "P": 1, "O": 3}


def test_balancing_phosphate_asks_for_its_declaration(fault) -> None:
    found = fault("balance phosphate\n" + HEAD + TAIL)

    assert (found.name.value, found.span.column) == ("unknown-species", 9)


@pytest.mark.parametrize(
    ("written", "ash", "sd"),
    [
        ("ash 8 %", Fraction(8, 100), 0),
        ("ash 8 ± 1 %", Fraction(8, 100), Fraction(1, 100)),
        ("ash 8 % ± 1 %", Fraction(8, 100), Fraction(1, 100)),
        ("ash 0.08 ± 0.01", Fraction(8, 100), Fraction(1, 100)),
        ("ash 7.5%", Fraction(75, 1000), 0),
    ],
)
def test_ash_is_a_share_of_dry_weight(read, written, ash, sd) -> None:
    biomass = read(HEAD + f"biomass X CH1.8O0.5N0.2 {written}\n" + TAIL).find_species("X")

    assert (biomass.ash, biomass.ash_sd) == (ash, sd)


def test_a_biomass_formula_keeps_its_rounding(read) -> None:
    formula = read(HEAD + "biomass X CH1.8O0.50N0.2 ash 8 %\n" + TAIL).find_species("X").formula

    assert formula.half_unit("H") == Fraction(1, 20)
    assert formula.half_unit("O") == Fraction(1, 200)
    assert formula.half_unit("C") == 0


@pytest.mark.parametrize(
    ("written", "sd", "low", "high"),
    [
        ("1.4", None, None, None),
        ("1.4 ± 0.2", Fraction(1, 5), None, None),
        ("1.4 ± 10 %", Fraction(14, 100), None, None),
        ("1.4 in [0.5, 2.5]", None, Fraction(1, 2), Fraction(5, 2)),
        ("1.4 ± 0.2 in [0,2]", Fraction(1, 5), 0, 2),
        ("1.4 ± 0.2 in [-1, 2]", Fraction(1, 5), -1, 2),
        ("1.4 ± 0", None, None, None),
    ],
)
def test_a_parameter_has_a_value_and_may_have_an_error_and_a_range(
    read, written, sd, low, high
) -> None:
    text = TAIL.replace("2 ethanol", "(2*p/p) ethanol")
    found = read(HEAD + f"parameter p = {written}\n" + text).parameters[0]

    assert (found.value, found.sd, found.low, found.high) == (Fraction(7, 5), sd, low, high)


@pytest.mark.parametrize(
    ("written", "basis"),
    [
        ("mmol/g/h", Basis.SPECIFIC), ("mmol / g / h", Basis.SPECIFIC),
        ("mmol/gDW/h", Basis.SPECIFIC), ("C-mol/C-mol/h", Basis.CARBON),
        ("mmol/l/h", Basis.VOLUMETRIC), ("mmol/L/h", Basis.VOLUMETRIC), ("mmol", Basis.AMOUNT),
    ],
)  # fmt: skip
def test_a_basis_is_one_of_four_units(read, written, basis) -> None:
    assert read(f"basis {written}\n" + HEAD + TAIL).basis is basis


def test_the_usual_basis_is_taken_where_none_is_given(read) -> None:
    assert read(HEAD + TAIL).basis is Basis.SPECIFIC


def test_a_title_is_free_text_up_to_a_comment(read) -> None:
    assert read("model Yeast -> ethanol, batch 3: + \n" + HEAD + TAIL).title == (
        "Yeast -> ethanol, batch 3: +"
    )
    assert read("model Yeast # strain 4\n" + HEAD + TAIL).title == "Yeast"


def test_free_species_are_kept_by_name(read) -> None:
    assert read("free sulfate\n" + HEAD + TAIL).free == ("sulfate",)


def test_a_name_may_be_used_before_it_is_declared(read) -> None:
    network = read("limit a <= 3\nlimit glucose <= 4\n" + TAIL + HEAD)

    assert [str(limit.quantity) for limit in network.limits] == ["flux a", "glucose in"]


def test_biomass_without_a_formula_takes_the_catalogues_only_under_its_name(read, fault) -> None:
    network = read(HEAD + "biomass cells ash 8 %\n" + TAIL)
    found = fault(HEAD + "biomass X ash 8 %\n" + TAIL)

    assert network.find_species("cells").formula.written == "CH1.8O0.5N0.2"
    assert (found.name.value, found.span.column) == ("formula-needed", 9)


def test_a_name_of_the_catalogue_that_is_not_declared_is_told_with_how_to_declare_it() -> None:
    text = "substrate glucose\nproduct ethanol\nexchange CO2\ncarrier NADH\ncompartment a\n"
    told = read_model_text(
        text + "    f : glucose -> 2 ethanol + 2 CO2\n    g : glucose -> acetate + NADPH\n"
    ).diagnostics
    mends = [d.mend or "" for d in told if d.name is Name.UNKNOWN_SPECIES]

    assert any("product acetate if it leaves the cell" in mend for mend in mends)
    assert any(mend.startswith("declare it: carrier NADPH") for mend in mends)
