"""What did the cell do: one solve for each run, with an aim or without."""

from __future__ import annotations

from fluxnet.ground.errors import MisuseError
from fluxnet.network.model import Network
from fluxnet.rates.measured import RatesTable, Run
from fluxnet.studies.aims import Aim, Sense, read_aim
from fluxnet.studies.fitting import fit_run
from fluxnet.studies.optimum import optimise
from fluxnet.studies.solution import FluxSolution, Solution

__all__ = ["solve_network"]


def solve_network(
    network: Network,
    table: RatesTable | None = None,
    *,
    maximise: str | None = None,
    minimise: str | None = None,
    within: float = 2.0,
    fraction: float = 1.0,
) -> Solution:
    """Solve the fluxes of each run.

    Without an aim they are those nearest to the measured rates (:func:`fit_run`); with one,
    measured rates are held within ``within`` sds (:func:`optimise`).

    Parameters
    ----------
    network
        A model without errors, its variant applied.
    table
        The runs; None asks the model alone, with its limits.
    maximise, minimise
        The aim, as :func:`fluxnet.studies.aims.read_aim` reads it; at most one of them.
    fraction
        The share of the optimum at which the ranges of the fluxes are searched.

    Raises
    ------
    MisuseError
        Where both aims are given, an aim names nothing, or a number makes no sense.
    """
    if maximise is not None and minimise is not None:
        raise MisuseError("one aim at a time: maximise or minimise")
    if not within >= 0:
        raise MisuseError("measured rates can only be held within a positive number of sd")
    if not 0 <= fraction <= 1:
        raise MisuseError("a fraction of the optimum lies between 0 and 1")
    aim: Aim | None = None
    if maximise is not None:
        aim = read_aim(maximise, Sense.MAXIMISE, network)
    elif minimise is not None:
        aim = read_aim(minimise, Sense.MINIMISE, network)
    runs: tuple[Run | None, ...] = (None,) if table is None else table.runs

    def answer(run: Run | None) -> FluxSolution:
        if aim is None:
            return fit_run(network, run)
        return optimise(network, run, aim, within=within, fraction=fraction)

    return Solution(network, tuple(answer(run) for run in runs))
