"""The rows of cases that share a programme, each laid out once."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import replace

from fluxnet.network.model import Limit, Network, QuantityKind
from fluxnet.solving.problem import Row
from fluxnet.solving.rows import lay_rows

__all__ = ["Sheets", "place_row"]

Laid = tuple[tuple[Row, ...], tuple[float, ...], tuple[float, ...]]


class Sheets:
    """The rows of networks; those of the species, and of each limit alone, are laid once.

    A ratio's rows depend on the other limits: a network with one is laid out as a whole.
    """

    def __init__(self) -> None:
        self._known: dict[object, tuple[object, Laid]] = {}

    def of(self, network: Network) -> Laid:
        """The rows of a network with their bounds."""
        if any(limit.quantity.kind is QuantityKind.RATIO for limit in network.limits):
            return _laid(network)
        species = tuple(map(id, network.species))
        own = self._kept(network, species, None)
        rows, low, high = list(own[0]), list(own[1]), list(own[2])
        for limit in network.limits:
            own = self._kept(network, species, limit)
            rows += own[0]
            low += own[1]
            high += own[2]
        return tuple(rows), tuple(low), tuple(high)

    def _kept(self, network: Network, species: tuple[int, ...], limit: Limit | None) -> Laid:
        key = (species, limit)
        if key not in self._known:
            # What the key names is kept, so that no identity is given anew.
            laid = _laid(replace(network, limits=())) if limit is None else _own(network, limit)
            self._known[key] = (network.species, laid)
        return self._known[key][1]


def _own(network: Network, limit: Limit) -> Laid:
    """The rows of a limit alone."""
    named = [s for s in (network.find_species(n) for n in limit.quantity.names) if s is not None]
    alone = replace(network, species=tuple(named), limits=(limit,))
    rows, low, high = _laid(alone)
    return rows[len(named) :], low[len(named) :], high[len(named) :]


def _laid(network: Network) -> Laid:
    sheet = lay_rows(network, None, 0.0, {})
    return sheet.rows, tuple(sheet.low.tolist()), tuple(sheet.high.tolist())


def place_row(
    row: Row, own: Mapping[int, None], labels: dict[object, int], rows: list[Row]
) -> int:
    """The place of a case's row among those of all, new where no other case has it."""
    key: object = (row.kind, row.name, row.quantity, row.ratio)
    place = labels.setdefault(key, len(rows))
    while place in own:  # the same limit twice in one case
        key = (key, place)
        place = labels.setdefault(key, len(rows))
    if place == len(rows):
        rows.append(row)
    return place
