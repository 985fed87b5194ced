"""Of undetermined fluxes the sums and differences that a person can read are told."""

from __future__ import annotations

from fractions import Fraction

import pytest

from fluxnet.exact.linear import rank
from fluxnet.ground.resources import resource_folder
from fluxnet.reading.model import read_model
from fluxnet.solving.build import build_problem
from fluxnet.solving.classify import classify
from fluxnet.solving.equalities import find_equalities
from fluxnet.solving.relations import find_relations

# Glucose goes through a chain and then by two parallel routes to the same product.
PARALLEL = """
substrate glucose
product ethanol, acetate
inside a, b, c
take : glucose -> a
chain : a -> 2 b
left : b -> c
right : b -> c
end : c -> ethanol
side : b -> acetate
"""


def structure_of(network, run=None):
    return classify(find_equalities(build_problem(network, run)))


def told(network, run=None):
    names = [r.name for r in network.reactions]
    return [
        {names[j]: factor for j, factor in relation.terms}
        for relation in find_relations(structure_of(network, run))
    ]


def test_of_two_parallel_routes_only_the_sum_is_determined(make_network, make_run):
    network = make_network(PARALLEL)
    run = make_run(network, "glucose in 2 ± 0.1", "acetate out 1 ± 0.1")
    assert told(network, run) == [{"left": 1, "right": 1}]


def test_what_follows_from_a_relation_and_the_balances_is_told_once(make_network, make_run):
    network = make_network(PARALLEL + "third : b -> 0.5 c\n")
    run = make_run(network, "glucose in 2 ± 0.1", "acetate out 1 ± 0.1")
    # third gives half a c: it takes from ethanol what it does not give. That left + right + third
    # is determined too follows by the balance of c.
    assert told(network, run) == [{"end": 2, "third": 1}]
    # ethanol fixes the third route, and leaves the pair
    more = make_run(network, "glucose in 2 ± 0.1", "acetate out 1 ± 0.1", "ethanol out 2 ± 0.1")
    assert told(network, more) == [{"left": 1, "right": 1}]


def test_a_sum_that_the_balances_hold_at_zero_is_not_told(make_network, make_run):
    network = make_network("""
        substrate glucose
        product ethanol, acetate
        inside a
        take : glucose -> a
        one : a -> ethanol
        two : a -> acetate
    """)
    # take - one - two = 0 whatever is measured; nothing else is known.
    assert told(network) == []
    assert told(network, make_run(network, "glucose in 2 ± 0.1")) == [{"one": 1, "two": 1}]


def test_of_a_chain_the_first_flux_is_told(make_network, make_run):
    network = make_network("""
        substrate glucose
        product ethanol
        inside a, b, c
        take : glucose -> a
        one : a -> 2 b
        back : b <-> c
        two : b -> ethanol
        three : c -> ethanol
    """)
    # b splits: two = 4 - back; three = back is a chain with it
    assert told(network, make_run(network, "glucose in 2 ± 0.1")) == [{"back": 1, "two": 1}]


def test_large_coefficients_are_not_told(make_network, make_run):
    network = make_network("""
        substrate glucose
        product ethanol, acetate
        inside a
        take : glucose -> 31 a
        one : 7 a -> ethanol
        two : 13 a -> acetate
    """)
    # 7 one + 13 two = 31 take
    assert told(network, make_run(network, "glucose in 2 ± 0.1")) == []


MEASURED = {
    "amino-acid": ["glucose in 10 ± 1", "ammonia in 3 ± 0.3"],
    "heterolactic": ["glucose in 10 ± 1", "X out 2 ± 0.2", "glycerol out 1 ± 0.1"],
    "mixed-acid": ["glucose in 10 ± 1", "succinate out 1 ± 0.1"],
    "solvent": ["glucose in 10 ± 1", "butanol out 3 ± 0.3", "acetone out 1 ± 0.1"],
    "yeast": ["glucose in 10 ± 1", "X out 2 ± 0.2"],
}


@pytest.mark.parametrize("name", MEASURED)
def test_what_is_told_of_a_model_is_determined_short_and_independent(name, make_run):
    network = read_model(resource_folder("models") / f"{name}.flux").network
    structure = structure_of(network, make_run(network, *MEASURED[name]))
    found = find_relations(structure)
    rows = []
    for relation in found:
        row = {j: Fraction(c) for j, c in relation.terms}
        assert structure.is_determined(row)
        assert not any(structure.determined[j] for j in row)
        assert 2 <= len(row) <= 3
        assert all(c == int(c) and 0 < abs(c) <= 6 for c in row.values())
        rows.append([row.get(j, Fraction(0)) for j in range(structure.exact.columns)])
    assert found
    assert rank(rows, structure.exact.columns) == len(found)
    assert list(found) == sorted(found, key=lambda relation: relation.effort)
