"""Why a network has no route, or none to a product."""

from __future__ import annotations

from fluxnet.studies.routes_system import RouteSystem

__all__ = ["why_no_product", "why_none"]

_MOST = 4


def why_none(system: RouteSystem) -> str:
    """What keeps every reaction from running, as far as single balances tell.

    Examples
    --------
    >>> from fluxnet.reading.model import read_model_text
    >>> from fluxnet.studies.routes_system import Openings, route_system
    >>> network = read_model_text('''
    ... substrate glucose
    ... inside    pyruvate
    ... carrier   ATP, NADH
    ... compartment a
    ...     lump : glucose -> 2 pyruvate + 2 ATP + 2 NADH
    ...     burn : ATP -> nothing
    ... ''').network
    >>> why_none(route_system(network, Openings()))
    'NADH is made (lump), and nothing uses it; pyruvate is made (lump), and nothing uses it.'
    """
    cone = system.cone
    names = [r.name for r in system.network.reactions]
    told: list[str] = []
    for name, row in system.balances:
        open_ = {j: a for j, a in row.items() if j not in system.shut}
        runs = ", ".join(names[j] for j in open_)
        both = [j for j in open_ if cone.both_ways[j]]
        if not open_ or (both and len(open_) > 1):
            continue
        if both:
            told.append(f"{name} takes part in {runs} alone")
        elif all(a > 0 for a in open_.values()):
            told.append(f"{name} is made ({runs}), and nothing uses it")
        elif all(a < 0 for a in open_.values()):
            told.append(f"{name} is used ({runs}), and nothing makes it")
    if told:
        more = f"; so it is with {len(told) - _MOST} more" if len(told) > _MOST else ""
        return f"{'; '.join(sorted(told)[:_MOST])}{more}."
    if len(system.shut) == len(names):
        return "Limits shut every reaction."
    return (
        "Every species is made and used somewhere, but no proportion of the reactions balances "
        "all of them: fluxnet check tells which reactions can carry no flux, and why."
    )


def why_no_product(
    system: RouteSystem, substrate: str, product: str, *, made_elsewhere: bool
) -> str:
    """Why no route from the substrate makes the product, as far as it can be told.

    Parameters
    ----------
    made_elsewhere
        Whether routes that do without the substrate make it.
    """
    # graphs and a search, for this answer alone
    from fluxnet.studies.compare_obstacles import tell_obstacle
    from fluxnet.studies.routes_lacking import tell_lacking

    head = f"No route from {substrate} makes {product}"
    if made_elsewhere:
        return f"{head}; routes that take up something else do."
    named = {name for name, _ in system.releases}
    opened = any(species.name in named for species in system.network.carriers)
    why = "" if opened else tell_obstacle(system.network, product)
    if not why or why.startswith("the limits and demands"):
        why = tell_lacking(system, substrate, product)
    return f"{head}: {why}." if why else f"{head}."
