"""Why one pathway yields less than another: which carriers it spends, and who makes them.

Two variants share most of their reactions. What the others do for a mole of product is brought
to the same intermediates by the shared ones, and then differs in carriers alone: one ATP more,
one NADPH less. That is the cause; where the electrons end is its effect.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from fractions import Fraction

import numpy as np

from fluxnet.chemistry.formula import degree_of_reduction
from fluxnet.ground.errors import MisuseError
from fluxnet.ground.record import record
from fluxnet.network.model import Network, Role
from fluxnet.solving.least_flux import least_total_flux
from fluxnet.solving.problem import Problem, Row, RowKind
from fluxnet.studies.compare_family import Family, Member
from fluxnet.studies.compare_result import Ability

__all__ = ["Cause", "find_cause", "tell_cause"]

_DUST = 1e-6
_MOST_NAMES = 3


@record
class Cause:
    """What the second pathway spends and makes more of than the first, per mole of ``per``.

    ``source`` is the reaction that makes most more of ``lacking`` for the second, per mole of
    substrate, and ``beside`` what else it releases; all empty where there is none.
    """

    per: str
    spends: tuple[tuple[str, float], ...]
    makes: tuple[tuple[str, float], ...]
    lacking: str
    source: str
    beside: str


Side = tuple[Member, Ability]


def find_cause(family: Family, first: Side, second: Side, product: str) -> Cause | None:
    """What the second pathway takes more than the first; None where that cannot be told.

    Both have to use the same substrate. It is told per mole of product where the pathways
    differ on the way to it, else per mole of substrate where they differ in its uptake.
    """
    if first[1].substrate != second[1].substrate or None in (first[1].facts, second[1].facts):
        return None
    for per, sizes in ((product, (1.0, 1.0)), (first[1].substrate, (_size(first), _size(second)))):
        difference = _difference(family, first, second, sizes)
        if not difference:
            return None
        carriers = _in_carriers(family, first, second, difference)
        if carriers is None:
            continue
        return _as_cause(family, per, carriers, first, second)
    return None


def tell_cause(cause: Cause, name: str = "it") -> list[str]:
    """A cause in words.

    Examples
    --------
    >>> tell_cause(Cause("acid", (("ATP", 1.0),), (), "ATP", "ack", "acetate"))
    ['it spends 1 ATP more per mol acid', 'more ATP for that comes from ack, with acetate']
    """
    parts: list[str] = []
    if cause.spends:
        parts.append(f"{name} spends {_listed(cause.spends)} more per mol {cause.per}")
    if cause.makes:
        tail = "" if cause.spends else f" more per mol {cause.per}"
        head = ", but makes " if cause.spends else f"{name} makes "
        more = " more" if cause.spends else ""
        parts.append(f"{head}{_listed(cause.makes)}{more}{tail}")
    told = ["".join(parts)] if parts else []
    if cause.source:
        beside = f", with {cause.beside}" if cause.beside else ""
        told.append(f"more {cause.lacking} for that comes from {cause.source}{beside}")
    return told


def _listed(carriers: Sequence[tuple[str, float]]) -> str:
    words = [f"{amount:.3g} {name}" for name, amount in carriers[:_MOST_NAMES]]
    return words[0] if len(words) == 1 else f"{', '.join(words[:-1])} and {words[-1]}"


def _size(side: Side) -> float:
    assert side[1].final.moles is not None
    return float(side[1].final.moles)


def _fluxes(side: Side) -> dict[int, float]:
    """Fluxes per mole of product by the family's column."""
    member, ability = side
    assert ability.facts is not None
    return dict(zip(member.columns, (flux for _, flux in ability.facts.fluxes), strict=True))


def _difference(
    family: Family, first: Side, second: Side, sizes: tuple[float, float]
) -> dict[str, float]:
    """What the reactions that only one has make in the first, less that in the second."""
    both = set(first[0].columns) & set(second[0].columns)
    found: dict[str, float] = {}
    for side, sign in ((first, sizes[0]), (second, -sizes[1])):
        for j, flux in _fluxes(side).items():
            if j in both:
                continue
            for name, value in family.columns[j].made:
                found[name] = found.get(name, 0.0) + sign * flux * float(value)
    return {name: amount for name, amount in found.items() if abs(amount) > _DUST}


def _in_carriers(
    family: Family, first: Side, second: Side, difference: Mapping[str, float]
) -> dict[str, float] | None:
    """The difference in carriers once shared reactions have made up for all else."""
    network = first[0].case.network
    second_network = second[0].case.network
    shared = [j for j in first[0].columns if j in set(second[0].columns)]
    free = _free(network) | _free(second_network)
    names = [s for s in family.species if s not in free]
    place = {name: i for i, name in enumerate(names)}
    matrix = np.zeros((len(names), len(shared)))
    for k, j in enumerate(shared):
        for name, value in family.columns[j].made:
            if name in place:
                matrix[place[name], k] = float(value)
    ends = np.array([-difference.get(name, 0.0) for name in names])
    open_ = np.full(len(shared), np.inf)
    try:
        fluxes = least_total_flux(Problem(
            columns=tuple(family.problem.columns[j] for j in shared),
            rows=tuple(Row(RowKind.BALANCE, name) for name in names),
            matrix=matrix, row_low=ends, row_high=ends, column_low=-open_, column_high=open_,
        ))  # fmt: skip
    except (MisuseError, ArithmeticError):
        return None
    carriers = {s.name for s in (*network.carriers, *second_network.carriers)}
    found = {name: difference.get(name, 0.0) for name in family.species if name in carriers}
    for j, flux in zip(shared, fluxes, strict=True):
        for name, value in family.columns[j].made:
            if name in found:
                found[name] += flux * float(value)
    return {name: amount for name, amount in found.items() if abs(amount) > _DUST}


def _free(network: Network) -> set[str]:
    """Carriers, and what goes either way and holds no electrons: CO2 as a rule."""
    return {s.name for s in network.carriers} | {
        s.name
        for s in network.boundary
        if s.role is Role.EXCHANGE
        and s.formula is not None
        and degree_of_reduction(s.formula) == 0
    }


def _as_cause(
    family: Family, per: str, carriers: Mapping[str, float], first: Side, second: Side
) -> Cause | None:
    facts = second[1].facts
    assert facts is not None
    prices = {p.species: p.price for p in facts.prices}
    spends = tuple((name, amount) for name, amount in carriers.items() if amount > 0)
    makes = tuple((name, -amount) for name, amount in carriers.items() if amount < 0)
    if not carriers:
        return None
    scarce = [(amount * prices.get(name, 0.0), name) for name, amount in spends]
    worth, lacking = max(scarce, default=(0.0, ""))
    source, beside = ("", "") if worth <= _DUST else _source(family, lacking, first, second)
    return Cause(per, spends, makes, lacking if source else "", source, beside)


def _source(family: Family, carrier: str, first: Side, second: Side) -> tuple[str, str]:
    """Which reaction makes most more of a carrier in the second, and what it releases."""
    network = second[0].case.network
    before, after = _fluxes(first), _fluxes(second)
    found: list[tuple[float, int]] = []
    for j, flux in after.items():
        made = float(dict(family.columns[j].made).get(carrier, Fraction(0)))
        gain = made * (flux * _size(second) - before.get(j, 0.0) * _size(first))
        if made * flux > _DUST and gain > _DUST:
            found.append((gain, j))
    if not found:
        return "", ""
    j = max(found)[1]
    reaction = family.columns[j].reaction
    released = [
        name
        for name, value in family.columns[j].made
        if float(value) * after[j] > 0
        and (s := network.find_species(name)) is not None
        and s.role in (Role.PRODUCT, Role.EXCHANGE)
        and name not in _free(network)
    ]
    return reaction.name, " and ".join(released)
