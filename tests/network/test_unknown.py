from __future__ import annotations

from fractions import Fraction

import pytest

from fluxnet.ground.diagnostic import has_errors
from fluxnet.ground.names import Name
from fluxnet.network.balance import check_balances
from fluxnet.network.line_balance import Verdict, balance_line, contents_of_network
from fluxnet.network.model import Parameter
from fluxnet.network.unknown import solve_unknowns

COMMON = {
    "G6P": "C6H13O9P",
    "pyruvate": "C3H4O3",
    "acetyl-CoA": "C2H2O",
    "ethanol": "C2H6O",
    "CO2": "CO2",
    "NADH": "2 electrons",
    "NADPH": "2 electrons",
    "ATP": "energy",
    "ammonia": "NH3",
    "X": "biomass CH1.8O0.5N0.2",
}
K = Parameter("K", Fraction(21, 10), Fraction(3, 10))


def balance_of(reaction, network):
    return balance_line(reaction, contents_of_network(network, (reaction,)))


def coefficients(network, name="r"):
    reaction = network.find_reaction(name)
    return {t.species: t.coefficient for _, t in reaction.terms}


def solved(network):
    after, findings = solve_unknowns(network)
    assert not has_errors(findings), findings
    return after


def only_finding(network):
    after, findings = solve_unknowns(network)
    assert len(findings) == 1, findings
    return after, findings[0]


def test_a_growth_line_is_solved_from_carbon_nitrogen_and_electrons(build):
    line = "r: ? G6P + ? ammonia + K ATP -> X + 0.1 CO2 + ? NADH"
    network = solved(build(COMMON, line, parameters=(K,)))
    found = {n: e.number for n, e in coefficients(network).items()}
    # 6 a = 1.1; N 0.2; electrons 24 a = 4.2 + 2 c
    assert found["G6P"] == Fraction(11, 60)
    assert found["ammonia"] == Fraction(1, 5)
    assert found["NADH"] == Fraction(1, 10)
    assert check_balances(network) == ()
    assert all(t.solved == (t.written == "?") for _, t in network.reactions[0].terms)


def test_a_solved_coefficient_is_an_expression_in_the_parameters(build):
    a = (Parameter("a", Fraction(1, 2), None, Fraction(0), Fraction(1)),)
    line = "r: ? pyruvate + a NADH -> (1-a) CO2 + ? ethanol"
    network = solved(build(COMMON, line, parameters=a))
    pyruvate = coefficients(network)["pyruvate"]
    ethanol = coefficients(network)["ethanol"]
    for value in (Fraction(0), Fraction(1, 3), Fraction(1)):
        p, e = pyruvate.exact({"a": value}), ethanol.exact({"a": value})
        assert 3 * p == (1 - value) + 2 * e
        assert 10 * p + 2 * value == 12 * e


def test_solving_again_gives_the_same(build):
    network = solved(build(COMMON, "r: ? pyruvate -> acetyl-CoA + CO2 + ? NADH"))
    assert solved(network).reactions == network.reactions


def test_energy_is_seen_by_no_balance_so_its_question_mark_is_free(build):
    after, finding = only_finding(build(COMMON, "r: pyruvate -> acetyl-CoA + CO2 + NADH + ? ATP"))
    assert finding.name is Name.COEFFICIENT_FREE
    assert "ATP carries energy" in finding.because
    assert coefficients(after)["ATP"] is None


def test_two_carriers_of_the_same_cargo_are_free_together(build):
    _, finding = only_finding(build(COMMON, "r: pyruvate + ? NADPH -> acetyl-CoA + CO2 + ? NADH"))
    assert finding.name is Name.COEFFICIENT_FREE
    assert "NADPH and NADH" in finding.message
    assert len(finding.also) == 1


def test_a_species_without_a_formula_leaves_a_question_mark_unsolved(build):
    _, finding = only_finding(build({**COMMON, "thing": None}, "r: ? thing -> pyruvate"))
    assert finding.name is Name.COEFFICIENT_FREE
    assert "thing has no formula" in finding.message


def test_balances_that_ask_for_different_values_contradict_one_another(build):
    after, finding = only_finding(build(COMMON, "r: 2 pyruvate -> ? ethanol + 2 CO2"))
    assert finding.name is Name.COEFFICIENT_CONTRADICTS
    assert finding.because == "C asks for 2, electrons ask for 5/3"
    assert coefficients(after)["ethanol"] is None


def test_the_mend_of_a_contradiction_names_what_to_solve_as_well_and_what_may_be_missing(build):
    _, finding = only_finding(build(COMMON, "r: ? pyruvate -> acetyl-CoA + CO2"))
    assert finding.mend == (
        "? CO2 as well closes every balance; so does ? NADH more on the right"
    )


def test_the_mend_of_a_contradiction_names_a_term_that_is_too_much(build):
    _, finding = only_finding(build(COMMON, "r: 2 acetyl-CoA -> ? ethanol + CO2 + 2 NADH"))
    assert "as well" in finding.mend
    _, finding = only_finding(build(COMMON, "r: acetyl-CoA + 2 NADH -> ? ethanol + CO2"))
    assert finding.mend.startswith("CO2 taken out closes every balance")


def test_what_rounding_explains_is_no_contradiction(build):
    species = {**COMMON, "sugar": "C6H12O6"}
    network = build(species, "r: 0.333 sugar -> ? pyruvate + 0.667 NADH")
    after = solved(network)
    assert coefficients(after)["pyruvate"].number == Fraction(666, 1000)
    assert balance_of(after.reactions[0], after).verdict is Verdict.ROUNDING
    exact = build(species, "r: 3 sugar -> ? pyruvate + 5 NADH")
    assert only_finding(exact)[1].name is Name.COEFFICIENT_CONTRADICTS


def test_rounding_that_changes_no_combination_seen_by_the_balances_excuses_nothing(build):
    # sugar and aldehyde hold electrons per carbon alike: rounding of the sugar moves no gap
    species = {"sugar": "C6H12O6", "aldehyde": "CH2O", "e": "1 electrons"}
    _, finding = only_finding(build(species, "r: 0.33 sugar -> ? aldehyde + e"))
    assert finding.name is Name.COEFFICIENT_CONTRADICTS


def test_a_negative_result_says_on_which_side_the_species_belongs(build):
    after, finding = only_finding(build(COMMON, "r: pyruvate + ? NADH -> acetyl-CoA + CO2"))
    assert finding.name is Name.COEFFICIENT_NEGATIVE
    assert "NADH belongs on the right" in finding.message
    assert coefficients(after)["NADH"] is None


def test_zero_is_a_note_and_stays_in_the_line(build):
    line = "r: pyruvate -> acetyl-CoA + CO2 + NADH + ? NADPH"
    after, finding = only_finding(build(COMMON, line))
    assert finding.name is Name.COEFFICIENT_ZERO
    assert coefficients(after)["NADPH"].is_zero


@pytest.mark.parametrize(
    ("parameter", "expected"),
    [
        (Parameter("a", Fraction(1, 2), None, Fraction(0), Fraction(1)), False),
        (Parameter("a", Fraction(1, 2), None, Fraction(0), Fraction(2)), True),
        (Parameter("a", Fraction(1, 2), Fraction(1, 4)), False),
        (Parameter("a", Fraction(1, 2), Fraction(3, 10)), True),
        (Parameter("a", Fraction(1, 2), Fraction(3, 10), Fraction(0), Fraction(1)), False),
        (Parameter("a", Fraction(1, 2)), False),
    ],
)
def test_a_sign_change_is_looked_for_in_the_range_or_within_two_sds(build, parameter, expected):
    # electrons: 2 b = 2 - 2 a
    line = "r: pyruvate -> acetyl-CoA + CO2 + a NADPH + ? NADH"
    after, findings = solve_unknowns(build(COMMON, line, parameters=(parameter,)))
    names = [d.name for d in findings]
    assert names == ([Name.COEFFICIENT_CHANGES_SIGN] if expected else [])
    assert coefficients(after)["NADH"] is not None


def test_water_is_solved_where_it_can_be_checked(build):
    species = {"ethanol": "C2H6O", "oxygen": "O2", "CO2": "CO2", "H2O": "H2O"}
    network = solved(build(species, "r: ethanol + 3 oxygen -> 2 CO2 + ? H2O"))
    assert coefficients(network)["H2O"].number == 3


def test_one_bad_line_leaves_the_others_solved(build):
    network = build(
        COMMON,
        "bad: pyruvate -> acetyl-CoA + ? ATP",
        "good: pyruvate -> acetyl-CoA + CO2 + ? NADH",
    )
    after, findings = solve_unknowns(network)
    assert len(findings) == 1
    assert coefficients(after, "good")["NADH"].number == 1
