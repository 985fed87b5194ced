"""Signs of coefficients: at the parameters' values, and over the parameters' ranges."""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Mapping, Sequence
from fractions import Fraction
from itertools import product

from fluxnet.ground.diagnostic import Diagnostic
from fluxnet.ground.names import Name
from fluxnet.network.amounts import coefficient_text, number_text
from fluxnet.network.expression import Expression
from fluxnet.network.model import Parameter, Reaction, Term
from fluxnet.network.poles import Pole, find_pole

__all__ = ["changes_sign", "pole_within", "range_of", "range_words", "sign_findings"]

_STEPS = 8


def range_of(parameter: Parameter) -> tuple[Fraction, Fraction]:
    """Where a parameter may lie: its range, else two sds to each side, else its value.

    Examples
    --------
    >>> low, high = range_of(Parameter("a", Fraction(2), sd=Fraction(1, 4)))
    >>> float(low), float(high)
    (1.5, 2.5)
    """
    spread = 2 * (parameter.sd or Fraction(0))
    low = parameter.value - spread if parameter.low is None else parameter.low
    high = parameter.value + spread if parameter.high is None else parameter.high
    return low, high


def pole_within(
    coefficient: Expression, parameters: Mapping[str, Parameter]
) -> Pole | None:
    """A place within the parameters' ranges where a coefficient divides by zero.

    Examples
    --------
    >>> from fluxnet.network.expression import ONE, parameter
    >>> b = Parameter("b", Fraction(2, 5), sd=Fraction(1, 10))
    >>> half = ONE.scaled(Fraction(1, 2))
    >>> pole_within(ONE / (half - parameter("b")), {"b": b}).place
    {'b': Fraction(1, 2)}
    """
    if coefficient.denominator.number is not None:
        return None
    return find_pole(coefficient, {n: range_of(parameters[n]) for n in coefficient.parameters})


def changes_sign(
    coefficient: Expression, parameters: Mapping[str, Parameter]
) -> tuple[dict[str, Fraction], Fraction] | None:
    """A place within the parameters' ranges where a coefficient is negative, with its value.

    The corners of the ranges are tried, which decides it where each parameter enters linearly;
    where one enters by a higher power or in a denominator, also points between them, on a grid
    of eight steps. It should have no pole there (see :func:`pole_within`).

    Examples
    --------
    >>> from fluxnet.network.expression import ONE, parameter
    >>> a = Parameter("a", Fraction(1, 2), low=Fraction(0), high=Fraction(3))
    >>> changes_sign(ONE - parameter("a"), {"a": a})
    ({'a': Fraction(3, 1)}, Fraction(-2, 1))
    """
    names = sorted(coefficient.parameters)
    linear = coefficient.denominator.number is not None and all(
        exponent == 1 for power, _ in coefficient.numerator.terms for _, exponent in power
    )
    axes: list[list[Fraction]] = []
    for name in names:
        low, high = range_of(parameters[name])
        steps = 1 if linear or len(names) > 3 else _STEPS
        points = [low + (high - low) * k / steps for k in range(steps + 1)]
        axes.append(points if high > low else [low])
    worst: tuple[dict[str, Fraction], Fraction] | None = None
    for corner in product(*axes):
        place = dict(zip(names, corner, strict=True))
        try:
            value = coefficient.exact(place)
        except ZeroDivisionError:
            continue  # (a/a) where a is zero: nothing changes its sign there
        if value < 0 and (worst is None or value < worst[1]):
            worst = (place, value)
    return worst


def sign_findings(
    reaction: Reaction,
    unknowns: Iterable[tuple[int, Term]],
    values: Sequence[Expression],
    parameters: Iterable[Parameter],
) -> tuple[Diagnostic, ...]:
    """What is to be said about the signs of solved coefficients of one reaction."""
    known = {p.name: p for p in parameters}
    at = {name: p.value for name, p in known.items()}
    return tuple(
        finding
        for (sign, term), value in zip(unknowns, values, strict=True)
        for finding in _sign_finding(reaction, sign, term, value, known, at)
    )


def _sign_finding(
    reaction: Reaction,
    sign: int,
    term: Term,
    value: Expression,
    known: Mapping[str, Parameter],
    at: Mapping[str, Fraction],
) -> Iterator[Diagnostic]:
    name = f"? {term.species} of {reaction.name}"
    try:
        number = value.exact(at)
    except ZeroDivisionError:
        yield Diagnostic(
            Name.DIVISION_BY_ZERO,
            f"{name} is {value}, which divides by zero at the parameters' values",
            term.span,
        )
        return
    shown = f"{number_text(number)} (that is {value})" if value.parameters else number_text(number)
    here, there = ("left", "right") if sign < 0 else ("right", "left")
    if number < 0:
        yield Diagnostic(
            Name.COEFFICIENT_NEGATIVE,
            f"{name} comes out as {shown}: {term.species} belongs on the {there}, "
            f"not on the {here}",
            term.span,
            mend=f"? {term.species} on the {there}, where it is {coefficient_text(-value)}",
        )
        return
    if number == 0:
        extent = "for every value of the parameters" if value.is_zero and value.parameters else ""
        yield Diagnostic(
            Name.COEFFICIENT_ZERO,
            f"{name} comes out as zero {extent}".rstrip(),
            term.span,
            mend=f"take {term.species} out of {reaction.name}" if value.is_zero else None,
        )
    if pole_within(value, known) is not None:
        return  # it comes from a written coefficient, which is told by itself
    negative = changes_sign(value, known)
    if negative is not None:
        place, lowest = negative
        where = ", ".join(f"{n} = {number_text(v)}" for n, v in place.items())
        yield Diagnostic(
            Name.COEFFICIENT_CHANGES_SIGN,
            f"{name} is {shown}, but {number_text(lowest)} at {where}",
            term.span,
            because="; ".join(range_words(known[n]) for n in place),
        )


def range_words(parameter: Parameter) -> str:
    """From where to where a parameter may lie, and by what.

    Examples
    --------
    >>> range_words(Parameter("b", Fraction(2, 5), sd=Fraction(1, 10)))
    'b from 0.2 to 0.6 (its value ± 2 sd)'
    """
    low, high = range_of(parameter)
    given = parameter.low is not None and parameter.high is not None
    source = "its range" if given else "its value ± 2 sd"
    return f"{parameter.name} from {number_text(low)} to {number_text(high)} ({source})"
