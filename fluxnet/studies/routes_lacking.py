"""Which carrier keeps every route from a product: one that none makes, or that none spends."""

from __future__ import annotations

from fractions import Fraction

from fluxnet.exact.sparse import SparseRow
from fluxnet.modes.cone import Cone
from fluxnet.studies.routes_search import Search
from fluxnet.studies.routes_system import RouteSystem

__all__ = ["tell_lacking"]


def tell_lacking(system: RouteSystem, substrate: str, product: str) -> str:
    """The carriers any one of which would do if it came from nowhere, or went there.

    Each is tried in exact arithmetic. Empty where no single carrier is in the way.

    Examples
    --------
    >>> from fluxnet.reading.model import read_model_text
    >>> from fluxnet.studies.routes_system import Openings, route_system
    >>> network = read_model_text('''
    ... substrate glucose
    ... product   glycerol
    ... carrier   ATP, NADH
    ... compartment c
    ...     reduce : glucose + 2 NADH + 2 ATP -> 2 glycerol
    ... ''').network
    >>> tell_lacking(route_system(network, Openings(opened=("ATP",))), "glucose", "glycerol")
    'NADH would have to be spent for it, and no route makes any'
    """
    releases = dict(system.releases)
    taken = {j: -a for j, a in releases[substrate].items()}
    balances = dict(system.balances)
    told: list[str] = []
    for species in system.network.carriers:
        row = balances.get(species.name)
        if not row:
            continue
        for sign, words in (
            (1, "would have to be spent for it, and no route makes any"),
            (-1, "would be left over, and no route spends it"),
        ):
            search = Search(_opened(system.cone, row, sign), taken, releases[product])
            if next(iter(search.routes()), None) is not None or search.endless:
                told.append(f"{species.name} {words}")
    return ", or ".join(told)


def _opened(cone: Cone, row: SparseRow, sign: int) -> Cone:
    """The cone with a column more that makes (1) or spends (-1) what a row balances."""
    rows = tuple(
        {**own, len(cone.columns): Fraction(sign)} if own == row else own for own in cone.rows
    )
    return Cone((*cone.columns, "from nowhere"), (*cone.both_ways, False), rows)
