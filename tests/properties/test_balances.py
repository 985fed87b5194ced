"""Balances of lines and their ``?``: what holds for every line."""

from __future__ import annotations

from dataclasses import replace
from fractions import Fraction

from hypothesis import assume, given, settings
from hypothesis import strategies as st

from fluxnet.chemistry.formula import composition
from fluxnet.network.balance import check_balances
from fluxnet.network.expression import Expression, constant, parameter
from fluxnet.network.line_balance import Verdict, balance_line, contents_of_network
from fluxnet.network.mend import MendKind, find_mends
from fluxnet.network.model import (
    Basis,
    Cargo,
    CargoKind,
    Compartment,
    Direction,
    Limit,
    Network,
    Parameter,
    Quantity,
    QuantityKind,
    Reaction,
    Relation,
    Role,
    Species,
    Term,
    Variant,
)
from fluxnet.network.unknown import solve_unknowns
from fluxnet.network.variant import apply_variant

NADH = Species("NADH", Role.CARRIER, cargo=Cargo(CargoKind.ELECTRONS, Fraction(2)))
CO2 = Species("CO2", Role.EXCHANGE, composition({"C": 1, "O": 2}))
AMMONIA = Species("ammonia", Role.EXCHANGE, composition({"N": 1, "H": 3}))
A = Parameter("a", Fraction(1, 2))

counts = st.integers(1, 12)
small = st.integers(1, 60).map(lambda k: Fraction(k, 10))
coefficients = st.one_of(st.integers(1, 6).map(Fraction), small)


@st.composite
def compounds(draw, name):
    formula = composition(
        {"C": draw(counts), "H": draw(counts), "O": draw(st.integers(0, 6)),
         "N": draw(st.integers(0, 2))}
    )  # fmt: skip
    return Species(name, Role.INSIDE, formula)


def balance_of(reaction, network):
    return balance_line(reaction, contents_of_network(network, (reaction,)))


def network_of(species, *reactions, parameters=(A,), **fields):
    return Network("", Basis.SPECIFIC, tuple(species), parameters, (Compartment("all"),),
                   tuple(reactions), **fields)  # fmt: skip


def half_unit(value):
    return Fraction(0) if value.denominator == 1 else Fraction(1, 20)


def number(species, value):
    return Term(species, constant(value), half_unit(value), str(value))


@st.composite
def solvable(draw, with_parameter=False):
    """Some compounds on the left; on the right ? CO2, ? ammonia, ? NADH (maybe negative)."""
    species = [draw(compounds(f"c{k}")) for k in range(draw(st.integers(1, 3)))]
    left = []
    for one in species:
        value = draw(coefficients)
        expression = constant(value)
        if with_parameter and draw(st.booleans()):
            expression = expression + parameter("a")
        left.append(Term(one.name, expression, Fraction(0) if with_parameter else half_unit(value)))
    unknown = tuple(Term(n, None, written="?") for n in ("CO2", "ammonia", "NADH"))
    return network_of(
        [*species, CO2, AMMONIA, NADH], Reaction("r", "all", tuple(left), unknown)
    )


def closed(network):
    """The line with its ? filled in by hand: on the right where positive, else on the left."""
    reaction = network.reactions[0]
    by_name = {s.name: s.formula for s in network.species}
    carbon = nitrogen = electrons = constant(0)
    for term in reaction.left:
        f = by_name[term.species]
        c, h, o, n = (f.count(e) for e in "CHON")
        carbon = carbon + term.coefficient.scaled(c)
        nitrogen = nitrogen + term.coefficient.scaled(n)
        electrons = electrons + term.coefficient.scaled(4 * c + h - 2 * o - 3 * n)
    values = {"CO2": carbon, "ammonia": nitrogen, "NADH": electrons.scaled(Fraction(1, 2))}
    left, right = list(reaction.left), []
    for name, value in values.items():
        at = value.exact({"a": Fraction(1, 2)})
        if at > 0:
            right.append(Term(name, value))
        elif at < 0:
            left.append(Term(name, -value))
    return replace(network, reactions=(replace(reaction, left=tuple(left), right=tuple(right)),))


@given(solvable())
def test_a_line_made_to_balance_passes(network):
    assert check_balances(closed(network)) == ()


@given(solvable(), st.booleans(), st.data())
def test_a_changed_coefficient_fails_and_the_mend_closes_the_line(network, rounded, data):
    network = closed(network)
    reaction = network.reactions[0]
    sign, term = data.draw(st.sampled_from(reaction.terms))
    step = data.draw(st.integers(1, 40).map(lambda k: Fraction(k, 4)))
    wrong = replace(term, coefficient=term.coefficient + constant(step), half_unit=Fraction(0))
    changed = reaction_with(reaction, lambda t: wrong if t is term else t)
    if not rounded:
        changed = reaction_with(
            changed, lambda t: t if t is wrong else replace(t, half_unit=Fraction(0))
        )
    line = balance_of(changed, network)
    if line.verdict is not Verdict.OPEN:
        assert rounded and any(t.half_unit for _, t in changed.terms)  # noqa: PT018
        return
    mends = find_mends(line, contents_of_network(network))
    assert any(m.term is wrong and m.sign == sign for m in mends)
    for mend in mends:
        assert balance_of(mended(changed, mend), network).verdict is not Verdict.OPEN
        if mend.exact:
            assert not balance_of(mended(changed, mend), network).open


def reaction_with(reaction, change):
    return replace(
        reaction,
        left=tuple(change(t) for t in reaction.left),
        right=tuple(change(t) for t in reaction.right),
    )


@given(solvable(), st.integers(1, 400))
def test_a_gap_is_rounding_just_where_the_ends_of_the_numbers_enclose_zero(network, gap):
    network = closed(network)
    reaction = network.reactions[0]
    moved = reaction.left[0]
    shifted = replace(moved, coefficient=moved.coefficient + constant(Fraction(gap, 1000)))
    reaction = reaction_with(reaction, lambda t: shifted if t is moved else t)
    line = balance_of(reaction, network)
    for balance in line.balances:
        low = high = Fraction(0)
        for sign, term in reaction.terms:
            amount = sign * balance.functional.of(line.contents[term.species])
            ends = [amount * (term.coefficient.number + s * term.half_unit) for s in (-1, 1)]
            low, high = low + min(ends), high + max(ends)
        assert (balance.verdict is Verdict.OPEN) == (not low <= 0 <= high)


def mended(reaction, mend):
    left = [t for t in reaction.left if t is not mend.term]
    right = [t for t in reaction.right if t is not mend.term]
    if mend.kind is not MendKind.LEAVE_OUT:
        (left if mend.sign < 0 else right).append(Term(mend.species, mend.coefficient))
    return replace(reaction, left=tuple(left), right=tuple(right))


@given(solvable(), st.integers(-3, 3), st.integers(1, 9), st.integers(1, 9))
def test_scaling_a_line_keeps_its_verdict(network, gap, top, bottom):
    network = closed(network)
    reaction = network.reactions[0]
    first = reaction.left[0]
    shifted = replace(first, coefficient=first.coefficient + constant(Fraction(abs(gap), 25)))
    reaction = replace(reaction, left=(shifted, *reaction.left[1:]))
    factor = Fraction(top, bottom)

    def scaled(side):
        return tuple(
            replace(t, coefficient=t.coefficient.scaled(factor), half_unit=t.half_unit * factor)
            for t in side
        )

    other = replace(reaction, left=scaled(reaction.left), right=scaled(reaction.right))
    assert balance_of(other, network).verdict is balance_of(reaction, network).verdict


@given(solvable(with_parameter=True), st.fractions(-5, 5, max_denominator=50))
def test_a_solved_line_balances_for_every_value_of_its_parameters(network, value):
    solved, _ = solve_unknowns(network)
    reaction = solved.reactions[0]
    assume(all(t.coefficient is not None for _, t in reaction.terms))
    assert check_balances(solved) == ()
    plain = [
        tuple(
            replace(t, coefficient=constant(t.coefficient.exact({"a": value})), solved=False)
            for t in side
        )
        for side in (reaction.left, reaction.right)
    ]
    at = replace(reaction, left=plain[0], right=plain[1])
    assert balance_of(at, solved).verdict is Verdict.CLOSES


@given(solvable())
def test_what_is_solved_agrees_with_the_balances_by_hand(network):
    solved, findings = solve_unknowns(network)
    by_hand = closed(network).reactions[0]
    if any(t.species in ("CO2", "ammonia", "NADH") for t in by_hand.left):
        assert findings
        return
    found = {t.species: t.coefficient for _, t in solved.reactions[0].terms}
    for _, term in by_hand.terms:
        assert found[term.species] == term.coefficient


def rates(name):
    return Quantity(QuantityKind.RATE, name, Direction.IN)


variants = st.builds(
    Variant,
    name=st.just(""),
    settings=st.lists(
        st.builds(Parameter, st.just("a"), st.sampled_from([Fraction(1, 2), Fraction(3, 4)])),
        max_size=1,
    ).map(tuple),
    limits=st.lists(
        st.builds(
            Limit, st.sampled_from([rates("CO2"), rates("ammonia")]), st.just(Relation.AT_MOST),
            st.none(), st.sampled_from([Fraction(1), Fraction(2)]),
        ),
        max_size=2, unique_by=lambda m: m.quantity,
    ).map(tuple),
)  # fmt: skip


@settings(max_examples=60)
@given(st.lists(variants, min_size=3, max_size=4), st.data())
def test_products_of_variants_do_not_depend_on_their_order(drawn, data):
    named = []
    for k, one in enumerate(drawn):
        before = [v.name for v in named]
        parents = data.draw(st.lists(st.sampled_from(before), max_size=2, unique=True)) if k else []
        named.append(replace(one, name=f"v{k}", parents=tuple(parents)))
    network = network_of([CO2, AMMONIA, NADH], variants=tuple(named))
    names = data.draw(st.lists(st.sampled_from([v.name for v in named]), min_size=1, max_size=3))
    turned = data.draw(st.permutations(names))
    one, told = apply_variant(network, " * ".join(names))
    other, told_turned = apply_variant(network, " * ".join(turned))

    # but for the name, which is kept as typed
    assert (one and replace(one, variant="")) == (other and replace(other, variant=""))
    assert sorted(d.name.value for d in told) == sorted(d.name.value for d in told_turned)


@given(st.fractions(-20, 20, max_denominator=30), st.fractions(-20, 20, max_denominator=30))
def test_expressions_read_back_from_their_text(p, q):
    expression = parameter("a").scaled(p) + constant(q)
    text = str(expression)
    value = Fraction(7, 3)
    assert eval_text(text, value) == expression.exact({"a": value})
    assert isinstance(expression, Expression)


def eval_text(text, value):
    """The text in the language's own terms: sums of products of numbers and the parameter."""
    total, sign = Fraction(0), 1
    for word in text.split():
        if word in "+-":
            sign = -1 if word == "-" else 1
            continue
        product = Fraction(1)
        for factor in word.split("*"):
            product *= value if factor == "a" else Fraction(factor)
        total, sign = total + sign * product, 1
    return total
