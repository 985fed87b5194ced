"""Routes as data."""

from __future__ import annotations

from typing import Any

from fluxnet.modes.enumerate import Ending
from fluxnet.studies.routes_result import Cuts, RouteGroup, Routes

__all__ = ["LISTED", "routes_record"]

Record = dict[str, Any]

LISTED = 10_000
"""So many routes are listed, the best first, unless all are asked for."""


def routes_record(routes: Routes, *, everything: bool = False) -> Record:
    """The body of ``routes/1``; whole numbers stay whole, however large."""
    room = routes.count if everything else LISTED
    groups = []
    listed = 0
    for group in routes.groups:
        shown = group.members[: max(0, room - listed)].tolist()
        listed += len(shown)
        groups.append(_group(routes, group, shown))
    return {
        "model": routes.title,
        "variant": routes.variant,
        "substrate": routes.substrate,
        "product": routes.product,
        "best_asked": routes.wanted,
        "count": routes.count,
        "listed": listed,
        "complete": routes.ending is Ending.COMPLETE,
        "ending": routes.ending.value,
        "in_work": routes.held,
        "memory_needed": routes.needed,
        "words": routes.words,
        "left_out": list(routes.system.sizes),
        "groups": groups,
        "cuts": None if routes.cuts is None else _cuts(routes.cuts),
    }


def _group(routes: Routes, group: RouteGroup, shown: list[int]) -> Record:
    exact = group.product_yield
    return {
        "equation": [{"species": name, "coefficient": amount} for name, amount in group.terms],
        "per": group.substrate,
        "per_substrate": [
            {"species": name, "coefficient": amount} for name, amount in group.per_substrate()
        ],
        "yield": exact,
        "exact_yield": None if exact is None else str(exact),
        "energy": [{"carrier": e.carrier, "low": e.low, "high": e.high} for e in group.energy],
        "count": group.count,
        "shortest": group.shortest,
        "routes": [_route(routes, group, k) for k in shown],
    }


def _route(routes: Routes, group: RouteGroup, k: int) -> Record:
    route = routes.route(k, group)
    return {
        "reactions": [{"reaction": n, "coefficient": amount} for n, amount in route.reactions],
        "substrate": route.substrate,
    }


def _cuts(cuts: Cuts) -> Record:
    return {
        "above": cuts.above,
        "kept": cuts.kept,
        "lost": cuts.lost,
        "up_to": cuts.most,
        "complete": cuts.complete,
        "words": cuts.words,
        "found": [
            {
                "reactions": [
                    {"reaction": name, "or": list(alike)}
                    for name, alike in zip(cut.reactions, cut.alike, strict=True)
                ],
                "routes_left": cut.left,
                "least_yield": cut.least,
                "best_yield": cut.best,
            }
            for cut in cuts.found
        ],
    }
