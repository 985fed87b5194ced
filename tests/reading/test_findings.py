"""What is told, and what is not told twice."""

from __future__ import annotations

from fluxnet.ground.names import Name
from fluxnet.reading.findings import nearest_names

HEAD = "substrate glucose\nproduct ethanol, CO2\n"


def test_all_independent_errors_of_a_file_are_told_at_once(faults) -> None:
    found = faults(HEAD + """\
subtrate oxygen
parameter p = 1,4
compartment c
    a : glucose => 2 ethanol + 2 CO2
    b : 1/2 glucose -> ethanol CO2
    d : glucose -> 3 ethanol + 2 CO2
    e : glucos -> 2 ethanol + 2 CO2
limit glucose <= -1
""")

    assert [(d.span.line, d.name.value) for d in sorted(found, key=lambda d: d.span)] == [
        (3, "unknown-statement"), (4, "decimal-comma"), (6, "wrong-arrow"),
        (7, "fraction-coefficient"), (7, "missing-plus"), (8, "unbalanced-line"),
        (9, "unknown-species"), (10, "bad-limit"),
    ]  # fmt: skip


def test_an_undeclared_species_is_told_once_at_its_first_use(fault) -> None:
    lines = "".join(f"    r{k} : glucose -> 2 pyruvat\n" for k in range(7))

    found = fault(f"{HEAD}inside pyruvate\ncompartment c\n{lines}")

    assert found.message == (
        "no species is called pyruvat (also in lines 6, 7, 8, 9 and 2 more)"
    )
    assert found.span.line == 5
    assert "pyruvate" in found.mend


def test_a_line_that_was_refused_makes_no_unknown_names(fault) -> None:
    found = fault("""\
substrate glucose
product ethanol CO2
compartment c
    a : glucose -> 2 ethanol + 2 CO2
""")

    assert found.name.value == "missing-comma"


def test_a_refused_parameter_makes_no_unknown_parameter(fault) -> None:
    found = fault(f"{HEAD}parameter p := 2\ncompartment c\n"
                  "    a : p glucose -> (2*p) ethanol + (2*p) CO2\n")

    assert found.name.value == "bad-parameter"


def test_a_refused_reaction_makes_no_unknown_limit_and_no_unused_parameter(fault) -> None:
    found = fault(f"{HEAD}parameter p = 2\ncompartment c\n"
                  "    a : p glucose => (2*p) ethanol + (2*p) CO2\nlimit a <= 3\n")

    assert found.name.value == "wrong-arrow"


def test_a_species_with_a_broken_formula_makes_no_unbalanced_line(fault) -> None:
    found = fault("substrate glucose\nproduct aroma C8Q, CO2\ncompartment c\n"
                  "    a : glucose -> 2 aroma + 2 CO2\n")

    assert found.name.value == "unknown-element"


def test_a_catalogue_synonym_of_a_declared_species_is_named(fault) -> None:
    found = fault(f"{HEAD}compartment c\n    a : Glc -> 2 ethanol + 2 CO2\n")

    assert "another name of glucose" in found.mend


def test_a_name_that_differs_in_case_is_mended_at_every_use(fault) -> None:
    found = fault(f"{HEAD}compartment c\n    a : Glucose -> 2 ethanol + 2 CO2\n"
                  "    b : 2 Glucose -> 4 ethanol + 4 CO2\n")

    assert found.name.value == "case-differs"
    assert [(e.span.line, e.text) for e in found.edits] == [(4, "glucose"), (5, "glucose")]


def test_two_things_of_one_name_are_told_with_both_places(fault) -> None:
    found = fault(f"{HEAD}compartment c\n    ethanol : glucose -> 2 ethanol + 2 CO2\n")

    assert found.name.value == "declared-twice"
    assert (found.span.line, found.also[0].line) == (4, 2)
    assert "species already" in found.message


def test_acceptances_come_with_the_network(read) -> None:
    network = read(f"{HEAD}compartment c\n    a : glucose -> 2 ethanol +\n"
                   "        2 CO2 accept dead-end: said so, accept unused-species: and this\n")
    first, second = network.acceptances

    assert (first.name.value, first.reason) == ("dead-end", "said so,")
    assert (second.name.value, second.reason) == ("unused-species", "and this")
    assert (first.first_line, first.span.line) == (4, 5)


def test_an_acceptance_at_the_end_of_a_continued_line_silences_its_first_line(read) -> None:
    from fluxnet.ground.diagnostic import Diagnostic, silence
    from fluxnet.ground.names import Name

    network = read(f"{HEAD}compartment c\n    a : glucose -> 2 ethanol +\n"
                   "        2 CO2 accept dead-end: said so\n")
    warning = Diagnostic(Name.DEAD_END, "x", network.reactions[0].span)

    assert [d.accepted for d in silence([warning], network.acceptances)] == ["said so"]


def test_near_names_are_those_spelt_nearly_so() -> None:
    names = ["glucose", "galactose", "pyruvate", "NADH", "NADPH", "ATP"]

    assert nearest_names("glucos", names)[0] == "glucose"
    assert nearest_names("NADHP", names)[0] in ("NADH", "NADPH")
    assert nearest_names("oxaloacetate", names) == ()


def test_a_misspelt_declaration_is_told_where_the_right_name_is_used(faults) -> None:
    found = faults("""\
substrate glukose
product ethanol, CO2
compartment c
    a : glucose -> 2 ethanol + 2 CO2
""")

    told = next(d for d in found if d.name is Name.UNKNOWN_SPECIES)
    assert told.message == "no species is called glucose"
    assert told.mend == "line 1 declares glukose, which nothing knows: write glucose there"


GROWTH = """\
substrate glucose, ammonia
exchange CO2
biomass X CH1.8O0.5N0.2 ash 0 %
carrier NADH carries 2 electrons
compartment c
    growth : ? glucose + 0.2 ammonia -> X + {} + ? NADH
"""


def test_growth_that_forgot_its_carbon_dioxide_is_told_so(faults) -> None:
    text = GROWTH.replace(" + {}", "")
    found = [d for d in faults(text) if d.name is Name.COEFFICIENT_NEGATIVE]

    assert [d.mend for d in found] == [
        "? NADH on the left, where it is 0.1; or a number of CO2 on the right, such as 0.1 CO2, "
        "if it was left out"
    ]
    assert not any(d.name is Name.COEFFICIENT_NEGATIVE for d in faults(GROWTH.format("0.1 CO2")))


def test_of_unknown_coefficients_that_are_free_carbon_dioxide_is_to_be_written(faults) -> None:
    (found,) = [d for d in faults(GROWTH.format("? CO2")) if d.name is Name.COEFFICIENT_FREE]

    assert found.mend == "write one of them as a number, for example CO2"
    assert len(found.also) == 2
