"""What has to go so that only routes above a yield are left."""

from __future__ import annotations

from fractions import Fraction
from itertools import combinations

import pytest

from fluxnet.ground.resources import resource_folder
from fluxnet.reading.model import read_model
from fluxnet.studies.routes import find_routes
from fluxnet.studies.routes_cuts import MOST
from fluxnet.studies.routes_result import Cuts, Routes


def routes_of(name: str, product: str, above: float) -> tuple[Routes, Cuts]:
    network = read_model(resource_folder("models") / f"{name}.flux").network
    assert network is not None
    routes = find_routes(network, product=product, keep_above=above)
    assert routes.cuts is not None
    return routes, routes.cuts


def supports(routes: Routes, above: Fraction) -> tuple[list[frozenset[str]], list[frozenset[str]]]:
    """The reactions of each route from the substrate: at or above the yield, and below."""
    good, low = [], []
    for group in routes.groups:
        for k in group.members.tolist():
            if group.product_yield is not None:
                runs = frozenset(name for name, _ in routes.route(k, group).reactions)
                (good if group.product_yield >= above else low).append(runs)
    return good, low


CASES = [
    ("mixed-acid", "ethanol", 1.5),
    ("mixed-acid", "2,3-butanediol", 0.3),
    ("yeast", "ethanol", 1.4),
    ("solvent", "butanol", 0.4),
    ("heterolactic", "ethanol", 0.9),
]


@pytest.mark.parametrize(("name", "product", "above"), CASES)
def test_each_cut_hits_every_low_route_spares_a_good_one_and_has_none_to_spare(
    name: str, product: str, above: float
) -> None:
    routes, cuts = routes_of(name, product, above)
    good, low = supports(routes, cuts.above)

    assert (cuts.kept, cuts.lost) == (len(good), len(low))
    assert cuts.found
    for cut in cuts.found:
        chosen = set(cut.reactions)
        left = [runs for runs in good if not runs & chosen]

        assert all(runs & chosen for runs in low)
        assert len(left) == cut.left > 0
        assert cut.least >= cuts.above
        for one in chosen:
            assert not all(runs & (chosen - {one}) for runs in low)


@pytest.mark.parametrize(("name", "product", "above"), CASES)
def test_all_cuts_of_two_reactions_are_found(name: str, product: str, above: float) -> None:
    routes, cuts = routes_of(name, product, above)
    good, low = supports(routes, cuts.above)
    names = [r.name for r in routes.system.network.reactions]

    def works(chosen: tuple[str, ...]) -> bool:
        taken = set(chosen)
        return all(runs & taken for runs in low) and any(not runs & taken for runs in good)

    single = {(name,) for name in names if works((name,))}
    pairs = {
        pair for pair in combinations(names, 2)
        if works(pair) and not single & {(name,) for name in pair}
    }  # fmt: skip
    told = set()
    for cut in cuts.found:
        ways = [(name, *alike) for name, alike in zip(cut.reactions, cut.alike, strict=True)]
        if len(ways) == 1:
            told |= {(name,) for name in ways[0]}
        if len(ways) == 2:
            told |= {tuple(sorted((a, b), key=names.index)) for a in ways[0] for b in ways[1]}

    assert told == single | pairs


def test_a_yield_beyond_reach_is_told() -> None:
    _, cuts = routes_of("mixed-acid", "ethanol", 2.5)

    assert not cuts.found
    assert cuts.words == "no route reaches 2.5: the best makes 2"


def test_where_no_few_reactions_do_one_larger_cut_is_told() -> None:
    _, cuts = routes_of("mixed-acid", "succinate", 0.999)

    assert len(cuts.found) >= 1
    if cuts.words:
        assert all(len(cut.reactions) > MOST for cut in cuts.found)
