"""The words for a line's balances: the gap, the counts behind it, the repair."""

from __future__ import annotations

from collections.abc import Iterable, Sequence

from fluxnet.network.amounts import coefficient_text, number_text
from fluxnet.network.contents import CHARGE, ELECTRONS
from fluxnet.network.expression import Expression
from fluxnet.network.line_balance import ElementBalance, LineBalance, Verdict
from fluxnet.network.mend import Mend, MendKind
from fluxnet.network.model import Term

__all__ = [
    "amount_words", "because_of", "gap_words", "join", "mend_words", "rounding_words",
]  # fmt: skip


def join(parts: Sequence[str], last: str = "and") -> str:
    """A list in words: ``a, b and c``.

    Examples
    --------
    >>> join(["C", "N", "electrons"]), join(["C"])
    ('C, N and electrons', 'C')
    """
    if len(parts) < 2:
        return "".join(parts)
    return f"{', '.join(parts[:-1])} {last} {parts[-1]}"


def amount_words(balance: ElementBalance, size: Expression) -> str:
    """An amount of what a balance counts: ``1 C``, ``2 electrons``."""
    number = size.constant_value
    text = f"({size})" if number is None else number_text(number)
    if balance.name == ELECTRONS:
        return f"{text} electron" if number == 1 else f"{text} electrons"
    return f"{text} of charge" if balance.name == CHARGE else f"{text} {balance.name}"


def gap_words(line: LineBalance) -> str:
    r"""One sentence that says what a reaction makes or uses in excess.

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
    >>> line = balance_line(bad, contents_of_network(network, (bad,)))
    >>> gap_words(line)
    'reaction ferment makes 1 C more than it uses'
    """
    return f"reaction {line.reaction.name} {_excess(_gaps(line))}"


def _gaps(line: LineBalance) -> list[ElementBalance]:
    """The balances to tell of: those past rounding, where there are such."""
    past = [b for b in line.balances if b.verdict is Verdict.OPEN]
    return past or list(line.open)


def _excess(gaps: Iterable[ElementBalance]) -> str:
    more: list[str] = []
    less: list[str] = []
    names: set[str] = set()
    for balance in gaps:
        names |= balance.gap.parameters if balance.gap.constant_value is None else set()
        turned = _is_negative(balance.gap)
        (less if turned else more).append(
            amount_words(balance, -balance.gap if turned else balance.gap)
        )
    parts: list[str] = []
    if more:
        parts.append(f"makes {join(more)} more than it uses")
    if less:
        parts.append(f"uses {join(less)} more than it makes")
    text = ", and ".join(parts)
    if names:
        return f"does not balance for every value of {join(sorted(names))}: it {text}"
    return text


def _is_negative(gap: Expression) -> bool:
    """Whether a gap reads better turned round: most of its terms are negative."""
    negative = sum(1 for _, c in gap.numerator.terms if c < 0)
    return 2 * negative > len(gap.numerator.terms)


def rounding_words(line: LineBalance) -> str:
    """The sentence for a gap that rounding explains, with the most that it can explain."""
    most = [
        f"{number_text(b.rounding)} {b.name}"
        for b in line.open
        if b.rounding and b.gap.constant_value is not None
    ]
    reach = f" (up to {join(most)})" if most else ""
    return f"{gap_words(line)}; the rounding of its numbers can explain that{reach}"


def because_of(line: LineBalance) -> str:
    """The counts of both sides by species, and which balances close."""
    parts = [
        f"left {_side(line, b, line.reaction.left, b.left)}, "
        f"right {_side(line, b, line.reaction.right, b.right)}"
        for b in line.open
    ]
    closing = [b.name for b in line.balances if b.gap.is_zero]
    if closing:
        verb = "close" if len(closing) > 1 or closing == [ELECTRONS] else "closes"
        parts.append(f"{join(closing)} {verb}")
    return "; ".join(parts)


def _side(
    line: LineBalance, balance: ElementBalance, terms: Iterable[Term], total: Expression
) -> str:
    holders: list[tuple[str, Expression]] = []
    for term in terms:
        amount = balance.functional.of(line.contents[term.species])
        if amount and term.coefficient is not None:
            holders.append((term.species, term.coefficient.scaled(amount)))
    text = f"{balance.name} {_text(total)}"
    if len(holders) == 1:
        return f"{text} ({holders[0][0]})"
    if holders:
        return f"{text} ({', '.join(f'{name} {_text(e)}' for name, e in holders)})"
    return text


def _text(amount: Expression) -> str:
    number = amount.constant_value
    return str(amount) if number is None else number_text(number)


def mend_words(mends: Sequence[Mend]) -> str:
    """The likeliest repair, and one that is as likely, if there is."""
    first = mends[0]
    text = _one_mend(first)
    others = [m for m in mends[1:] if m.species != first.species]
    return f"{text}; so does {_short(others[0])}" if others else text


def _one_mend(mend: Mend) -> str:
    rest = "closes every balance" if mend.exact else "closes every balance within rounding"
    if mend.kind is MendKind.LEAVE_OUT:
        return f"{mend.species} taken out {rest}"
    return f"{_short(mend)} {rest}"


def _short(mend: Mend) -> str:
    amount = f"{coefficient_text(mend.coefficient)} {mend.species}"
    side = "left" if mend.sign < 0 else "right"
    if mend.kind is MendKind.LEAVE_OUT:
        return f"{mend.species} taken out"
    if mend.kind is MendKind.MOVE:
        return f"{amount} on the {side} instead"
    return f"{amount} more on the {side}" if mend.kind is MendKind.ADD else amount
