"""The routes of a network, as data."""

from __future__ import annotations

from fractions import Fraction

import numpy as np
from numpy.typing import NDArray

from fluxnet.ground.record import record
from fluxnet.modes.enumerate import Ending
from fluxnet.modes.whole import Whole
from fluxnet.network.model import Role
from fluxnet.studies.routes_system import RouteSystem

__all__ = ["Cut", "Cuts", "Energy", "Route", "RouteGroup", "Routes"]


@record
class Energy:
    """What is left of a carrier per mol of substrate, over the routes of a group."""

    carrier: str
    low: float
    high: float


@record
class RouteGroup:
    """Routes with one net equation.

    ``terms`` are the releases (taken up: negative) in smallest whole numbers. ``substrate`` is
    what the equation is told per, None where nothing with carbon is taken up. ``product_yield``
    is None where none was asked for, or the substrate asked for is not taken up. ``members``
    are places in ``Routes.values``, the shortest first; ``shortest`` its number of reactions.
    """

    terms: tuple[tuple[str, int], ...]
    substrate: str | None
    product_yield: Fraction | None
    energy: tuple[Energy, ...]
    members: NDArray[np.intp]
    shortest: int

    @property
    def count(self) -> int:
        """The number of routes."""
        return len(self.members)

    def per_substrate(self) -> tuple[tuple[str, Fraction], ...]:
        """The releases per mol of substrate, or as they are where there is none."""
        amounts = dict(self.terms)
        taken = -amounts[self.substrate] if self.substrate is not None else 1
        return tuple((name, Fraction(amount, taken)) for name, amount in self.terms)


@record
class Route:
    """One route: its reactions with whole coefficients, negative where one runs backwards.

    ``substrate`` is what it takes up at these coefficients (0 where nothing is told per).
    """

    reactions: tuple[tuple[str, int], ...]
    substrate: Fraction


@record
class Cut:
    """Reactions without which only routes above the yield are left, and no fewer would do.

    ``alike`` holds for each reaction those that always run with it and would do as well.
    """

    reactions: tuple[str, ...]
    alike: tuple[tuple[str, ...], ...]
    left: int
    least: Fraction
    best: Fraction


@record
class Cuts:
    """What to take out so that only routes of at least ``above`` are left.

    ``most`` is the size up to which ``found`` holds all cuts; ``complete`` is False where the
    search was cut short. ``kept`` and ``lost`` are the routes at or above, and below.
    """

    above: Fraction
    kept: int
    lost: int
    found: tuple[Cut, ...]
    most: int
    complete: bool
    words: str


@record
class Routes:
    """The elementary routes of a network, grouped by net equation, the best yield first.

    ``values`` are their fluxes in smallest whole numbers, shape (routes, columns of the
    system's cone). ``wanted`` is the number asked for where only the best were looked for.
    ``held`` and ``needed`` are those of :class:`fluxnet.modes.enumerate.Modes`.
    """

    title: str
    variant: str
    substrate: str | None
    product: str | None
    system: RouteSystem
    values: Whole
    groups: tuple[RouteGroup, ...]
    ending: Ending
    held: int
    needed: int
    words: str
    wanted: int | None = None
    cuts: Cuts | None = None

    @property
    def count(self) -> int:
        """The number of routes."""
        return len(self.values)

    @property
    def is_sound(self) -> bool:
        """Whether all routes were found that were asked for, and one makes the product."""
        makes = self.product is None or any(group.product_yield for group in self.groups)
        return self.count > 0 and makes and self.ending is Ending.COMPLETE

    def takes_more(self, group: RouteGroup) -> bool:
        """Whether a group takes up a substrate with carbon beside the one asked for."""
        foods = {
            s.name for s in self.system.network.boundary
            if s.role is Role.SUBSTRATE and s.formula is not None and s.formula.count("C") > 0
        }  # fmt: skip
        return any(n < 0 and name in foods - {self.substrate} for name, n in group.terms)

    def route(self, k: int, group: RouteGroup) -> Route:
        """One route of a group, by its place in ``values``."""
        system = self.system
        flux = [int(v) for v in self.values[k].tolist()]
        count = len(system.turned)
        shared = int(np.gcd.reduce(np.array(flux[:count], dtype=object)))
        names = [r.name for r in system.network.reactions]
        reactions = tuple(
            (names[j], (-v if system.turned[j] else v) // shared)
            for j, v in enumerate(flux[:count])
            if v
        )
        taken = Fraction(0)
        for name, form in system.releases:
            if name == group.substrate:
                taken = -sum((a * flux[j] for j, a in form.items()), Fraction(0)) / shared
        return Route(reactions, taken)
