"""The routes of a network: elementary flux modes, what each makes, and which to keep."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace
from difflib import get_close_matches
from fractions import Fraction

import numpy as np

from fluxnet.ground.errors import MisuseError
from fluxnet.ground.progress import Progress, silent
from fluxnet.modes.enumerate import Ending, find_modes
from fluxnet.network.model import Network, Role, Species
from fluxnet.studies.routes_best import find_best
from fluxnet.studies.routes_cuts import find_cuts
from fluxnet.studies.routes_groups import group_routes
from fluxnet.studies.routes_result import Routes
from fluxnet.studies.routes_system import Openings, route_system
from fluxnet.studies.routes_words import why_no_product, why_none

__all__ = ["MEMORY", "find_routes"]

MEMORY = 2e9
"""The usual bound on memory, in bytes."""

_TOLD = 2_000
"""Bytes that a route takes at most when it is told (measured: 1,900 where none shares its net
equation)."""


def find_routes(
    network: Network,
    *,
    substrate: str | None = None,
    product: str | None = None,
    best: int | None = None,
    drain: Sequence[str] = (),
    open_carriers: Sequence[str] = (),
    keep_above: Fraction | float | None = None,
    memory: float = MEMORY,
    progress: Progress = silent,
) -> Routes:
    """All elementary routes of a network, or the best of a yield.

    A route (an elementary flux mode; Schuster & Hilgetag 1994) is a smallest set of reactions
    that can run in a steady state: with any one of them missing none of the others can run in
    these proportions. Every steady state is a sum of routes. Parameters stand at their values;
    limits take part by their signs alone.

    Parameters
    ----------
    substrate, product
        What yields are told of, mol/mol. A product alone is told per first carbon substrate.
    best
        Only so many of the largest yield, without looking for all.
    drain
        Carriers that may leave, so that what a route makes of them is told; reactions that only
        spend them stand still.
    open_carriers
        Carriers that are not balanced: a route may make or spend them.
    keep_above
        Also say what to take out so that only routes of this yield or more are left.
    memory
        The most bytes that routes may take.

    Raises
    ------
    MisuseError
        Where a name is none of the network's, or the question makes no sense.

    Examples
    --------
    >>> from fluxnet.cli.new import MODEL
    >>> from fluxnet.reading.model import read_model_text
    >>> routes = find_routes(read_model_text(MODEL).network, product="ethanol")
    >>> group = routes.groups[0]
    >>> routes.count, int(group.product_yield), [f"{v} {name}" for name, v in group.terms]
    (4, 2, ['-1 glucose', '2 ethanol', '2 CO2'])
    """
    taken, made = _ends(network, substrate, product)
    _check(network, taken, made, best, keep_above, (*drain, *open_carriers))
    exchange = {s.name for s in network.species if s.role is Role.EXCHANGE}
    system = route_system(
        network,
        Openings(
            tuple(dict.fromkeys(drain)),
            tuple(dict.fromkeys(name for name in open_carriers if name not in drain)),
            taken if taken in exchange else None,
            made if made in exchange else None,
        ),
    )
    if best is not None and taken is not None and made is not None:
        return find_best(system, taken, made, best, progress)
    found = find_modes(system.cone, memory=memory, beside=_TOLD, progress=progress)
    groups = group_routes(system, found.values, taken, made)
    routes = Routes(
        network.title, network.variant, taken, made, system, found.values, groups, found.ending,
        found.held, found.needed, "",
    )  # fmt: skip
    if not groups and found.ending is Ending.COMPLETE:
        routes = replace(routes, words=why_none(system))
    making = [g for g in groups if dict(g.terms).get(made or "", 0) > 0]
    ours = any(g.product_yield for g in making)
    if groups and taken is not None and made is not None and not ours:
        words = why_no_product(system, taken, made, made_elsewhere=bool(making))
        routes = replace(routes, words=words if found.ending is Ending.COMPLETE else "")
    if keep_above is not None and found.ending is Ending.COMPLETE:
        above = Fraction(str(keep_above))
        routes = replace(routes, cuts=find_cuts(routes, above, progress))
    return routes


def _ends(
    network: Network, substrate: str | None, product: str | None
) -> tuple[str | None, str | None]:
    """The two species that a yield is of."""
    if substrate is not None:
        _boundary(network, substrate)
    if product is not None:
        made = _boundary(network, product)
        if product == substrate:
            raise MisuseError(f"a route from {product} to {product} is none: name two species")
        if made.role is Role.SUBSTRATE:
            raise MisuseError(f"{product} is a substrate of the model: it is only taken up")
        if substrate is None:
            substrate = _first_carbon(network, product)
    if substrate is not None and (taken := _boundary(network, substrate)).role in (
        Role.PRODUCT, Role.BIOMASS,
    ):  # fmt: skip
        raise MisuseError(f"{substrate} is a {taken.role.value} of the model: it is only released")
    return substrate, product


def _first_carbon(network: Network, product: str) -> str | None:
    for species in network.boundary:
        is_food = species.role is Role.SUBSTRATE and species.formula is not None
        if is_food and species.formula is not None and species.formula.count("C") > 0:
            return species.name
    raise MisuseError(f"a yield of {product} needs a substrate: name it with --from")


def _boundary(network: Network, name: str) -> Species:
    """The boundary species of that name."""
    species = network.find_species(name)
    if species is None:
        known = [s.name for s in network.boundary]
        raise MisuseError(f"the model has no {name}{_near(name, known)}")
    if not species.role.is_boundary:
        hint = "--drain tells what a route makes of it" if species.cargo else "it is balanced"
        raise MisuseError(f"{name} does not cross the boundary; {hint}")
    return species


def _near(name: str, known: Sequence[str]) -> str:
    near = get_close_matches(name, known, 3, 0.6)
    return f"; near to it are {', '.join(near)}" if near else f"; there are {', '.join(known)}"


def _check(
    network: Network,
    substrate: str | None,
    product: str | None,
    best: int | None,
    keep_above: Fraction | float | None,
    carriers: Sequence[str],
) -> None:
    known = [s.name for s in network.carriers]
    for name in carriers:
        if name not in known:
            raise MisuseError(f"the model has no carrier {name}{_near(name, known)}")
    if best is not None and best < 1:
        raise MisuseError("the number of best routes is 1 or more")
    if best is not None and (substrate is None or product is None):
        raise MisuseError("the best routes are those of a yield: name the product with --to")
    if keep_above is not None:
        if product is None:
            raise MisuseError("a yield to keep is that of a product: name it with --to")
        if best is not None:
            raise MisuseError("what to take out is known from all routes: leave --best out")
        if not np.isfinite(float(keep_above)) or keep_above <= 0:
            raise MisuseError("the yield to keep is a number above 0, in mol/mol")
