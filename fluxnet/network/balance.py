"""Whether every reaction balances, exactly; what is told where one does not."""

from __future__ import annotations

from collections.abc import Iterable

from fluxnet.ground.diagnostic import Diagnostic
from fluxnet.ground.names import Name
from fluxnet.network.advice import terms_to_solve
from fluxnet.network.balance_notes import notes_on
from fluxnet.network.balance_words import because_of, gap_words, mend_words, rounding_words
from fluxnet.network.directions import Directions
from fluxnet.network.line_balance import (
    Contents,
    LineBalance,
    Verdict,
    balance_line,
    contents_of_network,
)
from fluxnet.network.mend import find_mends
from fluxnet.network.model import Network, Reaction

__all__ = ["check_balances"]


def check_balances(
    network: Network, reactions: Iterable[Reaction] | None = None
) -> tuple[Diagnostic, ...]:
    r"""Say which reactions do not balance, and what would mend them.

    Parameters
    ----------
    network
        A network whose ``?`` coefficients are solved; lines with one left are passed over.
    reactions
        Only these reactions (default: all).

    Returns
    -------
    tuple of Diagnostic
        ``unbalanced-line`` for a gap, ``rounding-gap`` for one that the rounding of the written
        numbers explains, ``balance-not-checked`` for each cause that forbids a check.

    Examples
    --------
    >>> from fluxnet.reading.model import read_model_text
    >>> network = read_model_text(
    ...     "substrate glucose\nproduct ethanol, CO2\ncompartment c\n"
    ...     "    ferment : glucose -> 2 ethanol + 2 CO2\n"
    ... ).network
    >>> check_balances(network)
    ()
    """
    chosen = network.reactions if reactions is None else tuple(reactions)
    contents = contents_of_network(network, chosen)
    lines = tuple(balance_line(r, contents) for r in chosen)
    found: list[Diagnostic] = []
    directions: Directions | None = None
    for line in lines:
        if line.verdict is Verdict.OPEN:
            directions = directions or Directions.of(contents)
            found.append(_unbalanced(line, contents, directions))
        elif line.verdict is Verdict.ROUNDING:
            found.append(_rounded(line))
    found.extend(notes_on(lines, network))
    return tuple(found)


def _unbalanced(line: LineBalance, contents: Contents, directions: Directions) -> Diagnostic:
    mends = find_mends(line, contents, directions)
    term = mends[0].term if mends else None
    return Diagnostic(
        Name.UNBALANCED_LINE,
        gap_words(line),
        line.reaction.span if term is None else term.span,
        because_of(line),
        mend_words(mends) if mends else _advice(line),
    )


def _advice(line: LineBalance) -> str:
    terms = terms_to_solve(line)
    if not terms:
        return "no single coefficient closes every balance: a species is missing or wrong"
    names = " and ".join(f"? {t.species}" for t in terms)
    return f"no single coefficient closes every balance; {names} would"


def _rounded(line: LineBalance) -> Diagnostic:
    terms = terms_to_solve(line)
    names = " and ".join(f"? {t.species}" for t in terms) or "? for one coefficient"
    return Diagnostic(
        Name.ROUNDING_GAP,
        rounding_words(line),
        terms[0].span if terms else line.reaction.span,
        because_of(line),
        f"write {names}: solved from the balances it closes exactly",
    )
