"""``?`` coefficients, solved from the reaction's own balances as expressions."""

from __future__ import annotations

from collections.abc import Iterable, Mapping, Sequence
from dataclasses import replace
from fractions import Fraction

from fluxnet.exact.linear import independent_rows, kernel, solve
from fluxnet.ground.diagnostic import Diagnostic, has_errors
from fluxnet.ground.names import Name
from fluxnet.ground.record import record
from fluxnet.network.biomass import biomasses
from fluxnet.network.contents import Content, Functional, content_of
from fluxnet.network.expression import ZERO, Expression, constant
from fluxnet.network.line_balance import (
    Contents,
    Verdict,
    balance_line,
    contents_of_network,
    line_functionals,
)
from fluxnet.network.model import Network, Reaction, Term
from fluxnet.network.unknown_signs import sign_findings
from fluxnet.network.unknown_words import (
    carbon_dioxide_of,
    contradiction,
    free_unknowns,
    unseen_composition,
)
from fluxnet.network.water import water_of

__all__ = ["solve_unknowns"]

_MOST_TENTHS = 11


@record
class _Unknown:
    """A ``?`` of one reaction: its side (-1 left, +1 right) and its place on that side."""

    sign: int
    place: int
    term: Term


def solve_unknowns(
    network: Network, reactions: Iterable[Reaction] | None = None
) -> tuple[Network, tuple[Diagnostic, ...]]:
    r"""Solve every ``?`` of a network.

    The balances of a line are linear in its ``?``. Where they are more than the ``?``, the
    first independent ones are solved, in the order carbon, nitrogen, sulfur, phosphorus, the
    other elements, electrons; the rest must then close within the rounding of the written
    numbers, else the line contradicts itself.

    Parameters
    ----------
    network
        A network with ``?`` (terms whose coefficient is None, or that were solved before).
    reactions
        Only these reactions (default: all).

    Returns
    -------
    Network
        The network with solved terms. A line with an error keeps its ``?``. A coefficient
        that comes out as zero stays in its line with the value 0.
    tuple of Diagnostic
        ``coefficient-free``, ``-contradicts``, ``-negative``, ``-changes-sign``, ``-zero``.

    Examples
    --------
    >>> from fluxnet.reading.model import read_model_text
    >>> network = read_model_text(
    ...     "substrate glucose\nproduct ethanol, CO2\ncompartment c\n"
    ...     "    ferment : glucose -> ? ethanol + ? CO2\n"
    ... ).network
    >>> [str(term.coefficient) for term in network.reactions[0].right]
    ['2', '2']
    >>> solve_unknowns(network)[1]
    ()
    """
    wanted = network.reactions if reactions is None else tuple(reactions)
    contents = contents_of_network(network, wanted)
    chosen = {r.name for r in wanted}
    found: list[Diagnostic] = []
    solved: list[Reaction] = []
    for reaction in network.reactions:
        if reaction.name in chosen:
            reaction, diagnostics = _solve_line(reaction, contents)
            found.extend(diagnostics)
        solved.append(reaction)
    if all(a is b for a, b in zip(solved, network.reactions, strict=True)):
        return network, tuple(found)
    return replace(network, reactions=tuple(solved)), tuple(found)


def _solve_line(
    reaction: Reaction, contents: Contents
) -> tuple[Reaction, tuple[Diagnostic, ...]]:
    unknowns = [
        _Unknown(sign, place, term)
        for sign, side in ((-1, reaction.left), (1, reaction.right))
        for place, term in enumerate(side)
        if term.coefficient is None or term.solved
    ]
    if not unknowns:
        return reaction, ()
    reaction = _filled(reaction, unknowns, [None] * len(unknowns))
    names = dict.fromkeys(term.species for _, term in reaction.terms)
    unseen = [n for n in names if contents.by_species.get(n) is None]
    if unseen:
        return reaction, (unseen_composition(reaction, unknowns[0].term, unseen),)
    present = {n: c for n in names if (c := contents.by_species[n]) is not None}
    species = [s for n in names if (s := contents.network.find_species(n)) is not None]
    functionals = line_functionals(present, contents.free, water_of(species).checked)
    rows = [
        [u.sign * f.of(present[u.term.species]) for u in unknowns] for f in functionals
    ]
    signed = [(u.sign, u.term) for u in unknowns]
    loose = kernel(rows, len(unknowns))
    if loose:
        return reaction, free_unknowns(
            reaction, signed, loose, functionals, contents.network, present
        )
    values = _solution(reaction, functionals, present, rows)
    after = _filled(reaction, unknowns, values)
    line = balance_line(after, contents)
    if line.verdict is Verdict.OPEN:
        return reaction, (contradiction(reaction, signed, line, contents),)
    diagnostics = sign_findings(after, signed, values, contents.network.parameters)
    if has_errors(diagnostics):
        return reaction, _or_forgotten_gas(reaction, diagnostics, contents)
    return after, diagnostics


def _or_forgotten_gas(
    reaction: Reaction, diagnostics: tuple[Diagnostic, ...], contents: Contents
) -> tuple[Diagnostic, ...]:
    """Where growth lacks CO2, a number of it that leaves every ``?`` on its side is a mend too."""
    network = contents.network
    grown = {s.name for s in biomasses(network)}
    gas = carbon_dioxide_of(network)
    negative = [d for d in diagnostics if d.name is Name.COEFFICIENT_NEGATIVE and d.mend]
    named = {t.species for _, t in reaction.terms}
    if gas is None or gas.name in named or not negative or not named & grown:
        return diagnostics
    wider = replace(contents, by_species={**contents.by_species, gas.name: content_of(gas)})
    for tenths in range(1, _MOST_TENTHS):
        term = Term(gas.name, constant(Fraction(tenths, 10)))
        if not has_errors(_solve_line(replace(reaction, right=(*reaction.right, term)), wider)[1]):
            more = f"; or a number of {gas.name} on the right, such as {tenths / 10:g} {gas.name}"
            return tuple(
                replace(d, mend=f"{d.mend}{more}, if it was left out") if d in negative else d
                for d in diagnostics
            )
    return diagnostics


def _solution(
    reaction: Reaction,
    functionals: Sequence[Functional],
    present: Mapping[str, Content],
    rows: Sequence[Sequence[Fraction]],
) -> list[Expression]:
    """The unknowns from the first independent balances: a rational inverse times the rest."""
    count = len(rows[0])
    chosen = independent_rows(rows, count)
    square = [rows[i] for i in chosen]
    rests = [_known(reaction, functionals[i], present) for i in chosen]
    values: list[Expression] = [ZERO] * count
    for k, rest in enumerate(rests):
        unit = [Fraction(int(i == k)) for i in range(count)]
        column = solve(square, unit, count)
        assert column is not None, "independent rows have a solution"
        for j, factor in enumerate(column):
            if factor:
                values[j] = values[j] - rest.scaled(factor)
    return values


def _known(
    reaction: Reaction, functional: Functional, present: Mapping[str, Content]
) -> Expression:
    """What the written coefficients add up to in one balance, right less left."""
    number, rest = Fraction(0), ZERO
    for sign, term in reaction.terms:
        amount = sign * functional.of(present[term.species])
        if term.coefficient is not None and amount:
            factor = term.coefficient.number
            if factor is None:
                rest = rest + term.coefficient.scaled(amount)
            else:
                number += factor * amount
    return rest + constant(number)


def _filled(
    reaction: Reaction, unknowns: Sequence[_Unknown], values: Sequence[Expression | None]
) -> Reaction:
    """The reaction with these coefficients for its unknowns (None: back to ``?``)."""
    sides = {-1: list(reaction.left), 1: list(reaction.right)}
    for unknown, value in zip(unknowns, values, strict=True):
        sides[unknown.sign][unknown.place] = replace(
            unknown.term, coefficient=value, solved=value is not None
        )
    return replace(reaction, left=tuple(sides[-1]), right=tuple(sides[1]))
