"""The carrier ledger: which compartment makes and which spends each carrier."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray

from fluxnet.ground.record import record
from fluxnet.matrices.stoichiometry import Stoichiometry
from fluxnet.network.model import Network
from fluxnet.studies.shares import Share

__all__ = ["LedgerLine", "LedgerPlace", "keep_ledger", "ledger_places", "ledger_rows"]

Array = NDArray[np.float64]

_ROUNDING = 1e-14
"""Of a net, beside what it is the difference of."""


@record
class LedgerPlace:
    """One carrier in one compartment that touches it."""

    carrier: str
    compartment: str


@record
class LedgerLine:
    """What one compartment makes and spends of one carrier, in the unit of the rates.

    ``net`` is ``made - spent``; over all compartments the nets of a carrier add up to zero.
    ``sd`` is that of the net where the net is determined, else None; ``low`` and ``high``
    bound the net as they bound a flux, and ``shares`` say where its error comes from.
    """

    carrier: str
    compartment: str
    made: float
    spent: float
    net: float
    sd: float | None = None
    low: float | None = None
    high: float | None = None
    shares: tuple[Share, ...] = ()


def ledger_places(network: Network, matrix: Stoichiometry) -> tuple[LedgerPlace, ...]:
    """The carriers by compartment, both in the order of the file, where any reaction has one.

    Examples
    --------
    >>> from fluxnet.reading.model import read_model_text
    >>> network = read_model_text('''
    ... substrate glucose
    ... product   lactate
    ... carrier   ATP  carries energy
    ... compartment a
    ...     lump   : glucose -> 2 lactate + 2 ATP
    ... compartment b
    ...     upkeep : ATP -> nothing
    ... limit glucose <= 10
    ... ''').network
    >>> from fluxnet.matrices.stoichiometry import stoichiometry
    >>> [(p.carrier, p.compartment) for p in ledger_places(network, stoichiometry(network))]
    [('ATP', 'a'), ('ATP', 'b')]
    """
    compartment_of = [r.compartment for r in network.reactions]
    touched = {(matrix.species[i], compartment_of[j]) for i, j, _ in matrix.entries}
    return tuple(
        LedgerPlace(carrier.name, compartment.name)
        for carrier in network.carriers
        for compartment in network.compartments
        if (carrier.name, compartment.name) in touched
    )


def ledger_rows(
    network: Network, matrix: Stoichiometry, coefficients: Array, places: tuple[LedgerPlace, ...]
) -> Array:
    """The net of each place as a row over the fluxes (places x reactions).

    ``coefficients`` is the stoichiometric matrix, species x reactions.

    Examples
    --------
    >>> from fluxnet.reading.model import read_model_text
    >>> network = read_model_text('''
    ... substrate glucose
    ... product   lactate
    ... carrier   ATP  carries energy
    ... compartment a
    ...     lump   : glucose -> 2 lactate + 2 ATP
    ... compartment b
    ...     upkeep : ATP -> nothing
    ... limit glucose <= 10
    ... ''').network
    >>> from fluxnet.matrices.stoichiometry import stoichiometry
    >>> matrix = stoichiometry(network)
    >>> places = ledger_places(network, matrix)
    >>> ledger_rows(network, matrix, matrix.floats({}), places).tolist()
    [[2.0, 0.0], [0.0, -1.0]]
    """
    rows = np.zeros((len(places), len(matrix.reactions)))
    for k, place in enumerate(places):
        inside = [r.compartment == place.compartment for r in network.reactions]
        rows[k, inside] = coefficients[matrix.row(place.carrier), inside]
    return rows


def keep_ledger(
    places: tuple[LedgerPlace, ...],
    rows: Array,
    fluxes: Array,
    sds: Array | None = None,
    lows: Array | None = None,
    highs: Array | None = None,
    shares: Sequence[tuple[Share, ...]] = (),
) -> tuple[LedgerLine, ...]:
    """The ledger at given fluxes.

    ``rows`` are those of :func:`ledger_rows`; ``sds``, ``lows`` and ``highs`` belong to the
    nets, one a place (NaN in ``sds`` where the net is not determined).

    Examples
    --------
    >>> places = (LedgerPlace("ATP", "a"), LedgerPlace("ATP", "b"))
    >>> rows = np.array([[2.0, -1.0, 0.0], [0.0, 0.0, -1.0]])
    >>> for line in keep_ledger(places, rows, np.array([10.0, 5.0, 15.0])):
    ...     print(line.compartment, line.made, line.spent, line.net)
    a 20.0 5.0 15.0
    b 0.0 15.0 -15.0
    """
    lines: list[LedgerLine] = []
    for k, place in enumerate(places):
        parts = rows[k] * fluxes
        made, spent = float(parts[parts > 0].sum()), 0.0 - float(parts[parts < 0].sum())
        net = made - spent
        if abs(net) <= _ROUNDING * (made + spent):
            net = 0.0
        sd = None if sds is None or np.isnan(sds[k]) else float(sds[k])
        lines.append(
            LedgerLine(
                place.carrier,
                place.compartment,
                made,
                spent,
                net,
                sd,
                None if lows is None else float(lows[k]),
                None if highs is None else float(highs[k]),
                shares[k] if shares and sd is not None else (),
            )
        )
    return tuple(lines)
