from __future__ import annotations

from fractions import Fraction

from fluxnet.ground.names import Name
from fluxnet.network.balance import check_balances
from fluxnet.network.expression import constant, parameter
from fluxnet.network.line_balance import Verdict, balance_line, contents_of_network
from fluxnet.network.model import Parameter

COMMON = {
    "glucose": "C6H12O6",
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


def balance_of(reaction, network):
    return balance_line(reaction, contents_of_network(network, (reaction,)))


def one_finding(network):
    findings = check_balances(network)
    assert len(findings) == 1, findings
    return findings[0]


def test_a_wrong_coefficient_is_named_with_its_gap_its_counts_its_place_and_its_mend(build):
    network = build(COMMON, "pdh: pyruvate -> acetyl-CoA + 2 CO2 + NADH")
    finding = one_finding(network)
    assert finding.name is Name.UNBALANCED_LINE
    assert finding.message == "reaction pdh makes 1 C more than it uses"
    counts = "left C 3 (pyruvate), right C 4 (acetyl-CoA 2, CO2 2)"
    assert finding.because == f"{counts}; electrons close"
    assert finding.mend == "1 CO2 closes every balance"
    assert (finding.span.column, finding.span.end_column) == (31, 36)


def test_the_gaps_of_a_line_are_exact_numbers(build):
    network = build(COMMON, "pdh: pyruvate -> acetyl-CoA + 1.1 CO2 + NADH")
    line = balance_of(network.reactions[0], network)
    gaps = {b.name: b.gap.number for b in line.balances}
    assert gaps == {"C": Fraction(1, 10), "electrons": Fraction(0)}


def test_a_missing_carrier_is_offered_on_the_side_where_it_closes_the_line(build):
    finding = one_finding(build(COMMON, "pdh: pyruvate -> acetyl-CoA + CO2"))
    assert finding.message == "reaction pdh uses 2 electrons more than it makes"
    assert finding.mend.startswith("1 NADH more on the right closes every balance")
    assert "NADPH" in finding.mend


def test_a_missing_species_that_holds_several_things_is_found_by_the_ratio_of_the_gaps(build):
    species = {**COMMON, "alanine": "C3H7NO2", "glutamate": "C5H9NO4"}
    finding = one_finding(build(species, "r: pyruvate + ammonia + 3 NADH -> 2 NADH"))
    assert finding.mend == "1 alanine more on the right closes every balance"


def test_a_species_on_the_wrong_side_is_told_to_move(build):
    finding = one_finding(build(COMMON, "pdh: pyruvate + NADH -> acetyl-CoA + CO2"))
    assert finding.mend == "1 NADH on the right instead closes every balance"


def test_a_term_that_must_go_is_told_to_be_taken_out(build):
    finding = one_finding(build(COMMON, "pdh: pyruvate -> acetyl-CoA + CO2 + NADH + 0.5 NADPH"))
    assert finding.mend == "0.5 NADH closes every balance; so does NADPH taken out"
    finding = one_finding(build(COMMON, "pdh: pyruvate + NADPH -> acetyl-CoA + CO2 + NADH"))
    assert finding.mend.startswith("2 NADH closes every balance")
    finding = one_finding(build(COMMON, "pdh: pyruvate -> acetyl-CoA + CO2 + NADH + ammonia"))
    assert finding.mend == "ammonia taken out closes every balance"


def test_a_mend_that_is_no_decimal_number_is_shown_as_a_fraction(build):
    species = {"glucose": "C6H12O6", "sugar": "C9H18O9"}
    finding = one_finding(build(species, "r: 2 sugar -> 2 glucose"))
    assert finding.mend == "3 glucose closes every balance; so does (4/3) sugar"


def test_two_errors_in_one_line_name_the_reaction_and_no_single_coefficient(build):
    network = build(COMMON, "pdh: pyruvate + ammonia -> acetyl-CoA + 2 CO2 + NADH")
    finding = one_finding(network)
    assert finding.span == network.reactions[0].span
    assert finding.mend.startswith("no single coefficient closes every balance")


def test_energy_counts_in_no_balance(build):
    assert check_balances(build(COMMON, "r: glucose -> 2 pyruvate + 17 ATP + 2 NADH")) == ()


def test_hydrogen_and_oxygen_need_not_balance_since_water_is_free(build):
    assert check_balances(build(COMMON, "r: acetyl-CoA + 2 NADH <-> ethanol")) == ()


def test_a_line_with_a_parameter_must_balance_for_every_value_of_it(build):
    a = (Parameter("a", Fraction(1)),)
    sound = build(COMMON, "r: a glucose -> 2*a pyruvate + 2*a NADH", parameters=a)
    assert check_balances(sound) == ()
    only_at_one = build(COMMON, "r: a glucose -> 2 pyruvate + 2 NADH", parameters=a)
    finding = one_finding(only_at_one)
    assert "does not balance for every value of a" in finding.message


def test_the_mend_of_a_line_with_a_parameter_is_an_expression(build):
    a = (Parameter("a", Fraction(1)),)
    network = build(COMMON, "r: a glucose -> 2*a pyruvate + NADH", parameters=a)
    assert one_finding(network).mend == "(2*a) NADH closes every balance"


def test_a_gap_within_rounding_is_a_note_with_the_advice_to_write_a_question_mark(build):
    network = build(COMMON, "r: 0.33 glucose -> 0.67 pyruvate + 0.67 NADH")
    finding = one_finding(network)
    assert finding.name is Name.ROUNDING_GAP
    assert "0.03 C" in finding.message
    assert "? " in finding.mend


def test_rounding_is_judged_by_half_a_unit_of_each_number_exactly(build):
    # 0.33 glucose may be 0.325 to 0.335: C 1.95 to 2.01, exactly 0.03 to each side
    within = build({"glucose": "C6H12O6", "CO2": "CH2O"}, "r: 0.33 glucose -> 2.01 CO2")
    line = balance_of(within.reactions[0], within)
    assert line.verdict is Verdict.ROUNDING
    assert line.balances[0].rounding == Fraction(3, 100) + Fraction(1, 200)
    at_the_edge = build({"glucose": "C6H12O6", "unit": "CH2O"}, "r: 0.33 glucose -> 2 unit")
    assert balance_of(at_the_edge.reactions[0], at_the_edge).verdict is Verdict.ROUNDING
    past_it = build({"glucose": "C6H12O6", "unit": "CH2O"}, "r: 0.334 glucose -> 2 unit")
    assert balance_of(past_it.reactions[0], past_it).verdict is Verdict.OPEN


def test_whole_numbers_are_exact(build):
    network = build({"A": "C3H6O3", "B": "CH2O"}, "r: A -> 4 B")
    assert balance_of(network.reactions[0], network).verdict is Verdict.OPEN


def test_the_decimals_of_a_formula_count_as_rounding(build):
    species = {"ammonia": "NH3", "X": "biomass CH1.8O0.5N0.2", "unit": "CH2O", "e": "2 electrons"}
    line = "growth: unit + 0.23 ammonia + 0.1 e -> X"
    assert one_finding(build(species, line)).name is Name.ROUNDING_GAP
    exact = {**species, "X": "biomass C5H9O3N"}
    finding = one_finding(build(exact, "growth: 5 unit + 1.1 ammonia -> X"))
    assert finding.name is Name.UNBALANCED_LINE


def test_phosphate_is_free_unless_the_model_balances_it(build):
    species = {"glucose": "C6H12O6", "G6P": "C6H13O9P", "ATP": "carries HPO3", "E": "energy"}
    line = "kinase: glucose + E -> G6P"
    assert check_balances(build(species, line)) == ()
    finding = one_finding(build(species, line, balance_phosphate=True))
    assert finding.message == "reaction kinase makes 1 P more than it uses"
    assert finding.mend == "1 ATP more on the left closes every balance"
    with_cargo = build(species, "kinase: glucose + ATP -> G6P", balance_phosphate=True)
    assert check_balances(with_cargo) == ()


def test_a_species_that_the_model_frees_is_left_out_of_every_balance(build):
    species = {"cysteine": "C3H7NO2S", "serine": "C3H7NO3", "sulfate": "H2SO4", "E": "8 electrons"}
    line = "r: serine + E -> cysteine"
    assert one_finding(build(species, line)).message == "reaction r makes 1 S more than it uses"
    assert check_balances(build(species, line, free=("sulfate",))) == ()


def test_a_free_species_may_join_carbon_to_nitrogen(build):
    species = {"glutamate": "C5H9NO4", "oxoglutarate": "C5H6O5", "alanine": "C3H7NO2",
               "pyruvate": "C3H4O3"}  # fmt: skip
    whole = "r: pyruvate + glutamate -> alanine + oxoglutarate"
    half = "r: pyruvate -> alanine + oxoglutarate"
    wrong = "r: pyruvate -> alanine"
    assert check_balances(build(species, whole)) == ()
    assert one_finding(build(species, half)).name is Name.UNBALANCED_LINE
    assert check_balances(build(species, half, free=("glutamate",))) == ()
    assert one_finding(build(species, wrong, free=("glutamate",))).name is Name.UNBALANCED_LINE


def test_a_species_without_formula_gives_one_note_for_all_its_lines(build):
    species = {**COMMON, "thing": None}
    network = build(species, "a: pyruvate -> thing", "b: thing -> ethanol")
    finding = one_finding(network)
    assert finding.name is Name.BALANCE_NOT_CHECKED
    assert "a, b" in finding.message
    assert finding.span == network.find_species("thing").span


def test_an_element_without_a_reference_leaves_only_the_electrons_unchecked(build):
    species = {"A": "C2H4Ti", "B": "C2H6Ti", "C": "CH4Ti"}
    network = build(species, "r: A -> B")
    assert one_finding(network).name is Name.BALANCE_NOT_CHECKED
    wrong = build(species, "r: A -> C")
    assert {d.name for d in check_balances(wrong)} == {
        Name.BALANCE_NOT_CHECKED,
        Name.UNBALANCED_LINE,
    }


def test_carried_groups_count_with_their_formula(build):
    species = {"acetylP": "carries C2H2O", "ethanol": "C2H6O", "NADH": "2 electrons"}
    assert check_balances(build(species, "r: acetylP + 2 NADH -> ethanol")) == ()


def test_a_species_on_both_sides_counts_with_the_difference(build):
    network = build(COMMON, "pdh: pyruvate + CO2 -> acetyl-CoA + 2 CO2 + NADH")
    assert check_balances(network) == ()


def test_gaps_of_lines_with_parameters_are_expressions(build):
    a = (Parameter("a", Fraction(1)),)
    network = build(COMMON, "r: glucose -> a pyruvate + 2 NADH", parameters=a)
    line = balance_of(network.reactions[0], network)
    assert line.balances[0].gap == parameter("a").scaled(Fraction(3)) - constant(6)
