from __future__ import annotations

from dataclasses import replace
from fractions import Fraction

import pytest

from fluxnet.chemistry.reader import read_formula
from fluxnet.ground.errors import MisuseError
from fluxnet.ground.names import Name
from fluxnet.network.model import (
    Direction,
    Drop,
    Limit,
    Parameter,
    Quantity,
    QuantityKind,
    Relation,
    Role,
    Species,
    Term,
    Variant,
)
from fluxnet.network.variant import apply_variant, check_variants

SPECIES = {
    "pyruvate": "C3H4O3",
    "acetyl-CoA": "C2H2O",
    "ethanol": "C2H6O",
    "CO2": "CO2",
    "oxygen": "O2",
    "NADH": "2 electrons",
    "NADPH": "2 electrons",
    "spare": "C2H6O",
}
LINES = (
    "pdh: pyruvate -> acetyl-CoA + CO2 + NADH",
    "adh: acetyl-CoA + 2 NADH -> ethanol",
    "mix: pyruvate -> acetyl-CoA + CO2 + PO NADPH + ? NADH",
)
PO = Parameter("PO", Fraction(1, 2), Fraction(1, 5), Fraction(1, 10), Fraction(1))


def rate(name, direction):
    return Quantity(QuantityKind.RATE, name, direction)


OXYGEN_IN = rate("oxygen", Direction.IN)
CO2_IN, CO2_OUT = rate("CO2", Direction.IN), rate("CO2", Direction.OUT)


def at_most(quantity, high):
    return Limit(quantity, Relation.AT_MOST, None, Fraction(high))


def set_to(value, sd=None, low=None, high=None):
    return Parameter("PO", Fraction(value), *(None if x is None else Fraction(x)
                                              for x in (sd, low, high)))  # fmt: skip


@pytest.fixture
def make(build):
    """The base network with these variants and limits."""

    def with_variants(*variants, limits=(), lines=LINES):
        known = {v.name for v in variants}
        assert len(known) == len(variants)
        return build(
            SPECIES, *lines, parameters=(PO,), variants=variants,
            limits=limits or (at_most(OXYGEN_IN, 8),),
        )  # fmt: skip

    return with_variants


@pytest.fixture
def reaction(build):
    return lambda text: build(SPECIES, text).reactions[0]


def names(network, which):
    return [d.name for d in apply_variant(network, which)[1]]


def applied(network, which):
    changed, findings = apply_variant(network, which)
    assert changed is not None, findings
    return changed


def limits_of(network):
    return {(str(m.quantity), m.low, m.high) for m in network.limits}


def test_base_names_the_unchanged_model(make):
    network = make(Variant("v", settings=(set_to("0.7"),)))
    assert apply_variant(network, "base") == (network, ())
    assert applied(network, "v * base").variant == "v"


def test_a_limit_replaces_the_limit_on_the_same_quantity_and_direction(make):
    network = make(Variant("anaerobic", limits=(at_most(OXYGEN_IN, 0),)))
    assert limits_of(applied(network, "anaerobic")) == {("oxygen in", None, 0)}


def test_a_limit_in_the_other_direction_joins_the_one_that_is_there(make):
    network = make(Variant("v", limits=(at_most(CO2_OUT, 3),)), limits=(at_most(CO2_IN, 1),))
    assert limits_of(applied(network, "v")) == {("CO2 in", None, 1), ("CO2 out", None, 3)}


def test_a_limit_in_one_direction_replaces_that_part_of_a_two_way_limit(make):
    both = Limit(CO2_OUT, Relation.BETWEEN, Fraction(-1), Fraction(5))
    network = make(Variant("v", limits=(at_most(CO2_IN, 0),)), limits=(both,))
    assert limits_of(applied(network, "v")) == {("CO2 in", None, 0), ("CO2 out", None, 5)}
    other = make(Variant("v", limits=(at_most(CO2_OUT, 2),)), limits=(both,))
    assert limits_of(applied(other, "v")) == {("CO2 in", None, 1), ("CO2 out", None, 2)}


def test_a_two_way_limit_replaces_both_directions(make):
    both = Limit(CO2_OUT, Relation.BETWEEN, Fraction(-1), Fraction(5))
    network = make(Variant("v", limits=(both,)), limits=(at_most(CO2_IN, 9), at_most(CO2_OUT, 9)))
    assert limits_of(applied(network, "v")) == {("CO2 out", -1, 5)}


def test_set_keeps_sd_and_range_unless_they_are_given(make):
    network = make(
        Variant("bare", settings=(set_to("0.7"),)),
        Variant("spread", settings=(set_to("0.7", sd="0.05"),)),
        Variant("ranged", settings=(set_to("0.3", low="0.2", high="0.4"),)),
    )
    assert applied(network, "bare").parameters == (
        replace(PO, value=Fraction(7, 10), span=applied(network, "bare").parameters[0].span),
    )
    assert applied(network, "spread").parameters[0].sd == Fraction(1, 20)
    assert applied(network, "spread").parameters[0].high == Fraction(1)
    ranged = applied(network, "ranged").parameters[0]
    assert (ranged.sd, ranged.low, ranged.high) == (PO.sd, Fraction(1, 5), Fraction(2, 5))


def test_a_value_outside_the_range_that_is_kept_is_an_error(make):
    assert names(make(Variant("v", settings=(set_to("3"),))), "v") == [Name.OUTSIDE_RANGE]


def test_drop_takes_a_reaction_with_the_limits_on_its_flux(make):
    limit = at_most(Quantity(QuantityKind.FLUX, "adh"), 5)
    network = make(Variant("v", drops=(Drop("adh"),)), limits=(limit,))
    changed = applied(network, "v")
    assert [r.name for r in changed.reactions] == ["pdh", "mix"]
    assert changed.limits == ()


def test_a_ratio_with_a_dropped_reaction_has_to_be_dropped_too(make):
    ratio = Quantity(
        QuantityKind.RATIO,
        numerator=Quantity(QuantityKind.FLUX, "adh"),
        denominator=Quantity(QuantityKind.FLUX, "pdh"),
    )
    limits = (at_most(ratio, 5),)
    network = make(
        Variant("v", drops=(Drop("adh"),)),
        Variant("w", drops=(Drop("adh"), Drop(quantity=ratio))),
        limits=limits,
    )
    assert names(network, "v") == [Name.STILL_USED]
    assert applied(network, "w").limits == ()


def test_drop_limit_takes_the_limit_of_a_quantity(make):
    network = make(Variant("v", drops=(Drop(quantity=OXYGEN_IN),)))
    assert applied(network, "v").limits == ()


def test_a_species_can_be_dropped_only_where_nothing_uses_it(make):
    network = make(
        Variant("v", drops=(Drop("spare"),)),
        Variant("w", drops=(Drop("ethanol"),)),
        Variant("x", drops=(Drop("ethanol"), Drop("adh"))),
    )
    assert applied(network, "v").find_species("spare") is None
    assert names(network, "w") == [Name.STILL_USED]
    assert applied(network, "x").find_species("ethanol") is None


def test_new_species_and_reactions_come_in_and_are_solved_and_checked(make, reaction):
    acetate = Species("acetate", Role.PRODUCT, read_formula("C2H4O2"))
    pta = replace(
        reaction("pta: acetyl-CoA -> spare"), right=(Term("acetate", None, written="?"),)
    )
    network = make(Variant("v", species=(acetate,), reactions=(pta,)))
    changed = applied(network, "v")
    assert changed.find_reaction("pta").right[0].coefficient.number == 1
    wrong = make(Variant("v", reactions=(reaction("th: NADH -> 2 NADPH"),)))
    assert apply_variant(wrong, "v")[0] is None
    assert names(wrong, "v") == [Name.UNBALANCED_LINE]


def test_a_changed_parameter_has_the_signs_of_its_lines_looked_at_again(make):
    # mix: NADH is 1 - PO, negative where PO passes 1
    network = make(Variant("v", settings=(set_to("2", low="0", high="3"),)))
    assert names(network, "v") == [Name.COEFFICIENT_NEGATIVE]


def test_a_reaction_is_replaced_by_dropping_it_and_adding_it_anew(make, reaction):
    new = reaction("adh: acetyl-CoA + 2 NADPH -> ethanol")
    network = make(
        Variant("v", drops=(Drop("adh"),), reactions=(new,)), Variant("w", reactions=(new,))
    )
    changed = applied(network, "v")
    assert [r.name for r in changed.reactions] == ["pdh", "adh", "mix"]
    assert changed.find_reaction("adh").left[1].species == "NADPH"
    assert names(network, "w") == [Name.DECLARED_TWICE]


def test_a_child_has_its_parents_changes_and_overrides_them(make):
    network = make(
        Variant("parent", settings=(set_to("0.7", sd="0.05"),), limits=(at_most(OXYGEN_IN, 0),)),
        Variant("child", parents=("parent",), settings=(set_to("0.9"),)),
    )
    changed = applied(network, "child")
    assert limits_of(changed) == {("oxygen in", None, 0)}
    assert changed.parameters[0].value == Fraction(9, 10)
    assert changed.parameters[0].sd == Fraction(1, 20)


def test_a_child_can_drop_what_its_parent_added_and_add_what_it_dropped(make, reaction):
    th = reaction("th: NADH -> NADPH")
    adh = reaction("adh: acetyl-CoA + 2 NADPH -> ethanol")
    network = make(
        Variant("parent", reactions=(th,), drops=(Drop("adh"),)),
        Variant("child", parents=("parent",), reactions=(adh,), drops=(Drop("th"),)),
    )
    changed = applied(network, "child")
    assert [r.name for r in changed.reactions] == ["pdh", "adh", "mix"]


def test_two_different_settings_of_one_thing_clash_and_equal_ones_do_not(make):
    network = make(
        Variant("a", settings=(set_to("0.7"),)),
        Variant("b", settings=(set_to("0.8"),)),
        Variant("c", settings=(set_to("0.7"),)),
        Variant("d", settings=(set_to("0.7", sd="0.01"),)),
        Variant("e", limits=(at_most(OXYGEN_IN, 1),)),
        Variant("f", drops=(Drop(quantity=OXYGEN_IN),)),
    )
    assert names(network, "a * b") == [Name.VARIANT_CLASH]
    assert names(network, "a * c") == []
    assert names(network, "a * d") == [Name.VARIANT_CLASH]
    assert names(network, "e * f") == [Name.VARIANT_CLASH]
    assert names(network, "a * e") == []


def test_a_shared_ancestor_counts_once(make):
    network = make(
        Variant("root", settings=(set_to("0.7"),)),
        Variant("left", parents=("root",), settings=(set_to("0.8"),)),
        Variant("right", parents=("root",), limits=(at_most(OXYGEN_IN, 1),)),
    )
    changed = applied(network, "left * right")
    assert changed.parameters[0].value == Fraction(4, 5)
    assert limits_of(changed) == {("oxygen in", None, 1)}


def test_a_clash_of_parents_is_settled_by_the_child(make):
    network = make(
        Variant("a", settings=(set_to("0.7"),)),
        Variant("b", settings=(set_to("0.8"),)),
        Variant("unsettled", parents=("a", "b")),
        Variant("settled", parents=("a", "b"), settings=(set_to("0.9"),)),
    )
    assert names(network, "unsettled") == [Name.VARIANT_CLASH]
    assert applied(network, "settled").parameters[0].value == Fraction(9, 10)


def test_a_product_is_named_in_the_order_typed_and_means_the_same_in_any(make):
    network = make(
        Variant("a", settings=(set_to("0.7"),)), Variant("b", limits=(at_most(OXYGEN_IN, 1),))
    )
    assert applied(network, "b*a") == replace(applied(network, " a * b * a"), variant="b * a")
    assert applied(network, "a * b * a").variant == "a * b"


def test_an_unknown_variant_gets_the_nearest_name(make):
    network = make(Variant("anaerobic", limits=(at_most(OXYGEN_IN, 0),)))
    changed, (finding,) = apply_variant(network, "anerobic")
    assert changed is None
    assert finding.name is Name.UNKNOWN_VARIANT
    assert finding.mend == "write anaerobic"


def test_an_unknown_parent_is_told_at_the_variant_that_names_it(make):
    network = make(Variant("v", parents=("nowhere",), settings=(set_to("0.7"),)))
    assert names(network, "v") == [Name.UNKNOWN_VARIANT]


def test_a_circle_of_variants_is_told_once_with_its_members(make):
    network = make(
        Variant("a", parents=("c",)),
        Variant("b", parents=("a",)),
        Variant("c", parents=("b",)),
        Variant("d", settings=(set_to("0.7"),)),
    )
    (finding,) = check_variants(network)
    assert finding.name is Name.VARIANT_CIRCLE
    assert finding.message.endswith("a from c from b from a")
    assert names(network, "d") == []


def test_what_a_variant_changes_must_be_there(make):
    network = make(
        Variant("a", settings=(Parameter("P0", Fraction(1)),)),
        Variant("b", drops=(Drop("adhh"),)),
        Variant("c", drops=(Drop(quantity=CO2_IN),)),
    )
    for which in "abc":
        assert names(network, which) == [Name.VARIANT_TARGET]
    assert apply_variant(network, "b")[1][0].mend == "write adh"


def test_a_variant_that_changes_nothing_is_a_warning(make):
    network = make(
        Variant("nothing-new", limits=(at_most(OXYGEN_IN, 8),), settings=(set_to("0.5"),))
    )
    assert names(network, "nothing-new") == [Name.VARIANT_EMPTY]
    assert applied(network, "nothing-new").variant == "nothing-new"


def test_a_variant_of_a_variant_is_a_misuse(make):
    network = make(Variant("a", settings=(set_to("0.7"),)))
    with pytest.raises(MisuseError):
        apply_variant(applied(network, "a"), "a")


def test_all_faults_of_all_variants_are_told(make):
    network = make(
        Variant("a", drops=(Drop("adhh"),)),
        Variant("b", settings=(set_to("7"),)),
        Variant("c", parents=("a",), settings=(set_to("0.7"),)),
    )
    found = [d.name for d in check_variants(network)]
    assert found == [Name.VARIANT_TARGET, Name.OUTSIDE_RANGE]
