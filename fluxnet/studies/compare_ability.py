"""What one case can do: its optimum in each mode, its growth, and why it makes nothing."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import replace
from fractions import Fraction

from fluxnet.chemistry.formula import molar_mass
from fluxnet.ground.record import record
from fluxnet.network.biomass import biomass_mass
from fluxnet.network.model import Network, Role
from fluxnet.solving.linear import Outcome, Programme
from fluxnet.solving.problem import RowKind
from fluxnet.solving.unbounded import explain_unbounded
from fluxnet.studies.aim_problem import hold_optimum
from fluxnet.studies.aims import Sense
from fluxnet.studies.compare_facts import ceiling_of, find_facts, growth_row
from fluxnet.studies.compare_family import Family, Member
from fluxnet.studies.compare_modes import DEMANDS, Demands, Mode, Question, ask, moles_of
from fluxnet.studies.compare_obstacles import tell_obstacle
from fluxnet.studies.compare_result import Ability, ModeYield
from fluxnet.studies.compare_scan import Best, find_best, scan, solve_again
from fluxnet.studies.compare_supply import find_supply

__all__ = ["Work", "find_ability", "solve_all"]


@record
class Work:
    """A case with all that is known of it before it is solved."""

    family: int
    member: Member
    demands: Demands
    name: str


def solve_all(
    family: Family, works: Sequence[Work], product: str
) -> list[tuple[Work, dict[Mode, Best]]]:
    """Each case's optimum in each mode that differs from the one before, proven."""
    asked = [
        (work, mode, ask(work.member, work.demands, DEMANDS[mode]))
        for work in works
        for mode in work.demands.modes
    ]
    solved = scan(family, [(w.member, q) for w, _, q in asked], product)
    found: dict[str, dict[Mode, Best]] = {w.name: {} for w in works}
    for (work, mode, question), one in zip(asked, solved, strict=True):
        found[work.name][mode] = find_best(family, work.member, question, product, one)
    for work in works:
        bests = found[work.name]
        for mode, best in bests.items():
            if best.outcome is Outcome.INFEASIBLE:
                bests[mode] = _at_most_uptake(family, work, mode, best, product)
    return [(work, found[work.name]) for work in works]


def _at_most_uptake(
    family: Family, work: Work, mode: Mode, best: Best, product: str
) -> Best:
    """The optimum at the largest uptake that the limits let the cell use; else as it was."""
    case = work.member.case
    species = case.network.find_species(case.substrate)
    if species is None or species.role is not Role.SUBSTRATE:
        return best
    held, zero = DEMANDS[mode], Fraction(0)
    wide = ask(work.member, work.demands, held, (zero, best.question.uptake))
    most = solve_again(family, work.member, wide, case.substrate)
    if not most.amount:
        return best
    span = (most.amount, most.amount)
    again = solve_again(family, work.member, ask(work.member, work.demands, held, span), product)
    return again if again.amount is not None else best


def find_ability(
    work: Work, bests: Mapping[Mode, Best], product: str, modes: Sequence[Mode]
) -> Ability:
    """What a case can do, given its optima; a mode without its own has the one before."""
    case = work.member.case
    asked = case.uptake or moles_of(case.network, case.substrate)
    yields: list[ModeYield] = []
    last = bests[Mode.ALONE]
    for mode in modes:
        last = bests.get(mode, last)
        yields.append(_yield(case.network, product, case.substrate, mode, last, asked))
    grown = _growth(work, bests.get(Mode.KEPT, bests[Mode.ALONE]), product)
    facts = find_facts(work.member, work.demands, last, product)
    supply = None
    if facts is not None and case.uptake is not None:
        supply = find_supply(case.network, case.substrate, product, yields[-1], facts)
    return Ability(
        name=work.name,
        variant=case.variant,
        substrate=case.substrate,
        yields=tuple(yields),
        ceiling=ceiling_of(case.network, product, case.substrate),
        facts=facts,
        without_growth=grown[0],
        most_growth=grown[1],
        forced=grown[2],
        reason=_reason(work, last, product, is_dead=bests[Mode.ALONE].amount is None),
        left_out=work.demands.left_out,
        parts=case.parts,
        supply=supply,
    )


def _yield(
    network: Network, product: str, substrate: str, mode: Mode, best: Best, asked: Fraction
) -> ModeYield:
    moles: Fraction | None = None
    carbon: Fraction | None = None
    mass: float | None = None
    share: Fraction | None = None
    ceiling = ceiling_of(network, product, substrate)
    if best.amount is not None:
        used = best.question.uptake / moles_of(network, substrate)
        moles = best.amount / moles_of(network, product) / used
        made, taken = network.find_species(product), network.find_species(substrate)
        assert made is not None
        assert taken is not None
        if made.formula is not None and taken.formula is not None:
            atoms = made.formula.count("C"), taken.formula.count("C")
            carbon = moles * atoms[0] / atoms[1] if all(atoms) else None
            grams = biomass_mass(made) if made.role is Role.BIOMASS else molar_mass(made.formula)
            mass = float(moles) * grams / molar_mass(taken.formula)
        share = moles / ceiling if ceiling else None
    proof = best.proven.proof
    return ModeYield(
        mode, best.outcome, moles, carbon, mass, share, best.question.uptake,
        best.question.uptake < asked, proof.verified, proof.words,
    )  # fmt: skip


def _growth(
    work: Work, best: Best, product: str
) -> tuple[float | None, float | None, float | None]:
    """The most product without growth, the most growth, the least product there [mol/mol]."""
    network, problem = work.member.case.network, best.problem
    growth = growth_row(problem, network)
    if growth is None or best.outcome is not Outcome.OPTIMAL:
        return None, None, None
    used = float(best.question.uptake / moles_of(network, work.member.case.substrate))
    each = float(moles_of(network, product))
    still = _without_growth(work.member, best.question)
    closed = replace(problem, row_low=still.low, row_high=still.high)
    none = Programme(closed).maximise(best.cost)
    without = none.objective / each / used if none.outcome is Outcome.OPTIMAL else 0.0
    grown = Programme(problem).maximise(growth)
    if grown.outcome is not Outcome.OPTIMAL:
        return _tidy(without), None, None
    at_most = hold_optimum(problem, growth, grown, Sense.MAXIMISE, 1.0)
    least = Programme(at_most).minimise(best.cost)
    forced = least.objective / each / used if least.outcome is Outcome.OPTIMAL else None
    return _tidy(without), _tidy(grown.objective / used), None if forced is None else _tidy(forced)


def _tidy(value: float) -> float:
    return 0.0 if abs(value) < 1e-9 else value


def _without_growth(member: Member, question: Question) -> Question:
    """The question with the release of biomass closed."""
    network = member.case.network
    own = {s.name for s in network.boundary if s.role is Role.BIOMASS}
    low, high = question.low.copy(), question.high.copy()
    for k, row in enumerate(member.labels):
        if row.kind is RowKind.ROLE and row.name in own:
            low[k] = high[k] = 0.0
    return replace(question, low=low, high=high)


def _reason(work: Work, best: Best, product: str, *, is_dead: bool) -> str:
    """Why no product comes out, where none does."""
    network = work.member.case.network
    if best.outcome is Outcome.UNBOUNDED:
        return f"there is no end to it: {explain_unbounded(best.problem, best.cost).words}"
    if best.outcome is Outcome.INFEASIBLE and is_dead:
        return f"no {work.member.case.substrate} can be used; {tell_obstacle(network, product)}"
    if best.outcome is Outcome.INFEASIBLE:
        return "maintenance and what is kept back ask for more than the substrate can give"
    if best.outcome is not Outcome.OPTIMAL:
        return "the solver could not tell what is best"
    return "" if best.amount else tell_obstacle(network, product)
