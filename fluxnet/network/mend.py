"""What would repair a reaction that does not balance: one changed, moved or added term."""

from __future__ import annotations

from collections.abc import Iterable, Iterator
from dataclasses import replace
from enum import Enum
from fractions import Fraction

from fluxnet.ground.record import record
from fluxnet.network.amounts import decimals_of
from fluxnet.network.contents import Content
from fluxnet.network.directions import Directions
from fluxnet.network.expression import Expression, constant
from fluxnet.network.line_balance import (
    Contents,
    LineBalance,
    Verdict,
    balance_line,
    held_by,
)
from fluxnet.network.model import Reaction, Role, Species, Term

__all__ = ["Mend", "MendKind", "find_mends"]


class MendKind(Enum):
    """How a line is repaired, the likelier first."""

    CHANGE = "another coefficient"
    LEAVE_OUT = "the term taken out"
    MOVE = "the term on the other side"
    ADD = "one term more"


@record
class Mend:
    """One repair that closes every balance of a line.

    ``sign`` is the side on which the species then stands (-1 left, +1 right) and
    ``coefficient`` what stands before it. ``term`` is the term as it was (None for one that is
    added). ``exact`` is false where rounding has to close a rest.
    """

    kind: MendKind
    species: str
    sign: int
    coefficient: Expression
    term: Term | None = None
    exact: bool = True


def find_mends(
    line: LineBalance, contents: Contents, directions: Directions | None = None
) -> tuple[Mend, ...]:
    r"""All repairs of one term that close every balance of a line, the likeliest first.

    Parameters
    ----------
    line
        The balance of a line with a gap.
    contents
        What the network's species hold; terms to add are looked for among its species.
    directions
        The same by direction of content, where many lines are looked at.

    Returns
    -------
    tuple of Mend
        Changes of a written coefficient before moves and additions; among equals whole
        numbers before decimals before fractions, then the smallest change. Empty where no
        single term repairs the line.

    Examples
    --------
    >>> from fluxnet.network.line_balance import balance_line, contents_of_network
    >>> from fluxnet.reading.model import read_model_text
    >>> network = read_model_text(
    ...     "substrate glucose\nproduct ethanol, CO2\ncompartment c\n"
    ...     "    ferment : glucose -> 2 ethanol + 2 CO2\n"
    ... ).network
    >>> from dataclasses import replace
    >>> from fluxnet.network.expression import constant
    >>> good = network.reactions[0]
    >>> bad = replace(good, right=(good.right[0], replace(good.right[1], coefficient=constant(3))))
    >>> from fluxnet.network.directions import Directions
    >>> contents = contents_of_network(network, (bad,))
    >>> mends = find_mends(balance_line(bad, contents), contents, Directions.of(contents))
    >>> [(m.species, str(m.coefficient)) for m in mends]
    [('CO2', '2')]
    """
    values = {p.name: p.value for p in contents.network.parameters}
    found = [m for m in _changes(line, contents) if _is_written(m, values)]
    if not found:
        found = list(_additions(line, contents, directions or Directions.of(contents), values))
    return tuple(sorted(found, key=lambda m: _rank(m, values, contents)))


def _changes(line: LineBalance, contents: Contents) -> Iterator[Mend]:
    """Changes of one term: those that close exactly, else those that rounding completes."""
    terms = [(s, t) for s, t in line.reaction.terms if not t.solved]
    exact = [m for s, t in terms if (m := _change(line, s, t)) is not None]
    if exact:
        yield from exact
        return
    for sign, term in terms:
        yield from _rounded_change(line, contents, sign, term)


def _change(line: LineBalance, sign: int, term: Term) -> Mend | None:
    step = _step(line, line.contents[term.species], sign)
    if step is None or term.coefficient is None:
        return None
    return _changed_to(sign, term, term.coefficient + step, exact=True)


def _step(line: LineBalance, content: Content, sign: int) -> Expression | None:
    """What has to be added to a coefficient so that every gap closes, or None."""
    step: Expression | None = None
    for balance in line.balances:
        amount = balance.functional.of(content) * sign
        if bool(amount) is balance.gap.is_zero:
            return None
        if amount and step is None:
            step = (-balance.gap).scaled(1 / amount)
    if step is None:
        return None
    for balance in line.balances:
        amount = balance.functional.of(content) * sign
        if not (balance.gap + step.scaled(amount)).is_zero:
            return None
    return step


def _changed_to(sign: int, term: Term, coefficient: Expression, *, exact: bool) -> Mend:
    number = coefficient.constant_value
    if number == 0:
        kind = MendKind.LEAVE_OUT
    elif number is not None and number < 0:
        kind, sign, coefficient = MendKind.MOVE, -sign, -coefficient
    else:
        kind = MendKind.CHANGE
    return Mend(kind, term.species, sign, coefficient, term, exact)


def _rounded_change(
    line: LineBalance, contents: Contents, sign: int, term: Term
) -> Iterator[Mend]:
    """A change that closes the open balances, with as many decimals as were written."""
    content = line.contents[term.species]
    for balance in line.balances:
        amount = balance.functional.of(content) * sign
        number = None if term.coefficient is None else term.coefficient.number
        gap = balance.gap.constant_value
        if balance.verdict is not Verdict.OPEN or not amount or number is None or gap is None:
            continue
        wanted = number - gap / amount
        unit = 2 * term.half_unit
        for value in dict.fromkeys((round(wanted / unit) * unit if unit else wanted, wanted)):
            if value > 0 and _closes(line, contents, sign, term, value):
                yield _changed_to(sign, term, constant(value), exact=False)
                return


def _closes(
    line: LineBalance, contents: Contents, sign: int, term: Term, value: Fraction
) -> bool:
    other = replace(term, coefficient=constant(value))
    reaction = line.reaction
    if sign < 0:
        changed = replace(reaction, left=_swap(reaction.left, term, other))
    else:
        changed = replace(reaction, right=_swap(reaction.right, term, other))
    return balance_line(changed, contents).verdict is not Verdict.OPEN


def _swap(terms: Iterable[Term], old: Term, new: Term) -> tuple[Term, ...]:
    return tuple(new if t is old else t for t in terms)


def _additions(
    line: LineBalance,
    contents: Contents,
    directions: Directions,
    values: dict[str, Fraction],
) -> Iterator[Mend]:
    """One more species on one side."""
    for species in directions.along(line):
        content = held_by(species, contents)
        if content is None or species.name in line.contents or species.role is Role.BIOMASS:
            continue
        step = _step(line, content, 1)
        if step is None:
            continue
        try:
            sign = 1 if step.exact(values) > 0 else -1
        except (ZeroDivisionError, KeyError):
            continue
        mend = Mend(MendKind.ADD, species.name, sign, step if sign > 0 else -step)
        added = _with_term(line.reaction, sign, Term(species.name, mend.coefficient))
        wider = replace(contents, by_species={**contents.by_species, species.name: content})
        if balance_line(added, wider).verdict is Verdict.CLOSES:
            yield mend


def _with_term(reaction: Reaction, sign: int, term: Term) -> Reaction:
    if sign < 0:
        return replace(reaction, left=(*reaction.left, term))
    return replace(reaction, right=(*reaction.right, term))


def _is_written(mend: Mend, values: dict[str, Fraction]) -> bool:
    """Whether a coefficient can stand there: not negative at the parameters' values."""
    try:
        return mend.kind is MendKind.LEAVE_OUT or mend.coefficient.exact(values) > 0
    except (ZeroDivisionError, KeyError):
        return False


def _rank(
    mend: Mend, values: dict[str, Fraction], contents: Contents
) -> tuple[int, int, int, float]:
    species: Species | None = contents.network.find_species(mend.species)
    likely = mend.kind is not MendKind.ADD or (species and species.role is Role.CARRIER)
    role = 0 if likely else 1
    number = mend.coefficient.constant_value
    size = 20 if number is None else decimals_of(number)
    shift = 0.0
    if mend.term is not None and mend.term.coefficient is not None:
        before = float(mend.term.coefficient.exact(values))
        after = float(mend.coefficient.exact(values))
        shift = abs(after - before) / before if before else 0.0
    elif number is not None:
        shift = float(number)
    kind = list(MendKind).index(mend.kind)
    return (kind, 10 if size is None else size, role, shift)
