"""Routes of whole models: what they make, the best of them, what keeps to roles and limits."""

from __future__ import annotations

from dataclasses import replace
from fractions import Fraction
from pathlib import Path

import pytest

from fluxnet.exact.linear import kernel
from fluxnet.ground.errors import MisuseError
from fluxnet.ground.resources import resource_folder
from fluxnet.matrices.stoichiometry import parameter_values, stoichiometry
from fluxnet.modes.enumerate import Ending
from fluxnet.network.model import Network
from fluxnet.network.variant import apply_variant
from fluxnet.reading.model import read_model, read_model_text
from fluxnet.studies.routes import find_routes
from fluxnet.studies.routes_result import Routes
from fluxnet.studies.routes_system import Openings, route_system

SMALL = """
substrate  glucose
substrate  xylose
product    ethanol, lactate, acetate
exchange   CO2
carrier    ATP, NADH
inside     pyruvate
inside     acCoA  C2H2O

compartment catabolism
    glycolysis : glucose -> 2 pyruvate + 2 ATP + 2 NADH
    xyl        : xylose + 0.3333333333333333 CO2 -> 1.7777777777777777 pyruvate
    pdh        : pyruvate -> acCoA + CO2 + NADH
    adh        : acCoA + 2 NADH -> ethanol
    ldh        : pyruvate + NADH <-> lactate
    ack        : acCoA -> acetate + ATP
compartment maintenance
    upkeep     : ATP -> nothing
"""


def network(text: str) -> Network:
    reading = read_model_text(text)
    assert reading.network is not None, reading.diagnostics
    return reading.network


def small(more: str = "") -> Network:
    lines = [line for line in SMALL.splitlines() if "xyl" not in line]
    return network("\n".join(lines) + "\n" + more)


def model(name: str) -> Network:
    found = read_model(resource_folder("models") / f"{name}.flux").network
    assert found is not None
    return found


def yields(routes: Routes) -> list[Fraction]:
    """The yields of all routes that make the product, the largest first."""
    found = [g.product_yield for g in routes.groups for _ in g.members if g.product_yield]
    return sorted(found, reverse=True)


def test_the_net_equations_and_what_atp_there_is_to_spare() -> None:
    routes = find_routes(small(), substrate="glucose", product="ethanol")
    found = {group.terms: group for group in routes.groups}
    ethanol = found[("glucose", -1), ("ethanol", 2), ("CO2", 2)]

    assert set(found) == {
        (("glucose", -1), ("ethanol", 2), ("CO2", 2)),
        (("glucose", -1), ("lactate", 2)),
    }
    assert ethanol.product_yield == 2
    assert [(e.carrier, e.low, e.high) for e in ethanol.energy] == [("ATP", 2.0, 2.0)]


def test_a_product_is_not_taken_up_even_where_a_reaction_could() -> None:
    for group in find_routes(small()).groups:
        assert all(amount > 0 for name, amount in group.terms if name == "lactate")


def test_a_drained_carrier_leaves_and_what_only_spends_it_stands_still() -> None:
    routes = find_routes(small(), drain=("ATP",))
    names = {name for g in routes.groups for k in g.members.tolist()
             for name, _ in routes.route(k, g).reactions}  # fmt: skip

    assert "upkeep" not in names
    assert (("glucose", -1), ("lactate", 2), ("ATP", 2)) in [g.terms for g in routes.groups]


def test_an_open_carrier_may_be_made_and_spent() -> None:
    routes = find_routes(small(), open_carriers=("NADH",))
    nadh = {dict(group.terms).get("NADH", 0) for group in routes.groups}

    assert min(nadh) == 0 < max(nadh)
    assert (("glucose", -1), ("acetate", 2), ("CO2", 2), ("NADH", 4)) in [
        group.terms for group in routes.groups
    ]


def test_a_limit_of_zero_shuts_and_other_limits_take_no_part() -> None:
    routes = find_routes(small("limit lactate <= 0\nlimit glucose <= 10\nlimit upkeep >= 1\n"))

    assert [group.terms for group in routes.groups] == [
        (("glucose", -1), ("ethanol", 2), ("CO2", 2))
    ]
    assert routes.system.sizes == ("limit glucose <= 10", "limit upkeep >= 1")


def test_a_variant_has_the_routes_of_the_base_that_it_leaves() -> None:
    base = model("mixed-acid")
    changed, _ = apply_variant(base, "anaerobic")
    assert changed is not None
    without = [
        g.terms for g in find_routes(base).groups
        if "oxygen" not in dict(g.terms)
    ]  # fmt: skip
    anaerobic = [g.terms for g in find_routes(changed).groups]

    assert set(anaerobic) <= set(without)
    assert 0 < len(anaerobic) < find_routes(base).count


@pytest.mark.parametrize("name", ["mixed-acid", "yeast", "solvent", "heterolactic"])
def test_each_route_of_a_model_balances_exactly_and_is_minimal(name: str) -> None:
    net = model(name)
    stoich = stoichiometry(net)
    rows = stoich.exact_rows(parameter_values(net), stoich.balanced)
    place = {r.name: j for j, r in enumerate(net.reactions)}
    routes = find_routes(net)
    role_columns = len(routes.system.cone.columns) - len(net.reactions)
    supports = []
    for group in routes.groups:
        for k in group.members.tolist():
            route = routes.route(k, group)
            flux = {place[name]: amount for name, amount in route.reactions}
            supports.append(frozenset(flux))

            assert all(sum(row[j] * v for j, v in flux.items()) == 0 for row in rows)
            assert all(v > 0 or net.reactions[j].reversible for j, v in flux.items())
            if not role_columns:
                assert len(kernel([[row[j] for j in flux] for row in rows], len(flux))) == 1
    assert len(supports) == routes.count
    assert not any(a < b for a in supports for b in supports) or role_columns


@pytest.mark.parametrize(
    ("name", "substrate", "product", "count"),
    [
        ("mixed-acid", "glucose", "ethanol", 12),
        ("mixed-acid", "glucose", "succinate", 200),
        ("solvent", "glucose", "butanol", 30),
        ("yeast", "glucose", "ethanol", 40),
        ("amino-acid", "glucose", "X", 8),
    ],
)
def test_the_best_are_those_of_a_full_search(
    name: str, substrate: str, product: str, count: int
) -> None:
    net = model(name)
    everything = find_routes(net, substrate=substrate, product=product)
    best = find_routes(net, substrate=substrate, product=product, best=count)
    known = {tuple(row) for row in everything.values.tolist()}
    found = [tuple(row) for row in best.values.tolist()]

    assert yields(best) == yields(everything)[:count]
    assert set(found) <= known
    assert len(set(found)) == len(found)
    if len(found) < count:
        assert best.words == f"No other route from {substrate} makes {product}."


def test_the_order_of_the_lines_and_the_size_of_a_reaction_change_no_route() -> None:
    net = model("mixed-acid")
    turned = replace(net, reactions=net.reactions[::-1])
    doubled = network(
        "\n".join(line.replace("pyruvate + NADH <-> lactate", "2 pyruvate + 2 NADH <-> 2 lactate")
                  for line in SMALL.splitlines() if "xyl" not in line)
    )  # fmt: skip

    def told(routes: Routes) -> set:
        return {(tuple(sorted(g.terms)), g.product_yield, g.count) for g in routes.groups}

    options = {"substrate": "glucose", "product": "ethanol"}
    assert told(find_routes(net, **options)) == told(find_routes(turned, **options))
    assert told(find_routes(small(), **options)) == told(find_routes(doubled, **options))


def test_an_exchange_species_goes_the_way_that_the_question_names() -> None:
    net = model("mixed-acid")
    made = find_routes(net, substrate="glucose", product="CO2")
    every = find_routes(net)

    assert any(dict(g.terms).get("CO2", 0) < 0 for g in every.groups)
    assert all(dict(g.terms).get("CO2", 0) >= 0 for g in made.groups)


def test_a_yield_that_another_substrate_lifts_without_end_is_told() -> None:
    two = model("heterolactic")
    names = [s.name for s in two.boundary]
    assert "xylose" in names
    best = find_routes(two, substrate="glucose", product="lactate", best=3)

    assert best.count == 0
    assert "can be made without glucose" in best.words


def test_a_network_that_cannot_run_says_why() -> None:
    routes = find_routes(network(
        "substrate glucose\ninside pyruvate\ncarrier ATP, NADH\ncompartment a\n"
        "    lump : glucose -> 2 pyruvate + 2 ATP + 2 NADH\n    burn : ATP -> nothing\n"
    ))  # fmt: skip

    assert routes.count == 0
    assert not routes.is_sound
    assert "pyruvate is made (lump), and nothing uses it" in routes.words


def test_too_little_memory_is_told_with_the_routes_found_so_far() -> None:
    routes = find_routes(model("mixed-acid"), memory=30_000)
    every = {tuple(row) for row in find_routes(model("mixed-acid")).values.tolist()}

    assert routes.ending is Ending.MEMORY
    assert not routes.is_sound
    assert routes.needed > 30_000
    assert {tuple(row) for row in routes.values.tolist()} < every


@pytest.mark.parametrize(
    ("options", "words"),
    [
        ({"substrate": "glucos"}, "near to it are glucose"),
        ({"product": "ethnol"}, "near to it are ethanol"),
        ({"substrate": "ethanol"}, "a product of the model: it is only released"),
        ({"product": "glucose"}, "a substrate of the model: it is only taken up"),
        ({"substrate": "glucose", "product": "glucose"}, "name two species"),
        ({"product": "ATP"}, "--drain"),
        ({"product": "pyruvate"}, "does not cross the boundary"),
        ({"drain": ("ATPP",)}, "near to it are ATP"),
        ({"best": 3}, "--to"),
        ({"best": 0, "product": "ethanol"}, "1 or more"),
        ({"keep_above": 1}, "--to"),
        ({"keep_above": -1, "product": "ethanol"}, "above 0"),
        ({"keep_above": 1, "product": "ethanol", "best": 3}, "leave --best out"),
    ],
)
def test_a_question_that_makes_no_sense_is_refused(options: dict, words: str) -> None:
    with pytest.raises(MisuseError, match=words):
        find_routes(small(), **options)


def test_the_benchmark_network_is_about_as_large_as_it_says() -> None:
    path = Path(__file__).parents[1] / "benchmarks" / "routes.flux"
    net = read_model(path).network
    assert net is not None
    both = route_system(net, Openings()).cone.both_ways

    assert (len(net.balanced), len(both) + sum(both)) == (37, 75)
