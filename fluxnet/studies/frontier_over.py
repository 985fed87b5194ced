"""What ``--over`` moves: a limit, or a parameter of the model."""

from __future__ import annotations

from dataclasses import replace
from fractions import Fraction

import numpy as np
from numpy.typing import NDArray

from fluxnet.exact.sparse import SparseRow
from fluxnet.ground.errors import MisuseError
from fluxnet.ground.record import record
from fluxnet.network.model import Limit, Network, Parameter, Quantity, Relation
from fluxnet.solving.forms import as_fraction
from fluxnet.solving.problem import Problem
from fluxnet.solving.words import limit_words, number_words, quantity_words
from fluxnet.studies.aims import name_quantity
from fluxnet.studies.frontier_axis import sizes_oxygen
from fluxnet.studies.frontier_result import OverKind, Setting
from fluxnet.studies.units import rate_unit

__all__ = ["MovedLimit", "find_moved_limit", "read_setting", "set_to", "with_room"]

Vector = NDArray[np.float64]


@record
class MovedLimit:
    """A limit that is moved: its quantity, which side it bounds, the network without it."""

    quantity: Quantity
    relation: Relation
    network: Network

    @property
    def room(self) -> int:
        """The sign with which what is left below (above) the limit is added to the quantity."""
        return {Relation.AT_MOST: 1, Relation.AT_LEAST: -1}.get(self.relation, 0)


def read_setting(text: str, network: Network, start: float | None, stop: float | None) -> Setting:
    """What a user wants moved: a parameter's name, or the quantity of a limit.

    Raises
    ------
    MisuseError
        Where it names neither, an end of the range is missing, or the range makes no sense.
    """
    if start is None or stop is None:
        raise MisuseError("--over needs both ends of its range: --from A --to B")
    if not np.isfinite([start, stop]).all():
        raise MisuseError("both ends of the range have to be numbers")
    if start >= stop:
        raise MisuseError(f"the range from {start:g} to {stop:g} is empty: --from is its lower end")
    found = _parameter(text, network)
    if found is None:
        moved = find_moved_limit(text, network)
        unit = rate_unit(moved.quantity, network.basis.value)
        name = quantity_words(moved.quantity, network)
        if name_quantity(name.split(), network) != moved.quantity:
            name = str(moved.quantity)
        sized = sizes_oxygen(((Fraction(1), moved.quantity),), network)
        return Setting(OverKind.LIMIT, name, unit, start, stop, sized)
    for end, is_inside in (
        (start, found.low is None or start >= found.low),
        (stop, found.high is None or stop <= found.high),
    ):
        if not is_inside:
            ends = (found.low, found.high)
            reach = " to ".join("no end" if e is None else f"{float(e):g}" for e in ends)
            raise MisuseError(f"{found.name} = {end:g} lies outside its range, {reach}")
    return Setting(OverKind.PARAMETER, found.name, "", start, stop)


def _parameter(text: str, network: Network) -> Parameter | None:
    return next((p for p in network.parameters if p.name == text.strip()), None)


def find_moved_limit(text: str, network: Network) -> MovedLimit:
    """The limit on a quantity; where the model has none, one from above.

    Of a range (between) the upper end is moved.

    Raises
    ------
    MisuseError
        Where the quantity is unknown, or its limit a measured value.
    """
    words = text.removeprefix("limit ").split()
    quantity = name_quantity(words, network, "a limit's quantity")
    own = [x for x in network.limits if x.quantity == quantity]
    measured = next((x for x in own if x.is_measured), None)
    if measured is not None:
        raise MisuseError(
            f"{limit_words(measured, network)} is a measured value; --over moves limits"
        )
    kinds = [x.relation for x in own]
    relation = Relation.AT_MOST
    if Relation.EQUAL in kinds:
        relation = Relation.EQUAL
    elif kinds and all(kind is Relation.AT_LEAST for kind in kinds):
        relation = Relation.AT_LEAST
    kept: list[Limit] = []
    for limit in network.limits:
        if limit.quantity != quantity:
            kept.append(limit)
        elif limit.relation is Relation.BETWEEN:
            kept.append(replace(limit, relation=Relation.AT_LEAST, high=None))
        elif limit.relation is not relation:
            kept.append(limit)
    return MovedLimit(quantity, relation, replace(network, limits=tuple(kept)))


def set_to(network: Network, setting: Setting, value: float) -> tuple[Network, str]:
    """The network with the moved thing at a value, and that in words."""
    exact = as_fraction(value)
    if setting.kind is OverKind.PARAMETER:
        parameters = tuple(
            replace(p, value=exact) if p.name == setting.name else p for p in network.parameters
        )
        return replace(network, parameters=parameters), f"{setting.name} = {number_words(value)}"
    moved = find_moved_limit(setting.name, network)
    low = None if moved.relation is Relation.AT_MOST else exact
    high = None if moved.relation is Relation.AT_LEAST else exact
    limit = Limit(moved.quantity, moved.relation, low, high)
    limits = (*moved.network.limits, limit)
    words = limit_words(limit, network).removeprefix("limit ")
    return replace(moved.network, limits=limits), words


def with_room(
    problem: Problem, room: int, along: Vector, cost: Vector, exact: SparseRow
) -> tuple[Problem, Vector, Vector, SparseRow]:
    """The problem with a variable for what is left up to the moved limit, and x with it in.

    "At most t" is then "quantity plus room = t": the limit itself is the quantity that moves.
    """
    if not room:
        return problem, along, cost, exact
    count = len(problem.columns)
    wider = replace(
        problem,
        columns=(*problem.columns, "room"),
        matrix=np.hstack([problem.matrix, np.zeros((len(problem.rows), 1))]),
        column_low=np.append(problem.column_low, 0.0),
        column_high=np.append(problem.column_high, np.inf),
    )
    row = {**exact, count: Fraction(room)}
    return wider, np.append(along, float(room)), np.append(cost, 0.0), row
