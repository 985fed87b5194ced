"""One sentence that says what was found."""

from __future__ import annotations

from collections.abc import Sequence
from math import isclose, isinf
from typing import TYPE_CHECKING

from fluxnet.network.model import Direction, Network, Quantity, QuantityKind
from fluxnet.solving.problem import Problem, RowKind
from fluxnet.solving.violations import find_violations
from fluxnet.solving.words import quantity_words
from fluxnet.studies.solution import FluxKind, FluxSolution, FluxTest, OptimumSpan, RateKind
from fluxnet.studies.units import sum_unit
from fluxnet.studies.yields import ALL_CARBON

if TYPE_CHECKING:
    from fluxnet.solving.conflict import LeastChange
    from fluxnet.solving.flux_fit import PressingBound
    from fluxnet.solving.unbounded import Unbounded
    from fluxnet.studies.aims import Aim
    from fluxnet.studies.conflicts import ToldConflict

__all__ = [
    "agrees_exactly", "bound_words", "listed", "open_substrates", "tell_clashes", "tell_fit",
    "tell_infeasible", "tell_optimum", "tell_unbounded", "tell_violations",
]  # fmt: skip


def tell_fit(solution: FluxSolution, test: FluxTest, clashes: Sequence[str] = ()) -> str:
    """What a least-squares solve found.

    ``clashes`` are limits that a measured value by itself passes (:func:`tell_clashes`).
    """
    determined = sum(f.kind is FluxKind.DETERMINED for f in solution.fluxes)
    known = f"{determined} of {len(solution.fluxes)} fluxes are determined"
    spender = _largest_spender(solution) + _guessed_ratios(solution)
    beyond = test.bound_p is not None and test.bound_p < 0.05
    chance = _chance(test.p)
    if clashes or beyond:
        told = [f"{words[:1].upper()}{words[1:]}." for words in clashes]
        if not clashes:
            start = "The rates fit only" if test.closes is False else "The rates balance, but only"
            told.append(f"{start} with fluxes that the limits forbid: {', '.join(test.active)}.")
        if test.closes is False:
            told.append(f"The balances alone reject the rates, too (p {_equals(chance)}).")
        return f"{' '.join(told)} Fluxes are given, and not to be trusted."
    if test.h is None and agrees_exactly(solution):
        return f"The exact values agree, and without errors nothing is tested; {known}.{spender}"
    if test.h is None:
        measured = any(rate.measured is not None for rate in solution.rates)
        if solution.run is None or not measured:
            return f"No rate is measured: the limits alone leave this; {known}.{spender}"
        return f"The rates fit the network, but none tests another; {known}.{spender}"
    if test.closes is False:
        worst = _worst(solution)
        return (
            f"The rates and the network do not agree: by chance they would differ so much with a "
            f"probability {chance}; {worst}. Fluxes are given, and not to be trusted."
        )
    return f"The rates and the network agree (p = {chance}); {known}.{spender}"


def _equals(chance: str) -> str:
    return chance if chance.startswith("below") else f"= {chance}"


def agrees_exactly(solution: FluxSolution) -> bool:
    """Whether values without an error are fixed by one another, and none has one."""
    fixed = [r for r in solution.rates if r.kind is RateKind.BALANCEABLE]
    return bool(fixed) and all(not rate.sd for rate in fixed)


def bound_words(bound: PressingBound) -> str:
    """A bound as it is named."""
    kind = bound.kind.value
    return bound.name if kind in bound.name else f"{kind} of {bound.name}"


def tell_clashes(problem: Problem) -> tuple[str, ...]:
    """Each limit with the measured value of the same quantity that passes it by two sds."""
    told = []
    for found in find_violations(problem):
        row = found.measured
        sd = (row.sd or 0.0) / (1.0 if row.ratio is None else row.denominator or 1.0)
        told.append(
            f"{found.limit.name} and {row.name} as measured, {found.value:.4g} ± {sd:.2g}, "
            "contradict each other"
        )
    return tuple(told)


def _chance(p: float | None) -> str:
    """A probability with the digits that it has everywhere else on the screen."""
    if p is None:
        return "unknown"
    return "below 0.001" if p < 0.001 else f"{p:.3f}" if p < 0.1 else f"{p:.2f}"


def _guessed_ratios(solution: FluxSolution) -> str:
    """The measured ratios whose weight is a guess, for nothing determines their lower part."""
    loose = {r.quantity for r in solution.rates if r.measured is None and r.reconciled_sd is None}
    words = [
        f" The measured ratio {rate.quantity} is weighed by a guess of {below}, which nothing "
        "determines: what rests on it is not to be trusted."
        for rate in solution.rates
        if rate.measured is not None and (below := rate.quantity.denominator) in loose
    ]
    return "".join(words)


def _worst(solution: FluxSolution) -> str:
    """The rates that were moved most, as many as are nearly alike."""
    tested = [r for r in solution.rates if r.z is not None and r.kind is RateKind.BALANCEABLE]
    ranked = sorted(tested, key=lambda rate: -abs(rate.z or 0.0))
    if not ranked:
        return "no single rate can be named"
    most = abs(ranked[0].z or 0.0)
    alike = [rate for rate in ranked[:4] if abs(rate.z or 0.0) > most - 0.5]
    names = listed([f"{rate.quantity} (z = {rate.z:.1f})" for rate in alike])
    if len(alike) == 1:
        return f"the largest adjustment is that of {names}"
    return f"the largest adjustments, nearly alike, are those of {names}"


def _largest_spender(solution: FluxSolution) -> str:
    """Who spends the first carrier that is spent, and how much of it."""
    for carrier in dict.fromkeys(line.carrier for line in solution.ledger):
        lines = [line for line in solution.ledger if line.carrier == carrier]
        spent = -sum(line.net for line in lines if line.net < 0)
        if spent > 0:
            if any(line.sd is None for line in lines):
                return ""  # shown is one of many values
            most = min(lines, key=lambda line: line.net)
            return (
                f" Of the {carrier} that compartments make for one another (net of what each "
                f"spends itself), {most.compartment} takes {-most.net / spent:.0%}."
            )
    return ""


def open_substrates(problem: Problem, solution: FluxSolution) -> tuple[str, ...]:
    """The carbon substrates that a solution takes up and no limit or measurement bounds.

    Those that the aim itself names are left out.
    """
    bounded = {
        row.quantity.name
        for row, low, high in zip(problem.rows, problem.row_low, problem.row_high, strict=True)
        if row.kind is not RowKind.ROLE
        and row.quantity is not None
        and row.quantity.kind is QuantityKind.RATE
        and not isinf(low if row.quantity.direction is Direction.OUT else high)
    }
    asked = {q.name for _, q in solution.aim.terms} if solution.aim is not None else set()
    taken = dict.fromkeys(line.substrate for line in solution.yields)
    return tuple(s for s in taken if s not in bounded | asked and s != ALL_CARBON)


def tell_optimum(solution: FluxSolution, unbounded: tuple[str, ...] = ()) -> str:
    """What an aim's best value is, per what, and what holds it back.

    ``unbounded`` are the substrates without a limit (:func:`open_substrates`).
    """
    from fluxnet.studies.aims import Sense

    is_maximum = solution.aim is not None and solution.aim.sense is Sense.MAXIMISE
    value = f"{solution.optimum:.4g} {_aim_unit(solution)}"
    words = f"The best that the network allows, {solution.aim}: {value}{_share(solution)}. "
    if solution.span is not None:
        words += _span_words(solution.span, _aim_unit(solution))
    if solution.limits:
        words += f"It is held back by {listed([limit.name for limit in solution.limits[:3]])}."
    elif solution.proof is None or solution.proof.verified:
        words += "No limit of the model holds it back, only the balances."
    if solution.unheld is not None:
        free = "there is no end to it" if isinf(solution.unheld) else f"it is {solution.unheld:.4g}"
        words += f" Without its own measurement {free}."
    if unbounded and is_maximum:
        words += (
            f" No limit is set on {listed([f'{name} in' for name in unbounded])}: this is the "
            "largest rate that the other limits allow, and the yield that goes with it need not "
            "be the largest."
        )
    return words


def _span_words(span: OptimumSpan, unit: str) -> str:
    """Where the optimum lies over the errors of the parameters."""
    names = listed(list(span.parameters))
    gap = f" (searched at {span.points} points"
    gap += f"; {span.infeasible} of them infeasible)" if span.infeasible else ")"
    if isclose(span.low, span.high, rel_tol=1e-9, abs_tol=1e-12):
        return f"Within ± 2 sd of {names} it stays the same{gap}. "
    low, high = ("no end" if isinf(end) else f"{end:.4g}" for end in (span.low, span.high))
    return f"Over ± 2 sd of {names} it lies between {low} and {high} {unit}{gap}. "


def _aim_unit(solution: FluxSolution) -> str:
    return solution.unit if solution.aim is None else sum_unit(solution.aim.terms, solution.unit)


def _share(solution: FluxSolution) -> str:
    """The aim's yield where it is the release of one product, and shown is the optimum."""
    aim = solution.aim
    if aim is None or len(aim.terms) != 1 or solution.fraction < 1:
        return ""
    weight, quantity = aim.terms[0]
    if weight != 1 or quantity.direction is not Direction.OUT:
        return ""
    name = quantity.name
    for line in solution.yields:
        if line.product == name and line.per_mole is not None:
            mass = f", {line.per_mass:.4g} g/g" if line.per_mass is not None else ""
            return f", {line.per_mole:.4g} mol per mol {line.substrate}{mass}"
    return ""


def tell_infeasible(
    conflicts: Sequence[ToldConflict], change: LeastChange | None, within: float | None = None
) -> str:
    """What cannot hold together, and how much would have to give way."""
    held = f" within {within:g} sd" if within is not None else ""
    words = f"No fluxes meet everything{held}{_first_conflict(conflicts)}"
    if change is None:
        return words + "."
    if not change.possible:
        return words + "; no change of the measured rates mends it."
    if change.common_k is None or not change.changes:
        return words + "."
    most = max(change.changes, key=lambda one: abs(one.in_sd))
    return (
        f"{words}. The least change that mends it moves {most.quantity} from {most.measured:.4g} "
        f"to {most.changed:.4g} ({most.in_sd:+.1f} sd)."
    )


def _first_conflict(conflicts: Sequence[ToldConflict]) -> str:
    """The first conflict, by its bill where it has one, and how many stand beside it."""
    if not conflicts:
        return ""
    bill = conflicts[0].bill
    given = [member.name for member in conflicts[0].conflict.given]
    names = listed(given) if given else "what the model demands"
    words = f": {names} cannot hold together" if bill is None else f". {bill.words[:-1]}"
    if len(conflicts) > 1:
        words += f", and {len(conflicts) - 1} more such conflict"
        words += "s stand beside it" if len(conflicts) > 2 else " stands beside it"
    return words


def tell_unbounded(aim: Aim, reason: Unbounded, network: Network) -> str:
    """Why an aim has no best value, and the lines that would mend it.

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
    >>> from fluxnet.solving.unbounded import Unbounded
    >>> from fluxnet.studies.aims import Sense, read_aim
    >>> reason = Unbounded((), ("glucose",), ("glucose",), "nothing limits glucose in")
    >>> tell_unbounded(read_aim("lactate", Sense.MAXIMISE, network), reason, network)[-69:]
    'in. Write `limit glucose <= 10` into the model, with your own number.'
    """
    words = str(aim)
    told = f"{words[:1].upper()}{words[1:]}: there is no end to it: {reason.words}."
    uptakes = [Quantity(QuantityKind.RATE, name, Direction.IN) for name in reason.missing]
    lines = [f"`limit {quantity_words(uptake, network)} <= 10`" for uptake in uptakes]
    if not lines:
        return told
    return f"{told} Write {listed(lines)} into the model, with your own number."


def tell_violations(problem: Problem) -> tuple[str, ...]:
    """The limits that a measured value of the same quantity passes by more than two sds."""
    return tuple(
        f"{v.limit.name} is passed by {v.measured.name}, measured {v.value:.4g}, "
        f"by {v.in_sd:.1f} sd"
        for v in find_violations(problem)
    )


def listed(words: Sequence[str]) -> str:
    """Words in a row, the last one behind "and"."""
    if len(words) <= 1:
        return "".join(words)
    return f"{', '.join(words[:-1])} and {words[-1]}"
