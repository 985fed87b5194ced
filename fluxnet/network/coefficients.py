"""Coefficients that are written as numbers or expressions: their signs and their spread."""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Mapping, Sequence
from fractions import Fraction

from fluxnet.ground.diagnostic import Diagnostic
from fluxnet.ground.names import Name
from fluxnet.network.amounts import number_text
from fluxnet.network.balance_words import join
from fluxnet.network.model import Network, Parameter, Reaction, Term
from fluxnet.network.poles import Pole
from fluxnet.network.unknown_signs import changes_sign, pole_within, range_of, range_words

__all__ = ["check_coefficients"]

_Place = tuple[tuple[str, Fraction], ...]

_WIDEST = 10**10
_REACH = 10**30


def check_coefficients(
    network: Network, reactions: Iterable[Reaction] | None = None
) -> tuple[Diagnostic, ...]:
    r"""Check the coefficients as written; those solved for ``?`` are judged where solved.

    Parameters
    ----------
    network
        Where the parameters are declared.
    reactions
        Only these reactions (default: all).

    Returns
    -------
    tuple of Diagnostic
        ``division-by-zero`` and ``coefficient-not-positive`` at the parameters' values,
        ``divides-by-zero-in-range`` and ``coefficient-changes-sign`` within their ranges,
        ``wide-coefficients`` for a reaction whose coefficients differ by more than ten
        decades; ``unreadable-line`` for a coefficient that cannot be computed with.

    Examples
    --------
    >>> from fluxnet.reading.model import read_model_text
    >>> reading = read_model_text(
    ...     "substrate glucose\nproduct ethanol, CO2\nparameter a = 1 in [0, 3]\ncompartment c\n"
    ...     "    ferment : (2 - a) glucose -> (4 - 2*a) ethanol + (4 - 2*a) CO2\n")
    >>> [d.name.value for d in check_coefficients(reading.network)]
    ['coefficient-changes-sign', 'coefficient-changes-sign']
    """
    parameters = {p.name: p for p in network.parameters}
    found: list[Diagnostic] = []
    for reaction in network.reactions if reactions is None else reactions:
        sizes: list[Fraction] = []
        poles: set[_Place] = set()
        for terms in _alike(reaction):
            found.extend(_term_findings(reaction, terms, parameters, sizes, poles))
        if sizes and max(sizes) > _WIDEST * min(sizes):
            found.append(
                Diagnostic(
                    Name.WIDE_COEFFICIENTS,
                    f"the coefficients of {reaction.name} run from {float(min(sizes)):.3g} "
                    f"to {float(max(sizes)):.3g}",
                    reaction.span,
                    mend="write the reaction per another amount, or check the numbers",
                )
            )
    return tuple(found)


def _alike(reaction: Reaction) -> list[list[Term]]:
    """The written terms of a reaction, those with the same expression together."""
    groups: dict[str, list[Term]] = {}
    for _, term in reaction.terms:
        if term.coefficient is not None and not term.solved:
            groups.setdefault(str(term.coefficient), []).append(term)
    return list(groups.values())


def _term_findings(
    reaction: Reaction,
    terms: Sequence[Term],
    parameters: Mapping[str, Parameter],
    sizes: list[Fraction],
    poles: set[_Place],
) -> Iterator[Diagnostic]:
    term, also = terms[0], tuple(t.span for t in terms[1:])
    coefficient = term.coefficient
    if coefficient is None:
        return
    number = coefficient.number
    species = join([t.species for t in terms])
    name = f"the coefficient of {species} in {reaction.name}"
    if number is not None and number > 0:
        beyond = _beyond_reach(number, name, terms)
        sizes.extend([] if beyond else [number])
        yield from beyond
        return
    at = {n: parameters[n].value for n in coefficient.parameters}
    try:
        value = coefficient.exact(at)
    except ZeroDivisionError:
        yield Diagnostic(
            Name.DIVISION_BY_ZERO,
            f"{name}, {term.written}, divides by zero at the parameters' values",
            term.span,
            because=_values(at),
            also=also,
        )
        return
    if value <= 0:
        yield Diagnostic(
            Name.COEFFICIENT_NOT_POSITIVE,
            f"{name} is {number_text(value)}",
            term.span,
            because=_values(at) or None,
            mend=f"take {species} out" if not value else f"write {species} on the other side",
            also=also,
        )
        return
    beyond = _beyond_reach(value, name, terms)
    if beyond:
        yield from beyond
        return
    sizes.append(value)
    pole = pole_within(coefficient, parameters)
    if pole is not None:
        place = tuple(sorted(pole.place.items()))
        if place in poles:
            return  # another term of the reaction divides by the same
        poles.add(place)
        yield Diagnostic(
            Name.DIVIDES_IN_RANGE,
            f"{name}, {term.written}, {_pole_words(pole, parameters)}",
            term.span,
            because="; ".join(range_words(parameters[n]) for n in sorted(pole.place)),
            mend="narrow the range or the sd, or write the line in another way",
            also=also,
        )
        return
    negative = changes_sign(coefficient, parameters)
    if negative is not None:
        where, lowest = negative
        yield Diagnostic(
            Name.COEFFICIENT_CHANGES_SIGN,
            f"{name} is {number_text(value)}, but {number_text(lowest)} at {_values(where)}",
            term.span,
            also=also,
        )


def _pole_words(pole: Pole, parameters: Mapping[str, Parameter]) -> str:
    """Where a coefficient divides by zero, as far as that is known."""
    plural = "s" if len(pole.place) > 1 else ""
    ranges = f"the parameter{plural}' range{plural}" if plural else "the parameter's range"
    if not pole.proven:
        return f"may divide by zero within {ranges}: that could not be ruled out"
    place = ", ".join(
        f"{n} = {number_text(v if pole.exact else _rounded(v, parameters[n]))}"
        for n, v in sorted(pole.place.items())
    )
    return f"divides by zero within {ranges}, {'at' if pole.exact else 'near'} {place}"


def _rounded(value: Fraction, parameter: Parameter) -> Fraction:
    """A place to some thousandths of the parameter's range."""
    low, high = range_of(parameter)
    digits = 0
    while (high - low) * 10**digits < 1000 and digits < 30:
        digits += 1
    return round(value, digits)


def _beyond_reach(value: Fraction, name: str, terms: Sequence[Term]) -> list[Diagnostic]:
    """What is said of a coefficient that cannot be computed with."""
    if Fraction(1, _REACH) <= value <= _REACH:
        return []
    return [
        Diagnostic(
            Name.UNREADABLE_LINE,
            f"{name}, {terms[0].written}, is out of reach",
            terms[0].span,
            because="coefficients lie between 1e-30 and 1e30",
            also=tuple(t.span for t in terms[1:]),
        )
    ]


def _values(place: Mapping[str, Fraction]) -> str:
    return ", ".join(f"{n} = {number_text(v)}" for n, v in sorted(place.items()))
