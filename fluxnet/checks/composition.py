"""Species without a formula: the compositions that their reactions imply, or rule out."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from fractions import Fraction
from functools import partial

from fluxnet.checks.composition_clashes import Balance, Contradiction, Reason, find_contradictions
from fluxnet.checks.composition_rows import (
    Equation,
    equations_of,
    global_functionals,
    within_rounding,
)
from fluxnet.checks.composition_search import determine
from fluxnet.ground.record import record
from fluxnet.network.contents import Functional
from fluxnet.network.line_balance import Contents, contents_of_network
from fluxnet.network.model import Network, Reaction

__all__ = [
    "CompositionResult", "Contradiction", "Implied", "Reason", "find_compositions",
]  # fmt: skip


@record
class Implied:
    """What the reactions around a species say about its content [mol/mol].

    ``contents`` are pairs (element or ``electrons``, amount) that are determined, zeros left
    out; ``undetermined`` are the balances that leave its content free.
    """

    species: str
    contents: tuple[tuple[str, Fraction], ...]
    undetermined: tuple[str, ...] = ()


@record
class CompositionResult:
    """The compositions of all species without a formula.

    ``rounded`` are reactions that balance only within the rounding of their numbers.
    ``at_values`` tells that coefficients with parameters were taken at the parameters' values.
    """

    implied: tuple[Implied, ...] = ()
    contradictions: tuple[Contradiction, ...] = ()
    rounded: tuple[Reaction, ...] = ()
    at_values: bool = False

    @property
    def settled(self) -> frozenset[str]:
        """The species whose composition their reactions determine in full."""
        return frozenset(i.species for i in self.implied if not i.undetermined)


def find_compositions(network: Network) -> CompositionResult:
    r"""Work out what species without a formula must hold, or which reactions forbid any content.

    Every balance of a line (C, N, S, P, other elements, electrons) is one linear equation for
    the unknown contents. They are solved exactly; counts of atoms must not be negative, and a
    species must hold something. Lines of rounded numbers are used after the exact ones and
    contradict only by more than their rounding explains. Parameters stand at their values.

    Parameters
    ----------
    network
        A network whose ``?`` coefficients are solved; lines with one left are passed over.

    Returns
    -------
    CompositionResult
        Implied contents, and irreducible contradictions that have no reaction in common.

    Examples
    --------
    >>> from fluxnet.cli.new import MODEL
    >>> from fluxnet.reading.model import read_model_text
    >>> more = "inside middle\ncompartment c\n    one : pyruvate -> middle + CO2\n"
    >>> more += "    two : middle + NADH -> ethanol\n"
    >>> found = find_compositions(read_model_text(MODEL + more).network)
    >>> [(i.species, dict(i.contents)) for i in found.implied]
    [('middle', {'C': Fraction(2, 1), 'electrons': Fraction(10, 1)})]
    """
    contents = contents_of_network(network)
    unknown = [n for n, content in contents.by_species.items() if content is None]
    if not unknown:
        return CompositionResult()
    balances: list[Balance] = []
    for functional in global_functionals(contents):
        equations = equations_of(contents, functional)
        excuses = partial(_excuses, contents, functional)
        balances.append(Balance(functional, equations, determine(equations, excuses)))
    lines = {e.reaction.name: e.reaction for b in balances for e in b.equations}
    used = {t.species for r in lines.values() for _, t in r.terms}
    contradictions = find_contradictions(balances, unknown)
    spoilt = {t.species for c in contradictions for r in c.reactions for _, t in r.terms}
    for balance in balances:
        for k in set().union(*balance.found.clashes):
            spoilt.update(balance.equations[k].factors)
    rounded = {b.equations[k].reaction.name for b in balances for k in b.found.rounded}
    return CompositionResult(
        tuple(_implied(n, balances) for n in unknown if n in used - spoilt),
        contradictions,
        tuple(r for name, r in lines.items() if name in rounded),
        any(_has_parameters(r) for r in lines.values()),
    )


def _excuses(
    contents: Contents,
    functional: Functional,
    equation: Equation,
    found: Mapping[str, Fraction],
    gap: Fraction,
) -> bool:
    return not equation.exact and within_rounding(equation, contents, functional, found, gap)


def _has_parameters(reaction: Reaction) -> bool:
    return any(t.coefficient is not None and t.coefficient.parameters for _, t in reaction.terms)


def _implied(name: str, balances: Sequence[Balance]) -> Implied:
    contents: list[tuple[str, Fraction]] = []
    free: list[str] = []
    for balance in balances:
        value = balance.found.values.get(name)
        if value is None:
            free.append(balance.functional.name)
        elif value:
            contents.append((balance.functional.name, value))
    return Implied(name, tuple(contents), tuple(free))
