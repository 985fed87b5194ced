"""The answer to "what did the cell do": one frozen result for every way of asking."""

from __future__ import annotations

from enum import Enum
from typing import TYPE_CHECKING

from fluxnet.ground.diagnostic import Diagnostic
from fluxnet.ground.record import record
from fluxnet.network.model import Limit, Network, Quantity
from fluxnet.solving.flux_fit import FluxKind, FluxRelation, RateKind
from fluxnet.studies.equations import NetEquation
from fluxnet.studies.heat_run import RunHeat
from fluxnet.studies.ledger import LedgerLine
from fluxnet.studies.shares import Correlated, Share
from fluxnet.studies.yields import Yield

if TYPE_CHECKING:
    from fluxnet.solving.conflict import Conflict, LeastChange
    from fluxnet.solving.proof import Proof
    from fluxnet.solving.unbounded import Unbounded
    from fluxnet.studies.aims import Aim
    from fluxnet.studies.bill import Bill
    from fluxnet.studies.conflicts import ToldConflict
    from fluxnet.studies.plan_result import Plan
    from fluxnet.studies.suspect_result import Suspects

__all__ = [
    "BindingLimit", "FluxEstimate", "FluxKind", "FluxRelation", "FluxSolution", "FluxTest",
    "MovedParameter", "OptimumSpan", "RateEstimate", "RateKind", "Solution", "SolveStatus",
    "SpeciesPrice",
]


class SolveStatus(Enum):
    """How a solve ended.

    ``SOLVED``: fluxes found, and neither the balances nor the limits reject the rates.
    ``INCONSISTENT``: fluxes found, but the rates are rejected at 5 %. ``OPTIMAL``: the aim's
    best value found. ``INFEASIBLE``: what must hold exactly has no solution. ``UNBOUNDED``:
    the aim has no best value.
    """

    SOLVED = "solved"
    INCONSISTENT = "inconsistent"
    OPTIMAL = "optimal"
    INFEASIBLE = "infeasible"
    UNBOUNDED = "unbounded"

    @property
    def is_sound(self) -> bool:
        """Whether nothing is wrong with data and model."""
        return self in (SolveStatus.SOLVED, SolveStatus.OPTIMAL)


@record
class FluxEstimate:
    """A reaction's flux, in the unit of the rates.

    ``value`` is the representative shown (of an undetermined flux: that of the least total
    flux); ``sd`` is None where it is not determined. ``low`` to ``high`` is what 95 % of the
    evidence allows, ``best_low`` to ``best_high`` the range at the best fit or optimum;
    infinities mark open ends. ``shares`` say where the variance of a determined one comes from.
    """

    reaction: str
    compartment: str
    value: float
    sd: float | None
    low: float
    high: float
    best_low: float
    best_high: float
    kind: FluxKind
    shares: tuple[Share, ...] = ()


@record
class RateEstimate:
    """A boundary rate (or another measured quantity), in its direction.

    ``measured`` and ``sd`` (as the table gives them) are None where it was not measured; ``z``
    is the change over its sd, positive where the rate was raised. ``reversed_`` marks a rate
    that came out against its direction.
    """

    quantity: Quantity
    unit: str
    measured: float | None
    sd: float | None
    reconciled: float
    reconciled_sd: float | None
    low: float
    high: float
    z: float | None
    kind: RateKind
    reversed_: bool = False


@record
class FluxTest:
    """Whether the rates agree with the balances, and what the bounds add.

    ``h`` is the least weighted sum of squares under the equalities alone, chi-squared with
    ``dof`` degrees of freedom; None where nothing is redundant. ``bound_h`` is what the bounds
    add to it, ``bound_p`` its probability by parametric bootstrap, ``active`` the bounds that
    hold the fit back.
    """

    h: float | None
    dof: int
    p: float | None
    limit: float | None
    closes: bool | None
    bound_h: float
    bound_p: float | None
    active: tuple[str, ...] = ()
    pulling: tuple[str, ...] = ()


@record
class MovedParameter:
    """A parameter with ± and where the fit moved it."""

    name: str
    value: float
    sd: float
    moved: float
    moved_sd: float


@record
class BindingLimit:
    """A limit that holds the optimum back.

    ``worth`` is the change of the aim per unit by which the bound is raised, at the prices that
    prove the optimum; ``worth_up`` that of the first bit by which it is raised, ``worth_down``
    that per unit of the first bit by which it is lowered: both the same unless other bounds
    hold there, too. Infinite where the bound cannot move that way at all. ``unit`` is that of
    the worths.
    """

    name: str
    value: float
    worth: float
    worth_up: float
    worth_down: float
    unit: str


@record
class SpeciesPrice:
    """What one unit of a balanced species is worth to the aim at its optimum.

    Positive: one more unit, as a gift, would raise a maximum or lower a minimum by so much;
    negative: it is a surplus that has to be got rid of. Where the optimum leaves the price free
    ``price_low`` is what the first bit more would help, ``price_high`` what the first bit less
    would cost.
    """

    species: str
    price: float
    price_low: float
    price_high: float


@record
class OptimumSpan:
    """The optimum over ± 2 sd of the ``parameters``, which otherwise stand at their values.

    The ends are the largest and the least found at so many ``points``, their values among them;
    at ``infeasible`` of these nothing is feasible.
    """

    low: float
    high: float
    parameters: tuple[str, ...]
    points: int
    infeasible: int = 0


@record
class FluxSolution:
    """The answer for one run (None: the model's limits alone).

    ``extras`` are the table's columns carried through. ``unheld`` is the optimum of an aim
    that is measured itself, without its own row; ``span`` the optimum over the parameters'
    errors; ``fraction`` the share of the optimum at which fluxes and ranges are given.
    Measured values are held within ``within`` sds and could be within ``smallest_within``.
    ``proof`` is that of the status (None: none is asked for, in a fit), ``bill`` the optimum's.
    ``suspects`` are what could be wrong in a fit (None: not looked for); ``plan`` what to
    measure next (None: not asked). What is ``correlated`` the data tell only together.
    """

    run: str | None
    variant: str
    status: SolveStatus
    unit: str
    words: str
    aim: Aim | None = None
    optimum: float | None = None
    unheld: float | None = None
    span: OptimumSpan | None = None
    fraction: float = 1.0
    within: float | None = None
    smallest_within: float | None = None
    fluxes: tuple[FluxEstimate, ...] = ()
    rates: tuple[RateEstimate, ...] = ()
    test: FluxTest | None = None
    ledger: tuple[LedgerLine, ...] = ()
    equations: tuple[NetEquation, ...] = ()
    yields: tuple[Yield, ...] = ()
    heat: RunHeat | None = None
    limits: tuple[BindingLimit, ...] = ()
    prices: tuple[SpeciesPrice, ...] = ()
    proof: Proof | None = None
    bill: Bill | None = None
    suspects: Suspects | None = None
    relations: tuple[FluxRelation, ...] = ()
    moved: tuple[MovedParameter, ...] = ()
    correlated_numbers: tuple[Correlated, ...] = ()
    correlated_fluxes: tuple[Correlated, ...] = ()
    plan: Plan | None = None
    conflicts: tuple[ToldConflict, ...] = ()
    least_change: LeastChange | None = None
    unbounded: Unbounded | None = None
    violated_limits: tuple[str, ...] = ()
    left_free: tuple[str, ...] = ()
    left_out: tuple[Limit, ...] = ()
    replaced: tuple[Limit, ...] = ()
    residual: float = 0.0
    notes: tuple[Diagnostic, ...] = ()
    extras: tuple[tuple[str, str], ...] = ()
    has_biomass: bool = False

    @property
    def conflict(self) -> Conflict | None:
        """The first conflict, where there is one."""
        return self.conflicts[0].conflict if self.conflicts else None


@record
class Solution:
    """The answers for all runs that were asked for, and the network that they were asked of."""

    network: Network
    runs: tuple[FluxSolution, ...]

    @property
    def is_sound(self) -> bool:
        """Whether nothing is wrong with any run, and every optimum is proven."""
        return all(
            run.status.is_sound and (run.proof is None or run.proof.verified) for run in self.runs
        )
