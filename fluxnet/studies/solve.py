"""What did the cell do: one solve for each run, with an aim or without."""

from __future__ import annotations

from collections.abc import Callable, Iterator, Sequence
from typing import TypedDict, Unpack

import numpy as np

from fluxnet.ground.errors import InputError, MisuseError
from fluxnet.ground.progress import Progress, silent
from fluxnet.network.model import Network
from fluxnet.rates.measured import RatesTable, Run
from fluxnet.solving.suspects import TooFarApartError
from fluxnet.studies.solution import FluxSolution, Solution

__all__ = ["SolveOptions", "solve_network", "solve_runs"]


class SolveOptions(TypedDict, total=False):
    """The options of :func:`solve_runs`."""

    maximise: str | None
    minimise: str | None
    within: float
    fraction: float
    suspects: bool
    plan: str | None
    plan_error: float
    progress: Progress


# More sds than this are no bound beside the rates themselves.
_MOST = 1e6


def solve_network(
    network: Network, table: RatesTable | None = None, **options: Unpack[SolveOptions]
) -> Solution:
    """The fluxes of all runs: :func:`solve_runs`, which tells the options, in one answer.

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
    >>> (run,) = solve_network(network, maximise="lactate").runs
    >>> run.status.value, run.optimum, [limit.name for limit in run.limits]
    ('optimal', 20.0, ['limit glucose <= 10'])
    """
    return Solution(network, tuple(solve_runs(network, table, **options)))


def solve_runs(
    network: Network,
    table: RatesTable | None = None,
    *,
    maximise: str | None = None,
    minimise: str | None = None,
    within: float = 2.0,
    fraction: float = 1.0,
    suspects: bool = False,
    plan: str | None = None,
    plan_error: float = 0.05,
    progress: Progress = silent,
) -> Iterator[FluxSolution]:
    """Solve the fluxes of each run, one at a time: whoever stops keeps those that are done.

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
    within
        With an aim, measured rates are held within so many sds; without one, it is asked
        within so many what contradicts what, where the rates are rejected.
    suspects
        Without an aim, look for what could be wrong in sound runs, too.
    plan
        Without an aim, tell what to measure next to know this better, as
        :func:`fluxnet.studies.plan_target.read_target` reads it.
    plan_error
        The relative error of what would be measured anew.

    Raises
    ------
    MisuseError
        Where both aims are given, an aim names nothing, or a number makes no sense.
    InputError
        Where numbers of the model or a run lie too far apart to be computed with.
    """
    if maximise is not None and minimise is not None:
        raise MisuseError("one aim at a time: maximise or minimise")
    if not within >= 0:
        raise MisuseError("measured rates are held within zero or more sd")
    if within > _MOST:
        raise MisuseError(f"{within:g} sd hold nothing: leave the rates out, or take up to 1e6")
    if not 0 <= fraction <= 1:
        raise MisuseError("a fraction of the optimum lies between 0 and 1")
    if plan is not None and (maximise is not None or minimise is not None):
        raise MisuseError("a plan is for measured rates: leave the aim out")
    if not 0 < plan_error < 1:
        raise MisuseError("the error of a new measurement lies between 0 and 100 %")
    runs: tuple[Run | None, ...] = (None,) if table is None else table.runs
    wanted = minimise if maximise is None else maximise
    # of several runs the runs are counted, of one what it does
    progress, told = (silent, progress) if len(runs) > 1 else (progress, silent)
    # Each of the two ways imports what it needs when it is gone.
    if wanted is None:
        from fluxnet.studies.fitting import fit_run

        wanted_for = None
        if plan is not None:
            from fluxnet.studies.plan_target import read_target

            wanted_for = (read_target(plan, network), plan_error)

        def fit_one(network: Network, run: Run | None) -> FluxSolution:
            return fit_run(
                network, run, suspects=suspects, within=within, plan=wanted_for,
                progress=progress,
            )  # fmt: skip

        yield from _each(network, fit_one, runs, told)
        return
    from fluxnet.studies.aims import Sense, read_aim
    from fluxnet.studies.optimum import optimise

    aim = read_aim(wanted, Sense.MINIMISE if maximise is None else Sense.MAXIMISE, network)

    def best_of(network: Network, run: Run | None) -> FluxSolution:
        return optimise(
            network, run, aim, within=within, fraction=fraction, progress=progress
        )

    yield from _each(network, best_of, runs, told)


def _each(
    network: Network,
    solve: Callable[[Network, Run | None], FluxSolution],
    runs: Sequence[Run | None],
    progress: Progress,
) -> Iterator[FluxSolution]:
    for done, run in enumerate(runs, 1):
        yield _with_cause(network, solve, run)
        progress("solving runs", done, len(runs))


def _with_cause(
    network: Network, solve: Callable[[Network, Run | None], FluxSolution], run: Run | None
) -> FluxSolution:
    """Solve one run; where the solvers give up, numbers far apart are told as the cause."""
    try:
        return solve(network, run)
    except TooFarApartError as failure:
        from fluxnet.studies.precision import find_sds_apart

        told = find_sds_apart(run, str(failure))
        if told is None:
            raise
        raise InputError((told,)) from failure
    except (ArithmeticError, np.linalg.LinAlgError) as failure:
        from fluxnet.studies.precision import find_numbers_apart

        told = find_numbers_apart(network, run, str(failure))
        if told is None:
            raise
        raise InputError((told,)) from failure
