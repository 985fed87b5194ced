"""From fluxes to what people read: the ledger, net equations, yields."""

from __future__ import annotations

from collections.abc import Callable, Mapping

import numpy as np
from numpy.typing import NDArray

from fluxnet.ground.record import record
from fluxnet.solving.build import Built
from fluxnet.studies.equations import NetEquation, add_implied, find_equations
from fluxnet.studies.heat import heat_of
from fluxnet.studies.heat_run import HeatRange, RunHeat, heat_rows, run_heat, temperature_of
from fluxnet.studies.ledger import LedgerLine, keep_ledger, ledger_places, ledger_rows
from fluxnet.studies.shares import Share
from fluxnet.studies.yields import Yield, find_yields

__all__ = ["Account", "Array", "Span", "Spans", "keep_account"]

Array = NDArray[np.float64]


@record
class Span:
    """What is known of functionals of the fluxes, one number each.

    ``sd`` is NaN where a functional is not determined; ``low`` and ``high`` may be infinite.
    ``shares`` say where its error comes from, where that was asked for.
    """

    sd: Array
    low: Array
    high: Array
    shares: tuple[tuple[Share, ...], ...] = ()


Spans = Callable[[Array, Mapping[str, Array]], Span]


@record
class Account:
    """What a flux vector amounts to."""

    ledger: tuple[LedgerLine, ...]
    equations: tuple[NetEquation, ...]
    yields: tuple[Yield, ...]
    heat: RunHeat | None


def keep_account(built: Built, fluxes: Array, spans: Spans) -> Account:
    """The ledger, the net equations, the yields and the heat at given fluxes.

    Parameters
    ----------
    built
        The problem at the parameters' values that the fluxes belong to.
    fluxes
        One a reaction, in the unit of the rates.
    spans
        Gives what is known of functionals, each a row over the reactions; beside the rows it
        is given their derivatives by each uncertain parameter.
    """
    network, matrix = built.network, built.stoichiometry
    coefficients = matrix.floats(built.values)
    equations = find_equations(network, matrix, coefficients, fluxes)
    whole = add_implied(equations[-1], network)
    releases = {t.species: t.coefficient for t in whole.terms if not t.implied}
    heat = heat_of(releases, network) if releases else None
    places = ledger_places(network, matrix)

    def rows_of(made: Array) -> Array:
        ledger = ledger_rows(network, matrix, made, places)
        return np.vstack([ledger, heat_rows(heat, network, matrix, made)])

    rows = rows_of(coefficients)
    drift = {
        number.name: rows_of(matrix.derivative(number.name, built.values))
        for number in built.uncertain
    }
    span = spans(rows, drift)
    ranges = [
        HeatRange(float(row @ fluxes), float(sd), float(low), float(high))
        for row, sd, low, high in zip(rows, span.sd, span.low, span.high, strict=True)
    ][len(places) :]
    run = built.run
    unit = run.unit if run is not None else network.basis.value
    return Account(
        keep_ledger(places, rows, fluxes, span.sd, span.low, span.high, span.shares),
        (*equations[:-1], whole),
        find_yields(network, releases),
        None
        if heat is None
        else run_heat(
            heat, network, releases, whole.per, unit, built.basis, tuple(ranges),
            temperature_of(run.extras if run is not None else ()),
        ),
    )  # fmt: skip
