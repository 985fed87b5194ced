"""The best routes of a yield, without looking for all."""

from __future__ import annotations

from fractions import Fraction

from fluxnet.ground.progress import Progress, silent
from fluxnet.modes.enumerate import Ending
from fluxnet.modes.whole import whole_rows
from fluxnet.studies.routes_groups import group_routes
from fluxnet.studies.routes_result import Routes
from fluxnet.studies.routes_search import Search
from fluxnet.studies.routes_system import RouteSystem
from fluxnet.studies.routes_words import why_no_product

__all__ = ["find_best"]


def find_best(
    system: RouteSystem, substrate: str, product: str, count: int, progress: Progress = silent
) -> Routes:
    """The routes from the substrate of the largest yields; Ctrl-C keeps those found.

    Where the yield has no largest value, because other substrates make the product too, no
    route is given and ``words`` says so.
    """
    network = system.network
    releases = dict(system.releases)
    search = Search(
        system.cone, {j: -a for j, a in releases[substrate].items()}, releases[product]
    )
    found: list[tuple[Fraction, ...]] = []
    ending = Ending.COMPLETE
    try:
        for route in search.routes():
            found.append(route)
            progress("best routes", len(found), count)
            if len(found) == count:
                break
    except KeyboardInterrupt:
        ending = Ending.INTERRUPTED
    words = ""
    if search.endless:
        words = (
            f"{product} can be made without {substrate}, so that no yield is the largest: shut "
            "the other substrates (limit OTHER <= 0)."
        )
    elif len(found) < count and ending is Ending.COMPLETE:
        words = (
            f"No other route from {substrate} makes {product}."
            if found
            else why_no_product(system, substrate, product, made_elsewhere=False)
        )
    values = whole_rows(found, len(system.cone.columns))
    groups = group_routes(system, values, substrate, product)
    return Routes(
        network.title, network.variant, substrate, product, system, values, groups, ending,
        search.solved, 0, words, count,
    )  # fmt: skip
