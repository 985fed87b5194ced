"""What variants can make of a substrate, against pathways worked out by hand."""

from __future__ import annotations

from fractions import Fraction
from math import erf, sqrt

import pytest

from fluxnet.ground.errors import InputError, MisuseError
from fluxnet.network.model import Network
from fluxnet.network.variant import apply_variant
from fluxnet.reading.model import read_model_text
from fluxnet.studies.compare import compare
from fluxnet.studies.compare_modes import Mode
from fluxnet.studies.compare_result import Ability, Comparison, Limiting
from fluxnet.studies.compare_words import holding_words
from fluxnet.studies.solve import solve_network
from tests.studies.pathways import ACETATE, CITRATE, ETHANOL, GLYCEROL, LACTATE


def read(text: str) -> Network:
    reading = read_model_text(text)
    assert reading.network is not None, reading.diagnostics
    return reading.network


def best(text: str, product: str, name: str = "base") -> Ability:
    found = compare(read(text), product, "glucose").find(name)
    assert found is not None
    return found


def gains(ability: Ability) -> dict[str, float | None]:
    assert ability.facts is not None
    return {h.name: h.gain for h in ability.facts.holding}


# --- five pathways by hand -------------------------------------------------------------


def test_ethanol_takes_all_electrons_and_leaves_one_atp_each() -> None:
    ability = best(ETHANOL, "ethanol")

    assert ability.final.moles == 2
    assert ability.final.share == 1
    assert ability.final.carbon == Fraction(2, 3)
    assert ability.facts is not None
    assert holding_words(ability.facts.holding) == "electrons"
    assert ability.facts.carbon_dioxide == pytest.approx(1)
    assert dict(ability.facts.surplus) == {"ATP": pytest.approx(1)}
    assert ability.facts.base == 0


def test_lactate_is_at_both_ceilings_and_needs_a_base_each() -> None:
    ability = best(LACTATE, "lactate")

    assert ability.final.moles == 2
    assert ability.final.mass == pytest.approx(1.0)
    assert ability.facts is not None
    assert {h.kind for h in ability.facts.holding} == {Limiting.ELECTRONS, Limiting.CARBON}
    assert ability.facts.base == pytest.approx(1)
    assert ability.facts.oxygen == 0


def test_acetate_is_held_back_by_carbon_and_burns_one_oxygen_each() -> None:
    ability = best(ACETATE, "acetate")

    assert ability.final.moles == 2
    assert ability.final.share == Fraction(2, 3)
    assert ability.facts is not None
    assert holding_words(ability.facts.holding) == "carbon"
    assert ability.facts.oxygen == pytest.approx(1)
    # glycolysis 2, pox 2, oxphos 4
    assert dict(ability.facts.surplus) == {"ATP": pytest.approx(4)}


def test_a_reduced_product_is_held_back_by_energy_and_electrons_alike() -> None:
    ability = best(GLYCEROL, "glycerol")

    assert ability.final.moles == Fraction(8, 5)
    assert ability.ceiling == Fraction(12, 7)
    assert gains(ability) == {"ATP": pytest.approx(0.1), "NADH": pytest.approx(0.1)}
    assert ability.facts is not None
    assert holding_words(ability.facts.holding) == "ATP and electrons (NADH)"
    assert ability.facts.oxygen == pytest.approx(1 / 4)
    assert dict(ability.facts.surplus) == {"ATP": 0}


def test_an_oxidised_product_is_held_back_by_carbon_and_burns_its_electrons() -> None:
    ability = best(CITRATE, "citrate")

    assert ability.final.moles == 1
    assert ability.final.share == Fraction(3, 4)
    assert ability.facts is not None
    assert holding_words(ability.facts.holding) == "carbon"
    assert ability.facts.oxygen == pytest.approx(1.5)
    assert dict(ability.facts.surplus) == {"ATP": pytest.approx(4)}
    assert {d.name: d.electrons for d in ability.facts.destinations} == {
        "citrate": pytest.approx(0.75),
        "oxygen": pytest.approx(0.25),
    }


def test_without_air_its_electrons_have_nowhere_to_go() -> None:
    found = compare(read(CITRATE), "citrate", "glucose")
    ability = found.find("anaerobic")
    assert ability is not None

    assert ability.final.moles is None
    assert ability.reason == (
        "no glucose can be used; cs, which makes it, cannot run: `limit oxygen <= 0` forbids it"
    )
    assert found.is_sound


# --- order, ties, what is the best of all ---------------------------------------------------


def test_exactly_equal_yields_share_a_rank() -> None:
    text = LACTATE + "variant slow\n    limit oxygen <= 3\nvariant none\n    drop ldh\n"
    found = compare(read(text), "lactate", "glucose", uptake=10)

    assert [(a.name, a.rank, a.tied) for a in found.abilities] == [
        ("base", 1, ("slow",)), ("slow", 1, ("base",)), ("none", 3, ()),
    ]  # fmt: skip


def test_less_oxygen_is_a_reason_to_stay_in_the_choice() -> None:
    text = GLYCEROL + "variant closed\n    limit oxygen <= 0\n    drop burn\n"
    text += "    add to c\n        acid : 2 pyruvate -> lactate + acetate + CO2\n"
    text += "variant worse from closed\n    drop reduce\n"
    text = text.replace("product    glycerol", "product    glycerol, lactate, acetate")
    found = compare(read(text), "glycerol", "glucose")
    marks = {a.name: (str(a.final.moles), a.is_best_of_all) for a in found.abilities}

    assert marks["base"] == ("8/5", True)
    assert marks["closed"] == ("1", True)
    assert marks["worse"] == ("None", False)


def test_the_second_is_told_with_where_its_electrons_go() -> None:
    text = LACTATE.replace("product    lactate", "product    lactate, ethanol")
    text += "variant leaky\n    drop ldh\n    add to c\n"
    text += "        mixed : 4 pyruvate + 4 NADH -> 3 lactate + ethanol + CO2\n"
    found = compare(read(text), "lactate", "glucose")

    assert found.second.startswith("leaky is second, 0.5 mol/mol less than base: ")
    assert "25 % more of the electrons of glucose end in ethanol" in found.second


def test_substrates_are_ranked_by_carbon() -> None:
    text = ETHANOL.replace("glucose, oxygen", "glucose, xylose, oxygen")
    text = text.replace("compartment c\n", "compartment c\n    xyl : 6 xylose -> 10 pyruvate"
                                           " + 10 NADH + 6 ATP\n")  # fmt: skip
    found = compare(read(text), "ethanol", "glucose | xylose", ["base"])

    assert [(a.name, str(a.final.moles), a.rank) for a in found.abilities] == [
        ("glucose: base", "2", 1), ("xylose: base", "5/3", 1),
    ]  # fmt: skip


# --- modes and limits -------------------------------------------------------------------


def test_maintenance_takes_what_its_atp_costs() -> None:
    # at 10 glucose an upkeep of 4 ATP costs 1/10 glycerol an ATP (its price): 16 - 0.4
    text = GLYCEROL + "limit glucose <= 10\nlimit upkeep >= 4\n"
    ability = best(text, "glycerol")

    assert {y.mode: y.moles for y in ability.yields} == {
        Mode.ALONE: Fraction(8, 5), Mode.KEPT: Fraction(8, 5) - Fraction(4, 100),
    }  # fmt: skip


def test_a_measured_maintenance_is_held_at_least_at_its_value() -> None:
    text = GLYCEROL + "limit glucose <= 10\nlimit upkeep = 4 ± 1\n"

    assert best(text, "glycerol").final.moles == Fraction(39, 25)


def test_without_an_uptake_absolute_limits_take_no_part_and_are_told() -> None:
    ability = best(GLYCEROL + "limit upkeep >= 4\nlimit oxygen <= 1\n", "glycerol")

    assert ability.final.moles == Fraction(8, 5)
    assert ability.left_out == ("limit upkeep >= 4", "limit oxygen <= 1")


def test_a_limit_on_oxygen_holds_at_the_uptake_and_is_named() -> None:
    # 1 oxygen for 10 glucose in place of 4: what is not respired becomes glycerol no more
    text = GLYCEROL + "limit glucose <= 10\nlimit oxygen <= 1\n"
    text = text.replace("product    glycerol", "product    glycerol, lactate")
    text = text.replace("compartment c\n", "compartment c\n    ldh : pyruvate + NADH -> lactate\n")
    ability = best(text, "glycerol")
    assert ability.facts is not None
    assert ability.final.moles is not None

    assert ability.final.moles < Fraction(8, 5)
    assert "oxygen" in holding_words(ability.facts.holding)
    assert gains(ability)["limit oxygen <= 1"] == pytest.approx(
        10 * float(compare(read(text.replace("<= 1\n", "<= 1.1\n")), "glycerol", "glucose")
                   .abilities[0].final.moles or 0) * 10
        - 100 * float(ability.final.moles)
    )  # fmt: skip


def test_a_reserved_ratio_takes_its_share_of_the_substrate() -> None:
    text = LACTATE.replace("product    lactate", "product    lactate, ethanol")
    way = "compartment c\n    f : pyruvate + NADH -> ethanol + CO2\n"
    text = text.replace("compartment c\n", way)
    found = compare(read(text), "lactate", "glucose", reserve="ethanol / glucose = 0.3")

    assert found.abilities[0].final.moles == Fraction(17, 10)
    assert found.modes == (Mode.ALONE, Mode.RESERVED)


def test_an_uptake_that_cannot_be_used_up_is_cut() -> None:
    text = CITRATE + "limit glucose <= 10\nlimit oxygen <= 3\n"
    ability = best(text, "citrate")

    # 1.5 oxygen a citrate: two of ten glucose
    assert ability.final.uptake == 2
    assert ability.final.is_cut
    assert ability.final.moles == 1


GROWING = """\
substrate  glucose, ammonia
product    ethanol, glycerol
exchange   CO2
biomass    X  CH1.8O0.5N0.2
carrier    ATP   carries energy
carrier    NADH  carries 2 electrons
inside     pyruvate
compartment c
    glycolysis : glucose -> 2 pyruvate + 2 ATP + 2 NADH
    ferment    : pyruvate + NADH -> ethanol + CO2
    reduce     : 0.5 glucose + NADH + ATP -> glycerol
    growth     : ? glucose + ? ammonia + 2 ATP -> X + 0.1 CO2 + ? NADH
"""


def test_growth_is_told_to_be_needed_and_to_bring_product_with_it() -> None:
    # the ATP of glycolysis has nowhere to go but into growth, and growth needs it
    ability = best(GROWING, "ethanol")

    assert ability.without_growth == 0
    assert ability.most_growth is not None
    assert ability.forced is not None
    assert ability.forced == pytest.approx(float(ability.final.moles or 0))


def test_growth_is_told_not_to_be_needed_where_atp_can_be_spent() -> None:
    ability = best(GROWING + "    upkeep : ATP -> nothing\n", "ethanol")

    assert ability.without_growth == pytest.approx(2)
    assert ability.final.moles == 2


# --- other bases, other roles ---------------------------------------------------------------


def test_rates_per_carbon_give_the_same_yields_and_prices() -> None:
    text = GLYCEROL + "limit glucose <= 12\nlimit upkeep >= 4\n"
    per_mole = best(text.replace("<= 12", "<= 2"), "glycerol")
    per_carbon = best("basis C-mol/C-mol/h\n" + text, "glycerol")

    assert per_carbon.final.moles == per_mole.final.moles
    assert per_carbon.facts is not None
    assert per_mole.facts is not None
    assert gains(per_carbon) == pytest.approx(gains(per_mole))
    assert per_carbon.facts.oxygen == pytest.approx(per_mole.facts.oxygen)


def test_a_gas_that_goes_either_way_can_be_the_substrate() -> None:
    text = """\
substrate  hydrogen
product    acetate
exchange   CO2
carrier    ATP   carries energy
carrier    NADH  carries 2 electrons
compartment c
    hyd : hydrogen -> NADH
    wl  : 2 CO2 + 4 NADH -> acetate
"""
    found = compare(read(text), "acetate", "CO2", beside=["hydrogen"])

    assert found.abilities[0].final.moles == Fraction(1, 2)
    assert found.abilities[0].ceiling is None
    assert compare(read(text), "acetate", "hydrogen").abilities[0].final.moles == Fraction(1, 4)


def test_biomass_can_be_the_product() -> None:
    ability = best(GROWING, "X")

    assert ability.final.moles is not None
    assert ability.most_growth == pytest.approx(float(ability.final.moles))
    assert ability.without_growth == 0


def test_one_name_for_two_species_makes_two_programmes_and_one_ranking() -> None:
    text = ETHANOL
    for name, formula, line in (
        ("acid", "C3H6O3", "pyruvate + NADH -> aroma"),
        ("alcohol", "C2H6O", "pyruvate + NADH -> aroma + CO2"),
    ):
        text += f"variant {name}\n    product aroma {formula}\n    add to c\n        r : {line}\n"
    found = compare(read(text), "aroma", "glucose", ["alcohol|acid"])

    assert [(a.name, a.final.moles, a.final.carbon) for a in found.abilities] == [
        ("acid", 2, 1), ("alcohol", 2, Fraction(2, 3)),
    ]  # fmt: skip


@pytest.mark.parametrize("product", ["ethanol", "succinate", "acetate", "2,3-butanediol"])
def test_every_variant_reaches_what_a_solve_of_it_finds(product: str) -> None:
    from tests.conftest import MODELS

    text = (MODELS / "mixed-acid.flux").read_text(encoding="utf-8")
    text = text.replace("limit      upkeep = 3 ± 1.5", "limit glucose = 1")
    network = read(text)
    across = ["base|anaerobic", "base|glucokinase", "base|diol"]
    for ability in compare(network, product, "glucose", across, draws=0).abilities:
        changed, _ = apply_variant(network, ability.variant)
        assert changed is not None
        (run,) = solve_network(changed, maximise=product).runs

        assert run.optimum == pytest.approx(float(ability.final.moles or 0), abs=1e-9)


# --- uncertain numbers ------------------------------------------------------------------

TWO_WAYS = """\
substrate  glucose, oxygen
product    glycogen  C6H10O5
exchange   CO2
carrier    ATP   carries energy
carrier    NADH  carries 2 electrons
parameter  A = 2.0 ± 0.1
parameter  B = 2.1 ± 0.2
compartment c
    burn  : glucose -> 6 CO2 + 12 NADH
    store : glucose + 12 ATP -> glycogen
variant first
    add to c
        one : NADH + 0.5 oxygen -> A ATP
variant second
    add to c
        two : NADH + 0.5 oxygen -> B ATP
"""


def test_the_odds_are_those_of_two_normal_numbers() -> None:
    # x of a glucose are stored, 12 x = 12 P (1 - x): the yield P / (1 + P) rises with P, so that
    # the second is better where B > A: both are normal, and so is their difference
    found = compare(read(TWO_WAYS), "glycogen", "glucose", ["first|second"], draws=2000)
    (odds,) = found.odds
    chance = 0.5 * (1 + erf(0.1 / sqrt(0.1**2 + 0.2**2) / sqrt(2)))

    assert (odds.better, odds.worse) == ("second", "first")
    assert odds.probability == pytest.approx(chance, abs=4 * sqrt(0.25 / 2000))


def test_the_interval_is_that_of_the_number_it_rests_on() -> None:
    found = compare(read(TWO_WAYS), "glycogen", "glucose", ["first"], draws=2000)
    final = found.abilities[0].final
    assert final.low is not None
    assert final.high is not None
    ends = [p / (1 + p) for p in (2.0 - 1.96 * 0.1, 2.0 + 1.96 * 0.1)]

    assert [final.low, final.high] == pytest.approx(ends, abs=2e-3)
    assert found.uncertain == ("A",)


def test_one_number_in_two_variants_is_drawn_once_for_both() -> None:
    # both rest on A alone: the one that needs less ATP is better in every draw
    text = TWO_WAYS.replace("-> B ATP", "-> A ATP")
    text += "        three : glucose + 11 ATP -> glycogen\n"
    found = compare(read(text), "glycogen", "glucose", ["first|second"], draws=50)

    assert found.odds[0].probability == 1


def test_one_combination_typed_in_two_orders_is_compared_once() -> None:
    text = f"{TWO_WAYS}variant cold\n    limit glucose <= 1\n"
    asked = ["first * cold | cold * first | cold * second"]
    found = compare(read(text), "glycogen", "glucose", asked)

    assert {a.variant for a in found.abilities} == {"first * cold", "cold * second"}


def test_an_interruption_keeps_the_draws_that_are_done() -> None:
    def stop(what: str, done: int, total: int) -> None:
        if what == "draws" and done == 30:
            raise KeyboardInterrupt

    found = compare(read(TWO_WAYS), "glycogen", "glucose", ["first|second"], progress=stop)
    whole = compare(read(TWO_WAYS), "glycogen", "glucose", ["first|second"], draws=30)

    assert found.draws == 30
    assert found.notes == ("interrupted: the intervals are of 30 draws, not 200",)
    assert whole.draws == 30
    assert found.abilities[0].final.low is not None


# --- bad input --------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("product", "substrate", "words"),
    [
        ("glucose", "glucose", "product and substrate are both glucose"),
        ("ethanl", "glucose", "no species ethanl; near to it are ethanol"),
        ("pyruvate", "glucose", "stays inside the cell"),
        ("ethanol", "ethanol ", "both ethanol"),
        ("oxygen", "glucose", "cannot be released"),
        ("CO2", "ethanol", "cannot be taken up"),
    ],
)
def test_a_pair_that_makes_no_question_is_refused(
    product: str, substrate: str, words: str
) -> None:
    with pytest.raises(MisuseError, match=words):
        compare(read(ETHANOL), product, substrate)


def test_an_unknown_variant_is_told() -> None:
    with pytest.raises(InputError, match="no variant anaerobc"):
        compare(read(ACETATE), "acetate", "glucose", ["base|anaerobc"])


def test_clashing_variants_are_skipped_and_told() -> None:
    text = ETHANOL + "variant a\n    limit oxygen <= 1\nvariant b\n    limit oxygen <= 2\n"
    found = compare(read(text), "ethanol", "glucose", ["a|base", "b|base"])

    assert [a.variant for a in found.abilities] == ["a", "b", "base"]
    assert [s.variant for s in found.skipped] == ["a * b"]
    assert "set limit oxygen in differently" in found.skipped[0].words


def test_a_variant_that_changes_nothing_is_told() -> None:
    text = ETHANOL + "limit oxygen <= 1\nvariant same\n    limit oxygen <= 1\n"
    found = compare(read(text), "ethanol", "glucose", ["base|same"])

    assert "variant same changes nothing" in found.notes[0]


def test_a_product_that_nothing_makes_is_told_with_its_dead_end() -> None:
    text = ETHANOL.replace("product    ethanol", "product    ethanol, lactate\ninside  lost C3H4O3")
    text = text.replace("compartment c\n", "compartment c\n    ldh : lost + NADH -> lactate\n")
    found = compare(read(text), "lactate", "glucose")

    assert not found.is_sound
    assert found.words == (
        "No variant compared can make lactate: base: ldh, which makes it, cannot run: lost is a "
        "dead end."
    )


def test_an_aim_without_an_end_names_the_missing_limit() -> None:
    text = ETHANOL.replace("exchange   CO2", "exchange   CO2, hydrogen")
    text = text.replace("compartment c\n",
                        "compartment c\n    hyd : hydrogen -> NADH\n"
                        "    fix : 2 CO2 + 6 NADH -> ethanol\n")  # fmt: skip
    network = read(text)
    (ability,) = compare(network, "ethanol", "glucose", beside=["hydrogen"]).abilities
    alone = compare(network, "ethanol", "glucose")

    assert ability.final.moles is None
    assert ability.reason.startswith("there is no end to it: nothing limits CO2 in")
    # what could be taken up beside the substrate is not, and that is told
    assert alone.abilities[0].final.moles == 2
    assert "not taken up beside the substrate: hydrogen" in alone.notes[0]


@pytest.mark.parametrize("text", ["mu", "mu < 3", "X / glucose / oxygen = 1", "nobody = 1"])
def test_a_reserve_that_says_nothing_is_refused(text: str) -> None:
    with pytest.raises(MisuseError):
        compare(read(GROWING), "ethanol", "glucose", reserve=text)


def test_a_reserved_rate_without_an_uptake_is_refused() -> None:
    with pytest.raises(MisuseError, match="needs the uptake of glucose"):
        compare(read(GROWING), "ethanol", "glucose", reserve="mu = 0.05")


def test_a_variant_that_closes_the_substrate_is_skipped_and_told() -> None:
    text = ETHANOL + "variant starved\n    limit glucose <= 0\n"
    found = compare(read(text), "ethanol", "glucose")

    assert [a.name for a in found.abilities] == ["base"]
    assert found.skipped[0].words == "`limit glucose <= 0` closes the substrate"


# --- where the yield goes ---------------------------------------------------------------


def stairs(text: str, product: str, **options: object) -> Comparison:
    return compare(read(text), product, "glucose", ["base"], staircase=True, **options)  # type: ignore[arg-type]


def test_the_staircase_adds_up_exactly_from_the_ceiling_to_what_is_reached() -> None:
    text = GLYCEROL + "limit glucose <= 10\nlimit upkeep >= 4\n"
    ability = stairs(text, "glycerol", measured="1.5").abilities[0]
    assert ability.staircase is not None
    steps = {s.kind.value: s.lost for s in ability.staircase.steps}

    assert steps == {
        "what may be exchanged": 0,
        "the reactions at hand": 0,
        "energy of the pathway": Fraction(12, 7) - Fraction(8, 5),
        "maintenance": Fraction(4, 100),
        "not explained": Fraction(39, 25) - Fraction(3, 2),
    }
    assert ability.staircase.ceiling - sum(steps.values()) == Fraction(3, 2)
    assert ability.staircase.adds_up
    assert sum(s.electrons for s in ability.staircase.steps) == 24 - 14 * Fraction(3, 2)


def test_the_staircase_has_a_step_for_the_lack_of_oxygen() -> None:
    found = compare(read(CITRATE), "citrate", "glucose", ["anaerobic"], staircase=["anaerobic"])
    assert found.abilities[0].staircase is not None
    steps = {s.kind.value: s.lost for s in found.abilities[0].staircase.steps}

    assert steps["the reactions at hand"] == Fraction(4, 3) - 1
    assert steps["oxygen"] == 1


def test_growth_and_by_products_are_steps_of_their_own() -> None:
    text = GROWING + "    upkeep : ATP -> nothing\n"
    found = stairs(text, "ethanol", reserve=["X / glucose = 0.3", "glycerol / glucose = 0.02"])
    assert found.abilities[0].staircase is not None
    kinds = [s.kind.value for s in found.abilities[0].staircase.steps]

    assert kinds[-2:] == ["growth", "by-products"]
    assert found.abilities[0].staircase.reached == found.abilities[0].final.moles
