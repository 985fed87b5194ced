"""The levels of a staircase: linear programmes of one case, each with one demand more."""

from __future__ import annotations

from dataclasses import replace
from fractions import Fraction

import numpy as np

from fluxnet.chemistry.formula import degree_of_reduction
from fluxnet.exact.programme import make_programme
from fluxnet.exact.simplex import End, Place, solve_from
from fluxnet.matrices.elements import network_elements
from fluxnet.network.model import Network, Role
from fluxnet.solving.linear import Outcome
from fluxnet.solving.problem import RowKind
from fluxnet.studies.compare_facts import ceiling_of
from fluxnet.studies.compare_family import Family, Member
from fluxnet.studies.compare_modes import Demand, Demands, Question, ask, is_energy, moles_of
from fluxnet.studies.compare_scan import solve_again
from fluxnet.studies.staircase import Staircase, StepKind, make_staircase

__all__ = ["find_staircase"]

_FIRST = frozenset({Demand.STRUCTURE, Demand.SUBSTRATE})
_ADDED = (
    (StepKind.OXYGEN, Demand.OXYGEN),
    (StepKind.LIMITS, Demand.LIMIT),
    (StepKind.MAINTENANCE, Demand.MAINTENANCE),
    (StepKind.GROWTH, Demand.GROWTH),
    (StepKind.BY_PRODUCTS, Demand.RESERVE),
)


def find_staircase(
    family: Family,
    member: Member,
    demands: Demands,
    product: str,
    uptake: Fraction,
    measured: Fraction | None = None,
) -> Staircase | None:
    """The staircase of one case; None where no electrons can be counted or nothing is feasible.

    Parameters
    ----------
    uptake
        Of the substrate, in the unit of the basis: the one that the yield was found at.
    measured
        A yield that was measured [mol/mol]: what is left above it is not explained.
    """
    case = member.case
    network = case.network
    ceiling = ceiling_of(network, product, case.substrate)
    made, used = network.find_species(product), network.find_species(case.substrate)
    assert made is not None
    assert used is not None
    if ceiling is None or made.formula is None or used.formula is None:
        return None
    held = used.formula.count("C")
    carbon = made.formula.count("C") / held if held and made.formula.count("C") else None
    scale = uptake / moles_of(network, case.substrate) * moles_of(network, product)
    levels: list[tuple[StepKind, str, Fraction]] = []
    exchanged = _by_elements(network, product, case.substrate)
    if exchanged is not None:
        levels.append((StepKind.EXCHANGE, "carbon, nitrogen and electrons balance", exchanged))

    def add(kind: StepKind, words: str, question: Question) -> None:
        best = solve_again(family, member, question, product)
        if best.amount is not None:
            levels.append((kind, words, best.amount / scale))
        elif best.outcome is Outcome.INFEASIBLE:
            levels.append((kind, f"{words}: nothing is feasible", Fraction(0)))

    span = (uptake, uptake)
    question = ask(member, demands, _FIRST, span)
    energy = [s.name for s in network.carriers if is_energy(s)]
    if energy:
        free = _without_balances(member, question, set(energy))
        add(StepKind.ROUTES, f"{' and '.join(energy)} as if free", free)
        add(StepKind.ENERGY, f"{' and '.join(energy)} balanced", question)
    else:
        add(StepKind.ROUTES, "every carrier balanced", question)
    in_force = set(_FIRST)
    for kind, demand in _ADDED:
        names = _names(member, demands, demand)
        in_force.add(demand)
        if names:
            add(kind, ", ".join(names), ask(member, demands, in_force, span))
    if measured is not None:
        levels.append((StepKind.UNEXPLAINED, "between this and the measured yield", measured))
    electrons = degree_of_reduction(made.formula)
    assert electrons is not None
    return make_staircase(ceiling, electrons, carbon, tuple(levels))


def _names(member: Member, demands: Demands, demand: Demand) -> list[str]:
    """The rows of a demand that are in force."""
    sized = member.case.uptake is not None
    rows = zip(member.labels, demands.kinds, demands.absolute, strict=True)
    return list(
        dict.fromkeys(
            row.name.removeprefix("limit ")
            for row, kind, absolute in rows
            if kind is demand and (sized or not absolute)
        )
    )


def _without_balances(member: Member, question: Question, names: set[str]) -> Question:
    """The question with some balances lifted."""
    low, high = question.low.copy(), question.high.copy()
    for k, row in enumerate(member.labels):
        if row.kind is RowKind.BALANCE and row.name in names:
            low[k], high[k] = -np.inf, np.inf
    return replace(question, low=low, high=high)


def _by_elements(network: Network, product: str, substrate: str) -> Fraction | None:
    """The most product that carbon, nitrogen and electrons allow, whatever the reactions."""
    zero, one = Fraction(0), Fraction(1)
    elements = network_elements(network)
    kept = [
        {j: a for j, a in enumerate(row) if a}
        for name, row in zip(elements.balances, elements.exact, strict=True)
        if name in ("C", "N", "electrons")
    ]
    closed = {
        limit.quantity.name
        for limit in network.limits
        if limit.high == 0 and limit.quantity.direction is not None
        and (s := network.find_species(limit.quantity.name)) is not None
        and s.role is Role.SUBSTRATE and s.formula is not None and s.formula.count("C")
    }  # fmt: skip
    bounds: list[tuple[Fraction | None, Fraction | None]] = []
    for name in elements.species:
        species = network.find_species(name)
        assert species is not None
        if name == substrate:
            bounds.append((-one, -one))
        elif name in closed:
            bounds.append((zero, zero))
        elif species.role is Role.SUBSTRATE:
            bounds.append((None, zero))
        else:
            bounds.append((None if species.role is Role.EXCHANGE else zero, None))
    costs = {elements.species.index(product): -one}
    programme = make_programme(len(bounds), kept, [(zero, zero)] * len(kept), bounds, costs)
    places = [Place.HIGH if low is None else Place.LOW for low, _ in bounds]
    found = solve_from(programme, [*places, *([Place.BASIC] * len(kept))], None)
    return -found.objective if found.end is End.OPTIMAL else None
